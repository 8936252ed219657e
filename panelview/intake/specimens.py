"""What all files of a panel say of each specimen, put together; a specimen that is contradicted is left out."""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np

from panelview.catalogue.load import Catalogue
from panelview.intake.facts import MatrixWord, UnreadableFact, condition_of, matrix_of
from panelview.intake.not_specimens import IN_GROUPS, not_a_specimen
from panelview.intake.panel import SpecimenFacts
from panelview.intake.problems import Problem, Severity
from panelview.intake.records import METADATA, Records, Statement

_CONDITIONS = ("ph", "temperature", "ionic_strength", "pmg")

#: What to do about a row that holds nothing but a code.
_NOTHING = "nothing need be done if it is a remark; otherwise fill in its values"


@dataclass
class Specimens:
    """facts: by code, in the order of the files; refused: codes left out, or the place of a row without one."""

    facts: dict[str, SpecimenFacts] = field(default_factory=dict)
    refused: list[str] = field(default_factory=list)
    problems: list[Problem] = field(default_factory=list)


@dataclass(frozen=True, slots=True)
class _Said:
    """One fact and where it stands."""

    value: str | float
    file: str
    row: int


class _Refused(Exception):
    def __init__(self, file: str, row: int, column: str, what: str, remedy: str) -> None:
        super().__init__(what)
        self.file = file
        self.row = row
        self.column = column
        self.what = what
        self.remedy = remedy


def gather(files: Sequence[Records], catalogue: Catalogue, matrix: str | None) -> Specimens:
    """The facts of every specimen. matrix: id for specimens of which no file states one."""
    made = Specimens()
    by_code: defaultdict[str, list[tuple[Records, Statement]]] = defaultdict(list)
    filled: Counter[str] = Counter()
    for records in files:
        for statement in records.statements:
            by_code[statement.code].append((records, statement))
        counted = np.bincount(records.specimen[records.value != ""], minlength=len(records.codes)).tolist()
        filled.update({code: counted[k] for k, code in enumerate(records.codes)})
    for records, statement in by_code.pop("", []):
        _leave_out_nameless(made, records, statement)
    reader = _Reader(catalogue, made)
    unstated: list[str] = []
    for code, statements in by_code.items():
        try:
            _check_kind(code, statements)
            said = reader.read(code, statements)
            if not said and not filled[code]:
                _check_row(code, *statements[0])
        except _Refused as error:
            count = filled[code]
            what = f"{error.what}, so {_short(code)} is left out ({count} value{'s' if count != 1 else ''})"
            made.problems.append(
                Problem(Severity.SPECIMEN, error.file, error.row, error.column, what, error.remedy, code)
            )
            made.refused.append(code)
            continue
        if "matrix" not in said:
            unstated.append(code)
        records, first = statements[0]
        made.facts[code] = _facts(code, said, matrix or "", records.source.name, first.row)
    _tell_unstated(made, unstated, matrix)
    return made


def _check_kind(code: str, statements: list[tuple[Records, Statement]]) -> None:
    """Raise _Refused for a row that says it is no specimen, by its code or in a column of groups or matrices."""
    for records, statement in statements:
        for name, text in (("specimen", code), *((n, statement.facts.get(n, "")) for n in ("group", "matrix"))):
            kind = "the heading" if text and text == records.columns.get(name) else not_a_specimen(text)
            if kind and (name != "group" or kind in ("the heading", *IN_GROUPS)):
                what = f"“{_short(text)}” names {kind}, not a specimen"
                remedy = "nothing need be done if so; otherwise give it another word"
                column = records.columns.get(name, code)
                raise _Refused(records.source.name, statement.row, column, what, remedy)


def _check_row(code: str, records: Records, statement: Statement) -> None:
    """Raise _Refused for a row of a wide table that holds nothing but a first cell: a footnote, mostly."""
    if "specimen" in records.columns and "analyte" not in records.columns:
        what = f"nothing but “{_short(code)}” stands in this row"
        raise _Refused(records.source.name, statement.row, records.columns["specimen"], what, _NOTHING)


def _column(records: Records, name: str) -> str:
    return records.columns.get(name, name)


def _short(text: str) -> str:
    return text if len(text) <= 40 else text[:37] + "…"


