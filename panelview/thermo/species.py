"""Species of each reactant as arrays: ΔfG°, ΔfH°, charge, hydrogen and magnesium counts."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Index = NDArray[np.intp]

#: Free magnesium ion, 298.15 K, I = 0, kJ/mol (Alberty 2003, table 1.2 and appendix).
MAGNESIUM_FORMATION_ENERGY = -455.3
MAGNESIUM_FORMATION_ENTHALPY = -467.0


@dataclass(frozen=True)
class SpeciesTable:
    """Protonated and magnesium-bound species, grouped by reactant.

    Arrays of shape [species], sorted so that one reactant's species are neighbours:
    formation_energy, formation_enthalpy: ΔfG°, ΔfH° at 298.15 K and I = 0, kJ/mol (enthalpy NaN where
    unknown); charge, hydrogen, magnesium: z, nH, nMg; reactant: index into `reactants`.
    """

    reactants: tuple[str, ...]
    formation_energy: Array
    formation_enthalpy: Array
    charge: Array
    hydrogen: Array
    magnesium: Array
    reactant: Index

    def __post_init__(self) -> None:
        if np.any(np.diff(self.reactant) < 0):
            raise ValueError("species must be sorted by reactant")
        if len(set(self.reactant.tolist())) != len(self.reactants):
            raise ValueError("every reactant needs at least one species")

    @cached_property
    def enthalpy(self) -> Array:
        """ΔfH° with gaps filled, shape [species], kJ/mol.

        A species without ΔfH° takes that of its reactant's other species (binding of H⁺ and Mg²⁺ then
        has no enthalpy beyond the ion's own). A reactant without any takes ΔfH° = ΔfG°, so that its
        untransformed reactions have ΔrS° = 0: callers with a measured reaction enthalpy should evaluate
        at 298.15 K and add their own term.
        """
        bound = self.magnesium * MAGNESIUM_FORMATION_ENTHALPY
        known = np.isfinite(self.formation_enthalpy)
        count = np.add.reduceat(known.astype(float), self.first)
        of_known = np.where(known, self.formation_enthalpy - bound, 0.0)
        size = np.add.reduceat(np.ones_like(bound), self.first)
        free_energy = self.formation_energy - self.magnesium * MAGNESIUM_FORMATION_ENERGY
        level = np.where(
            count > 0,
            np.add.reduceat(of_known, self.first) / np.maximum(count, 1),
            np.add.reduceat(free_energy, self.first) / size,
        )
        return np.where(known, self.formation_enthalpy, level[self.reactant] + bound)

    @property
    def first(self) -> Index:
        """Index of each reactant's first species, shape [reactant] (for reduceat)."""
        return np.searchsorted(self.reactant, np.arange(len(self.reactants)))

    @property
    def has_enthalpy(self) -> NDArray[np.bool_]:
        """Whether all species of a reactant have ΔfH°, shape [reactant]."""
        return np.logical_and.reduceat(np.isfinite(self.formation_enthalpy), self.first)
