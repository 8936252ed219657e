"""The shape of a table: long, wide, or analytes in rows; each is taken apart into records."""

from __future__ import annotations

from panelview.intake.heading_row import from_heading, is_analyte
from panelview.intake.headings import field_of, is_idle, is_own_heading, own_heading, split_unit
from panelview.intake.layouts import Table, analytes_in_rows, long, wide
from panelview.intake.names import Names
from panelview.intake.problems import Problem, Severity
from panelview.intake.records import Records
from panelview.intake.tabular import Grid, refused

#: So many headings and first cells are looked up to tell the shape of a table whose headings do not.
_LOOKED_AT = 300


def shape(grid: Grid, names: Names) -> Records:
    """Find the shape of a grid and take it apart. Raises InputRefused."""
    if len(grid.rows[0]) < 2:
        what = "the table has a single column"
        raise refused(grid.source.name, grid.lines[0], "", what, "export it with one column a field")
    grid = from_heading(grid, names)
    name, line = grid.source.name, grid.lines[0]
    heading = [h.strip() for h in grid.rows[0]]
    if len(grid.rows) < 2:
        raise refused(name, line, "", "the table has a heading and no rows", "export the panel again")
    _refuse_twins(grid, heading)
    table = _with_fields(grid, heading)
    fields = table.fields
    if "specimen" in fields and "analyte" in fields:
        if "value" in fields:
            return long(table)
        if not any(is_analyte(h, names) for h in heading):
            what = "there are columns of specimens and analytes, and none of values"
            raise refused(name, line, "", what, "head the column of values with value")
    if "specimen" in fields:
        return wide(table, names)
    return _by_content(table, names)


def _refuse_twins(grid: Grid, heading: list[str]) -> None:
    seen: set[str] = set()
    for h in heading:
        if h and h.casefold() in seen:
            what = f"two columns are headed “{h}”"
            raise refused(grid.source.name, grid.lines[0], h, what, "rename or remove one of them")
        seen.add(h.casefold())


def _with_fields(grid: Grid, heading: list[str]) -> Table:
    """The table with the field of every column, at most one column a field."""
    fields = [field_of(h) for h in heading]
    heading_unit = ""
    if "value" not in fields and "analyte" in fields:
        for k, h in enumerate(heading):
            name, unit = split_unit(h)
            if unit and field_of(name) == "value":
                fields[k], heading_unit = "value", unit
    problems = list(grid.problems)
    second: dict[str, int] = {}
    for field in dict.fromkeys(f for f in fields if f):
        at = [k for k, f in enumerate(fields) if f == field]
        own = [k for k in at if is_own_heading(heading[k], field)]
        if len(at) == 1:
            continue
        if field == "collected" and len(at) == 2:  # a date and a time
            second[field] = at[1]
            fields[at[1]] = ""
            continue
        if not own:
            both = " and ".join(f"“{heading[k]}”" for k in at)
            what = f"{both} both look like the {own_heading(field)}"
            remedy = f"head the one to be read with {own_heading(field)}, or remove the others"
            raise refused(grid.source.name, grid.lines[0], heading[at[1]], what, remedy)
        for k in at:
            if k != own[0]:
                fields[k] = "ignored"
                problems.append(_not_read(grid, heading[k], f"“{heading[own[0]]}” is read in its place"))
    return Table(grid, heading, fields, second, heading_unit, problems)


def _not_read(grid: Grid, column: str, why: str) -> Problem:
    remedy = "rename it if it holds something of the panel"
    return Problem(Severity.NOTE, grid.source.name, grid.lines[0], column, f"this column is not read: {why}", remedy)


def _by_content(table: Table, names: Names) -> Records:
    """A table none of whose headings means the specimens: told by where the names of analytes are."""
    grid, heading, fields = table.grid, table.heading, table.fields
    analyte = fields.index("analyte") if "analyte" in fields[:2] else 0
    in_heading = sum(is_analyte(h, names) for h in heading[1:_LOOKED_AT])
    in_rows = sum(is_analyte(row[analyte], names) for row in grid.rows[1:_LOOKED_AT])
    if in_rows and in_rows >= in_heading:
        fields[analyte] = "analyte"
        return analytes_in_rows(table, names)
    code = fields.index("participant") if "participant" in fields else 0
    codes = [row[code].strip() for row in grid.rows[1:]]
    is_free = fields[code] in ("", "participant", "analyte") and not is_idle(heading[code])
    if in_heading and is_free and len(set(codes)) == len(codes):
        if fields[code] != "participant":
            fields[code] = "specimen"
        table.code = code
        column = heading[code] or "1"
        what = "no column is headed specimen; this one was taken, since each row has another entry in it"
        remedy = "head the column of specimen codes with specimen"
        table.problems.append(Problem(Severity.NOTE, grid.source.name, grid.lines[0], column, what, remedy))
        return wide(table, names)
    raise refused(
        grid.source.name,
        grid.lines[0],
        "",
        "no column names the specimens (and no first column the analytes)",
        "head the column of specimen codes with specimen, and one column each for analyte, value and unit, "
        "or one column an analyte",
    )
