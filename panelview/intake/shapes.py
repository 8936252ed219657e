"""The shape of a table: long, wide, or analytes in rows; each becomes one stream of cells."""

from __future__ import annotations

from dataclasses import dataclass, field

from panelview.intake.headings import field_of, is_idle, split_unit
from panelview.intake.names import Names
from panelview.intake.problems import Problem, Severity
from panelview.intake.tabular import Grid, refused
from panelview.intake.units import UnknownUnit, read_unit

#: First cells of rows below the heading that describe the columns.
_UNIT_ROW = frozenset({"#unit", "#units", "unit", "units", "einheit", "[unit]", "(unit)"})
_LLOQ_ROW = frozenset({"#lloq", "#loq", "lloq", "loq", "#lod", "lod"})
_CV_ROW = frozenset({"#cv", "#cv%", "cv", "cv%", "cv_percent", "#cv_percent"})

METADATA = ("participant", "group", "matrix", "collected", "ph", "temperature", "ionic_strength", "pmg")


@dataclass(slots=True)
class Cell:
    """One reported value before it is understood; texts as written."""

    row: int
    column: str
    specimen: str
    name: str
    value: str
    unit: str
    comparator: str = ""
    flag: str = ""
    cv: str = ""
    lloq: str = ""
    replicate: str = ""


@dataclass
class Shaped:
    """A table in one shape: metadata rows and cells. metadata: (row, specimen, field → text)."""

    layout: str
    metadata: list[tuple[int, str, dict[str, str]]]
    cells: list[Cell]
    number_texts: list[str] = field(default_factory=list)
    problems: list[Problem] = field(default_factory=list)
    metadata_columns: dict[str, str] = field(default_factory=dict)


def shape(grid: Grid, names: Names) -> Shaped:
    """Find the shape of a grid and take it apart. Raises InputRefused."""
    name = grid.source.name
    heading = [h.strip() for h in grid.rows[0]]
    fields = [field_of(h) for h in heading]
    if len(heading) < 2:
        raise refused(
            name, grid.lines[0], "", "the table has a single column", "check the delimiter of the export"
        )
    if len(grid.rows) < 2:
        raise refused(
            name, grid.lines[0], "", "the table has a heading and no rows", "export the panel again"
        )
    if {"analyte", "value"} <= set(fields) and "specimen" in fields:
        return _long(grid, heading, fields)
    if "analyte" in fields[:2] and "specimen" not in fields:
        return _analytes_in_rows(grid, heading, fields)
    if "specimen" not in fields:
        fields = _assume_specimen_column(grid, heading, fields, names)
    return _wide(grid, heading, fields)


def _assume_specimen_column(grid: Grid, heading: list[str], fields: list[str], names: Names) -> list[str]:
    """Refuse a table without a specimen column, unless the first column can be nothing else."""
    first = [row[0].strip() for row in grid.rows[1:]]
    analytes = sum(names.match(split_unit(h)[0]).how not in ("unknown",) for h in heading[1:])
    if fields[0] == "" and analytes and len(set(first)) == len(first) and heading[0]:
        return ["specimen", *fields[1:]]
    raise refused(
        grid.source.name,
        grid.lines[0],
        "",
        "no column names the specimens (and there is none of specimen, analyte, value)",
        "head the column of specimen codes with specimen, and one column each for analyte, value and unit, "
        "or one column an analyte",
    )


def _duplicate_headings(grid: Grid, heading: list[str]) -> None:
    seen: set[str] = set()
    for h in heading:
        key = h.casefold()
        if h and key in seen:
            raise refused(
                grid.source.name,
                grid.lines[0],
                h,
                f"two columns are headed “{h}”",
                "rename or remove one of them",
            )
        seen.add(key)


def _long(grid: Grid, heading: list[str], fields: list[str]) -> Shaped:
    _duplicate_headings(grid, heading)
    at = {f: k for k, f in reversed(list(enumerate(fields))) if f}
    made = Shaped("long, " + grid.layout, [], [], metadata_columns=_columns(heading, fields))
    for k, h in enumerate(heading):
        if not fields[k] and h and not is_idle(h):
            made.problems.append(
                Problem(
                    Severity.NOTE,
                    grid.source.name,
                    grid.lines[0],
                    h,
                    "this column is not read",
                    "rename it if it holds something of the panel",
                )
            )

    def cell(row: list[str], name: str) -> str:
        return row[at[name]].strip() if name in at else ""

    meta = [f for f in METADATA if f in at]
    value_column = heading[at["value"]]
    for line, row in zip(grid.lines[1:], grid.rows[1:], strict=True):
        specimen = cell(row, "specimen")
        made.metadata.append((line, specimen, {f: cell(row, f) for f in meta}))
        made.cells.append(
            Cell(
                row=line,
                column=value_column,
                specimen=specimen,
                name=cell(row, "analyte"),
                value=cell(row, "value"),
                unit=cell(row, "unit"),
                comparator=cell(row, "comparator"),
                flag=cell(row, "flag"),
                cv=cell(row, "cv_percent"),
                lloq=cell(row, "lloq"),
                replicate=cell(row, "replicate"),
            )
        )
    made.number_texts = [c.value for c in made.cells]
    return made


