"""A wrong row in a table gives one error that names file, row and column and says what to do."""

from __future__ import annotations

import csv
import shutil
from collections.abc import Callable
from pathlib import Path

import pytest

from panelview import resource_files
from panelview.catalogue.load import load_catalogue
from panelview.catalogue.rows import CatalogueError

Rows = list[dict[str, str]]


@pytest.fixture
def folder(tmp_path: Path) -> Path:
    """A copy of the shipped tables."""
    made = tmp_path / "resources"
    made.mkdir()
    for path in resource_files.resources().glob("*.*"):
        if path.is_file():
            shutil.copy(path, made)
    return made


def rewrite(table: Path, change: Callable[[Rows], None]) -> None:
    with table.open(newline="", encoding="utf-8") as stream:
        reader = csv.DictReader(stream)
        columns = list(reader.fieldnames or ())
        rows = list(reader)
    change(rows)
    with table.open("w", newline="", encoding="utf-8") as stream:
        writer = csv.DictWriter(stream, columns, lineterminator="\n")
        writer.writeheader()
        writer.writerows(rows)


def refused(folder: Path) -> CatalogueError:
    with pytest.raises(CatalogueError) as caught:
        load_catalogue(folder)
    return caught.value


# table, key column and its value (first row that has it), column to damage, damaged text, words of the error
CELLS = [
    ("metabolites.csv", "id", "glucose", "formula", "C6H12Q", "formula"),
    ("metabolites.csv", "id", "glucose", "molar_mass_g_per_mol", "180.2", "molar mass"),
    ("metabolites.csv", "id", "glucose", "molar_mass_g_per_mol", "", "molar mass"),
    ("metabolites.csv", "id", "glucose", "unit_activity", "maybe", "maybe"),
    ("metabolites.csv", "id", "glucose", "species_data", "somewhere", "somewhere"),
    ("metabolites.csv", "id", "glucose", "name", "", "empty"),
    ("metabolites.csv", "id", "glucose", "symbol", "G6P", "already stands in row"),
    ("species.csv", "reactant", "lactate", "reactant", "lactat", "perhaps lactate"),
    ("species.csv", "reactant", "lactate", "charge", "1", "does not go with"),
    ("species.csv", "reactant", "lactate", "hydrogen", "4.5", "whole number"),
    ("species.csv", "reactant", "lactate", "formation_energy_kj_per_mol", "nan", "finite"),
    ("species.csv", "reactant", "lactate", "formation_energy_kj_per_mol", "-516,72", "finite"),
    ("species.csv", "reactant", "acetyl_coa", "hydrogen", "38", "does not go with"),
    ("species.csv", "reactant", "lactate", "reactant", "galactitol", "no species data"),
    ("levels.csv", "reactant", "glutamate", "sd_kj_per_mol", "-1", "outside"),
    ("levels.csv", "reactant", "glutamate", "reactant", "hmg_coa", "no reactant with species"),
    ("names.csv", "name", "Lac", "analytes", "lactat", "perhaps lactate"),
    ("names.csv", "name", "Lac", "is_sum", "yes", "sum of one"),
    ("names.csv", "name", "Lac", "analytes", "", "stands for nothing"),
    ("known_analytes.csv", "id", "taurine", "id", "glucose", "catalogued metabolite"),
    ("steps.csv", "id", "enolase", "reaction", "phosphoglycerate_2 = phosphoenolpyruvate", "H -2, O -1"),
    ("steps.csv", "id", "enolase", "reaction", "phosphoglycerate_2 -> phosphoenolpyruvate", "needs one"),
    ("steps.csv", "id", "enolase", "reaction", "water + phosphoglycerat_2 = water", "no metabolite"),
    ("steps.csv", "id", "enolase", "reaction", "lactate + lactate = lactate", "stands twice"),
    ("steps.csv", "id", "enolase", "reaction", "lactate = pyruvate + hydrogen_ion", "held by pH"),
    ("steps.csv", "id", "enolase", "reaction", "0 lactate = pyruvate", "not a reactant"),
    ("steps.csv", "id", "enolase", "reaction", "phosphoglycerate_3 = phosphoglycerate_2", "already stands"),
    ("steps.csv", "id", "enolase", "compartments", "lysosome", "no compartment"),
    ("steps.csv", "id", "enolase", "compartments", "", "empty"),
    ("steps.csv", "id", "enolase", "usual_direction", "backward", "backward"),
    ("steps.csv", "id", "enolase", "short", "PK", "already stands in row"),
    ("constants.csv", "step", "enolase", "k_prime", "-5.665", "not positive"),
    ("constants.csv", "step", "enolase", "k_prime", "0", "not positive"),
    ("constants.csv", "step", "enolase", "sd_kj_per_mol", "-0.8", "outside"),
    ("constants.csv", "step", "enolase", "temperature_k", "37", "outside"),
    ("constants.csv", "step", "enolase", "ph", "70", "outside"),
    ("constants.csv", "step", "enolase", "ionic_strength_mol_per_l", "250", "outside"),
    ("constants.csv", "step", "enolase", "pmg", "-3", "outside"),
    ("constants.csv", "step", "enolase", "step", "hexokinase", "already stands in row"),
    ("constants.csv", "step", "hmg_coa_lyase", "basis", "estimated", "no species"),
    ("constants.csv", "step", "hmg_coa_lyase", "k_prime", "3", "basis is “none”"),
    ("measurements.csv", "step", "enolase", "evaluation", "E", "not one of"),
    ("measurements.csv", "step", "enolase", "k_prime", "inf", "finite"),
    ("measurements.csv", "step", "enolase", "temperature_k", "25", "outside"),
    ("measurements.csv", "step", "enolase", "step", "enolas", "perhaps enolase"),
    ("matrices.csv", "id", "liver", "temperature_c", "310", "outside"),
    ("matrices.csv", "id", "liver", "usual_basis", "gram", "not one of"),
    ("conversions.csv", "matrix", "liver", "litres_pool_water", "0", "not positive"),
    ("conversions.csv", "matrix", "liver", "matrix", "spleen", "no matrix"),
    ("applicability.csv", "step", "enolase", "assessability", "perhaps", "not one of"),
    ("applicability.csv", "step", "enolase", "reason", "", "empty"),
    ("applicability.csv", "step", "enolase", "matrix", "liver", "already stands in row"),
    ("effectors.csv", "step", "hexokinase", "effect", "helps", "not one of"),
    ("effectors.csv", "step", "hexokinase", "metabolite", "g6p", "no metabolite"),
    ("regulation.csv", "enzyme", "Glucokinase", "steps", "hexokinase;hexokinase", "twice"),
    ("couples.csv", "step", "lactate_dehydrogenase", "pool", "nad_everywhere", "not one of"),
    ("couples.csv", "step", "glycerol_3_phosphate_dehydrogenase", "pool", "adp_cytosol", "takes no part"),
    ("couples.csv", "step", "lactate_dehydrogenase", "step", "hydroxybutyrate_dehydrogenase", "does not run"),
    ("couples.csv", "step", "lactate_dehydrogenase", "priority", "0", "outside"),
    ("published_concentrations.csv", "set", "beutler_1984", "mean", "-3", "outside"),
    ("published_concentrations.csv", "set", "beutler_1984", "ln_mean", "27.8", "outside"),
    ("published_concentrations.csv", "set", "red_cell_model_2004", "is_default", "yes", "two default sets"),
]

