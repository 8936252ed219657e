"""Panel files to one panel: read, take apart, put specimens together, understand, join."""

from __future__ import annotations

from collections.abc import Sequence
from pathlib import Path

import numpy as np

from panelview.catalogue.load import Catalogue
from panelview.intake.facts import UnreadableFact, matrix_of
from panelview.intake.names import Names
from panelview.intake.panel import Panel
from panelview.intake.plausibility import far_from_published
from panelview.intake.problems import InputRefused, Problem, Severity
from panelview.intake.records import Records
from panelview.intake.repeats import joined, settle_repeats
from panelview.intake.shapes import shape
from panelview.intake.specimens import gather
from panelview.intake.tabular import read_file, read_grid, refused
from panelview.intake.telling import problems_of
from panelview.intake.understand import Understood, understand


def read_panels(paths: Sequence[Path], catalogue: Catalogue, *, matrix: str | None = None) -> Panel:
    """Read panel files into one panel.

    matrix: for specimens whose files state none. Raises InputRefused where a file cannot be read (every such file is
    named: a panel without one of its files would not be what was asked for) or no specimen can be used.
    """
    if not paths:
        raise refused("panel", 0, "", "no file is given", "name at least one file")
    names = _names_of(catalogue)
    files: list[Records] = []
    problems: list[Problem] = []
    for path in paths:
        try:
            files.append(_records(path.name or str(path), read_file(path), names))
        except InputRefused as error:
            problems += error.problems
    if problems:
        raise InputRefused(tuple(problems))
    return _panel(files, catalogue, names, matrix)


def read_panel_bytes(name: str, data: bytes, catalogue: Catalogue, *, matrix: str | None = None) -> Panel:
    """As read_panels, from the bytes of one file."""
    names = _names_of(catalogue)
    return _panel([_records(name, data, names)], catalogue, names, matrix)


#: The spellings of the catalogue that was read with last: making them takes longer than reading a small file.
_last_names: list[tuple[Catalogue, Names]] = []


def _names_of(catalogue: Catalogue) -> Names:
    for known, names in _last_names:
        if known is catalogue:
            return names
    _last_names[:] = [(catalogue, Names(catalogue))]
    return _last_names[0][1]


def _records(name: str, data: bytes, names: Names) -> Records:
    """The records of one file. A reader of another format joins here. Raises InputRefused."""
    return shape(read_grid(name, data), names)


def _panel(files: list[Records], catalogue: Catalogue, names: Names, matrix: str | None) -> Panel:
    problems: list[Problem] = []
    files = _without_twins(files, problems)
    specimens = gather(files, catalogue, _known(matrix, catalogue, files[0].source.name))
    facts = tuple(specimens.facts.values())
    problems += [p for records in files for p in records.problems] + specimens.problems
    if not facts:
        what = "no specimen of it can be used"
        first = Problem(Severity.FILE, files[0].source.name, 0, "", what, "mend what the other lines name")
        raise InputRefused((first, *(p for p in problems if p.severity is not Severity.NOTE)))
    understood = [understand(records, facts, catalogue, names) for records in files]
    for records, made in zip(files, understood, strict=True):
        problems += problems_of(records.source.name, made, facts)
        problems += far_from_published(records.source.name, made, facts, catalogue)
    readings = joined([made.readings for made in understood])
    problems += settle_repeats(
        readings,
        np.concatenate([made.analyte_number(catalogue) for made in understood]),
        np.concatenate([made.replicates for made in understood]),
        np.repeat(np.arange(len(files)), [len(made.readings) for made in understood]),
        [records.source.name for records in files],
        facts,
    )
    layouts = [_layout(records, made) for records, made in zip(files, understood, strict=True)]
    matches = {s.name: names.match(s.name) for made in understood for s in made.series if s.name}
    return Panel(
        sources=tuple(records.source for records in files),
        layout="; ".join(dict.fromkeys(layouts)),
        specimens=facts,
        readings=readings,
        matches=tuple(matches.values()),
        problems=tuple(problems),
        refused_specimens=tuple(specimens.refused),
    )


def _layout(records: Records, made: Understood) -> str:
    return f"{records.layout}, decimal {made.marks.mark.name.lower()}"


def _without_twins(files: list[Records], problems: list[Problem]) -> list[Records]:
    """The files without those whose content was given before."""
    kept: dict[str, Records] = {}
    for records in files:
        earlier = kept.setdefault(records.source.sha256, records)
        if earlier is not records:
            what = f"this file has the same content as {earlier.source.name}, and was read once"
            remedy = "give each file once"
            problems.append(Problem(Severity.NOTE, records.source.name, 0, "", what, remedy))
    return list(kept.values())


def _known(matrix: str | None, catalogue: Catalogue, file: str) -> str | None:
    if matrix is None:
        return None
    try:
        return matrix_of(matrix, catalogue).matrix or None
    except UnreadableFact as error:
        raise refused(file, 0, "", error.what, error.remedy) from error
