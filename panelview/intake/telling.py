"""What is to be told of the cells of one file: refused, unmatched, assumed; each kind once, with its place."""

from __future__ import annotations

from collections import Counter, defaultdict
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from panelview.intake.conversion import DEFAULT_CV
from panelview.intake.panel import SpecimenFacts, State
from panelview.intake.problems import Problem, Severity
from panelview.intake.understand import Understood
from panelview.intake.values import AMBIGUOUS_WORDS

#: Refused cells of one series that are told one by one; the rest are counted, and stand in intake.csv.
_TOLD_SINGLY = 20

#: Analytes that are named where something is true of several.
_NAMED = 5


def problems_of(file: str, made: Understood, specimens: tuple[SpecimenFacts, ...]) -> list[Problem]:
    """The problems of one file's cells, in the order of its rows."""
    teller = _Teller(file, made, specimens)
    teller.marks()
    teller.treatments()
    teller.values()
    teller.words()
    teller.default_uncertainty()
    return sorted(teller.problems, key=lambda p: p.row)


class _Teller:
    def __init__(self, file: str, made: Understood, specimens: tuple[SpecimenFacts, ...]) -> None:
        self._file = file
        self._made = made
        self._readings = made.readings
        self._specimens = specimens
        self.problems: list[Problem] = []

    def _tell(self, severity: Severity, cell: int, what: str, remedy: str, specimen: str = "") -> None:
        row, column = (int(self._readings.row[cell]), str(self._readings.column[cell])) if cell >= 0 else (0, "")
        self.problems.append(Problem(severity, self._file, row, column, what, remedy, specimen))

    def _code(self, cell: int) -> str:
        return self._specimens[int(self._readings.specimen[cell])].code

    def marks(self) -> None:
        """The decimal mark, where it was assumed or contradicted."""
        marks = self._made.marks
        word = marks.mark.name.lower()
        remedy = "write all numbers with one decimal mark and no thousands mark"
        if marks.is_mixed:
            what = f"decimal points and commas are mixed; the file is read with a decimal {word}"
            self._tell(Severity.NOTE, -1, what, remedy)
        elif marks.doubtful >= 0:
            value = self._readings.value[marks.doubtful]
            what = f"“{value}” may hold a decimal {word} or a thousands mark; it and its like were read as decimal"
            self._tell(Severity.NOTE, marks.doubtful, what, "write one more decimal, or no thousands mark")
        thousands = [k for k, value in self._made.column.odd.items() if value.has_thousands]
        if thousands:
            first = thousands[0]
            number = self._made.column.number[first]
            what = f"“{self._readings.value[first]}” was read as {number:.10g}, its mark taken as one of thousands"
            self._tell(Severity.NOTE, first, what + _more(len(thousands)), "write numbers without thousands marks")

    def treatments(self) -> None:
        """Names and units that cannot be used, and what was assumed to use others."""
        made = self._made
        first, count, one_specimen = self._spread(made.treatment, len(made.treatments))
        told: Counter[tuple[str, str]] = Counter()
        place: dict[tuple[str, str], int] = {}
        names: defaultdict[tuple[str, str], dict[str, None]] = defaultdict(dict)
        for t, treatment in enumerate(made.treatments):
            key = (treatment.note, treatment.remedy)
            if treatment.fate is not State.MEASURED:
                told[key] += int(count[t])
                place.setdefault(key, t)
                names[key][treatment.match.written] = None
            for assumed in treatment.assumed if count[t] else ():
                if (assumed.what, "") not in place:
                    place[assumed.what, ""] = t
                    self._tell(Severity.NOTE, int(first[t]), assumed.what, assumed.remedy)
        for key, cells in told.items():
            t = place[key]
            treatment = made.treatments[t]
            is_known = treatment.fate is State.SUM or bool(
                treatment.match.analyte and treatment.fate is State.UNMATCHED
            )
            severity = Severity.NOTE if is_known or not cells else Severity.VALUE
            specimen = self._code(int(first[t])) if one_specimen[t] and cells == count[t] else ""
            self._tell(severity, int(first[t]), key[0] + _more(cells, list(names[key])), key[1], specimen)

    def _spread(
        self, treatment: NDArray[np.intp], length: int
    ) -> tuple[NDArray[np.intp], NDArray[np.intp], NDArray[np.bool_]]:
        """For each treatment: its first cell (one that is not missing, if any), how many cells are not missing, and
        whether they all belong to one specimen."""
        first = np.zeros(length, dtype=np.intp)
        everywhere = np.arange(len(treatment), dtype=np.intp)
        first[treatment[::-1]] = everywhere[::-1]
        is_there = np.flatnonzero(self._readings.state != State.MISSING)
        count = np.bincount(treatment[is_there], minlength=length)
        first[treatment[is_there][::-1]] = is_there[::-1]
        lowest, highest = (np.zeros(length, dtype=np.intp) for _ in range(2))
        specimen = self._readings.specimen
        lowest.fill(np.iinfo(np.intp).max)
        np.minimum.at(lowest, treatment[is_there], specimen[is_there])
        np.maximum.at(highest, treatment[is_there], specimen[is_there])
        return first, count, lowest == highest

    def values(self) -> None:
        """Cells that hold no usable number, one by one."""
        told: Counter[int] = Counter()
        left: dict[int, int] = {}
        for k, value in sorted(self._made.column.odd.items()):
            fate = self._made.treatments[self._made.treatment[k]].fate
            if value.state is not State.REFUSED or fate not in (State.MEASURED, State.REFUSED):
                continue
            series = int(self._made.series_of[k])
            told[series] += 1
            if told[series] > _TOLD_SINGLY:
                left.setdefault(series, k)
                continue
            self._tell(Severity.VALUE, k, value.why, value.remedy, self._code(k))
        for series, k in left.items():
            more = told[series] - _TOLD_SINGLY
            name = self._made.series[series].name
            what = f"from here on {more} more value{'s' if more != 1 else ''} of {name} cannot be used"
            self._tell(Severity.VALUE, k, what, "see each in the list of values (intake.csv)")

    def words(self) -> None:
        """Words that some laboratories use for “not detected” and others for “not determined”."""
        found: Counter[str] = Counter()
        first: dict[str, int] = {}
        for k, value in sorted(self._made.column.odd.items()):
            text = str(self._readings.value[k])
            if value.state is State.BELOW_LOQ and text.casefold() in AMBIGUOUS_WORDS:
                found[text] += 1
                first.setdefault(text, k)
        for text, count in found.items():
            what = f"“{text}” was read as not detected, that is below the limit of quantification"
            self._tell(Severity.NOTE, first[text], what + _more(count), "leave the cell blank if it was not measured")

    def default_uncertainty(self) -> None:
        count = int(np.count_nonzero(self._readings.sd_is_default))
        if count:
            what = f"no assay CV is stated for {count} value{'s' if count != 1 else ''}; {DEFAULT_CV:.0%} was taken"
            self._tell(Severity.NOTE, -1, what, "add a cv_percent column, or a CV row below the heading")


def _more(count: int, names: Sequence[str] = ()) -> str:
    """How many values something is true of, and of which analytes where of several."""
    if count < 2:
        return ""
    if len(names) < 2:
        return f" ({count} values)"
    others = f" and {len(names) - _NAMED} more" if len(names) > _NAMED else ""
    return f" ({count} values: {', '.join(n[:40] for n in names[:_NAMED])}{others})"
