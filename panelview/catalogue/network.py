"""Reconciled formation levels of all reactants, with their covariance: the constants that ship.

Every reactant carries two corrections to the species table, δG (of ΔfG°) and δH (of ΔfH°), shared by all
its species. A step's ΔrG′° at any conditions is the sum over its reactants, so cycles close by
construction and the covariance between any two steps follows.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from panelview.thermo.conditions import Conditions
from panelview.thermo.physical import TABLE_TEMPERATURE
from panelview.thermo.species import SpeciesTable
from panelview.thermo.transform import FormationEnergies, formation_energies

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Network:
    """Posterior of the reconciliation.

    species: the published table; level, enthalpy[reactant]: δG and δH, kJ/mol; covariance
    [2·reactant, 2·reactant]: of (δG, δH), (kJ/mol)².
    """

    species: SpeciesTable
    level: Array
    enthalpy: Array
    covariance: Array

    @cached_property
    def reconciled(self) -> SpeciesTable:
        """The species table with all corrections applied."""
        at = self.species.reactant
        return replace(
            self.species,
            formation_energy=self.species.formation_energy + self.level[at],
            formation_enthalpy=self.species.enthalpy + self.enthalpy[at],
        )

    def formation(self, conditions: Conditions) -> FormationEnergies:
        """ΔfG′° of every reactant at every condition, [condition, reactant]."""
        return formation_energies(self.reconciled, conditions)

    def design(self, stoichiometry: Array, temperature: float) -> Array:
        """∂ΔrG′°/∂(δG, δH) of reactions at one temperature (K), [reaction, 2·reactant]."""
        ratio = temperature / TABLE_TEMPERATURE
        return np.hstack([stoichiometry * ratio, stoichiometry * (1 - ratio)])

    def reaction_covariance(self, stoichiometry: Array, temperature: float) -> Array:
        """Covariance of ΔrG′° between reactions at one temperature, (kJ/mol)², [reaction, reaction]."""
        design = self.design(stoichiometry, temperature)
        return np.asarray(design @ self.covariance @ design.T)
