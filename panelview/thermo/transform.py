"""Transformed Gibbs energies of formation and reaction at conditions, with their derivatives.

The physics of Alberty, *Thermodynamics of Biochemical Reactions* (2003): species energies are carried
to T by Gibbs–Helmholtz (ΔfH° constant), to I by the extended Debye–Hückel equation, to pH and pMg by
a Legendre transform, and the species of a reactant are then summed as one group.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from panelview.thermo.conditions import Conditions
from panelview.thermo.physical import GAS_CONSTANT, LN10, TABLE_TEMPERATURE
from panelview.thermo.species import (
    MAGNESIUM_FORMATION_ENERGY,
    MAGNESIUM_FORMATION_ENTHALPY,
    SpeciesTable,
)

Array = NDArray[np.float64]

#: Extended Debye–Hückel parameter B, (mol/L)^−½ (Alberty 2003; Goldberg and Tewari 1991).
DEBYE_HUECKEL_B = 1.6

#: RTα(T) as a polynomial in T, kJ/mol per (mol/L)^½: coefficients of T, T², T³ (Alberty 2003, p. 55).
_RT_ALPHA = (9.20483e-3, -1.28467e-5, 4.95199e-8)


@dataclass(frozen=True)
class FormationEnergies:
    """ΔfG′° of every reactant at every condition, kJ/mol, with partial derivatives.

    value[condition, reactant]; by[condition, reactant, field] with field in the order of
    `conditions.FIELDS`: per pH unit, per K, per mol/L, per pMg unit.
    """

    value: Array
    by: Array


def debye_hueckel_energy(temperature: ArrayLike) -> Array:
    """RTα(T), kJ/mol per (mol/L)^½. temperature: K.

    Source: Alberty (2003), p. 55.

    >>> round(float(debye_hueckel_energy(298.15)) / (GAS_CONSTANT * 298.15), 4)
    1.1759
    """
    t = np.asarray(temperature, dtype=np.float64)
    a, b, c = _RT_ALPHA
    return t * (a + t * (b + t * c))


def _debye_hueckel_slope(temperature: Array) -> Array:
    """d(RTα)/dT, kJ/(mol K) per (mol/L)^½."""
    a, b, c = _RT_ALPHA
    return a + temperature * (2 * b + 3 * temperature * c)


def _ionic_factor(ionic_strength: Array) -> Array:
    root = np.sqrt(ionic_strength)
    return root / (1 + DEBYE_HUECKEL_B * root)


def _ionic_factor_slope(ionic_strength: Array) -> Array:
    """d/dI of √I/(1 + B√I); infinite at I = 0, where a tiny floor keeps it finite."""
    root = np.sqrt(np.maximum(ionic_strength, 1e-12))
    return 1 / (2 * root * (1 + DEBYE_HUECKEL_B * root) ** 2)


def formation_energies(table: SpeciesTable, conditions: Conditions) -> FormationEnergies:
    """ΔfG′° = −RT ln Σ exp(−ΔfG′°j/RT) over the species j of each reactant.

    Returns [condition, reactant], kJ/mol. For species without ΔfH° see SpeciesTable.enthalpy.
    Source: Alberty (2003), chapters 3 and 4.
    """
    t = conditions.temperature[:, None]
    rt = GAS_CONSTANT * t
    ratio = t / TABLE_TEMPERATURE
    g0 = table.formation_energy
    h0 = table.enthalpy
    z2 = table.charge**2
    n_h, n_mg = table.hydrogen, table.magnesium

    rt_alpha = debye_hueckel_energy(t)
    rt_alpha_slope = _debye_hueckel_slope(t)
    ionic = _ionic_factor(conditions.ionic_strength)[:, None]
    ionic_slope = _ionic_factor_slope(conditions.ionic_strength)[:, None]
    ph = conditions.ph[:, None]
    pmg = conditions.pmg[:, None]

    # The free ion's own charge (z² = 4) enters its ionic-strength term once for each bound Mg.
    magnesium = ratio * MAGNESIUM_FORMATION_ENERGY + (1 - ratio) * MAGNESIUM_FORMATION_ENTHALPY
    effective_z2 = z2 - n_h - 4 * n_mg

    energy = (
        ratio * g0
        + (1 - ratio) * h0
        + n_h * (rt * LN10 * ph)
        + n_mg * (rt * LN10 * pmg - magnesium)
        - rt_alpha * ionic * effective_z2
    )
    energy_by_t = (
        (g0 - h0) / TABLE_TEMPERATURE
        + n_h * (GAS_CONSTANT * LN10 * ph)
        + n_mg
        * (
            GAS_CONSTANT * LN10 * pmg
            - (MAGNESIUM_FORMATION_ENERGY - MAGNESIUM_FORMATION_ENTHALPY) / TABLE_TEMPERATURE
        )
        - rt_alpha_slope * ionic * effective_z2
    )

    first = table.first
    lowest = np.minimum.reduceat(energy, first, axis=1)
    weight = np.exp((lowest[:, table.reactant] - energy) / rt)
    total = np.add.reduceat(weight, first, axis=1)
    value = lowest - rt * np.log(total)
    fraction = weight / total[:, table.reactant]

    def mean(quantity: Array) -> Array:
        """Average over a reactant's species, weighted by their equilibrium fractions."""
        return np.add.reduceat(fraction * quantity, first, axis=1)

    by_ph = rt * LN10 * mean(np.broadcast_to(n_h, energy.shape))
    by_pmg = rt * LN10 * mean(np.broadcast_to(n_mg, energy.shape))
    by_ionic_strength = -rt_alpha * ionic_slope * mean(np.broadcast_to(effective_z2, energy.shape))
    by_temperature = value / t + mean(energy_by_t - energy / t)
    by = np.stack([by_ph, by_temperature, by_ionic_strength, by_pmg], axis=-1)
    return FormationEnergies(value=value, by=by)


def bound_hydrogen(table: SpeciesTable, conditions: Conditions) -> Array:
    """N̄H, average number of hydrogen atoms bound to a reactant; [condition, reactant]."""
    by_ph = formation_energies(table, conditions).by[..., 0]
    return by_ph / (GAS_CONSTANT * conditions.temperature[:, None] * LN10)


def reaction_energies(stoichiometry: Array, formation: FormationEnergies) -> FormationEnergies:
    """ΔrG′° = Σ νi ΔfG′°i of each reaction, kJ/mol, with derivatives.

    stoichiometry[reaction, reactant], products positive, water included. Returns the same
    structure with reactions in place of reactants.
    """
    return FormationEnergies(
        value=formation.value @ stoichiometry.T,
        by=stoichiometry @ formation.by,
    )


def reaction_energy(delta_g0_prime: Array, ln_gamma: Array, temperature: Array) -> Array:
    """ΔG′ = ΔrG′° + RT ln Γ.

    delta_g0_prime, ln_gamma: [specimen, step], kJ/mol and 1. temperature: [specimen, 1], K.
    Returns [specimen, step], kJ/mol; NaN where either is missing.
    Source: Alberty (2003), eq. for the transformed Gibbs energy of reaction.
    """
    return delta_g0_prime + GAS_CONSTANT * temperature * ln_gamma
