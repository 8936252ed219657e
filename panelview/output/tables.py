"""Rows to CSV: UTF-8, decimal point, NaN empty; text that a spreadsheet would run is made harmless."""

from __future__ import annotations

import csv
import math
import re
from collections.abc import Iterable, Iterator, Sequence
from pathlib import Path

from panelview.assess.review import Review
from panelview.intake.summary import INTAKE_COLUMNS, intake_rows
from panelview.output.rows import (
    DRIVER_COLUMNS,
    STATE_COLUMNS,
    Row,
    StepRows,
    Value,
    driver_rows,
    state_rows,
)

#: Significant digits of a written number: more than any input has, so that nothing is lost to rounding.
_DIGITS = 9

#: Spreadsheets take text that begins with one of these as a formula (OWASP, CSV injection).
_RISKY = ("=", "+", "-", "@", "\t", "\r", "\n", "＝", "＋", "－", "＠")

_PLAIN_NUMBER = re.compile(r"[+-]?\d+([.,]\d+)?([eE][+-]?\d+)?")


def cell(value: Value) -> str:
    """A value as it stands in a CSV file.

    >>> cell(True), cell(-0.0), cell(float("nan")), cell(float("-inf")), cell(1 / 3)
    ('true', '0', '', '-inf', '0.333333333')
    >>> cell("=1+1"), cell("-5.2")
    ("'=1+1", '-5.2')
    """
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, int):
        return str(value)
    if isinstance(value, float):
        return "" if math.isnan(value) else f"{value + 0.0:.{_DIGITS}g}"
    if value.startswith(_RISKY) and not _PLAIN_NUMBER.fullmatch(value):
        return f"'{value}"
    return value


def write_csv(path: Path, columns: Sequence[str], rows: Iterable[Row]) -> None:
    """Write one table. Raises OSError."""
    with path.open("w", encoding="utf-8", newline="") as stream:
        writer = csv.writer(stream, lineterminator="\n")
        writer.writerow(columns)
        writer.writerows([cell(v) for v in row] for row in rows)


#: Tables that every review is written to.
TABLES = ("steps.csv", "drivers.csv", "state.csv", "intake.csv")


def table_rows(review: Review, name: str) -> tuple[Sequence[str], Iterator[Row]]:
    """Columns and rows of one of `TABLES`, specimen by specimen."""
    specimens = range(len(review.specimens))
    if name == "steps.csv":
        steps = StepRows(review)
        return StepRows.columns, (row for i in specimens for row in steps.of(i))
    if name == "drivers.csv":
        return DRIVER_COLUMNS, (row for i in specimens for row in driver_rows(review, i))
    if name == "state.csv":
        return STATE_COLUMNS, (row for i in specimens for row in state_rows(review, i))
    return INTAKE_COLUMNS, intake_rows(review.panel)


def write_table(review: Review, name: str, path: Path) -> None:
    """Write one of `TABLES` to `path`. Raises OSError."""
    columns, rows = table_rows(review, name)
    write_csv(path, columns, rows)
