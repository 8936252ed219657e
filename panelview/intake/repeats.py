"""Several readings of one analyte in one specimen: replicates are averaged, unexplained repeats refused."""

from __future__ import annotations

import dataclasses
import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from panelview.intake.panel import Readings, SpecimenFacts, State
from panelview.intake.problems import Problem, Severity


def settle_repeats(
    readings: Readings,
    analyte: NDArray[np.intp],
    replicate: NDArray[np.object_],
    file_of: NDArray[np.intp],
    files: Sequence[str],
    specimens: Sequence[SpecimenFacts],
) -> list[Problem]:
    """Change readings (in place) that report an analyte of a specimen more than once; returns what is to be told.

    analyte, replicate, file_of: [reading], a number for each analyte (−1 where there is none), the replicate as written
    ("" where there is none) and the index of the file. Numbered replicates of one file
    become their geometric mean, in the place of the first; of all other repeats none is used, because nothing says
    which is right.
    """
    states = (State.MEASURED, State.BELOW_LOQ, State.ABOVE_RANGE, State.REFUSED)
    reports = np.flatnonzero((analyte >= 0) & np.isin(readings.state, states))
    key = readings.specimen[reports] * (analyte.max(initial=0) + 1) + analyte[reports]
    ordered = np.sort(key)
    if not (ordered[1:] == ordered[:-1]).any():
        return []
    order = np.argsort(key, kind="stable")
    bounds = np.flatnonzero(np.diff(key[order]) != 0) + 1
    groups = [g for g in np.split(reports[order], bounds) if len(g) > 1]
    problems = []
    for group in sorted((g.tolist() for g in groups), key=lambda g: g[0]):
        if _are_replicates(group, readings, replicate, file_of):
            _combine(group, readings)
        else:
            problems.append(_refuse(group, readings, file_of, files, specimens))
    return problems


def _are_replicates(
    group: list[int], readings: Readings, replicate: NDArray[np.object_], file_of: NDArray[np.intp]
) -> bool:
    numbers = {str(replicate[k]) for k in group}
    return (
        len(numbers) == len(group)
        and "" not in numbers
        and len({int(file_of[k]) for k in group}) == 1
        and all(readings.state[k] == State.MEASURED and math.isfinite(readings.mol_per_l[k]) for k in group)
    )


def _combine(group: list[int], readings: Readings) -> None:
    """Geometric mean in the place of the first; the scatter of the replicates where it exceeds the assay's CV."""
    logs = np.log(readings.mol_per_l[group])
    first, others = group[0], group[1:]
    scatter, assay = float(np.std(logs, ddof=1)), float(readings.sd_ln[first])
    readings.mol_per_l[first] = math.exp(float(np.mean(logs)))
    readings.sd_ln[first] = max(assay, scatter) / math.sqrt(len(group))
    readings.sd_is_default[first] &= assay >= scatter
    rows = ", ".join(str(readings.row[k]) for k in group)
    _add_note(readings, first, f"geometric mean of {len(group)} replicates (rows {rows})")
    for k in others:
        _without_number(readings, k)
        readings.state[k] = State.MISSING
        readings.note[k] = f"a replicate, used in the mean that stands in row {readings.row[first]}"


def _refuse(
    group: list[int],
    readings: Readings,
    file_of: NDArray[np.intp],
    files: Sequence[str],
    specimens: Sequence[SpecimenFacts],
) -> Problem:
    first, second = group[:2]
    if len({int(file_of[k]) for k in group}) == 1:
        columns = {str(readings.column[k]) for k in group}
        rows = ", ".join(str(readings.row[k]) for k in group)
        where = f"rows {rows}" if len(columns) == 1 else f"rows {rows}; columns {', '.join(sorted(columns))}"
        remedy = "keep one value, or number them in a replicate column to have them averaged"
        if len({int(readings.row[k]) for k in group}) == 1:
            where = f"columns {', '.join(str(readings.column[k]) for k in group)}"
            remedy = "keep one of the columns"
    else:
        where = ", ".join(f"{files[file_of[k]]} row {readings.row[k]}" for k in group)
        remedy = "keep it in one of the files"
    for k in group:
        _without_number(readings, k)
        if readings.state[k] == State.REFUSED:
            _add_note(readings, k, f"reported more than once ({where})")
        else:
            readings.state[k], readings.note[k] = State.REFUSED, f"reported more than once ({where})"
    code = specimens[readings.specimen[first]].code
    what = f"{readings.analyte[first]} of {code} is reported more than once ({where}), so no value of it is used"
    return Problem(
        Severity.VALUE,
        files[file_of[second]],
        int(readings.row[second]),
        str(readings.column[second]),
        what,
        remedy,
        code,
    )


def _without_number(readings: Readings, k: int) -> None:
    readings.mol_per_l[k] = readings.sd_ln[k] = readings.shared_sd_ln[k] = math.nan
    readings.sd_is_default[k] = False
    readings.basis[k] = ""


def _add_note(readings: Readings, k: int, note: str) -> None:
    readings.note[k] = "; ".join(n for n in (readings.note[k], note) if n)


def joined(parts: Sequence[Readings]) -> Readings:
    """The readings of several files, one behind the other."""
    if len(parts) == 1:
        return parts[0]
    names = [f.name for f in dataclasses.fields(Readings)]
    return Readings(**{name: np.concatenate([getattr(part, name) for part in parts]) for name in names})
