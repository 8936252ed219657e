"""What must hold for any panel: order does not matter, nothing vanishes, nothing but a refusal is ever raised."""

from __future__ import annotations

import math
import random

from hypothesis import given, settings
from hypothesis import strategies as st
from panel_texts import by_name, read

from panelview.intake.panel import State
from panelview.intake.problems import InputRefused, Severity
from panelview.intake.summary import describe, intake_rows

ANALYTES = ("lactate", "pyruvate", "glucose", "ATP", "foo", "Glu", "2PG/3PG")
values = st.one_of(
    st.floats(1e-3, 1e3).map(lambda x: f"{x:.3g}" if 1e-3 < x < 999 else "1.5"),
    st.sampled_from(["", "ND", "<0.5", "> 30", "0", "-1", "x", "NA", "5.1 H"]),
)
tables = st.integers(1, 5).flatmap(lambda n: st.lists(st.lists(values, min_size=7, max_size=7), min_size=n, max_size=n))


def wide(table: list[list[str]], rows: list[int], columns: list[int]) -> str:
    head = ["specimen", "matrix", *(f"{ANALYTES[c]} (mmol/L)" for c in columns)]
    body = [[f"S{r}", "plasma", *(table[r][c] for c in columns)] for r in rows]
    return "\n".join(",".join(row) for row in (head, *body)) + "\n"


def long(table: list[list[str]], order: list[tuple[int, int]]) -> str:
    rows = [f"S{r},plasma,{ANALYTES[c]},{table[r][c]},mmol/L" for r, c in order]
    return "specimen,matrix,analyte,value,unit\n" + "\n".join(rows) + "\n"


def keyed(catalogue, text: str) -> dict[tuple[str, str], tuple[str, float]]:
    """(specimen, analyte as written) → state and number; as written, since some names are matched to none."""
    panel = read(catalogue, text)
    return {(r[0], r[1]): (r[7], -1.0 if math.isnan(r[5]) else r[5]) for r in intake_rows(panel)}


@given(table=tables, shuffle=st.integers(0, 1000))
def test_the_order_of_rows_and_columns_and_the_layout_do_not_matter(catalogue, table, shuffle):
    rows, columns = list(range(len(table))), list(range(len(ANALYTES)))
    plain = keyed(catalogue, wide(table, rows, columns))
    order = random.Random(shuffle)
    order.shuffle(rows)
    order.shuffle(columns)
    assert keyed(catalogue, wide(table, rows, columns)) == plain
    cells = [(r, c) for r in rows for c in columns]
    order.shuffle(cells)
    assert keyed(catalogue, long(table, cells)) == plain


@given(table=tables)
def test_every_cell_becomes_a_reading_in_file_order(catalogue, table):
    rows, columns = list(range(len(table))), list(range(len(ANALYTES)))
    readings = read(catalogue, wide(table, rows, columns)).readings
    assert readings.value.tolist() == [v.strip() for row in table for v in row]
    assert readings.row.tolist() == [r + 2 for r in rows for _ in columns]
    used = [State.MEASURED, State.BELOW_LOQ, State.ABOVE_RANGE]
    for k in range(len(readings)):
        if not math.isnan(readings.mol_per_l[k]):
            assert readings.state[k] in used
            assert readings.mol_per_l[k] > 0
            assert readings.sd_ln[k] > 0
            assert readings.shared_sd_ln[k] > 0
            assert readings.basis[k]
        else:
            assert math.isnan(readings.sd_ln[k])
            assert readings.basis[k] == ""


@given(table=tables)
def test_a_decimal_comma_says_the_same_as_a_point(catalogue, table):
    text = wide(table, list(range(len(table))), list(range(len(ANALYTES))))
    german = text.replace(",", ";").replace(".", ",")
    if any("." in value for row in table for value in row[:4]):
        assert by_name(read(catalogue, german)) == by_name(read(catalogue, text))


words = st.one_of(
    st.text(max_size=12),
    st.sampled_from(
        "specimen matrix analyte value unit plasma RBC lactate Lac G6P/F6P Glu foo mmol/L umol/g % mg/dL 1.5 1,5 1.234 "
        "1,234 <0.5 >5 ND NA - 0 -3 #unit #LLOQ ph 7.2 99 A B replicate 1 status below_loq comparator < id sample lloq "
        "cv_percent 0.04 compartment cytosol date time group participant pyruvate_uM inf nan 1e400 1_0".split()
    ),
)


@settings(max_examples=300)
@given(
    rows=st.lists(st.lists(words, min_size=1, max_size=6), max_size=6),
    delimiter=st.sampled_from(list(",;\t|")),
    is_even=st.booleans(),
)
def test_any_table_is_a_panel_or_a_refusal(catalogue, rows, delimiter, is_even):
    if is_even and rows:
        rows = [["specimen", *(row * 6)[:4]] if k == 0 else (row * 6)[:5] for k, row in enumerate(rows)]
    text = "\n".join(delimiter.join(row) for row in rows)
    panel_or_refusal(catalogue, text.encode("utf-8", "replace"))


@given(data=st.binary(max_size=400))
def test_any_bytes_are_a_panel_or_a_refusal(catalogue, data):
    panel_or_refusal(catalogue, data)


def panel_or_refusal(catalogue, data: bytes) -> None:
    try:
        panel = read(catalogue, data)
    except InputRefused as error:
        told = error.problems
        has_reason = any(p.severity is Severity.FILE for p in told)
    else:
        has_reason = True
        told = panel.problems
        assert len(list(intake_rows(panel))) == len(panel.readings)
        assert describe(panel, catalogue)
        assert panel.specimens
    assert has_reason
    for problem in told:
        assert problem.what
        assert problem.remedy
        assert len(str(problem).splitlines()) == 1
