"""Tables of substances: metabolites, their species and levels, names, analytes outside the catalogue."""

from __future__ import annotations

import math
from collections.abc import Collection, Mapping
from pathlib import Path
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

from panelview.catalogue.formula import element_counts, molar_mass
from panelview.catalogue.levels import LevelPrior
from panelview.catalogue.metabolites import KnownAnalyte, Metabolite, Name
from panelview.catalogue.rows import Row, read_table, unique
from panelview.thermo.species import SpeciesTable

Array = NDArray[np.float64]
Scalar = TypeVar("Scalar", bound=np.generic)

#: Standard uncertainty of a table level that no measurement has tested, kJ/mol: the prior of most
#: well-known reactants is 1 to 4 (see resources/README.md).
UNTESTED_LEVEL_SD = 2.0

#: The free ion is part of the transform, never a reactant.
MAGNESIUM = "magnesium_ion"

#: Hydrogen atoms of the coenzyme's own body that rows on the reduced CoA convention leave out.
_COA_BODY_HYDROGEN = 35

_SPECIES_DATA = ("table", "derived", "zero", "none")
_CONVENTIONS = ("full formula", "reduced CoA", "reduced haem")


def read_metabolites(folder: Path) -> dict[str, Metabolite]:
    """metabolites.csv, in its order, by id."""
    columns = (
        "id",
        "name",
        "symbol",
        "formula",
        "molar_mass_g_per_mol",
        "unit_activity",
        "species_data",
        "count_convention",
        "zero_family",
        "source",
        "note",
    )
    rows = read_table(folder, "metabolites.csv", columns)
    for column in ("id", "name", "symbol"):
        unique(rows, (column,))
    return {made.id: made for made in (_metabolite(row) for row in rows)}


def _metabolite(row: Row) -> Metabolite:
    convention = row.choice("count_convention", _CONVENTIONS)
    formula = row.text("formula") or None
    mass = row.positive("molar_mass_g_per_mol") if row.text("molar_mass_g_per_mol") else None
    if formula is None:
        if convention != "reduced haem":
            raise row.error("formula", "the formula is missing", "write the neutral molecular formula")
    else:
        _check_mass(row, formula, mass)
    return Metabolite(
        id=row.required("id"),
        name=row.required("name"),
        symbol=row.required("symbol"),
        formula=formula,
        molar_mass=mass,
        unit_activity=row.flag("unit_activity"),
        species_data=row.choice("species_data", _SPECIES_DATA),
        count_convention=convention,
        zero_family=row.text("zero_family"),
        source=row.required("source"),
        note=row.text("note"),
    )


def _check_mass(row: Row, formula: str, mass: float | None) -> None:
    try:
        expected = molar_mass(formula)
    except (ValueError, KeyError):
        raise row.error(
            "formula", f"“{formula}” is not a molecular formula", "write it like C6H13O9P"
        ) from None
    if mass is None or abs(mass - expected) > 2e-5 * expected:
        raise row.error(
            "molar_mass_g_per_mol",
            f"the molar mass is not that of {formula}, {expected:.4f} g/mol",
            "correct the mass or the formula",
        )


def read_species(folder: Path, metabolites: Mapping[str, Metabolite]) -> SpeciesTable:
    """species.csv as arrays in the order of the metabolites, magnesium ion left out."""
    columns = (
        "reactant",
        "formation_energy_kj_per_mol",
        "formation_enthalpy_kj_per_mol",
        "charge",
        "hydrogen",
        "magnesium",
        "source",
        "note",
    )
    rows = read_table(folder, "species.csv", columns)
    unique(rows, ("reactant", "charge", "hydrogen", "magnesium"))
    by_reactant: dict[str, list[tuple[float, ...]]] = {}
    for row in rows:
        metabolite = metabolites[row.known("reactant", metabolites, "metabolite")]
        if metabolite.species_data == "none":
            raise row.error(
                "reactant",
                f"metabolites.csv says that {metabolite.id} has no species data",
                "correct one of the two tables",
            )
        species = _species(row, metabolite)
        if metabolite.id != MAGNESIUM:
            by_reactant.setdefault(metabolite.id, []).append(species)
    reactants = tuple(i for i in metabolites if i in by_reactant)
    for metabolite in metabolites.values():
        if metabolite.species_data != "none" and metabolite.id not in (*reactants, MAGNESIUM):
            raise rows[-1].error(
                "reactant", f"no species of {metabolite.id} is listed", "add its rows or mark it “none”"
            )
    table = np.array([species for reactant in reactants for species in by_reactant[reactant]])
    counts = [len(by_reactant[reactant]) for reactant in reactants]
    return SpeciesTable(
        reactants=reactants,
        formation_energy=read_only(table[:, 0]),
        formation_enthalpy=read_only(table[:, 1]),
        charge=read_only(table[:, 2]),
        hydrogen=read_only(table[:, 3]),
        magnesium=read_only(table[:, 4]),
        reactant=read_only(np.repeat(np.arange(len(reactants)), counts)),
    )


