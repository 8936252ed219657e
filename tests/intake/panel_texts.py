"""Small panels as text, read and looked up by specimen and analyte."""

from __future__ import annotations

import math
from dataclasses import dataclass

import pytest

from panelview.catalogue.load import Catalogue
from panelview.intake.panel import Panel, State
from panelview.intake.problems import InputRefused, Problem, Severity
from panelview.intake.read import read_panel_bytes

LONG = "specimen,matrix,analyte,value,unit\n"


@dataclass(frozen=True)
class Seen:
    """One reading of a panel."""

    analyte: str
    state: State
    mol_per_l: float
    sd_ln: float
    sd_is_default: bool
    shared_sd_ln: float
    basis: str
    value: str
    flag: str
    row: int
    column: str
    note: str


def read(catalogue: Catalogue, text: str | bytes, *, name: str = "panel.csv", matrix: str | None = None) -> Panel:
    data = text.encode() if isinstance(text, str) else text
    return read_panel_bytes(name, data, catalogue, matrix=matrix)


def seen(panel: Panel) -> list[Seen]:
    """All readings, in file order."""
    r = panel.readings
    return [
        Seen(
            str(r.analyte[k]),
            State(int(r.state[k])),
            float(r.mol_per_l[k]),
            float(r.sd_ln[k]),
            bool(r.sd_is_default[k]),
            float(r.shared_sd_ln[k]),
            str(r.basis[k]),
            str(r.value[k]),
            str(r.flag[k]),
            int(r.row[k]),
            str(r.column[k]),
            str(r.note[k]),
        )
        for k in range(len(r))
    ]


def one(
    catalogue: Catalogue, value: str, unit: str = "mmol/L", *, analyte: str = "lactate", matrix: str = "plasma"
) -> Seen:
    """The reading of a single value."""
    (reading,) = seen(read(catalogue, f'specimen;matrix;analyte;value;unit\nA;{matrix};"{analyte}";{value};{unit}\n'))
    return reading


def by_name(panel: Panel) -> dict[tuple[str, str], tuple[str, float]]:
    """(specimen, analyte) → state and mol/L, None in place of NaN so that tables can be compared."""
    codes = [s.code for s in panel.specimens]
    r = panel.readings
    return {
        (codes[int(r.specimen[k])], str(r.analyte[k])): (
            State(int(r.state[k])).word,
            -1.0 if math.isnan(r.mol_per_l[k]) else float(r.mol_per_l[k]),
        )
        for k in range(len(r))
    }


def problems(panel: Panel, severity: Severity | None = None) -> list[Problem]:
    """The problems of a panel but for the default uncertainty, which nearly every test file brings."""
    return [
        p
        for p in panel.problems
        if (severity is None or p.severity is severity) and not p.what.startswith("no assay CV is stated")
    ]


def refusal(catalogue: Catalogue, text: str | bytes, **options: str) -> Problem:
    """The first problem of a file that is refused whole."""
    with pytest.raises(InputRefused) as caught:
        read(catalogue, text, **options)
    first = caught.value.problems[0]
    assert first.severity is Severity.FILE
    assert first.what
    assert first.remedy
    return first
