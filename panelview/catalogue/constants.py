"""Step constants: K′eq of every step at any conditions, with its standard uncertainty and basis."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from panelview.thermo.conditions import FIELDS, Conditions
from panelview.thermo.physical import GAS_CONSTANT, TABLE_TEMPERATURE
from panelview.thermo.species import SpeciesTable
from panelview.thermo.transform import FormationEnergies, formation_energies, reaction_energies

Array = NDArray[np.float64]

_TEMPERATURE = FIELDS.index("temperature")


@dataclass(frozen=True, slots=True)
class Anchor:
    """The recommended constant of one step at its own reference conditions.

    ln_k_prime: NaN where no constant is known; sd: standard uncertainty of ΔrG′°, kJ/mol;
    enthalpy, enthalpy_sd: ΔrH′°, kJ/mol; uses_species_enthalpy: whether the species table carries
    the temperature (else `enthalpy` does, and the table is read at 298.15 K); basis: "measured",
    "estimated" or "none"; references: paper codes or the estimate's origin.
    """

    step_id: str
    ln_k_prime: float
    sd: float
    temperature: float
    ph: float
    ionic_strength: float
    pmg: float
    enthalpy: float
    enthalpy_sd: float
    uses_species_enthalpy: bool
    enthalpy_basis: str
    basis: str
    measurements: int
    references: str
    source: str
    note: str


@dataclass(frozen=True, slots=True)
class OwnConstant:
    """A constant of the reviewer's own for one step, used as given at the specimen's conditions.

    Exactly one of delta_g0_prime (kJ/mol, held whatever the temperature) and ln_k_prime (ΔrG′° is
    then −RT ln K′ at the specimen's temperature) is set; sd: kJ/mol; source: the reviewer's words.
    """

    step_id: str
    delta_g0_prime: float | None
    ln_k_prime: float | None
    sd: float
    source: str


@dataclass(frozen=True)
class StepConstants:
    """ΔrG′° of every step at every condition.

    delta_g0_prime[condition, step], kJ/mol, NaN where none is known; sd[condition, step]: standard
    uncertainty of the constant itself, conditions taken as exact; by[condition, step, field]:
    derivatives in the order of `conditions.FIELDS`.
    """

    delta_g0_prime: Array
    sd: Array
    by: Array

    def ln_k_prime(self, conditions: Conditions) -> Array:
        """ln K′eq, shape [condition, step]."""
        return -self.delta_g0_prime / (GAS_CONSTANT * conditions.temperature[:, None])


@dataclass(frozen=True)
class _AnchorArrays:
    """Anchors of all steps as arrays [step]; `table`, `table_flat`: ln K′ of the bare species table at the
    anchor's conditions, at its own temperature and at 298.15 K."""

    ln_k_prime: Array
    sd: Array
    temperature: Array
    enthalpy: Array
    enthalpy_sd: Array
    uses_species_enthalpy: NDArray[np.bool_]
    table: Array
    table_flat: Array


@dataclass(frozen=True)
class ConstantSet:
    """Anchors of all steps (in catalogue order) with the reviewer's own constants in their place.

    stoichiometry[step, reactant] over `species.reactants`, water included; level[reactant]: correction
    of the table's ΔfG° levels and level_sd its uncertainty, kJ/mol (used for reactions that are no
    catalogued step).
    """

    version: str
    sha256: str
    step_ids: tuple[str, ...]
    anchors: tuple[Anchor, ...]
    species: SpeciesTable
    stoichiometry: Array
    level: Array
    level_sd: Array
    own: Mapping[str, OwnConstant] = field(default_factory=dict)

    def with_own(self, own: Mapping[str, OwnConstant]) -> ConstantSet:
        """A copy in which `own` replaces all earlier own constants. Raises KeyError for unknown steps."""
        for step_id in own:
            if step_id not in self.step_ids:
                raise KeyError(step_id)
        return replace(self, own=dict(own))

    def basis(self, step: int) -> str:
        """ "measured", "estimated", "none" or "own" for the step at this index."""
        return "own" if self.step_ids[step] in self.own else self.anchors[step].basis

    def source(self, step: int) -> str:
        """What the step's constant rests on, in words."""
        own = self.own.get(self.step_ids[step])
        if own is not None:
            return f"reviewer's own: {own.source}" if own.source else "reviewer's own"
        anchor = self.anchors[step]
        return anchor.references if anchor.basis != "none" else "no constant known"

    def at(self, conditions: Conditions) -> StepConstants:
        """Every step's ΔrG′° at every condition.

        Anchors are carried by differences in ln K′, so that errors in the level of the species table
        cancel:  ln K′(c) = ln K′(anchor) + [ln K′table(c) − ln K′table(anchor)].  Where the table lacks
        enthalpies the bracket is taken at 298.15 K and the temperature term is van 't Hoff's with the
        anchor's own ΔrH′°. pH is taken as printed by the laboratory (glass electrode), as in the
        measurements, so that the difference between an electrode pH and −log10[H⁺] cancels too.
        """
        anchor = self._anchor_arrays
        temperature = conditions.temperature[:, None]
        rt = GAS_CONSTANT * temperature
        table_t = self._table_ln_k(conditions)
        at_table = replace(conditions, temperature=np.full_like(conditions.temperature, TABLE_TEMPERATURE))
        table_flat = self._table_ln_k(at_table)
        vant_hoff = -anchor.enthalpy / GAS_CONSTANT * (1 / temperature - 1 / anchor.temperature)
        ln_k = anchor.ln_k_prime + np.where(
            anchor.uses_species_enthalpy,
            table_t.value - anchor.table,
            table_flat.value - anchor.table_flat + vant_hoff,
        )
        by_ln_k = np.where(anchor.uses_species_enthalpy[None, :, None], table_t.by, table_flat.by)
        by_ln_k[..., _TEMPERATURE] = np.where(
            anchor.uses_species_enthalpy,
            table_t.by[..., _TEMPERATURE],
            anchor.enthalpy / (GAS_CONSTANT * temperature**2),
        )
        by = -rt[..., None] * by_ln_k
        by[..., _TEMPERATURE] -= GAS_CONSTANT * ln_k
        carried = anchor.enthalpy_sd * np.abs(1 - temperature / anchor.temperature)
        sd = np.hypot(anchor.sd, carried)
        made = StepConstants(delta_g0_prime=-rt * ln_k, sd=sd, by=by)
        return self._put_own(made, rt)

    def reaction(self, stoichiometry: Array, conditions: Conditions) -> StepConstants:
        """ΔrG′° of one reaction that is no catalogued step, from the corrected species table.

        stoichiometry[reactant]; returns arrays with one step. The temperature term is the table's
        where every reactant has ΔfH°; elsewhere ΔrH′° is taken as zero ± 30 kJ/mol from 298.15 K.
        """
        complete = bool(np.all(self.species.has_enthalpy[stoichiometry != 0]))
        where = conditions if complete else conditions.replace(temperature=TABLE_TEMPERATURE)
        formed = reaction_energies(stoichiometry[None, :], formation_energies(self.species, where))
        value = formed.value + self.level @ stoichiometry
        by = formed.by
        sd = np.full_like(value, float(np.sqrt(np.sum((stoichiometry * self.level_sd) ** 2))))
        if not complete:
            # ΔrH = 0: ln K′ does not change with T, so ΔrG′° scales with it.
            scale = conditions.temperature[:, None] / TABLE_TEMPERATURE
            by = by * scale[..., None]
            by[..., _TEMPERATURE] = value / TABLE_TEMPERATURE
            value = value * scale
            sd = np.hypot(sd, UNKNOWN_ENTHALPY_SD * np.abs(1 - scale))
        return StepConstants(delta_g0_prime=value, sd=np.maximum(sd, LEAST_SD), by=by)

    def _table_ln_k(self, conditions: Conditions) -> FormationEnergies:
        """ln K′ of the bare species table and its derivatives, [condition, step]."""
        energies = reaction_energies(self.stoichiometry, formation_energies(self.species, conditions))
        rt = GAS_CONSTANT * conditions.temperature[:, None]
        value = -energies.value / rt
        by = -energies.by / rt[..., None]
        by[..., _TEMPERATURE] -= value / conditions.temperature[:, None]
        return FormationEnergies(value=value, by=by)

    @cached_property
    def _anchor_arrays(self) -> _AnchorArrays:
        """The anchors as arrays, with the bare table's ln K′ at each anchor's own conditions."""
        own = Conditions.of(
            ph=[a.ph for a in self.anchors],
            temperature=[a.temperature for a in self.anchors],
            ionic_strength=[a.ionic_strength for a in self.anchors],
            pmg=[a.pmg for a in self.anchors],
        )
        flat = own.replace(temperature=TABLE_TEMPERATURE)
        return _AnchorArrays(
            ln_k_prime=np.array([a.ln_k_prime for a in self.anchors]),
            sd=np.array([a.sd for a in self.anchors]),
            temperature=own.temperature,
            enthalpy=np.array([a.enthalpy for a in self.anchors]),
            enthalpy_sd=np.array([a.enthalpy_sd for a in self.anchors]),
            uses_species_enthalpy=np.array([a.uses_species_enthalpy for a in self.anchors]),
            table=np.diagonal(self._table_ln_k(own).value),
            table_flat=np.diagonal(self._table_ln_k(flat).value),
        )

    def _put_own(self, made: StepConstants, rt: Array) -> StepConstants:
        value, sd, by = made.delta_g0_prime.copy(), made.sd.copy(), made.by.copy()
        for step_id, own in self.own.items():
            s = self.step_ids.index(step_id)
            by[:, s] = 0.0
            sd[:, s] = own.sd
            if own.delta_g0_prime is not None:
                value[:, s] = own.delta_g0_prime
            elif own.ln_k_prime is not None:
                value[:, s] = -rt[:, 0] * own.ln_k_prime
                by[:, s, _TEMPERATURE] = -GAS_CONSTANT * own.ln_k_prime
        return StepConstants(delta_g0_prime=value, sd=sd, by=by)


#: Standard uncertainty of a reaction enthalpy that nothing is known of, kJ/mol: the spread of ΔrH′° over
#: the catalogue's steps that have one (see resources/constants.csv).
UNKNOWN_ENTHALPY_SD = 30.0

#: No constant is better known than this, kJ/mol: reproducibility between laboratories of the best
#: measured K′ (median 0.6, see resources/constants.csv).
LEAST_SD = 0.3
