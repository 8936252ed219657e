"""The build step that makes one network of the species table and all measured K′.

Unknowns are δG and δH of every reactant (see network.py). Each measured K′ at its own T, I, pH, pMg is one
linear equation

    −RT ln K′ − ΔrG′°(table, at these conditions) = Σ ν [(T/T0) δG + (1 − T/T0) δH] + b + ε

with b an effect that all measurements of one step in one paper share (papers share calibration,
buffers and free-Mg²⁺ estimates), and ε their scatter. Both are robust (Student-t, by iterated
reweighting): a stray row loses its weight at the row, a stray paper at the paper. Reaction enthalpies from
calorimetry or trends enter as equations of their own. pH is taken as printed (glass electrode) for measurements
and specimens alike, so that the offset from −log10[H⁺] (0.14 at I 0.25) is absorbed by the levels; converting
the measured pH instead changed the scatter of the measurements by less than 0.01 kJ/mol.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.catalogue.measurements import MeasuredConstant
from panelview.thermo.conditions import FIELDS, Conditions
from panelview.thermo.physical import GAS_CONSTANT
from panelview.thermo.species import SpeciesTable
from panelview.thermo.transform import formation_energies, reaction_energies

Array = NDArray[np.float64]
Index = NDArray[np.intp]

#: Standard deviation of one measurement's scatter by evaluation grade, kJ/mol (A and B: pooled scatter of rows
#: within papers; C, D: what "approximate" and "poor" turned out to mean against the others).
ROW_SD = {"A": 0.4, "B": 0.6, "C": 5.0, "D": 8.0}

#: Standard deviation between papers, kJ/mol: the value that predicts papers left out best.
SOURCE_SD = 0.5

#: Degrees of freedom of the Student-t weights.
ROBUST_DF = 4.0

#: Uncertainty of an assumed ionic strength, mol/L, by how it was obtained; never over 60 % of the value.
IONIC_STRENGTH_SD = {"stated": 0.01, "estimated": 0.05, "median": 0.05, "assumed": 0.1}

#: Uncertainty of pMg by how it was obtained.
PMG_SD = {"stated": 0.05, "total": 0.4, "not stated, 3": 0.7}

#: Uncertainty of a printed pH.
PH_SD = 0.05

#: Prior standard deviation of δG, kJ/mol: table levels that no measurement has put in doubt; levels that were
#: derived from measurements of this very network and so are no independent knowledge; zeros by convention.
LEVEL_SD = 2.5
DERIVED_LEVEL_SD = 15.0
CONVENTION_SD = 1e-3

#: Prior standard deviation of δH, kJ/mol: complete table enthalpy, partial, none, and reactants whose printed
#: enthalpies contradict measurements (resources/README.md).
ENTHALPY_SD = {"complete": 8.0, "partial": 25.0, "none": 1000.0, "distrusted": 50.0}
DISTRUSTED_ENTHALPY = frozenset(
    {
        "fructose_1_6_bisphosphate",
        "phosphoenolpyruvate",
        "oxaloacetate",
        "aspartate",
        "glutamate",
        "oxoglutarate_2",
    }
)

#: Factor on all standard uncertainties of the network, by which 95 % intervals hold 95 % of papers left out.
CALIBRATION = 1.4

_LARGEST_ROUNDS = 300

#: Rounds end when no measurement's prediction moves by more than this, kJ/mol.
_SETTLED = 1e-5


@dataclass(frozen=True)
class Equations:
    """All equations of the network as arrays.

    Measurements, [row]: step, source (index of the (paper, step) pair), paper, residual (left-hand side, kJ/mol),
    design[row, 2·reactant], variance (scatter and assumed conditions, (kJ/mol)²). Enthalpies, [equation]:
    enthalpy_design, enthalpy_residual, enthalpy_sd. prior_mean, prior_sd[2·reactant].
    """

    step: Index
    source: Index
    sources: tuple[tuple[str, str], ...]
    paper: NDArray[np.object_]
    residual: Array
    design: Array
    variance: Array
    enthalpy_design: Array
    enthalpy_residual: Array
    enthalpy_sd: Array
    prior_mean: Array
    prior_sd: Array


@dataclass(frozen=True)
class Fit:
    """Posterior and weights: estimate, covariance of (δG, δH); source effects b; row residuals ε; weights."""

    estimate: Array
    covariance: Array
    source_effect: Array
    scatter: Array
    row_weight: Array
    source_weight: Array
    enthalpy_weight: Array
    rounds: int


@dataclass(frozen=True)
class EnthalpyDatum:
    """ΔrH′° of one step at its reference conditions, with standard uncertainty, kJ/mol."""

    step: int
    value: float
    sd: float
    conditions: Conditions


def equations(
    species: SpeciesTable,
    stoichiometry: Array,
    step_ids: Sequence[str],
    measurements: Sequence[MeasuredConstant],
    enthalpies: Sequence[EnthalpyDatum],
    level_prior: tuple[Array, Array],
) -> Equations:
    """Set up the network. level_prior: prior mean and standard deviation of δG, kJ/mol, each [reactant]."""
    index = {s: k for k, s in enumerate(step_ids)}
    step = np.array([index[m.step_id] for m in measurements], dtype=np.intp)
    conditions = conditions_of(measurements)
    energies = reaction_energies(stoichiometry, formation_energies(species, conditions))
    row = np.arange(len(step))
    table, by = energies.value[row, step], energies.by[row, step]
    rt = GAS_CONSTANT * conditions.temperature
    residual = -rt * np.log([m.k_prime for m in measurements]) - table
    spread = np.stack([getattr(conditions, f"{f}_sd") for f in FIELDS], axis=-1)
    scatter = np.array([ROW_SD[m.evaluation] for m in measurements])
    ratio = (conditions.temperature / 298.15)[:, None]
    nu = stoichiometry[step]
    pairs = {(m.reference_id, m.step_id): None for m in measurements}
    place = {pair: k for k, pair in enumerate(pairs)}
    enthalpy = _enthalpy_equations(species, stoichiometry, enthalpies)
    return Equations(
        step=step,
        source=np.array([place[m.reference_id, m.step_id] for m in measurements], dtype=np.intp),
        sources=tuple(pairs),
        paper=np.array([m.reference_id for m in measurements], dtype=object),
        residual=residual,
        design=np.hstack([nu * ratio, nu * (1 - ratio)]),
        variance=scatter**2 + ((by * spread) ** 2).sum(axis=-1),
        enthalpy_design=enthalpy[0],
        enthalpy_residual=enthalpy[1],
        enthalpy_sd=enthalpy[2],
        prior_mean=np.concatenate([level_prior[0], np.zeros(len(species.reactants))]),
        prior_sd=np.concatenate([level_prior[1], _enthalpy_prior(species)]),
    )


def conditions_of(measurements: Sequence[MeasuredConstant]) -> Conditions:
    """Conditions of measurements with the uncertainty of what was assumed.

    A few were made at ionic strengths over the model's limit; they enter with their grade and are not
    refused, so the usual check is passed by.
    """

    def sd(basis: str, table: dict[str, float]) -> float:
        return next((v for k, v in table.items() if basis.startswith(k)), 0.0)

    ionic = np.array([m.ionic_strength for m in measurements])
    ionic_sd = np.array([sd(m.ionic_strength_basis, IONIC_STRENGTH_SD) for m in measurements])
    zero = np.zeros(len(measurements))
    return Conditions(
        ph=np.array([m.ph for m in measurements]),
        temperature=np.array([m.temperature for m in measurements]),
        ionic_strength=ionic,
        pmg=np.array([m.pmg for m in measurements]),
        ph_sd=zero + PH_SD,
        temperature_sd=zero,
        ionic_strength_sd=np.minimum(ionic_sd, np.maximum(0.6 * ionic, 0.01)),
        pmg_sd=np.array([sd(m.pmg_basis, PMG_SD) for m in measurements]),
    )


def _enthalpy_prior(species: SpeciesTable) -> Array:
    known = np.isfinite(species.formation_enthalpy).astype(float)
    share = np.add.reduceat(known, species.first) / np.add.reduceat(np.ones_like(known), species.first)
    kind = np.where(share == 1, "complete", np.where(share > 0, "partial", "none"))
    kind = np.where([r in DISTRUSTED_ENTHALPY for r in species.reactants], "distrusted", kind)
    return np.array([ENTHALPY_SD[k] for k in kind])


def _enthalpy_equations(
    species: SpeciesTable, stoichiometry: Array, enthalpies: Sequence[EnthalpyDatum]
) -> tuple[Array, Array, Array]:
    """Design, residual and sd of the reaction enthalpies: ΔH′ = G′ − T ∂G′/∂T of the table, plus Σ ν δH."""
    n = stoichiometry.shape[1]
    design = np.zeros((len(enthalpies), 2 * n))
    residual = np.zeros(len(enthalpies))
    for k, datum in enumerate(enthalpies):
        formed = formation_energies(species, datum.conditions)
        temperature = datum.conditions.temperature[0]
        table = formed.value[0] - temperature * formed.by[0, :, FIELDS.index("temperature")]
        design[k, n:] = stoichiometry[datum.step]
        residual[k] = datum.value - stoichiometry[datum.step] @ table
    return design, residual, np.array([d.sd for d in enthalpies])


@dataclass
class _Weights:
    row: Array
    source: Array
    enthalpy: Array


def fit(
    system: Equations,
    keep: NDArray[np.bool_] | None = None,
    source_sd: float = SOURCE_SD,
    start: Fit | None = None,
) -> Fit:
    """Solve the network by iterated reweighting.

    keep[row]: measurements to use (all by default); start: a fit to all measurements whose weights are
    a good beginning.
    """
    rows = np.arange(len(system.step)) if keep is None else np.flatnonzero(keep)
    n_sources = len(system.sources)
    source = system.source[rows]
    counts = np.bincount(source, minlength=n_sources)
    weights = _Weights(np.ones(len(rows)), np.ones(n_sources), np.ones(len(system.enthalpy_residual)))
    if start is not None:
        weights = _Weights(start.row_weight[rows], start.source_weight.copy(), start.enthalpy_weight.copy())
    estimate = np.zeros(system.design.shape[1])
    rounds = 0
    while rounds < _LARGEST_ROUNDS:
        rounds += 1
        normal, right, shrink = _normal_equations(system, rows, weights, source_sd)
        previous = estimate
        estimate = np.asarray(np.linalg.solve(normal, right))
        residual = system.residual[rows] - system.design[rows] @ estimate
        precision = weights.row / system.variance[rows]
        effect = shrink * np.bincount(source, precision * residual, minlength=n_sources)
        scatter = residual - effect[source]
        off = system.enthalpy_residual - system.enthalpy_design @ estimate
        weights.row = _student(scatter**2 / system.variance[rows])
        weights.source = np.where(counts > 0, _student(effect**2 / source_sd**2), 1.0)
        weights.enthalpy = _student((off / system.enthalpy_sd) ** 2)
        if np.abs(system.design @ (estimate - previous)).max() < _SETTLED:
            break
    return Fit(
        estimate=estimate,
        covariance=np.asarray(np.linalg.inv(normal)),
        source_effect=effect,
        scatter=scatter,
        row_weight=weights.row,
        source_weight=weights.source,
        enthalpy_weight=weights.enthalpy,
        rounds=rounds,
    )


def _student(square: Array) -> Array:
    """Weight of a standardised residual under Student's t (EM form): (ν + 1)/(ν + z²)."""
    return (ROBUST_DF + 1) / (ROBUST_DF + square)


def _normal_equations(
    system: Equations, rows: Index, weights: _Weights, source_sd: float
) -> tuple[Array, Array, Array]:
    """Normal matrix and right-hand side with source effects integrated out; their shrinkage factors."""
    n_sources = len(system.sources)
    source = system.source[rows]
    design, residual = system.design[rows], system.residual[rows]
    precision = weights.row / system.variance[rows]
    total = np.bincount(source, precision, minlength=n_sources)
    shrink = 1 / (total + weights.source / source_sd**2)
    belongs = (source[:, None] == np.arange(n_sources)).astype(float)
    by_source = belongs.T @ (design * precision[:, None])
    of_source = np.bincount(source, precision * residual, minlength=n_sources)
    normal = (design.T * precision) @ design - (by_source.T * shrink) @ by_source
    right = design.T @ (precision * residual) - by_source.T @ (shrink * of_source)
    of_enthalpy = system.enthalpy_design.T * (weights.enthalpy / system.enthalpy_sd**2)
    normal += np.diag(1 / system.prior_sd**2) + of_enthalpy @ system.enthalpy_design
    right += of_enthalpy @ system.enthalpy_residual + system.prior_mean / system.prior_sd**2
    return normal, right, shrink
