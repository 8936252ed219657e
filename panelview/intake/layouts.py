"""The three layouts of a table, each taken apart into records."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from itertools import compress

import numpy as np

from panelview.intake.headings import field_of, is_idle, is_personal, split_unit
from panelview.intake.names import Names
from panelview.intake.problems import Problem, Severity
from panelview.intake.records import METADATA, Records, Series, Statement, same_text, stripped, texts
from panelview.intake.tabular import Grid, refused
from panelview.intake.units import UnknownUnit, read_unit
from panelview.intake.values import MISSING_WORDS, NOT_DETECTED

#: First cells of rows below the heading that describe the columns, without #, blanks and brackets.
_ROW_WORDS = {
    "unit": "unit",
    "units": "unit",
    "einheit": "unit",
    "lloq": "lloq",
    "loq": "lloq",
    "lod": "lloq",
    "cv": "cv",
    "cv%": "cv",
    "cv_percent": "cv",
}

#: Fields that a wide table has no use for; their columns are named as not read.
_LONG_ONLY = frozenset(
    {"ignored", "analyte", "value", "unit", "comparator", "status", "cv_percent", "lloq", "compartment"}
)


@dataclass
class Table:
    """A grid with the field of every column ("" where none).

    second: field → a second column that continues it (a time beside a date); heading_unit: unit that the heading of
    the value column states; code: column of specimen codes where no heading says so, −1 otherwise.
    """

    grid: Grid
    heading: list[str]
    fields: list[str]
    second: dict[str, int]
    heading_unit: str
    problems: list[Problem]
    code: int = -1

    def at(self, field: str) -> int:
        """Index of the column of a field, −1 where there is none."""
        return self.fields.index(field) if field in self.fields else -1

    def note(self, row: int, column: str, what: str, remedy: str, severity: Severity = Severity.NOTE) -> None:
        self.problems.append(Problem(severity, self.grid.source.name, row, column, what, remedy))

    def not_read(self, k: int) -> None:
        what, remedy = "this column is not read", "rename it if it holds something of the panel"
        if is_personal(self.heading[k]):
            what = "this column describes a person, so it is not read and nothing of it is kept"
            remedy = "nothing need be done; head it participant if it holds codes that name nobody"
        self.note(self.grid.lines[0], self.heading[k] or str(k + 1), what, remedy)

    @property
    def columns(self) -> dict[str, str]:
        return {f: h for f, h in zip(self.fields, self.heading, strict=True) if f}


def _positions(codes: Sequence[str]) -> tuple[list[str], np.ndarray]:
    """Different codes in their order, and the index into them for every entry."""
    position: dict[str, int] = {}
    index = [position.setdefault(code, len(position)) for code in codes]
    return list(position), np.array(index, dtype=np.intp)


def _statements(
    table: Table, lines: Sequence[int], codes: Sequence[str], columns: Sequence[Sequence[str]]
) -> list[Statement]:
    """What rows say of specimens; a row that repeats an earlier one word by word is left out."""
    fields = [f for f in METADATA if f in table.fields]
    made: list[Statement] = []
    seen: set[tuple[str, ...]] = set()
    given = [columns[table.at(f)] for f in fields]
    for f, k in table.second.items():
        given[fields.index(f)] = [
            " ".join(t for t in both if t) for both in zip(columns[table.at(f)], columns[k], strict=True)
        ]
    for line, code, *said in zip(lines, codes, *given, strict=True):
        key = (code, *said)
        if key not in seen:
            seen.add(key)
            made.append(Statement(line, code, dict(zip(fields, said, strict=True))))
    return made


def long(table: Table) -> Records:
    """One value a row."""
    grid = table.grid
    columns = [stripped(column) for column in zip(*grid.rows[1:], strict=True)]
    lines = grid.lines[1:]
    for k, h in enumerate(table.heading):
        is_second = k in table.second.values()
        if not table.fields[k] and not is_second and not is_idle(h) and (h or any(columns[k])):
            table.not_read(k)
    blank: Sequence[str] = [""] * len(lines)

    def column(field: str) -> Sequence[str]:
        return columns[table.at(field)] if field in table.fields else blank

    series: dict[tuple[str, ...], int] = {}
    series_of = [
        series.setdefault(key, len(series))
        for key in zip(
            *map(column, ("analyte", "unit", "lloq", "cv_percent", "comparator", "compartment")), strict=True
        )
    ]
    made = []
    for name, unit, lloq, cv, comparator, compartment in series:
        both = table.heading_unit if unit else ""
        made.append(Series(name, unit or table.heading_unit, both, lloq, cv, comparator, compartment))
    codes, specimen = _positions(column("specimen"))
    return Records(
        source=grid.source,
        layout=f"long, {grid.layout}",
        columns=table.columns,
        statements=_statements(table, lines, column("specimen"), columns),
        codes=codes,
        series=made,
        specimen=specimen,
        series_of=np.array(series_of, dtype=np.intp),
        row=np.array(lines, dtype=np.int64),
        column=same_text(table.heading[table.at("value")], len(lines)),
        value=texts(column("value")),
        flag=texts(column("flag")),
        status=texts(column("status")) if table.at("status") >= 0 else None,
        replicate=texts(column("replicate")) if table.at("replicate") >= 0 else None,
        problems=table.problems,
    )


def wide(table: Table, names: Names) -> Records:
    """One row a specimen, one column an analyte."""
    grid, heading = table.grid, table.heading
    below, start = _rows_below(table)
    rows, lines = grid.rows[start:], grid.lines[start:]
    if not rows:
        raise refused(grid.source.name, grid.lines[0], "", "no row holds a specimen", "export the panel again")
    columns = [stripped(column) for column in zip(*rows, strict=True)]
    code = table.code if table.code >= 0 else table.at("specimen")
    analytes = [k for k in range(len(heading)) if k != code and _is_analyte_column(table, k, columns[k])]
    if not analytes:
        raise refused(
            grid.source.name, grid.lines[0], "", "no column holds an analyte", "add one column an analyte with its unit"
        )
    n, m = len(rows), len(analytes)
    codes, position = _positions(columns[code])
    # Cells in file order: row by row.
    value = np.empty((n, m), dtype=object)
    for j, k in enumerate(analytes):
        value[:, j] = columns[k]

    def by_row(field: str) -> np.ndarray:
        k = table.at(field)
        return np.repeat(texts(columns[k]), m) if k >= 0 else same_text("", n * m)

    return Records(
        source=grid.source,
        layout=f"wide, one row a specimen, {grid.layout}",
        columns=table.columns,
        statements=_statements(table, lines, columns[code], columns),
        codes=codes,
        series=[_series(heading[k], below, k, names) for k in analytes],
        specimen=np.repeat(position, m),
        series_of=np.tile(np.arange(m, dtype=np.intp), n),
        row=np.repeat(np.array(lines, dtype=np.int64), m),
        column=np.tile(texts([heading[k] or str(k + 1) for k in analytes]), n),
        value=value.ravel(),
        flag=by_row("flag"),
        replicate=by_row("replicate") if table.at("replicate") >= 0 else None,
        problems=table.problems,
    )


def _is_analyte_column(table: Table, k: int, cells: Sequence[str]) -> bool:
    """Whether a column of a wide table holds an analyte; a column that is not read is named."""
    field, h = table.fields[k], table.heading[k]
    if field in METADATA or field in ("flag", "replicate", "specimen") or k in table.second.values():
        return False
    if field in _LONG_ONLY or is_idle(h) or is_personal(h):
        if field != "ignored":
            table.not_read(k)
        return False
    return bool(h) or any(cells)


def _series(heading: str, below: dict[str, list[str]], k: int, names: Names) -> Series:
    name, unit = (heading, "") if names.knows(heading) else split_unit(heading)

    def under(kind: str) -> str:
        return below[kind][k].strip() if kind in below else ""

    in_row = under("unit")
    return Series(name, in_row or unit, unit if in_row else "", under("lloq"), under("cv"))


def _rows_below(table: Table) -> tuple[dict[str, list[str]], int]:
    """Units, LLOQ and CV rows right below the heading, and the index of the first specimen row."""
    rows = table.grid.rows
    found: dict[str, list[str]] = {}
    start = 1
    while start < len(rows):
        first = next(c.strip() for c in rows[start] if c.strip())
        kind = _ROW_WORDS.get(first.casefold().strip("#[]() :"), "")
        if not kind and start == 1 and all(_is_unit(c) for c in rows[start] if c.strip()):
            kind = "unit"
        if not kind:
            break
        if kind in found:
            what = f"there are two rows of {'units' if kind == 'unit' else kind.upper()}"
            raise refused(table.grid.source.name, table.grid.lines[start], "", what, "keep one of them")
        found[kind] = rows[start]
        start += 1
    return found, start


def _is_unit(text: str) -> bool:
    try:
        read_unit(text.strip())
    except UnknownUnit as error:
        return error.is_known and not text.strip().replace(".", "").isdigit()
    return True


def analytes_in_rows(table: Table, names: Names) -> Records:
    """One row an analyte, one column a specimen; rows that are headed group, matrix and the like say what these are."""
    grid, heading = table.grid, table.heading
    first = table.at("analyte")
    field = [field_of(row[first]) for row in grid.rows[1:]]
    said = [(f, row, line) for f, row, line in zip(field, grid.rows[1:], grid.lines[1:], strict=True) if f in METADATA]
    is_analyte = [f not in METADATA for f in field]
    rows, lines = (list(compress(part[1:], is_analyte)) for part in (grid.rows, grid.lines))
    columns = [stripped(column) for column in zip(*rows, strict=True)]
    described = {k: table.at(k) for k in ("analyte", "unit", "lloq", "cv_percent")}
    specimens = [
        k
        for k, h in enumerate(heading)
        if k not in described.values() and table.fields[k] != "ignored" and _is_specimen_column(table, k, columns[k])
    ]
    if not specimens:
        what = "no column holds the values of a specimen"
        raise refused(grid.source.name, grid.lines[0], "", what, "add one column a specimen, headed with its code")

    def text(field: str, row: int) -> str:
        return columns[described[field]][row] if described[field] >= 0 else ""

    series = []
    for r in range(len(rows)):
        written = text("analyte", r)
        name, own_unit = (written, "") if names.knows(written) else split_unit(written)
        unit = text("unit", r)
        series.append(Series(name, unit or own_unit, own_unit if unit else "", text("lloq", r), text("cv_percent", r)))
    n, m = len(rows), len(specimens)
    value = np.empty((n, m), dtype=object)
    for j, k in enumerate(specimens):
        value[:, j] = columns[k]
    codes = [heading[k] for k in specimens]
    return Records(
        source=grid.source,
        layout=f"analytes in rows, {grid.layout}",
        columns={f: row[first].strip() for f, row, _ in said},
        statements=[
            *(Statement(grid.lines[0], code, {}) for code in codes),
            *(Statement(line, heading[k], {f: row[k].strip()}) for f, row, line in said for k in specimens),
        ],
        codes=codes,
        series=series,
        specimen=np.tile(np.arange(m, dtype=np.intp), n),
        series_of=np.repeat(np.arange(n, dtype=np.intp), m),
        row=np.repeat(np.array(lines, dtype=np.int64), m),
        column=np.tile(texts(codes), n),
        value=value.ravel(),
        flag=same_text("", n * m),
        problems=table.problems,
    )


def _is_specimen_column(table: Table, k: int, cells: Sequence[str]) -> bool:
    """Whether a column beside the analytes holds values; a column that is not read is named."""
    h = table.heading[k]
    if is_idle(h) or not (h or any(cells)):
        return False
    words = [c for c in cells if c.casefold() not in MISSING_WORDS and c.casefold() not in NOT_DETECTED]
    if h and (not words or any(map(str.isdigit, "".join(words)))):
        return True
    table.not_read(k)
    return False
