"""Cells to readings: names, units, values and limits of one file, each cell kept whatever becomes of it."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.catalogue.load import Catalogue
from panelview.intake.conversion import Converter, Treatment
from panelview.intake.decimal_marks import Marks, decimal_mark
from panelview.intake.names import Names
from panelview.intake.panel import Readings, SpecimenFacts, State
from panelview.intake.records import Records, Series, same_text, texts
from panelview.intake.values import STATUS_WORDS, Column, Value, read_values

_UNDER_LIMIT = "reported under the limit of quantification, so taken as below it"
_NO_LIMIT = "below a limit that the file does not state, so nothing can be said of its size"
_NO_UPPER_LIMIT = "above a limit that the file does not state, so nothing can be said of its size"

#: mol/L: pure water holds 55; under the other, a nanolitre holds no molecule.
_MOST, _LEAST = 55.5, 1e-15

_LIMIT_SIGNS = ("<", "<=", "≤", ">", ">=", "≥")


@dataclass
class Understood:
    """What one file says, cell by cell.

    readings: all cells of the specimens asked for, in file order; treatments: how series were converted in each
    matrix; treatment, series_of: [reading] index into treatments and into the records' series; column: the cells as
    numbers; replicates: [reading] as written; marks: the file's decimal mark, `doubtful` an index of readings.
    """

    readings: Readings
    treatments: list[Treatment]
    treatment: NDArray[np.intp]
    series: list[Series]
    series_of: NDArray[np.intp]
    column: Column
    replicates: NDArray[np.object_]
    marks: Marks

    def analyte_number(self, catalogue: Catalogue) -> NDArray[np.intp]:
        """[reading] index of the metabolite in the catalogue, −1 where the reading has none."""
        number = {analyte: k for k, analyte in enumerate(catalogue.metabolites)}
        of_treatment = [number.get(t.match.analyte, -1) for t in self.treatments]
        return np.array(of_treatment, dtype=np.intp)[self.treatment]


def understand(records: Records, specimens: Sequence[SpecimenFacts], catalogue: Catalogue, names: Names) -> Understood:
    """Understand the cells of a file; those of specimens that are not among `specimens` are left out."""
    position = {facts.code: k for k, facts in enumerate(specimens)}
    of_code = np.array([position.get(code, -1) for code in records.codes], dtype=np.intp)
    specimen = of_code[records.specimen]
    kept = np.flatnonzero(specimen >= 0)
    specimen, series_of = specimen[kept], records.series_of[kept]
    values = records.value[kept].tolist()
    marks = _marks(values, series_of, [bool(names.match(s.name).analyte) for s in records.series])
    column = read_values(_with_comparators(values, series_of, records.series), marks)
    status = None if records.status is None else records.status[kept]
    if status is not None:
        _apply_status(status, column)
    treatments, treatment = _treat(records.series, series_of, specimen, specimens, Converter(catalogue, names, marks))
    readings = _readings(records, kept, specimen, values, column, _PerCell(treatments, treatment))
    if status is not None:
        _add_status(readings.flag, status)
    replicates = same_text("", len(kept)) if records.replicate is None else records.replicate[kept]
    return Understood(readings, treatments, treatment, records.series, series_of, column, replicates, marks)


def _marks(values: list[str], series_of: NDArray[np.intp], is_analyte: list[bool]) -> Marks:
    """The decimal mark, from the cells of known analytes only: other columns may hold dates or codes."""
    if all(is_analyte):
        return decimal_mark(values)
    chosen = np.flatnonzero(np.array(is_analyte, dtype=bool)[series_of]).tolist()
    found = decimal_mark([values[k] for k in chosen])
    return Marks(found.mark, found.is_mixed, chosen[found.doubtful]) if found.doubtful >= 0 else found


def _with_comparators(values: list[str], series_of: NDArray[np.intp], series: Sequence[Series]) -> list[str]:
    """The cells with the sign of a comparator column before them, unless they carry it already."""
    signs = [s.comparator if s.comparator in _LIMIT_SIGNS else "" for s in series]
    if not any(signs):
        return values
    made = list(values)
    for k, s in enumerate(series_of.tolist()):
        if signs[s] and made[k] and not made[k].startswith(signs[s][0]):
            made[k] = signs[s] + made[k]
    return made


def _apply_status(status: NDArray[np.object_], column: Column) -> None:
    """Let a status column say that a value is a limit, or that there is none."""
    meaning = {word: STATUS_WORDS.get(word.strip().casefold().replace(" ", "_")) for word in set(status.tolist())}
    if not any(m is not None for m in meaning.values()):
        return
    for k, word in enumerate(status.tolist()):
        said, found = meaning[word], State(int(column.state[k]))
        if said is None or said is found:
            continue
        flag = column.flag(k)
        if said is State.MISSING:
            why = f"the status says “{word}”, and the cell holds a value"
            changed = Value(State.REFUSED, np.nan, flag, why, "clear the cell or correct the status")
        elif found is State.MEASURED:
            changed = Value(said, float(column.number[k]), flag)
        elif found is State.MISSING or (found is State.REFUSED and said is State.BELOW_LOQ and column.odd[k].is_zero):
            changed = Value(said, np.nan, flag)
        elif found is State.REFUSED:
            continue
        else:
            why = f"the status says “{word}”, the cell another limit"
            changed = Value(State.REFUSED, np.nan, flag, why, "correct the cell or the status")
        column.put(k, changed)


def _treat(
    series: Sequence[Series],
    series_of: NDArray[np.intp],
    specimen: NDArray[np.intp],
    specimens: Sequence[SpecimenFacts],
    converter: Converter,
) -> tuple[list[Treatment], NDArray[np.intp]]:
    """The treatments of all series in the matrices in which they occur, and which one each cell has."""
    matrices = list(dict.fromkeys(facts.matrix for facts in specimens)) or [""]
    code = {matrix: k for k, matrix in enumerate(matrices)}
    matrix_of = np.array([code[facts.matrix] for facts in specimens], dtype=np.intp)
    pair = series_of * len(matrices) + (matrix_of[specimen] if len(specimens) else 0)
    present = np.flatnonzero(np.bincount(pair, minlength=len(series) * len(matrices)))
    index = np.zeros(len(series) * len(matrices), dtype=np.intp)
    index[present] = np.arange(len(present))
    made = [converter.treat(series[p // len(matrices)], matrices[p % len(matrices)]) for p in present.tolist()]
    return made, index[pair]


class _PerCell:
    """What treatments say, spread over their cells."""

    def __init__(self, treatments: Sequence[Treatment], treatment: NDArray[np.intp]) -> None:
        self._treatments = treatments
        self._treatment = treatment

    def numbers(self, name: str) -> NDArray[np.float64]:
        return np.array([getattr(t, name) for t in self._treatments], dtype=np.float64)[self._treatment]

    def words(self, of: Callable[[Treatment], str]) -> NDArray[np.object_]:
        return texts([of(t) for t in self._treatments])[self._treatment]


@dataclass
class _Amounts:
    """[cell]: states once names, units and limits are known; mol/L of the pool's water, NaN where there is no number;
    where a value stood under its LLOQ, and was taken as below it."""

    state: NDArray[np.int8]
    mol_per_l: NDArray[np.float64]
    under: NDArray[np.bool_]


def _amounts(column: Column, per_cell: _PerCell) -> _Amounts:
    fate = per_cell.numbers("fate").astype(np.int8)
    state, number = column.state.copy(), column.number.copy()
    is_limit = (state == State.BELOW_LOQ) | (state == State.ABOVE_RANGE)
    # A limit without a number needs no unit, so a unit that cannot be used takes nothing from it.
    blocked = (fate != State.MEASURED) & (state != State.MISSING)
    blocked &= ~((fate == State.REFUSED) & is_limit & np.isnan(number))
    state[blocked] = fate[blocked]
    limit, is_used = per_cell.numbers("limit"), fate == State.MEASURED
    unstated = is_used & (state == State.BELOW_LOQ) & np.isnan(number)
    number[unstated] = limit[unstated]
    under = is_used & (state == State.MEASURED) & (number < limit)
    state[under], number[under] = State.BELOW_LOQ, limit[under]
    has_number = is_used & np.isfinite(number) & np.isin(state, (State.MEASURED, State.BELOW_LOQ, State.ABOVE_RANGE))
    with np.errstate(over="ignore", under="ignore"):
        mol_per_l = np.where(has_number, number * per_cell.numbers("multiplier") / per_cell.numbers("divisor"), np.nan)
    impossible = has_number & ~((mol_per_l >= _LEAST) & (mol_per_l <= _MOST))
    for k in np.flatnonzero(impossible).tolist():
        what = f"{mol_per_l[k]:.2g} mol/L is no concentration that a cell can hold"
        column.put(k, Value(State.REFUSED, np.nan, column.flag(k), what, "check the value and its unit"))
    state[impossible], mol_per_l[impossible] = State.REFUSED, np.nan
    return _Amounts(state, mol_per_l, under & ~impossible)


def _readings(
    records: Records,
    kept: NDArray[np.intp],
    specimen: NDArray[np.intp],
    values: list[str],
    column: Column,
    per_cell: _PerCell,
) -> Readings:
    amounts = _amounts(column, per_cell)
    has_number = np.isfinite(amounts.mol_per_l)
    flag = records.flag[kept]
    for k in column.odd:
        flag[k] = " ".join(f for f in (flag[k], column.flag(k)) if f)
    basis = per_cell.words(lambda t: t.basis)
    basis[~has_number] = ""
    series_of = records.series_of[kept]
    return Readings(
        specimen=specimen,
        analyte=per_cell.words(lambda t: t.match.analyte),
        name=texts([s.name for s in records.series])[series_of],
        value=texts(values),
        unit=texts([s.unit for s in records.series])[series_of],
        flag=flag,
        state=amounts.state,
        mol_per_l=amounts.mol_per_l,
        sd_ln=np.where(has_number, per_cell.numbers("sd_ln"), np.nan),
        sd_is_default=has_number & (per_cell.numbers("sd_is_default") > 0),
        shared_sd_ln=np.where(has_number, per_cell.numbers("shared_sd"), np.nan),
        basis=basis,
        row=records.row[kept],
        column=records.column[kept],
        note=_notes(amounts, column, per_cell),
    )


def _notes(amounts: _Amounts, column: Column, per_cell: _PerCell) -> NDArray[np.object_]:
    note = per_cell.words(lambda t: t.note)
    state, has_number = amounts.state, np.isfinite(amounts.mol_per_l)
    note[state == State.MISSING] = ""
    note[(state == State.BELOW_LOQ) & ~has_number] = _NO_LIMIT
    note[(state == State.ABOVE_RANGE) & ~has_number] = _NO_UPPER_LIMIT
    for k in np.flatnonzero(amounts.under).tolist():
        note[k] = "; ".join(n for n in (note[k], _UNDER_LIMIT) if n)
    for k, value in column.odd.items():
        if value.state is State.REFUSED and state[k] == State.REFUSED:
            note[k] = value.why
    return note


def _add_status(flag: NDArray[np.object_], status: NDArray[np.object_]) -> None:
    for k, word in enumerate(status.tolist()):
        if word and word.casefold() != "ok":
            flag[k] = " ".join(f for f in (flag[k], word) if f)
