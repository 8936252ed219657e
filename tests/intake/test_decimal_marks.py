"""The decimal mark of a file, from all its numbers."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.intake.decimal_marks import Mark, Marks, decimal_mark, without_group_blanks


@pytest.mark.parametrize(
    ("cells", "mark"),
    [
        (["1.5", "2"], Mark.POINT),
        (["1,5", "2"], Mark.COMMA),
        (["<0,5", "ND", ""], Mark.COMMA),
        (["12,5*", "3 H"], Mark.COMMA),
        (["1.234,5"], Mark.COMMA),
        (["1,234.5"], Mark.POINT),
        (["1.234.567"], Mark.COMMA),
        (["1,234,567"], Mark.POINT),
        (["0.123"], Mark.POINT),
        (["1234.567"], Mark.POINT),
        ([".125"], Mark.POINT),
        (["1,5e-3"], Mark.COMMA),
        ([], Mark.POINT),
        (["1180", "64"], Mark.POINT),
    ],
    ids=lambda value: " ".join(value) if isinstance(value, list) else value.name,
)
def test_it_is_told_by_numbers_that_can_be_read_in_one_way_only(cells, mark):
    found = decimal_mark(cells)
    assert (found.mark, found.is_mixed, found.doubtful) == (mark, False, -1)


def test_one_sure_number_settles_the_doubtful_ones():
    assert decimal_mark(["1.234", "1.180", "0.5"]).doubtful == -1


def test_a_mark_before_three_digits_alone_is_doubtful_and_named():
    found = decimal_mark(["12", "1.234", "2.345"])
    assert (found.mark, found.doubtful) == (Mark.POINT, 1)


def test_an_ungrouped_thousand_settles_the_doubt():
    assert decimal_mark(["1180", "1.234"]) == Marks(Mark.POINT)


@pytest.mark.parametrize("cells", [["1.5", "1,5"], ["1.234", "1,234"], ["0,5", "1,234.5"]], ids=" ".join)
def test_contradictions_are_told(cells):
    assert decimal_mark(cells).is_mixed


@pytest.mark.parametrize("text", ["04.03.2026", "2026-03-04", "1.2.3", "lots", "P-12,5-x", "...", ",,"])
def test_what_is_no_number_is_no_evidence(text):
    assert decimal_mark([text]) == Marks(Mark.POINT)


@pytest.mark.parametrize("blank", [" ", "\u00a0", "\u202f", "\u2009", "'", "’"], ids=lambda c: f"U+{ord(c):04X}")
def test_blanks_and_apostrophes_between_groups_go(blank):
    assert without_group_blanks(f"1{blank}234{blank}567.5") == "1234567.5"
    assert without_group_blanks(f"1{blank}23") == f"1{blank}23"


@given(st.lists(st.floats(0.001, 1e5), min_size=1), st.sampled_from(list(Mark)))
def test_numbers_of_one_mark_never_contradict_one_another(numbers, mark):
    cells = [f"{x:.2f}".replace(".", mark.value) for x in numbers]
    assert decimal_mark(cells).mark is mark
    assert not decimal_mark(cells).is_mixed


@given(st.lists(st.text("0123456789.,-<eE *H", max_size=8)))
def test_the_order_of_cells_does_not_matter(cells):
    forth, back = decimal_mark(cells), decimal_mark(cells[::-1])
    assert (forth.mark, forth.is_mixed, forth.doubtful >= 0) == (back.mark, back.is_mixed, back.doubtful >= 0)