def _species(row: Row, metabolite: Metabolite) -> tuple[float, ...]:
    energy = row.number_in("formation_energy_kj_per_mol")
    enthalpy = row.number_or_nan("formation_enthalpy_kj_per_mol")
    charge = row.number_in("charge", -10, 10)
    hydrogen = row.integer("hydrogen")
    magnesium = row.integer("magnesium")
    row.required("source")
    if metabolite.count_convention == "reduced haem":
        expected = charge
    else:
        expected = hydrogen - _neutral_hydrogen(metabolite) + 2 * magnesium
    if charge != expected:
        raise row.error(
            "charge",
            f"charge {charge:+g} does not go with {hydrogen} H and {magnesium} Mg of {metabolite.id}, "
            f"which make {expected:+g}",
            "correct the charge or the counts",
        )
    return energy, enthalpy, charge, float(hydrogen), float(magnesium)


def _neutral_hydrogen(metabolite: Metabolite) -> int:
    """Hydrogen atoms of the uncharged form, counted as the metabolite's species count them."""
    if metabolite.id == "hydrogen_ion":
        return 0
    hydrogen = element_counts(metabolite.formula or "")["H"]
    return hydrogen - _COA_BODY_HYDROGEN if metabolite.count_convention == "reduced CoA" else hydrogen


_LEVEL_COLUMNS = ("reactant", "shift_kj_per_mol", "sd_kj_per_mol", "prior_sd_kj_per_mol", "source", "note")


def read_level_priors(folder: Path) -> tuple[LevelPrior, ...]:
    """levels.csv as the reconciliation needs it: the width that each level was given before any measurement."""
    made = []
    for row in read_table(folder, "levels.csv", _LEVEL_COLUMNS):
        prior = row.number_or_nan("prior_sd_kj_per_mol", 0, 50)
        evidence = row.text("note").removeprefix("evidence:").split(";")
        made.append(
            LevelPrior(
                reactant=row.required("reactant"),
                shift=row.number_in("shift_kj_per_mol", -50, 50),
                sd=row.number_in("sd_kj_per_mol", 0, 50),
                prior_sd=None if math.isnan(prior) else prior,
                only_auxiliary=all(e.strip().startswith("auxiliary") for e in evidence),
            )
        )
    return tuple(made)


def read_levels(folder: Path, reactants: tuple[str, ...]) -> tuple[Array, Array]:
    """levels.csv: correction of each reactant's ΔfG° and its standard uncertainty, kJ/mol, [reactant]."""
    rows = read_table(folder, "levels.csv", _LEVEL_COLUMNS)
    unique(rows, ("reactant",))
    position = {reactant: k for k, reactant in enumerate(reactants)}
    level = np.zeros(len(reactants))
    sd = np.full(len(reactants), UNTESTED_LEVEL_SD)
    for row in rows:
        k = position[row.known("reactant", position, "reactant with species")]
        level[k] = row.number_in("shift_kj_per_mol", -50, 50)
        sd[k] = row.number_in("sd_kj_per_mol", 0, 50)
        row.number_or_nan("prior_sd_kj_per_mol", 0, 50)
        row.required("source")
    return read_only(level), read_only(sd)


def read_known_analytes(folder: Path, metabolites: Mapping[str, Metabolite]) -> tuple[KnownAnalyte, ...]:
    """known_analytes.csv."""
    columns = ("id", "name", "formula", "molar_mass_g_per_mol", "source", "note")
    rows = read_table(folder, "known_analytes.csv", columns)
    unique(rows, ("id",))
    made = []
    for row in rows:
        if row.required("id") in metabolites:
            raise row.error("id", f"{row.text('id')} is a catalogued metabolite", "remove the row")
        mass = row.positive("molar_mass_g_per_mol")
        _check_mass(row, row.required("formula"), mass)
        made.append(KnownAnalyte(row.text("id"), row.required("name"), mass, row.required("source")))
    return tuple(made)


def read_names(folder: Path, analytes: Collection[str]) -> tuple[Name, ...]:
    """names.csv; analytes: ids of metabolites and of known analytes."""
    columns = ("name", "analytes", "is_sum", "molar_mass_g_per_mol", "source", "note")
    rows = read_table(folder, "names.csv", columns)
    unique(rows, ("name",))
    made = []
    for row in rows:
        candidates = row.many_known("analytes", analytes, "analyte")
        if not candidates:
            raise row.error("analytes", "the name stands for nothing", "write one or more analyte ids")
        is_sum = row.flag("is_sum")
        if is_sum and len(candidates) < 2:
            raise row.error("is_sum", "a sum of one analyte", "name all members or write no")
        mass = row.number_or_nan("molar_mass_g_per_mol", 1.0)
        made.append(
            Name(
                text=row.required("name"),
                candidates=candidates,
                is_sum=is_sum,
                source=row.required("source"),
                molar_mass=None if math.isnan(mass) else mass,
            )
        )
    return tuple(made)


def read_only(array: NDArray[Scalar]) -> NDArray[Scalar]:
    """The array, no longer to be written to."""
    array = np.ascontiguousarray(array)
    array.flags.writeable = False
    return array
