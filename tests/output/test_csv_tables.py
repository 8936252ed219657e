"""The CSV files of a review."""

from __future__ import annotations

import csv
import math
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.assess.calls import Assessability
from panelview.assess.review import Review
from panelview.output.tables import TABLES, cell, write_csv, write_table

#: Names and order fixed by the contract of the command line.
CONTRACT = [
    "specimen",
    "step",
    "enzyme",
    "ec",
    "pathway",
    "reaction",
    "assessability",
    "reason",
    "ln_gamma",
    "ln_k_prime",
    "delta_g0_prime_kj_per_mol",
    "delta_g0_prime_sd",
    "delta_g_kj_per_mol",
    "delta_g_sd",
    "delta_g_lower95",
    "delta_g_upper95",
    "p_reversed",
    "p_near_equilibrium",
    "direction",
    "distance",
    "reference_n",
    "reference_lower",
    "reference_upper",
    "shift_kj_per_mol",
    "shift_sd",
    "shift",
    "q_value",
    "highlighted",
    "censored",
    "inferred",
    "constant_source",
]

Rows = list[dict[str, str]]


@pytest.fixture(scope="session")
def tables(red_cells: Review, tmp_path_factory: pytest.TempPathFactory) -> dict[str, Rows]:
    folder = tmp_path_factory.mktemp("tables")
    found = {}
    for name in TABLES:
        write_table(red_cells, name, folder / name)
        found[name] = _read(folder / name)
    return found


def _read(path: Path) -> Rows:
    with path.open(encoding="utf-8", newline="") as stream:
        return list(csv.DictReader(stream))


def _step(rows: Rows, specimen: str, step: str) -> dict[str, str]:
    return next(r for r in rows if r["specimen"] == specimen and r["step"] == step)


def test_steps_begin_with_the_columns_of_the_contract_in_their_order(tables: dict[str, Rows]) -> None:
    assert list(tables["steps.csv"][0])[: len(CONTRACT)] == CONTRACT


@pytest.mark.parametrize(
    ("name", "columns"),
    [
        ("drivers.csv", "specimen step term contribution_kj_per_mol"),
        ("state.csv", "specimen quantity compartment couple value lower95 upper95 unit validity reason"),
        (
            "intake.csv",
            (
                "specimen analyte_as_written analyte value_as_written unit_as_written mol_per_l sd_ln "
                "state row column note"
            ),
        ),
    ],
)
def test_the_other_tables_hold_the_columns_of_the_contract(
    tables: dict[str, Rows], name: str, columns: str
) -> None:
    assert list(tables[name][0])[: len(columns.split())] == columns.split()


def test_every_specimen_has_a_row_for_every_step(tables: dict[str, Rows], red_cells: Review) -> None:
    rows = tables["steps.csv"]
    steps = {s.id for s in red_cells.catalogue.steps}
    for code in ("C01", "P1-a", "P4"):
        assert {r["step"] for r in rows if r["specimen"] == code} == steps


def test_a_second_compartment_has_a_row_only_where_it_can_be_read(
    tables: dict[str, Rows], red_cells: Review
) -> None:
    readable = int(
        (red_cells.findings.assessability[:, len(red_cells.catalogue.steps) :] <= Assessability.PROXY).sum()
    )
    expected = len(red_cells.specimens) * len(red_cells.catalogue.steps) + readable
    assert len(tables["steps.csv"]) == expected


def test_the_written_numbers_are_those_of_the_review(tables: dict[str, Rows], red_cells: Review) -> None:
    i = next(k for k, s in enumerate(red_cells.specimens) if s.code == "P1-a")
    c = next(k for k, e in enumerate(red_cells.columns) if e.step.id == "pyruvate_kinase")
    row = _step(tables["steps.csv"], "P1-a", "pyruvate_kinase")
    for name, array in (
        ("delta_g_kj_per_mol", red_cells.findings.delta_g),
        ("shift_kj_per_mol", red_cells.findings.shift),
        ("ln_k_prime", red_cells.findings.ln_k_prime),
        ("q_value", red_cells.findings.q_value),
    ):
        assert float(row[name]) == pytest.approx(float(array[i, c]), rel=1e-8)
    assert row["shift"] == "pushed_forward"
    assert row["highlighted"] == "true"
    assert row["temperature_c"] == "37"


def test_an_open_side_is_inf_and_the_value_empty(tables: dict[str, Rows]) -> None:
    row = _step(tables["steps.csv"], "P3 <ß & µ>", "pyruvate_kinase")
    assert row["delta_g_kj_per_mol"] == ""
    assert row["delta_g_lower95"] == "-inf"
    assert math.isfinite(float(row["delta_g_upper95"]))
    assert row["censored"] == "true"


def test_what_is_not_known_is_empty_never_nan(tables: dict[str, Rows]) -> None:
    for rows in tables.values():
        assert not any(v.casefold() == "nan" for r in rows for v in r.values())


def test_drivers_of_a_step_add_up_to_its_shift(tables: dict[str, Rows]) -> None:
    parts = [
        float(r["contribution_kj_per_mol"])
        for r in tables["drivers.csv"]
        if r["specimen"] == "P1-a" and r["step"] == "pyruvate_kinase"
    ]
    shift = float(_step(tables["steps.csv"], "P1-a", "pyruvate_kinase")["shift_kj_per_mol"])
    assert len(parts) == 5
    assert sum(parts) == pytest.approx(shift, abs=1e-6)


def test_intake_holds_every_reading_in_file_order(tables: dict[str, Rows], red_cells: Review) -> None:
    rows = tables["intake.csv"]
    assert len(rows) == len(red_cells.panel.readings)
    assert [int(r["row"]) for r in rows] == red_cells.panel.readings.row.tolist()
    assert {r["state"] for r in rows} == {"measured", "below_loq", "unmatched"}


def test_a_specimen_code_that_a_spreadsheet_would_run_is_made_harmless(tables: dict[str, Rows]) -> None:
    codes = {r["specimen"] for rows in tables.values() for r in rows}
    assert "'=cmd|'/c calc'!A1" in codes
    assert not any(code.startswith("=") for code in codes)


@given(text=st.text(max_size=20))
def test_no_text_cell_begins_like_a_formula(text: str) -> None:
    shown = cell(text)
    assert shown in (text, f"'{text}")
    if shown[:1] in ("+", "-"):
        float(shown.replace(",", "."))  # only a plain number may begin so
    else:
        assert shown[:1] not in ("=", "@", "\t", "\r", "\n")


@given(value=st.floats(allow_nan=False, allow_infinity=False))
def test_a_number_stays_a_number_with_a_decimal_point(value: float) -> None:
    shown = cell(value)
    assert "," not in shown
    assert float(shown) == pytest.approx(value, rel=1e-8)
    assert shown != "-0"


def test_text_with_commas_quotes_and_breaks_comes_back_as_it_was(tmp_path: Path) -> None:
    texts = ['a "b", c', "line\nbreak", "ΔG′ µmol/L", "a;b"]
    write_csv(tmp_path / "t.csv", ("text",), ((t,) for t in texts))
    assert [r["text"] for r in _read(tmp_path / "t.csv")] == texts


def test_whole_numbers_of_numpy_are_not_written_as_text(red_cells: Review) -> None:
    assert cell(np.int32(3).item()) == "3"
    assert cell(red_cells.findings.reference_n.tolist()[0][0]).isdigit()
