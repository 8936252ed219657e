"""Cells to readings: names, units, values and limits of one file, each cell kept whatever becomes of it."""

from __future__ import annotations

import math
from collections import defaultdict
from dataclasses import dataclass, field

from panelview.catalogue.load import Catalogue
from panelview.intake.names import Names
from panelview.intake.panel import Match, State
from panelview.intake.problems import Problem, Severity
from panelview.intake.shapes import Cell, Shaped
from panelview.intake.units import MASS_UNSTATED, Unit, UnknownUnit, read_unit
from panelview.intake.values import Mark, Value, decimal_mark, read_value

#: Analytical coefficient of variation where the file states none, printed as a default (common practice for
#: chromatographic panels, no source).
DEFAULT_CV = 0.08

#: Shared relative uncertainty of a plain amount per litre where the matrix is not stated.
_UNSTATED_FACTOR_SD = 0.10


@dataclass(slots=True)
class Reading:
    """One cell as understood; fields as in panel.Readings."""

    specimen: str
    analyte: str
    name: str
    value: str
    unit: str
    flag: str
    state: State
    mol_per_l: float
    sd_ln: float
    sd_is_default: bool
    shared_sd_ln: float
    basis: str
    row: int
    column: str
    note: str
    replicate: str = ""


@dataclass(frozen=True, slots=True)
class _Scale:
    """mol/L of pool water per unit of the value, its shared uncertainty, and what was assumed."""

    factor: float
    shared_sd: float
    basis: str
    note: str


@dataclass(frozen=True, slots=True)
class _Refusal:
    what: str
    remedy: str


@dataclass
class Understanding:
    """What one file says, cell by cell."""

    readings: list[Reading] = field(default_factory=list)
    problems: list[Problem] = field(default_factory=list)
    matches: dict[str, Match] = field(default_factory=dict)
    mark: Mark = Mark.POINT


