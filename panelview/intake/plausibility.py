"""Values so far from what is published for their matrix that a slip of the unit is likely: told, never changed."""

from __future__ import annotations

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
    """A note for each series of one file that holds values over 100-fold off the published concentration."""
    readings = made.readings
    usual = {(p.metabolite_id, p.matrix_id): p.ln_mean for p in catalogue.published if p.is_default}
    cells = np.flatnonzero((readings.state == State.MEASURED) & np.isfinite(readings.mol_per_l))
    first = dict(zip(made.treatment[cells[::-1]].tolist(), cells[::-1].tolist(), strict=True))
    matrix_of = {t: specimens[int(readings.specimen[k])].matrix for t, k in first.items()}
    ln_usual = np.full(len(made.treatments), np.nan)
    for t, matrix in matrix_of.items():
        ln_usual[t] = usual.get((made.treatments[t].match.analyte, matrix), np.nan)
    of = made.treatment[cells]
    off = np.log(readings.mol_per_l[cells]) - ln_usual[of]
    is_far = np.abs(off) > np.log(_FAR)
    total, far = (np.bincount(of[which], minlength=len(ln_usual)) for which in (slice(None), is_far))
    problems = []
    for t in np.flatnonzero(far).tolist():
        j = int(np.flatnonzero(is_far & (of == t))[0])
        cell, factor = int(cells[j]), float(np.exp(abs(off[j])))
        written = f"{readings.name[cell]} of {readings.value[cell]} {readings.unit[cell]}"
        way = "above" if off[j] > 0 else "below"
        usual_size = _size(float(np.exp(ln_usual[t])))
        likely = "probably a slip of the unit" if 2 * far[t] > total[t] else "perhaps a slip of the unit or the point"
        more = f" ({far[t]} values)" if far[t] > 1 else ""
        what = (
            f"{written} is {_round(factor)} times {way} what is published for {matrix_of[t].replace('_', ' ')} "
            f"({usual_size}): {likely}{more}"
        )
        remedy = "check it; nothing was changed"
        code = specimens[int(readings.specimen[cell])].code if far[t] == 1 else ""
        row, column = int(readings.row[cell]), str(readings.column[cell])
        problems.append(Problem(Severity.NOTE, file, row, column, what, remedy, code))
    return sorted(problems, key=lambda p: p.row)


def _round(number: float) -> str:
    """Two digits, without powers of ten."""
    return f"{float(f'{number:.2g}'):,.15g}"


def _size(mol_per_l: float) -> str:
    for scale, unit in ((1e3, "mmol/L"), (1e6, "µmol/L"), (1e9, "nmol/L")):
        if mol_per_l * scale >= 1:
            return f"{_round(mol_per_l * scale)} {unit}"
    return f"{_round(mol_per_l * 1e12)} pmol/L"