#: Damage that shows in another column than the damaged one.
SEEN_IN = {
    ("species.csv", "hydrogen", "38"): "charge",
    ("couples.csv", "pool", "adp_cytosol"): "step",
}


@pytest.mark.parametrize(
    ("table", "key", "value", "column", "damage", "words"),
    [pytest.param(*cell, id=f"{cell[0]}: {cell[3]} = {cell[4] or 'nothing'}") for cell in CELLS],
)
def test_a_wrong_cell_is_named(
    folder: Path, table: str, key: str, value: str, column: str, damage: str, words: str
) -> None:
    line = 0

    def change(rows: Rows) -> None:
        nonlocal line
        index = next(i for i, row in enumerate(rows) if row[key] == value)
        line = index + 2
        assert rows[index][column] != damage
        rows[index][column] = damage

    rewrite(folder / table, change)
    error = refused(folder)
    assert error.file == table
    assert words in error.what
    assert error.remedy
    if "already stands in row" in words:  # the later of the two rows is named
        assert error.row >= line
    else:
        assert error.row == line
    assert error.column == SEEN_IN.get((table, column, damage), column)
    assert str(error) == f"{table}:{error.row}:{error.column}: {error.what}; {error.remedy}"


def test_a_reaction_may_not_cross_a_zero_family(folder: Path) -> None:
    # No other nucleotide balances in its elements, so the family of one is renamed instead.
    def change(rows: Rows) -> None:
        for row in rows:
            if row["id"] == "gdp":
                row["zero_family"] = "another"

    rewrite(folder / "metabolites.csv", change)
    error = refused(folder)
    assert (error.file, error.column) == ("steps.csv", "reaction")
    assert "zero of energy is arbitrary" in error.what