class Understander:
    """Understands the cells of one file; everything that repeats is worked out once."""

    def __init__(self, catalogue: Catalogue, names: Names, file: str) -> None:
        self._catalogue = catalogue
        self._names = names
        self._file = file
        self._scales: dict[tuple[str, str, str, str], _Scale | _Refusal] = {}
        self._told: set[tuple[str, str]] = set()
        self._made = Understanding()

    def understand(self, shaped: Shaped, matrix_of: dict[str, str]) -> Understanding:
        """matrix_of: specimen code → matrix id ("" where not stated); cells of other specimens are skipped."""
        mark, mixed, doubtful = decimal_mark(shaped.number_texts)
        self._made.mark = mark
        word = "point" if mark is Mark.POINT else "comma"
        if mixed:
            self._note(
                0,
                "",
                f"decimal points and commas are mixed; the file is read with a decimal {word}",
                "write all numbers with one decimal mark",
            )
        elif doubtful:
            self._note(
                0,
                "",
                f"whether “{mark.value}” before three digits marks decimals or thousands cannot be told; "
                f"it was read as a decimal {word}",
                "write one more decimal, or no thousands mark",
            )
        for cell in shaped.cells:
            if cell.specimen in matrix_of:
                self._made.readings.append(self._reading(cell, matrix_of[cell.specimen], mark))
        return self._made

    def _note(self, row: int, column: str, what: str, remedy: str) -> None:
        self._made.problems.append(Problem(Severity.NOTE, self._file, row, column, what, remedy))

    def _reading(self, cell: Cell, matrix: str, mark: Mark) -> Reading:
        match = self._match(cell)
        value = self._value(cell, mark)
        made = Reading(
            specimen=cell.specimen,
            analyte=match.analyte,
            name=cell.name,
            value=cell.value.strip(),
            unit=cell.unit,
            flag=" ".join(f for f in (cell.flag, value.flag) if f),
            state=value.state,
            mol_per_l=math.nan,
            sd_ln=math.nan,
            sd_is_default=False,
            shared_sd_ln=math.nan,
            basis="",
            row=cell.row,
            column=cell.column,
            note="",
            replicate=cell.replicate,
        )
        if value.state is State.REFUSED:
            self._refuse(made, value.why, value.remedy)
            return made
        if match.how == "sum" or not match.analyte or self._names.is_known_outside(match.analyte):
            self._set_unusable(made, match)
            return made
        if value.state is State.MISSING:
            return made
        self._convert(made, value, cell, matrix, mark)
        return made

    def _match(self, cell: Cell) -> Match:
        match = self._names.match(cell.name)
        if cell.name in self._made.matches:
            return match
        self._made.matches[cell.name] = match
        if match.how == "unknown":
            offered = (
                f"perhaps {', '.join(match.candidates)}" if match.candidates else "see resources/names.csv"
            )
            self._value_problem(cell, f"the analyte “{cell.name}” is not known", f"rename it ({offered})")
        elif match.how == "ambiguous":
            self._value_problem(
                cell, f"“{cell.name}” may mean {' or '.join(match.candidates)}", "write the full name"
            )
        elif match.how == "sum":
            self._note(
                cell.row,
                cell.column,
                f"“{cell.name}” is the sum of {', '.join(match.candidates)}",
                "it is kept as a sum and no step uses it",
            )
        elif self._names.is_known_outside(match.analyte):
            self._note(
                cell.row,
                cell.column,
                f"“{cell.name}” ({match.analyte}) takes part in no catalogued step",
                "it is kept and not used",
            )
        return match

    def _value_problem(self, cell: Cell, what: str, remedy: str) -> None:
        self._made.problems.append(
            Problem(Severity.VALUE, self._file, cell.row, cell.column, what, remedy, cell.specimen)
        )

    def _value(self, cell: Cell, mark: Mark) -> Value:
        text = cell.value
        if cell.comparator in ("<", "<=", ">", ">=", "≤", "≥") and text.strip():
            text = cell.comparator + text
        value = read_value(text, mark)
        if not cell.name:
            return Value(State.REFUSED, math.nan, value.flag, "no analyte is named", "fill in the analyte")
        return value

    def _refuse(self, made: Reading, what: str, remedy: str) -> None:
        made.state, made.note = State.REFUSED, what
        self._made.problems.append(
            Problem(Severity.VALUE, self._file, made.row, made.column, what, remedy, made.specimen)
        )

    def _set_unusable(self, made: Reading, match: Match) -> None:
        if made.state is State.MISSING:
            return
        if match.how == "sum":
            made.state = State.SUM
            made.note = f"sum of {', '.join(match.candidates)}; kept as a sum"
        elif match.analyte:
            made.state, made.note = State.UNMATCHED, "known, but takes part in no catalogued step"
        elif match.how == "ambiguous":
            made.state, made.note = State.UNMATCHED, f"may mean {' or '.join(match.candidates)}"
        else:
            made.state = State.UNMATCHED
            made.note = (
                f"unknown; near names: {', '.join(match.candidates)}" if match.candidates else "unknown"
            )

    def _convert(self, made: Reading, value: Value, cell: Cell, matrix: str, mark: Mark) -> None:
        scale = self._scale(made.analyte, cell.name, cell.unit, matrix)
        if isinstance(scale, _Refusal):
            made.state, made.note = State.REFUSED, scale.what
            self._tell_once(made, scale)
            return
        number = value.number
        limit = read_value(cell.lloq, mark).number if cell.lloq else math.nan
        notes = [scale.note] if scale.note else []
        if value.state is State.BELOW_LOQ and math.isnan(number):
            number = limit
            if math.isnan(number):
                notes.append("below a limit that the file does not state: nothing can be said of its size")
        elif value.state is State.MEASURED and number < limit:
            made.state, number = State.BELOW_LOQ, limit
            notes.append("reported under the limit of quantification: taken as below it")
        made.mol_per_l = number * scale.factor
        made.shared_sd_ln, made.basis = scale.shared_sd, scale.basis
        made.sd_ln, made.sd_is_default = self._assay_sd(cell, made)
        made.note = "; ".join(notes)

    def _assay_sd(self, cell: Cell, made: Reading) -> tuple[float, bool]:
        """Standard uncertainty of ln c from the coefficient of variation: √ln(1 + CV²)."""
        cv = DEFAULT_CV
        stated = False
        if cell.cv:
            text = cell.cv.replace("%", "").replace(",", ".").strip()
            try:
                percent = float(text)
            except ValueError:
                percent = math.nan
            if math.isfinite(percent) and 0 < percent <= 200:
                cv, stated = percent / 100, True
            else:
                self._tell_once(
                    made,
                    _Refusal(
                        f"the CV “{cell.cv}” is not a percentage between 0 and 200",
                        f"correct it; {DEFAULT_CV:.0%} was taken",
                    ),
                    Severity.NOTE,
                )
        return math.sqrt(math.log1p(cv**2)), not stated

    def _tell_once(self, made: Reading, refusal: _Refusal, severity: Severity = Severity.VALUE) -> None:
        key = (made.column if made.column else made.name, refusal.what)
        if key not in self._told:
            self._told.add(key)
            self._made.problems.append(
                Problem(
                    severity, self._file, made.row, made.column, refusal.what, refusal.remedy, made.specimen
                )
            )

    def _scale(self, analyte: str, name: str, unit: str, matrix: str) -> _Scale | _Refusal:
        key = (analyte, name, unit, matrix)
        if key not in self._scales:
            self._scales[key] = self._work_out(*key)
        return self._scales[key]

    def _work_out(self, analyte: str, name: str, text: str, matrix: str) -> _Scale | _Refusal:
        try:
            unit = read_unit(text)
        except UnknownUnit as error:
            return _Refusal(error.what, error.remedy)
        factor, notes = unit.factor, []
        if unit.is_mass:
            mass = self._names.mass_of(name) or self._catalogue.metabolites[analyte].molar_mass
            if mass is None:
                return _Refusal(f"{analyte} has no molar mass to convert “{text}” with", "report it in mol")
            factor /= mass
            notes.append(f"molar mass {mass:g} g/mol")
        basis = self._basis(unit, matrix, notes, text)
        if isinstance(basis, _Refusal):
            return basis
        if not matrix:
            if basis != "litre":
                return _Refusal(
                    f"“{text}” needs the matrix to be converted",
                    "state the matrix in the file or when opening it",
                )
            return _Scale(factor, _UNSTATED_FACTOR_SD, basis, "; ".join(notes))
        conversion = self._catalogue.conversions.get((matrix, basis))
        if conversion is None:
            return _Refusal(
                f"no conversion of “{text}” to mol/L is known for {matrix}", "report the value per litre"
            )
        if conversion.litres != 1.0:
            per = basis.replace("_", " ")
            notes.append(f"{conversion.litres:g} L pool water per {per}")
        return _Scale(factor / conversion.litres, conversion.relative_sd, basis, "; ".join(notes))

    def _basis(self, unit: Unit, matrix: str, notes: list[str], text: str) -> str | _Refusal:
        if unit.basis != MASS_UNSTATED:
            return unit.basis
        usual = self._catalogue.matrices[matrix].usual_basis if matrix else ""
        if not usual.startswith("kg_"):
            return _Refusal(f"“{text}” does not say wet or dry weight", "write µmol/g ww or mmol/kg dw")
        words = usual.removeprefix("kg_")
        notes.append(f"weight taken as {words}, as usual for {matrix}")
        key = (text, f"assumed {matrix}")
        if key not in self._told:
            self._told.add(key)
            self._note(
                0,
                "",
                f"“{text}” does not say wet or dry; {words} weight was assumed, as usual for {matrix}",
                f"write {text.strip()} ww or {text.strip()} dw",
            )
        return usual


