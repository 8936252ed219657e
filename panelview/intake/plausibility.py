"""Values so far from what is published for their matrix that a slip of the unit is likely: told, never changed."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from panelview.catalogue.load import Catalogue
from panelview.intake.panel import SpecimenFacts, State
from panelview.intake.problems import Problem, Severity
from panelview.intake.understand import Understood

#: A factor of a thousand lies between the usual units; disease moves few analytes a hundredfold.
_FAR = 100.0


def far_from_published(
    file: str, made: Understood, specimens: Sequence[SpecimenFacts], catalogue: Catalogue
) -> list[Problem]:
    """A note for each series of one file with values over 100-fold off every published concentration of the matrix.

    All published sets count, fasting, exercise and disease among them, because a value that one of them explains needs
    no other explanation.
    """
    readings = made.readings
    cells = np.flatnonzero((readings.state == State.MEASURED) & np.isfinite(readings.mol_per_l))
    first = np.full(len(made.treatments), -1, dtype=np.intp)
    first[made.treatment[cells[::-1]]] = cells[::-1]
    matrix = {t: specimens[int(readings.specimen[k])].matrix for t, k in enumerate(first.tolist()) if k >= 0}
    lowest, highest = (np.full(len(made.treatments), np.nan) for _ in range(2))
    published = _ranges(catalogue)
    for t in matrix:
        lowest[t], highest[t] = published.get((made.treatments[t].match.analyte, matrix[t]), (np.nan, np.nan))
    of, mol_per_l = made.treatment[cells], readings.mol_per_l[cells]
    is_far = (mol_per_l > _FAR * highest[of]) | (mol_per_l < lowest[of] / _FAR)
    total, far = (np.bincount(of[which], minlength=len(lowest)) for which in (slice(None), is_far))
    problems = []
    for t in np.flatnonzero(far).tolist():
        j = int(np.flatnonzero(is_far & (of == t))[0])
        cell = int(cells[j])
        written = f"{readings.name[cell]} of {readings.value[cell]} {readings.unit[cell]}"
        found, is_above = float(mol_per_l[j]), bool(mol_per_l[j] > highest[t])
        nearest = float(highest[t] if is_above else lowest[t])
        factor = f"{_round(max(found / nearest, nearest / found))} times {'above' if is_above else 'below'}"
        usual = f"what is published for {matrix[t].replace('_', ' ')} ({_size(nearest)})"
        likely = "probably a slip of the unit" if 2 * far[t] > total[t] else "perhaps a slip of the unit or the point"
        more = f" ({far[t]} values)" if far[t] > 1 else ""
        code = specimens[int(readings.specimen[cell])].code if far[t] == 1 else ""
        what, remedy = f"{written} is {factor} {usual}: {likely}{more}", "check it; nothing was changed"
        row, column = int(readings.row[cell]), str(readings.column[cell])
        problems.append(Problem(Severity.NOTE, file, row, column, what, remedy, code))
    return sorted(problems, key=lambda p: p.row)


def _ranges(catalogue: Catalogue) -> dict[tuple[str, str], tuple[float, float]]:
    """(metabolite, matrix) → the lowest and the highest published mean, mol/L."""
    made: dict[tuple[str, str], tuple[float, float]] = {}
    for p in catalogue.published:
        if math.isnan(p.ln_mean):  # a limit or a range only
            continue
        key, mean = (p.metabolite_id, p.matrix_id), math.exp(p.ln_mean)
        low, high = made.get(key, (mean, mean))
        made[key] = (min(low, mean), max(high, mean))
    return made


def _round(number: float) -> str:
    """Two digits, without powers of ten."""
    return f"{float(f'{number:.2g}'):,.15g}"


def _size(mol_per_l: float) -> str:
    for scale, unit in ((1e3, "mmol/L"), (1e6, "µmol/L"), (1e9, "nmol/L")):
        if mol_per_l * scale >= 1:
            return f"{_round(mol_per_l * scale)} {unit}"
    return f"{_round(mol_per_l * 1e12)} pmol/L"
