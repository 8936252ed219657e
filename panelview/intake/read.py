"""Panel files to one panel: read, shape, understand, join; nothing vanishes without a word."""

from __future__ import annotations

import dataclasses
from collections import defaultdict
from collections.abc import Sequence
from pathlib import Path

import numpy as np

from panelview.catalogue.load import Catalogue
from panelview.intake.facts import UnreadableFact, condition_of, disagreement, matrix_of
from panelview.intake.names import Names
from panelview.intake.panel import Match, Panel, Readings, SourceFile, SpecimenFacts, State
from panelview.intake.problems import InputRefused, Problem, Severity
from panelview.intake.shapes import Shaped, shape
from panelview.intake.tabular import Grid, read_file, read_grid
from panelview.intake.understand import Reading, Understander, Understanding, settle_repeats
from panelview.intake.values import Mark

_CONDITIONS = ("ph", "temperature", "ionic_strength", "pmg")


def read_panels(paths: Sequence[Path], catalogue: Catalogue, *, matrix: str | None = None) -> Panel:
    """Read panel files into one panel.

    matrix: for specimens whose file states none. Raises InputRefused where nothing can be used.
    """
    return _panel([(p.name or str(p), read_file(Path(p))) for p in paths], catalogue, matrix)


def read_panel_bytes(name: str, data: bytes, catalogue: Catalogue, *, matrix: str | None = None) -> Panel:
    """As read_panels, from the bytes of one file."""
    return _panel([(name, data)], catalogue, matrix)


#: Spellings by the hash of the catalogue they were made from: making them takes longer than reading a small file.
_names_made: dict[str, Names] = {}


def _names(catalogue: Catalogue) -> Names:
    if catalogue.sha256 not in _names_made:
        _names_made[catalogue.sha256] = Names(catalogue)
    return _names_made[catalogue.sha256]


def _panel(files: list[tuple[str, bytes]], catalogue: Catalogue, matrix: str | None) -> Panel:
    names = _names(catalogue)
    join = _Join()
    for name, data in files:
        grid = read_grid(name, data)
        join.add(grid, _file(grid, catalogue, names, matrix))
    panel = join.panel()
    if not panel.specimens:
        first = Problem(
            Severity.FILE, files[0][0], 0, "", "no specimen can be used", "mend what the other lines name"
        )
        raise InputRefused((*(p for p in panel.problems if p.severity is not Severity.NOTE), first))
    return panel


@dataclasses.dataclass
class _File:
    """One file understood: its specimens that can be used, and those that cannot."""

    layout: str
    facts: dict[str, SpecimenFacts]
    refused: list[str]
    understood: Understanding
    problems: list[Problem]


def _file(grid: Grid, catalogue: Catalogue, names: Names, matrix: str | None) -> _File:
    shaped = shape(grid, names)
    problems = [*grid.problems, *shaped.problems]
    facts, refused = _specimens(grid.source, shaped, catalogue, matrix, problems)
    understander = Understander(catalogue, names, grid.source.name)
    understood = understander.understand(shaped, {code: f.matrix for code, f in facts.items()})
    settle_repeats(understood, grid.source.name)
    mark = "decimal point" if understood.mark is Mark.POINT else "decimal comma"
    return _File(f"{shaped.layout}, {mark}", facts, refused, understood, problems)


def _specimens(
    source: SourceFile, shaped: Shaped, catalogue: Catalogue, matrix: str | None, problems: list[Problem]
) -> tuple[dict[str, SpecimenFacts], list[str]]:
    """Facts of every specimen of a file; codes that cannot be used, with the problem that says why."""
    rows: defaultdict[str, list[tuple[int, dict[str, str]]]] = defaultdict(list)
    for line, code, texts in shaped.metadata:
        if code:
            rows[code].append((line, texts))
        else:
            column = shaped.metadata_columns.get("specimen", "specimen")
            problems.append(
                Problem(
                    Severity.SPECIMEN,
                    source.name,
                    line,
                    column,
                    "no specimen is named in this row",
                    "fill in its code",
                )
            )
    facts: dict[str, SpecimenFacts] = {}
    refused: list[str] = []
    unstated: list[str] = []
    for code, given in rows.items():
        try:
            facts[code] = _facts(source.name, code, given, shaped, catalogue, matrix)
        except _SpecimenRefused as error:
            problems.append(error.problem)
            refused.append(code)
            continue
        if not facts[code].matrix:
            unstated.append(code)
    if unstated:
        problems.append(
            Problem(
                Severity.NOTE,
                source.name,
                facts[unstated[0]].row,
                "",
                f"the matrix of {len(unstated)} specimens is not stated, so where a step can be read is not checked",
                "add a matrix column, or choose the matrix when opening the file (--matrix)",
            )
        )
    return facts, refused


class _SpecimenRefused(Exception):
    def __init__(self, problem: Problem) -> None:
        super().__init__(problem)
        self.problem = problem


