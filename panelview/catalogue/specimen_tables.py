"""Tables of specimens: matrices, conversions, where a step can be read, published concentrations."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path

from panelview.catalogue.matrices import Applicability, Conversion, Matrix
from panelview.catalogue.metabolites import Metabolite
from panelview.catalogue.published import PublishedConcentration
from panelview.catalogue.rows import Row, read_table, unique
from panelview.catalogue.steps import Step
from panelview.thermo.conditions import LIMITS
from panelview.thermo.physical import ZERO_CELSIUS

#: What a laboratory may relate an amount to; see `Conversion.basis`.
BASES = ("litre", "litre_cells", "kg_wet", "kg_dry", "kg_protein", "kg_haemoglobin", "billion_cells")


def read_matrices(folder: Path) -> dict[str, Matrix]:
    """matrices.csv, by id."""
    columns = (
        "id",
        "name",
        "pools",
        "ph",
        "ph_sd",
        "temperature_c",
        "temperature_sd_k",
        "ionic_strength_mol_per_l",
        "ionic_strength_sd_mol_per_l",
        "pmg",
        "pmg_sd",
        "usual_basis",
        "source",
        "note",
    )
    rows = read_table(folder, "matrices.csv", columns)
    unique(rows, ("id",))
    unique(rows, ("name",))
    return {made.id: made for made in (_matrix(row) for row in rows)}


def _matrix(row: Row) -> Matrix:
    coldest, warmest = (limit - ZERO_CELSIUS for limit in LIMITS["temperature"])
    return Matrix(
        id=row.required("id"),
        name=row.required("name"),
        pools=row.required("pools"),
        ph=row.number_in("ph", *LIMITS["ph"]),
        ph_sd=row.number_in("ph_sd", 0, 2),
        temperature=row.number_in("temperature_c", coldest, warmest) + ZERO_CELSIUS,
        temperature_sd=row.number_in("temperature_sd_k", 0, 10),
        ionic_strength=row.number_in("ionic_strength_mol_per_l", *LIMITS["ionic_strength"]),
        ionic_strength_sd=row.number_in("ionic_strength_sd_mol_per_l", 0, 0.3),
        pmg=row.number_in("pmg", *LIMITS["pmg"]),
        pmg_sd=row.number_in("pmg_sd", 0, 2),
        usual_basis=row.choice("usual_basis", ("", *BASES)),
        source=row.required("source"),
        note=row.text("note"),
    )


def read_conversions(folder: Path, matrices: Mapping[str, Matrix]) -> dict[tuple[str, str], Conversion]:
    """conversions.csv, by matrix and basis."""
    columns = ("matrix", "basis", "litres_pool_water", "relative_sd", "source", "note")
    rows = read_table(folder, "conversions.csv", columns)
    unique(rows, ("matrix", "basis"))
    made = {}
    for row in rows:
        entry = Conversion(
            matrix_id=row.known("matrix", matrices, "matrix"),
            basis=row.choice("basis", BASES),
            litres=row.positive("litres_pool_water"),
            relative_sd=row.number_in("relative_sd", 0, 1),
            source=row.required("source"),
            note=row.text("note"),
        )
        made[entry.matrix_id, entry.basis] = entry
    return made


def read_applicability(
    folder: Path, steps: tuple[Step, ...], matrices: Mapping[str, Matrix]
) -> dict[tuple[str, str], Applicability]:
    """applicability.csv, by step and matrix; every pair must have its row."""
    columns = ("step", "matrix", "assessability", "reason", "caution", "source", "note")
    rows = read_table(folder, "applicability.csv", columns)
    unique(rows, ("step", "matrix"))
    step_ids = frozenset(step.id for step in steps)
    made = {}
    for row in rows:
        entry = Applicability(
            step_id=row.known("step", step_ids, "step"),
            matrix_id=row.known("matrix", matrices, "matrix"),
            assessability=row.choice("assessability", ("assessed", "proxy", "not_assessable")),
            reason=row.required("reason"),
            caution=row.text("caution"),
            source=row.required("source"),
        )
        made[entry.step_id, entry.matrix_id] = entry
    for step in steps:
        for matrix in matrices:
            if (step.id, matrix) not in made:
                raise rows[-1].error("step", f"{step.id} in {matrix} has no row", "add one")
    return made


def read_published(
    folder: Path, metabolites: Mapping[str, Metabolite], matrices: Mapping[str, Matrix]
) -> tuple[PublishedConcentration, ...]:
    """published_concentrations.csv; at most one default set a matrix."""
    columns = (
        "set",
        "is_default",
        "metabolite",
        "matrix",
        "organism",
        "mean",
        "spread",
        "unit",
        "per",
        "basis_of_amount",
        "ln_mean",
        "ln_sd",
        "n",
        "state",
        "source",
        "basis",
        "confidence",
        "note",
    )
    rows = read_table(folder, "published_concentrations.csv", columns)
    unique(rows, ("set", "matrix", "metabolite"))
    default_of: dict[str, str] = {}
    made = []
    for row in rows:
        entry = _published(row, metabolites, matrices)
        if entry.is_default and default_of.setdefault(entry.matrix_id, entry.set_id) != entry.set_id:
            raise row.error(
                "is_default",
                f"{entry.matrix_id} has two default sets, {default_of[entry.matrix_id]} and {entry.set_id}",
                "make one of them no default",
            )
        made.append(entry)
    return tuple(made)


def _published(
    row: Row, metabolites: Mapping[str, Metabolite], matrices: Mapping[str, Matrix]
) -> PublishedConcentration:
    mean = row.number_in("mean", 0) if row.text("mean") else None
    if mean is None and not row.text("spread"):
        raise row.error("mean", "neither a mean nor a spread is given", "write one of them")
    row.choice("basis_of_amount", BASES)
    return PublishedConcentration(
        set_id=row.required("set"),
        is_default=row.flag("is_default"),
        metabolite_id=row.known("metabolite", metabolites, "metabolite"),
        matrix_id=row.known("matrix", matrices, "matrix"),
        organism=row.required("organism"),
        mean=mean,
        spread=row.text("spread"),
        unit=row.required("unit"),
        per=row.required("per"),
        ln_mean=row.number_or_nan("ln_mean", -35, 2.5),
        ln_sd=row.number_or_nan("ln_sd", 0, 5),
        n=row.integer("n", 1) if row.text("n") else None,
        state=row.text("state"),
        source=row.required("source"),
        basis=row.required("basis"),
        confidence=row.required("confidence"),
        note=row.text("note"),
    )