def _leave_out_nameless(made: Specimens, records: Records, statement: Statement) -> None:
    column = _column(records, "specimen")
    what = "no specimen is named in this row, so it is left out"
    made.problems.append(
        Problem(Severity.SPECIMEN, records.source.name, statement.row, column, what, "fill in its code")
    )
    made.refused.append(f"(no code, row {statement.row})")


def _facts(code: str, said: dict[str, _Said], matrix: str, file: str, row: int) -> SpecimenFacts:
    def text(name: str) -> str:
        return str(said[name].value) if name in said else ""

    def number(name: str) -> float | None:
        return float(said[name].value) if name in said else None

    return SpecimenFacts(
        code=code,
        participant=text("participant"),
        group=text("group"),
        matrix=text("matrix") or matrix,
        collected=text("collected"),
        ph=number("ph"),
        temperature=number("temperature"),
        ionic_strength=number("ionic_strength"),
        pmg=number("pmg"),
        source=file,
        row=row,
    )


def _tell_unstated(made: Specimens, unstated: list[str], matrix: str | None) -> None:
    if not unstated:
        return
    first = made.facts[unstated[0]]
    count = f"{len(unstated)} specimen{'s' if len(unstated) != 1 else ''}"
    if matrix:
        what = f"no matrix is stated for {count}; {matrix} was taken, as chosen for the whole input"
        remedy = "add a matrix column if that is not so"
    else:
        what = f"the matrix of {count} is not stated, so where a step can be read is not checked"
        remedy = "add a matrix column, or choose the matrix when opening the file (--matrix)"
    made.problems.append(Problem(Severity.NOTE, first.source, first.row, "", what, remedy))


class _Reader:
    """Reads the statements of one specimen after the other; tells once what it assumed."""

    def __init__(self, catalogue: Catalogue, made: Specimens) -> None:
        self._catalogue = catalogue
        self._made = made
        self._told: set[tuple[str, str]] = set()
        self._conditions: dict[tuple[str, str], float | None] = {}
        self._matrices: dict[str, MatrixWord] = {}

    def read(self, code: str, statements: list[tuple[Records, Statement]]) -> dict[str, _Said]:
        """The facts of one specimen. Raises _Refused."""
        known: dict[str, _Said] = {}
        for records, statement in statements:
            for name in METADATA:
                text = statement.facts.get(name, "")
                if not text:
                    continue
                value = self._value(name, text, records, statement)
                if value in (None, ""):
                    continue
                said = _Said(value, records.source.name, statement.row)
                earlier = known.setdefault(name, said)
                if earlier is not said and not _agree(name, earlier.value, value):
                    self._contradict(code, _column(records, name), earlier, said)
        return known

    def _value(self, name: str, text: str, records: Records, statement: Statement) -> str | float | None:
        file, column = records.source.name, _column(records, name)
        try:
            if name in _CONDITIONS:
                if (name, text) not in self._conditions:
                    self._conditions[name, text] = condition_of(name, text)
                return self._conditions[name, text]
            if name != "matrix":
                return text
            if text not in self._matrices:
                self._matrices[text] = matrix_of(text, self._catalogue)
            word = self._matrices[text]
        except UnreadableFact as error:
            raise _Refused(file, statement.row, column, error.what, error.remedy) from error
        if word.is_like and (file, text) not in self._told:
            self._told.add((file, text))
            what = f"“{text}” is read as the matrix {word.matrix}"
            remedy = "check that its conditions and conversions fit"
            self._made.problems.append(Problem(Severity.NOTE, file, statement.row, column, what, remedy))
        return word.matrix

    def _contradict(self, code: str, column: str, earlier: _Said, later: _Said) -> None:
        place = f"row {earlier.row}" if earlier.file == later.file else f"row {earlier.row} of {earlier.file}"
        what = f"{column} of {code} is “{_shown(later)}” here and “{_shown(earlier)}” in {place}"
        raise _Refused(later.file, later.row, column, what, "give one value a specimen, or two specimen codes")


def _shown(said: _Said) -> str:
    return f"{said.value:g}" if isinstance(said.value, float) else said.value


def _agree(name: str, first: str | float, later: str | float) -> bool:
    if isinstance(first, str) and isinstance(later, str):
        a, b = first.casefold(), later.casefold()
        # A day agrees with a time of that day.
        return a == b or (name == "collected" and (a.startswith(b) or b.startswith(a)))
    return first == later