def _facts(
    file: str,
    code: str,
    given: list[tuple[int, dict[str, str]]],
    shaped: Shaped,
    catalogue: Catalogue,
    matrix: str | None,
) -> SpecimenFacts:
    """Facts of one specimen from all its rows. Raises _SpecimenRefused."""
    known: dict[str, object] = {}
    first_row: dict[str, int] = {}
    done: set[tuple[tuple[str, str], ...]] = set()
    for line, texts in given:
        key = tuple(texts.items())
        if key in done:
            continue
        done.add(key)
        read: dict[str, object] = {}
        for field, text in texts.items():
            column = shaped.metadata_columns.get(field, field)
            try:
                if field == "matrix":
                    read[field] = matrix_of(text, catalogue)
                elif field in _CONDITIONS:
                    read[field] = condition_of(field, text)
                else:
                    read[field] = text
            except UnreadableFact as error:
                raise _SpecimenRefused(
                    Problem(Severity.SPECIMEN, file, line, column, error.what, error.remedy, code)
                ) from error
        clash = disagreement(known, read)
        if clash:
            column = shaped.metadata_columns.get(clash, clash)
            raise _SpecimenRefused(
                Problem(
                    Severity.SPECIMEN,
                    file,
                    line,
                    column,
                    f"{column} of {code} differs from that in row {first_row.get(clash, given[0][0])}",
                    "give one value a specimen, or two specimen codes",
                    code,
                )
            )
        for field, value in read.items():
            if value not in (None, "") and known.get(field) in (None, ""):
                known[field] = value
                first_row[field] = line
    conditions = {field: _number(known.get(field)) for field in _CONDITIONS}
    return SpecimenFacts(
        code=code,
        participant=str(known.get("participant") or ""),
        group=str(known.get("group") or ""),
        matrix=str(known.get("matrix") or matrix or ""),
        collected=str(known.get("collected") or ""),
        **conditions,
        source=file,
        row=given[0][0],
    )


def _number(value: object) -> float | None:
    return value if isinstance(value, float) else None


class _Join:
    """Files joined to one panel."""

    def __init__(self) -> None:
        self._sources: list[SourceFile] = []
        self._layouts: list[str] = []
        self._facts: dict[str, SpecimenFacts] = {}
        self._refused: list[str] = []
        self._readings: list[Reading] = []
        self._matches: dict[str, Match] = {}
        self._problems: list[Problem] = []

    def add(self, grid: Grid, file: _File) -> None:
        self._sources.append(grid.source)
        self._layouts.append(file.layout)
        self._problems += file.problems + file.understood.problems
        self._matches |= file.understood.matches
        clashing = {code for code, facts in file.facts.items() if self._clashes(code, facts)}
        self._refused += [c for c in (*file.refused, *clashing) if c not in self._refused]
        for code, facts in file.facts.items():
            if code not in clashing:
                self._facts.setdefault(code, facts)
        held = {(r.specimen, r.analyte) for r in self._readings if r.analyte and r.state is not State.MISSING}
        for reading in file.understood.readings:
            if reading.specimen in clashing:
                continue
            if (reading.specimen, reading.analyte) in held and reading.state is not State.MISSING:
                self._refuse_repeat(grid.source.name, reading)
            self._readings.append(reading)

    def _clashes(self, code: str, facts: SpecimenFacts) -> bool:
        earlier = self._facts.get(code)
        if earlier is None:
            return False
        for field in ("participant", "matrix", *_CONDITIONS):
            mine, theirs = getattr(facts, field), getattr(earlier, field)
            if mine not in (None, "") and theirs not in (None, "") and mine != theirs:
                self._problems.append(
                    Problem(
                        Severity.SPECIMEN,
                        facts.source,
                        facts.row,
                        field,
                        f"{field} of {code} differs from that in {earlier.source}",
                        "make them equal, or give two specimen codes",
                        code,
                    )
                )
                return True
        return False

    def _refuse_repeat(self, file: str, reading: Reading) -> None:
        reading.state, reading.mol_per_l = State.REFUSED, float("nan")
        reading.note = "another file reports this analyte of this specimen"
        self._problems.append(
            Problem(
                Severity.VALUE,
                file,
                reading.row,
                reading.column,
                f"{reading.analyte} of {reading.specimen} is already reported in another file",
                "keep it in one of the files",
                reading.specimen,
            )
        )

    def panel(self) -> Panel:
        position = {code: k for k, code in enumerate(self._facts)}
        kept = [r for r in self._readings if r.specimen in position]
        return Panel(
            sources=tuple(self._sources),
            layout="; ".join(dict.fromkeys(self._layouts)),
            specimens=tuple(self._facts.values()),
            readings=_columnar(kept, position),
            matches=tuple(self._matches.values()),
            problems=tuple(self._problems),
            refused_specimens=tuple(self._refused),
        )


def _columnar(readings: list[Reading], position: dict[str, int]) -> Readings:
    def objects(name: str) -> np.ndarray:
        made = np.empty(len(readings), dtype=object)
        made[:] = [getattr(r, name) for r in readings]
        return made

    def numbers(name: str, kind: type) -> np.ndarray:
        return np.array([getattr(r, name) for r in readings], dtype=kind)

    return Readings(
        specimen=np.array([position[r.specimen] for r in readings], dtype=np.intp),
        analyte=objects("analyte"),
        name=objects("name"),
        value=objects("value"),
        unit=objects("unit"),
        flag=objects("flag"),
        state=numbers("state", np.int8),
        mol_per_l=numbers("mol_per_l", np.float64),
        sd_ln=numbers("sd_ln", np.float64),
        sd_is_default=numbers("sd_is_default", np.bool_),
        shared_sd_ln=numbers("shared_sd_ln", np.float64),
        basis=objects("basis"),
        row=numbers("row", np.int64),
        column=objects("column"),
        note=objects("note"),
    )