def test_an_unbalanced_coefficient_is_named_with_its_elements(folder: Path) -> None:
    def change(rows: Rows) -> None:
        row = next(row for row in rows if row["id"] == "adenylate_kinase")
        row["reaction"] = "3 adp = atp + amp"

    rewrite(folder / "steps.csv", change)
    error = refused(folder)
    assert error.column == "reaction"
    assert "C -10" in error.what
    assert "P -2" in error.what


@pytest.mark.parametrize(
    ("table", "key", "value", "missing"),
    [
        ("applicability.csv", "step", "enolase", "enolase in"),
        ("constants.csv", "step", "enolase", "enolase has no row"),
        ("species.csv", "reactant", "urea", "no species of urea"),
    ],
)
def test_a_missing_row_is_named(folder: Path, table: str, key: str, value: str, missing: str) -> None:
    def change(rows: Rows) -> None:
        del rows[next(i for i, row in enumerate(rows) if row[key] == value)]

    rewrite(folder / table, change)
    error = refused(folder)
    assert (error.file, error.column) == (table, key)
    assert missing in error.what


@pytest.mark.parametrize("table", ["metabolites.csv", "species.csv", "steps.csv", "names.csv", "couples.csv"])
def test_a_row_that_stands_twice_is_refused(folder: Path, table: str) -> None:
    rewrite(folder / table, lambda rows: rows.append(dict(rows[0])))
    error = refused(folder)
    assert error.file == table
    assert "already stands in row 2" in error.what


def test_an_unknown_column_is_named(folder: Path) -> None:
    table = folder / "conversions.csv"
    table.write_text(table.read_text(encoding="utf-8").replace("relative_sd", "sd", 1), encoding="utf-8")
    error = refused(folder)
    assert (error.file, error.row, error.column) == ("conversions.csv", 1, "sd")


def test_a_missing_column_is_named(folder: Path) -> None:
    lines = (folder / "effectors.csv").read_text(encoding="utf-8").splitlines()
    (folder / "effectors.csv").write_text(lines[0].removesuffix(",note") + "\n", encoding="utf-8")
    error = refused(folder)
    assert (error.file, error.row, error.column) == ("effectors.csv", 1, "note")


def test_a_row_with_a_cell_too_many_is_named(folder: Path) -> None:
    table = folder / "conversions.csv"
    lines = table.read_text(encoding="utf-8").splitlines()
    lines[4] += ",extra"
    table.write_text("\n".join(lines) + "\n", encoding="utf-8")
    error = refused(folder)
    assert (error.file, error.row) == ("conversions.csv", 5)
    assert "7 cells under 6 headings" in error.what


@pytest.mark.parametrize(
    ("content", "words"),
    [
        ("Größe".encode("cp1252"), "UTF-8"),
        (b'matrix,"basis\n', "CSV"),
        (b"", "missing"),
    ],
)
def test_a_table_that_is_no_table_is_named(folder: Path, content: bytes, words: str) -> None:
    (folder / "conversions.csv").write_bytes(content)
    error = refused(folder)
    assert error.file == "conversions.csv"
    assert words in error.what


def test_a_missing_table_is_named(folder: Path) -> None:
    (folder / "steps.csv").unlink()
    error = refused(folder)
    assert error.file == "steps.csv"
    assert "missing" in error.what


@pytest.mark.parametrize("content", [None, "", "[]", '{"version": 3}', "{}"])
def test_a_catalogue_without_version_is_refused(folder: Path, content: str | None) -> None:
    if content is None:
        (folder / "catalogue.json").unlink()
    else:
        (folder / "catalogue.json").write_text(content, encoding="utf-8")
    assert refused(folder).file == "catalogue.json"
