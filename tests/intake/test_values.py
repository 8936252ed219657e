"""One cell: a number, a limit, a word, or a refusal with its reason."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.intake.decimal_marks import Mark, Marks
from panelview.intake.panel import State
from panelview.intake.values import read_value, read_values

POINT, COMMA = Marks(Mark.POINT), Marks(Mark.COMMA)


@pytest.mark.parametrize(
    ("cell", "marks", "number"),
    [
        ("5", POINT, 5.0),
        (" 5.25 ", POINT, 5.25),
        ("+5.25", POINT, 5.25),
        (".5", POINT, 0.5),
        ("5.", POINT, 5.0),
        ("1,234.5", POINT, 1234.5),
        ("1,234,567", POINT, 1234567.0),
        ("1 234.5", POINT, 1234.5),
        ("1\u00a0234.5", POINT, 1234.5),
        ("1'234.5", POINT, 1234.5),
        ("1.5e-3", POINT, 0.0015),
        ("1.5E+2", POINT, 150.0),
        ("1e−3", POINT, 0.001),
        ("1,5", COMMA, 1.5),
        ("1.234,5", COMMA, 1234.5),
        ("1.234", COMMA, 1234.0),
        ("1 234,5", COMMA, 1234.5),
        ("1,5e2", COMMA, 150.0),
        ("0,001", COMMA, 0.001),
    ],
)
def test_numbers(cell, marks, number):
    found = read_value(cell, marks)
    assert (found.state, found.number) == (State.MEASURED, pytest.approx(number))
    assert float(read_values([cell], marks).number[0]) == pytest.approx(number)


@pytest.mark.parametrize(
    ("cell", "state", "number"),
    [
        ("<0.5", State.BELOW_LOQ, 0.5),
        ("< 0.5", State.BELOW_LOQ, 0.5),
        ("≤0.5", State.BELOW_LOQ, 0.5),
        ("<=0.5", State.BELOW_LOQ, 0.5),
        ("<0.5*", State.BELOW_LOQ, 0.5),
        (">30", State.ABOVE_RANGE, 30.0),
        ("> 30 H", State.ABOVE_RANGE, 30.0),
        ("≥30", State.ABOVE_RANGE, 30.0),
    ],
)
def test_limits_are_states_with_a_number(cell, state, number):
    found = read_value(cell, POINT)
    assert (found.state, found.number) == (state, number)


def test_a_limit_with_a_decimal_comma():
    assert read_value("< 0,5", COMMA).number == 0.5


@pytest.mark.parametrize(
    "cell",
    ["<LOQ", "< LOQ", "<LOD", "<lod", "<LLOQ", "BLQ", "BLOQ", "ND", "nd", "N.D.", "n.d.", "not detected", "n.n."],
)
def test_not_detected_is_below_a_limit_that_the_cell_does_not_state(cell):
    found = read_value(cell, POINT)
    assert found.state is State.BELOW_LOQ
    assert math.isnan(found.number)


@pytest.mark.parametrize(
    "cell", ["", "  ", "-", "–", ".", "NA", "n/a", "N/A", "#N/A", "NaN", "null", "None", "n.b.", "NF", "missing"]
)
def test_words_for_not_measured(cell):
    assert read_value(cell, POINT).state is State.MISSING


@pytest.mark.parametrize("cell", [">ULOQ", "ALQ", "> ULOQ"])
def test_over_a_limit_that_the_cell_does_not_state(cell):
    assert read_value(cell, POINT).state is State.ABOVE_RANGE


@pytest.mark.parametrize(
    ("cell", "flag"),
    [
        ("5.2*", "*"),
        ("5.2 *", "*"),
        ("* 5.2", "*"),
        ("5.2 H", "H"),
        ("5.2H", "H"),
        ("5.2 L", "L"),
        ("5.2 (H)", "(H)"),
        ("H 5.2", "H"),
        ("5.2 HH", "HH"),
        ("5.2↑", "↑"),
        ("5.2 H *", "H *"),
        ("** 5.2 L#", "** L #"),
    ],
)
def test_flags_are_taken_off_and_kept(cell, flag):
    found = read_value(cell, POINT)
    assert (found.state, found.number) == (State.MEASURED, 5.2)
    assert found.flag.replace(" ", "") == flag.replace(" ", "")


@pytest.mark.parametrize(
    ("cell", "why"),
    [
        ("0", "zero is not a concentration"),
        ("0.00", "zero is not a concentration"),
        ("<0", "zero is not a concentration"),
        ("-5", "a negative value is not a concentration"),
        ("−5", "a negative value is not a concentration"),
        ("-0.5e3", "a negative value is not a concentration"),
        ("inf", "is not a number"),
        ("Infinity", "is not a number"),
        ("1e400", "too large"),
        ("lots", "is not a number"),
        ("5 mmol/L", "holds a unit beside the number"),
        ("<5.0 mM", "holds a unit beside the number"),
        ("80 µmol/L H", "holds a unit beside the number"),
        ("5 %", "holds a unit beside the number"),
        ("5 furlongs", "is not a number"),
        ("~5", "is not a number"),
        ("4-5", "is not a number"),
        ("2026-03-04", "is not a number"),
        ("1_000", "is not a number"),
        ("١٢", "is not a number"),
        ("５", "is not a number"),
        ("0x10", "is not a number"),
        ("TRUE", "is not a number"),
        ("<<5", "is not a number"),
        ("1.2.3", "does not fit the decimal point"),
        ("1,2,3", "does not fit the decimal point"),
        ("1,5", "does not fit the decimal point"),
        ("12,34.5", "does not fit the decimal point"),
        ("1.234,5", "does not fit the decimal point"),
    ],
)
def test_what_is_refused_says_why_and_what_to_do(cell, why):
    found = read_value(cell, POINT)
    assert found.state is State.REFUSED
    assert why in found.why
    assert found.remedy
    assert math.isnan(found.number)
    assert read_values([cell], POINT).odd[0] == found


def test_zero_is_told_apart_so_that_a_status_can_explain_it():
    assert read_value("0", POINT).is_zero
    assert not read_value("-1", POINT).is_zero


class TestMixedMarks:
    MIXED = Marks(Mark.POINT, is_mixed=True)

    @pytest.mark.parametrize("cell", ["1.234", "1,234", "12.345", "<1.234"])
    def test_a_mark_before_three_digits_cannot_be_read(self, cell):
        assert read_value(cell, self.MIXED).state is State.REFUSED
        assert read_values([cell], self.MIXED).odd[0].state is State.REFUSED

    @pytest.mark.parametrize(("cell", "number"), [("1.5", 1.5), ("0.123", 0.123), ("1234.567", 1234.567), ("7", 7)])
    def test_a_number_of_the_commoner_mark_that_reads_one_way_is_taken(self, cell, number):
        assert read_value(cell, self.MIXED).number == number

    def test_a_number_of_the_other_mark_is_refused(self):
        assert "does not fit the decimal point" in read_value("1,5", self.MIXED).why


def test_a_lonely_thousands_mark_is_refused_where_other_thousands_have_none():
    found = read_value("1,234", Marks(Mark.POINT, is_ungrouped=True))
    assert found.state is State.REFUSED
    assert "thousands mark" in found.why
    assert read_value("1,234.5", Marks(Mark.POINT, is_ungrouped=True)).number == 1234.5


def test_a_long_cell_gives_a_short_sentence():
    assert len(read_value("x" * 100_000, POINT).why) < 150
    assert len(read_value("*" * 100_000 + "x", POINT).why) < 150


@given(st.floats(1e-30, 1e30), st.sampled_from(list(Mark)))
def test_a_number_survives_writing_and_reading(number, mark):
    cell = repr(number).replace(".", mark.value)
    assert read_value(cell, Marks(mark)).number == number
    assert read_values([cell], Marks(mark)).number[0] == number


@given(st.integers(1, 10**12), st.integers(0, 99), st.sampled_from([*Mark, None]), st.sampled_from(list(Mark)))
def test_thousands_marks_change_nothing(whole, hundredths, thousands, mark):
    number = float(f"{whole}.{hundredths:02d}")
    grouped = f"{whole:,}".replace(",", " " if thousands in (None, mark) else thousands.value)
    assert read_value(f"{grouped}{mark.value}{hundredths:02d}", Marks(mark)).number == number


@given(
    st.lists(st.text("0123456789.,<>+-eE_* HLnainfNDF\u00a0٣", max_size=9), max_size=30), st.sampled_from(list(Mark))
)
def test_many_cells_are_read_as_each_alone(cells, mark):
    together = read_values(cells, Marks(mark))
    for k, cell in enumerate(cells):
        alone = read_value(cell, Marks(mark))
        assert State(int(together.state[k])) is alone.state
        assert together.number[k] == pytest.approx(alone.number, rel=1e-15, nan_ok=True)


@given(st.text(max_size=40), st.sampled_from(list(Mark)), st.booleans())
def test_any_text_is_a_value_or_a_refusal_with_a_way_out(text, mark, is_mixed):
    found = read_value(text, Marks(mark, is_mixed=is_mixed))
    if found.state is State.REFUSED:
        assert found.why
        assert found.remedy
    elif not math.isnan(found.number):
        assert 0 < found.number < math.inf