def settle_repeats(made: Understanding, file: str) -> None:
    """Readings of one specimen and analyte: replicates are combined, unexplained repeats refused.

    Combined to the geometric mean, with the scatter of the replicates in place of a default CV.
    """
    groups: defaultdict[tuple[str, str], list[Reading]] = defaultdict(list)
    for reading in made.readings:
        if reading.analyte and reading.state in (State.MEASURED, State.BELOW_LOQ, State.ABOVE_RANGE):
            groups[reading.specimen, reading.analyte].append(reading)
    for (specimen, analyte), readings in groups.items():
        if len(readings) < 2:
            continue
        numbered = {r.replicate for r in readings}
        if (
            len(numbered) == len(readings)
            and "" not in numbered
            and all(r.state is State.MEASURED for r in readings)
        ):
            _combine(readings)
            continue
        rows = ", ".join(str(r.row) for r in readings)
        for r in readings:
            r.state, r.mol_per_l, r.note = State.REFUSED, math.nan, f"reported more than once (rows {rows})"
        made.problems.append(
            Problem(
                Severity.VALUE,
                file,
                readings[1].row,
                readings[1].column,
                f"{analyte} of {specimen} is reported more than once (rows {rows})",
                "keep one value, or number them in a replicate column to have them averaged",
                specimen,
            )
        )


def _combine(readings: list[Reading]) -> None:
    logs = [math.log(r.mol_per_l) for r in readings]
    mean = sum(logs) / len(logs)
    scatter = math.sqrt(sum((x - mean) ** 2 for x in logs) / (len(logs) - 1))
    first = readings[0]
    first.mol_per_l = math.exp(mean)
    first.sd_ln = max(first.sd_ln, scatter) / math.sqrt(len(logs))
    first.note = "; ".join(n for n in (first.note, f"geometric mean of {len(logs)} replicates") if n)
    for other in readings[1:]:
        other.state = State.MISSING
        other.mol_per_l = math.nan
        other.note = f"replicate, combined in row {first.row}"
