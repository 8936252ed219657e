"""Which row of a table is its heading, where lines stand above it."""

from __future__ import annotations

import dataclasses
import re
from collections.abc import Sequence

from panelview.intake.headings import field_of, split_unit
from panelview.intake.names import Names
from panelview.intake.problems import Problem, Severity
from panelview.intake.tabular import MOST_ABOVE, Grid, refused, uneven

#: So many cells of a row are looked at.
_LOOKED_AT = 300

_NUMBER = re.compile(r"[<>≤≥]?\s*[+-]?[0-9.,]+\Z")


def from_heading(grid: Grid, names: Names) -> Grid:
    """The grid from its heading on; lines above it are told. Raises InputRefused where it cannot be found.

    The first row is the heading wherever no other row looks more like one.
    """
    if not grid.above and _is_heading(grid.rows[0], names):
        return grid
    name, above = grid.source.name, list(grid.above)
    if any(_is_heading(cells, names) for _, cells in above):
        raise uneven(name, grid.lines[0], len(grid.rows[0]), len(above[-1][1]))
    found = [k for k, cells in enumerate(grid.rows[: MOST_ABOVE + 1]) if _is_heading(cells, names)]
    if not found:
        if above and len(above[0][1]) == 1:
            what = "the first line holds a single cell, so it is no heading, and no other line looks like one"
            raise refused(name, above[0][0], "", what, "remove the lines above the heading")
        if above:
            raise uneven(name, grid.lines[0], len(grid.rows[0]), len(above[0][1]))
        return grid
    if len(found) > 1:
        lines = " and ".join(str(grid.lines[k]) for k in found[:2])
        what = f"lines {lines} both look like the heading of a table"
        raise refused(name, grid.lines[found[1]], "", what, "keep one table a file, with its heading in the first line")
    start = found[0]
    above += zip(grid.lines[:start], grid.rows[:start], strict=True)
    told = _not_read(name, above)
    return dataclasses.replace(
        grid, rows=grid.rows[start:], lines=grid.lines[start:], above=(), problems=(*grid.problems, told)
    )


def is_analyte(text: str, names: Names) -> bool:
    """Whether a heading (or a cell) names an analyte and no field."""
    return not field_of(text) and (names.knows(text) or names.knows(split_unit(text)[0]))


def _is_heading(cells: Sequence[str], names: Names) -> bool:
    """Whether a row names a column of specimens or analytes and one thing more, or two analytes.

    Numbers are codes of specimens at best, so a row that holds any must name two fields.
    """
    written = [c.strip() for c in cells[:_LOOKED_AT] if c.strip()]
    fields = [field_of(c) for c in written]
    if sum(map(bool, fields)) < 2 and any(map(_NUMBER.match, written)):
        return False
    known = sum(bool(f) or is_analyte(c, names) for f, c in zip(fields, written, strict=True))
    return known >= 2 and ("specimen" in fields or "analyte" in fields or known - sum(map(bool, fields)) >= 2)


def _not_read(name: str, above: list[tuple[int, list[str]]]) -> Problem:
    first, last = above[0][0], above[-1][0]
    words = " ".join(c.strip() for _, cells in above for c in cells if c.strip())
    shown = words if len(words) <= 60 else words[:57] + "…"
    place = f"line {first} stands" if first == last else f"lines {first} to {last} stand"
    what = f"{place} above the heading and {'is' if first == last else 'are'} not read (“{shown}”)"
    remedy = (
        "put what they tell of the specimens into columns"
        if len(above) > 1
        else "nothing need be done if it is a title"
    )
    return Problem(Severity.NOTE, name, first, "", what, remedy)