def _columns(heading: list[str], fields: list[str]) -> dict[str, str]:
    return {f: h for f, h in reversed(list(zip(fields, heading, strict=True))) if f}


def _wide(grid: Grid, heading: list[str], fields: list[str]) -> Shaped:
    _duplicate_headings(grid, heading)
    code = fields.index("specimen")
    analytes = [
        k
        for k, f in enumerate(fields)
        if k != code and heading[k] and f not in (*METADATA, "flag", "replicate")
    ]
    if not analytes:
        raise refused(
            grid.source.name,
            grid.lines[0],
            "",
            "no column holds an analyte",
            "add one column an analyte with its unit",
        )
    split = {k: split_unit(heading[k]) for k in analytes}
    below, start = _rows_below(grid)
    made = Shaped(
        "wide, one row a specimen, " + grid.layout, [], [], metadata_columns=_columns(heading, fields)
    )
    unit = {k: _first(below["unit"], k) or split[k][1] for k in analytes}
    lloq = {k: _first(below["lloq"], k) for k in analytes}
    cv = {k: _first(below["cv"], k) for k in analytes}
    meta = [(f, k) for k, f in enumerate(fields) if f in METADATA]
    replicate = fields.index("replicate") if "replicate" in fields else -1
    flag = fields.index("flag") if "flag" in fields else -1
    for line, row in zip(grid.lines[start:], grid.rows[start:], strict=True):
        specimen = row[code].strip()
        made.metadata.append((line, specimen, {f: row[k].strip() for f, k in meta}))
        for k in analytes:
            made.cells.append(
                Cell(
                    row=line,
                    column=heading[k],
                    specimen=specimen,
                    name=split[k][0],
                    value=row[k],
                    unit=unit[k],
                    flag=row[flag].strip() if flag >= 0 else "",
                    cv=cv[k],
                    lloq=lloq[k],
                    replicate=row[replicate].strip() if replicate >= 0 else "",
                )
            )
    made.number_texts = [c.value for c in made.cells]
    return made


def _rows_below(grid: Grid) -> tuple[dict[str, list[str]], int]:
    """Units, LLOQ and CV rows right below the heading, and the index of the first specimen row."""
    found: dict[str, list[str]] = {"unit": [], "lloq": [], "cv": []}
    start = 1
    while start < len(grid.rows):
        word = next((c.strip() for c in grid.rows[start] if c.strip()), "").casefold()
        kind = next(
            (k for k, words in (("unit", _UNIT_ROW), ("lloq", _LLOQ_ROW), ("cv", _CV_ROW)) if word in words),
            "",
        )
        if not kind and start == 1 and all(_is_unit(c) for c in grid.rows[start] if c.strip()):
            kind = "unit"
        if not kind:
            break
        found[kind] = grid.rows[start]
        start += 1
    return found, start


def _is_unit(text: str) -> bool:
    try:
        read_unit(text)
    except UnknownUnit:
        return False
    return True


def _first(row: list[str], k: int) -> str:
    return row[k].strip() if row else ""


def _analytes_in_rows(grid: Grid, heading: list[str], fields: list[str]) -> Shaped:
    _duplicate_headings(grid, heading)
    analyte = fields.index("analyte")
    unit = fields.index("unit") if "unit" in fields else -1
    described = {"analyte", "unit", "cv_percent", "lloq"}
    specimens = [k for k, h in enumerate(heading) if h and fields[k] not in described and not is_idle(h)]
    made = Shaped("analytes in rows, " + grid.layout, [], [], metadata_columns={})
    cv = fields.index("cv_percent") if "cv_percent" in fields else -1
    lloq = fields.index("lloq") if "lloq" in fields else -1
    made.metadata = [(grid.lines[0], heading[k], {}) for k in specimens]
    for line, row in zip(grid.lines[1:], grid.rows[1:], strict=True):
        name, own_unit = split_unit(row[analyte])
        for k in specimens:
            made.cells.append(
                Cell(
                    row=line,
                    column=heading[k],
                    specimen=heading[k],
                    name=name,
                    value=row[k],
                    unit=row[unit].strip() if unit >= 0 else own_unit,
                    cv=row[cv].strip() if cv >= 0 else "",
                    lloq=row[lloq].strip() if lloq >= 0 else "",
                )
            )
    made.number_texts = [c.value for c in made.cells]
    return made
