"""A panel as plain data: what `panelview inspect` prints and what intake.csv holds."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterator
from typing import Any

import numpy as np

from panelview.catalogue.load import Catalogue
from panelview.intake.panel import Panel, SpecimenFacts, State
from panelview.intake.problems import Problem, Severity

INTAKE_COLUMNS = (
    "specimen",
    "analyte_as_written",
    "analyte",
    "value_as_written",
    "unit_as_written",
    "mol_per_l",
    "sd_ln",
    "state",
    "row",
    "column",
    "note",
)

IntakeRow = tuple[str, str, str, str, str, float, float, str, int, str, str]


def intake_rows(panel: Panel) -> Iterator[IntakeRow]:
    """Every value as reported and as used, in file order; NaN where there is no number."""
    r = panel.readings
    for k in range(len(r)):
        note = r.note[k]
        if r.sd_is_default[k]:
            note = "; ".join(n for n in (note, "assay uncertainty is the program's default") if n)
        yield (
            panel.specimens[r.specimen[k]].code,
            r.name[k],
            r.analyte[k],
            r.value[k],
            r.unit[k],
            float(r.mol_per_l[k]),
            float(r.sd_ln[k]),
            State(int(r.state[k])).word,
            int(r.row[k]),
            r.column[k],
            note,
        )


def describe(panel: Panel, catalogue: Catalogue) -> dict[str, Any]:
    """Files, layout, specimens, analytes and how each was matched, units, states, problems."""
    r = panel.readings
    values = np.bincount(r.specimen, minlength=len(panel.specimens)).tolist()
    states = np.bincount(r.state, minlength=len(State)).tolist()
    return {
        "files": [{"name": s.name, "bytes": s.size, "sha256": s.sha256} for s in panel.sources],
        "layout": panel.layout,
        "specimens": [_specimen(facts, n, catalogue) for facts, n in zip(panel.specimens, values, strict=True)],
        "refused_specimens": list(panel.refused_specimens),
        "analytes": [
            {
                "as_written": m.written,
                "analyte": m.analyte,
                "matched_by": m.how,
                "candidates": list(m.candidates),
            }
            for m in panel.matches
        ],
        "units": _units(panel),
        "states": {s.word: states[s] for s in sorted(State, key=lambda s: s.word) if states[s]},
        "below_loq": _of_state(panel, State.BELOW_LOQ),
        "assumed": [_problem(p) for p in panel.problems if p.severity is Severity.NOTE],
        "refused": [_problem(p) for p in panel.problems if p.severity is not Severity.NOTE],
    }


def _specimen(facts: SpecimenFacts, values: int, catalogue: Catalogue) -> dict[str, Any]:
    return {
        "specimen": facts.code,
        "participant": facts.participant,
        "group": facts.group,
        "matrix": facts.matrix,
        "matrix_name": catalogue.matrices[facts.matrix].name if facts.matrix else "",
        "collected": facts.collected,
        "row": facts.row,
        "values": values,
    }


def _units(panel: Panel) -> list[dict[str, Any]]:
    """Each unit with the basis it was converted with and how many values carry it."""
    r = panel.readings
    used = np.flatnonzero(~np.isnan(r.mol_per_l))
    counted = Counter(zip(r.unit[used].tolist(), r.basis[used].tolist(), strict=True))
    return [{"unit": unit, "basis": basis, "values": n} for (unit, basis), n in counted.items()]


def _of_state(panel: Panel, state: State) -> list[dict[str, Any]]:
    r = panel.readings
    return [
        {
            "specimen": panel.specimens[r.specimen[k]].code,
            "analyte": r.analyte[k] or r.name[k],
            "as_written": f"{r.value[k]} {r.unit[k]}".strip(),
            "row": int(r.row[k]),
            "column": r.column[k],
        }
        for k in np.flatnonzero(r.state == state).tolist()
    ]


def _problem(p: Problem) -> dict[str, Any]:
    return {
        "file": p.file,
        "row": p.row,
        "column": p.column,
        "what": p.what,
        "remedy": p.remedy,
        "severity": p.severity.value,
        "specimen": p.specimen,
    }
