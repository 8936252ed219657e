"""Species of each reactant as arrays: ΔfG°, ΔfH°, charge, hydrogen and magnesium counts."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Index = NDArray[np.intp]


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
        if len(np.unique(self.reactant)) != len(self.reactants):
            raise ValueError("every reactant needs at least one species")

    @property
    def first(self) -> Index:
        """Index of each reactant's first species, shape [reactant] (for reduceat)."""
        return np.searchsorted(self.reactant, np.arange(len(self.reactants)))

    @property
    def has_enthalpy(self) -> NDArray[np.bool_]:
        """Whether all species of a reactant have ΔfH°, shape [reactant]."""
        return np.logical_and.reduceat(np.isfinite(self.formation_enthalpy), self.first)
