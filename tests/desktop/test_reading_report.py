"""What was read, as rows: the gravest problem first, every value as written and as used."""

from __future__ import annotations

from dataclasses import replace

import pytest

from panelview.desktop.reading_report import (
    PROBLEM_HEADINGS,
    VALUE_HEADINGS,
    ValueRows,
    left_out,
    problem_rows,
    summary,
)
from panelview.intake.problems import Problem, Severity


@pytest.fixture
def panel(review):
    problems = (
        Problem(Severity.NOTE, "made.csv", 1, "", "no CV in the file", "5 % was taken"),
        Problem(Severity.VALUE, "made.csv", 9, "Lactate", "“1,2,3” is no number", "mend it", "P1-a"),
        Problem(Severity.VALUE, "made.csv", 4, "ATP", "“-3” is negative", "mend it", "C01"),
        Problem(Severity.SPECIMEN, "made.csv", 12, "ph", "pH 12 is outside the model's range", "mend it", "X"),
    )
    return replace(review.panel, problems=problems)


def test_what_is_left_out_stands_before_what_is_only_noted(panel):
    rows = problem_rows(panel)
    assert [row[0] for row in rows] == ["specimen left out", "value left out", "value left out", "note"]
    assert [row[1] for row in rows] == ["12", "4", "9", "1"]
    assert all(len(row) == len(PROBLEM_HEADINGS) for row in rows)


def test_what_is_left_out_is_counted_in_words(panel):
    assert left_out(panel) == "2 values and 1 specimen"
    assert left_out(replace(panel, problems=panel.problems[:1])) == ""


def test_every_value_is_listed_as_written_and_as_used(review):
    rows = ValueRows(review.panel)
    assert len(rows) == len(review.panel.readings)
    assert all(len(row) == len(VALUE_HEADINGS) for row in rows[:50])
    below = next(row for row in rows if row[7] == "below loq")
    assert below[3] == "<0.004 mmol/L"
    assert below[5] == "< 4.00 µmol/L"
    assert "(default)" in rows[0][6]


def test_the_summary_counts_what_was_read(review):
    text = summary(review.panel)
    assert "28 specimens" in text
    assert "1 beyond a limit of quantification" in text
