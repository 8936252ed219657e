"""The network of a catalogue, and how well it predicts papers that it has not seen."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.catalogue.levels import LevelPrior
from panelview.catalogue.load import Catalogue
from panelview.catalogue.measurements import MeasuredConstant
from panelview.catalogue.metabolites import Metabolite
from panelview.catalogue.network import Network
from panelview.catalogue.reconcile import (
    CALIBRATION,
    CONVENTION_SD,
    DERIVED_LEVEL_SD,
    LEVEL_SD,
    SOURCE_SD,
    EnthalpyDatum,
    Equations,
    Fit,
    conditions_of,
    equations,
    fit,
)
from panelview.thermo.conditions import Conditions
from panelview.thermo.physical import GAS_CONSTANT
from panelview.thermo.species import SpeciesTable

Array = NDArray[np.float64]


def used_measurements(catalogue: Catalogue) -> list[MeasuredConstant]:
    """Measurements that were not set aside."""
    return [m for m in catalogue.measurements if not m.set_aside]


def system_of(
    catalogue: Catalogue, levels: Sequence[LevelPrior], measurements: Sequence[MeasuredConstant] | None = None
) -> Equations:
    """All equations of the catalogue's network (of `measurements` in place of the catalogue's own, if given)."""
    constants = catalogue.constants
    enthalpies = [
        EnthalpyDatum(k, a.enthalpy, a.enthalpy_sd, Conditions.of(a.ph, a.temperature, a.ionic_strength, a.pmg))
        for k, a in enumerate(constants.anchors)
        if a.basis != "none"
    ]
    return equations(
        constants.species,
        constants.stoichiometry,
        constants.step_ids,
        used_measurements(catalogue) if measurements is None else measurements,
        enthalpies,
        level_priors(catalogue.metabolites, constants.species, levels),
    )


def network_of(species: SpeciesTable, full: Fit) -> Network:
    """The fit as a network, its covariance calibrated."""
    n = len(species.reactants)
    return Network(species, full.estimate[:n], full.estimate[n:], CALIBRATION**2 * full.covariance)


def anchor_errors(catalogue: Catalogue) -> Array:
    """Measured minus predicted ΔrG′° of each measurement, kJ/mol, by the constants that the program uses now."""
    measurements = used_measurements(catalogue)
    conditions = conditions_of(measurements)
    index = {s: k for k, s in enumerate(catalogue.constants.step_ids)}
    step = [index[m.step_id] for m in measurements]
    predicted = catalogue.constants.at(conditions).delta_g0_prime[np.arange(len(step)), step]
    measured = -GAS_CONSTANT * conditions.temperature * np.log([m.k_prime for m in measurements])
    return np.asarray(measured - predicted)


def level_priors(
    metabolites: Mapping[str, Metabolite], species: SpeciesTable, rows: Sequence[LevelPrior]
) -> tuple[Array, Array]:
    """Prior mean and standard deviation of δG, [reactant], kJ/mol.

    A level in doubt has the prior of levels.csv; one that rests on measurements outside the catalogue's steps
    alone starts from the published correction, because nothing else in the network knows of them.
    """
    given = {row.reactant: row for row in rows}
    mean = np.zeros(len(species.reactants))
    sd = np.full(len(species.reactants), LEVEL_SD)
    for k, reactant in enumerate(species.reactants):
        kind = metabolites[reactant].species_data
        row = given.get(reactant)
        if kind == "zero":
            sd[k] = CONVENTION_SD
        elif kind == "derived":
            sd[k] = DERIVED_LEVEL_SD
        elif row is not None and row.prior_sd is not None:
            sd[k] = row.prior_sd
            if row.only_auxiliary:
                mean[k], sd[k] = row.shift, max(row.sd, 1.5)
    return mean, sd


@dataclass(frozen=True)
class LeftOut:
    """Prediction of every measurement from a fit without its paper, arrays [row], kJ/mol.

    error: measured minus predicted; sd: predictive standard deviation, calibrated; level_sd: of the network alone.
    """

    error: Array
    sd: Array
    level_sd: Array


def leave_one_source_out(system: Equations, full: Fit) -> LeftOut:
    """Predict each paper's measurements from all others."""
    error, sd, level_sd = (np.empty(len(system.step)) for _ in range(3))
    for paper in dict.fromkeys(system.paper):
        out = system.paper == paper
        partial = fit(system, ~out, start=full)
        design = system.design[out]
        level = CALIBRATION**2 * np.einsum("ij,jk,ik->i", design, partial.covariance, design)
        error[out] = system.residual[out] - design @ partial.estimate
        level_sd[out] = np.sqrt(level)
        sd[out] = np.sqrt(level + CALIBRATION**2 * (SOURCE_SD**2 + system.variance[out]))
    return LeftOut(error, sd, level_sd)
