"""Readings to ln c: one number, one uncertainty and one state per specimen and analyte."""

from __future__ import annotations

from itertools import repeat

import numpy as np

from panelview.assess.review import Concentrations
from panelview.intake.panel import Panel, State

#: Codes of the conversion bases in Concentrations.basis; values with one basis share its factor's error.
BASES = (
    "",
    "litre",
    "litre_cells",
    "kg_wet",
    "kg_dry",
    "kg_protein",
    "kg_haemoglobin",
    "billion_cells",
)


def concentrations(panel: Panel, analytes: tuple[str, ...]) -> Concentrations:
    """ln c of every specimen and analyte, NaN where there is none.

    A value below (above) a limit of quantification enters at the limit with its `below` (`above`) flag
    set; without a known limit it stays missing. Sums and unmatched readings never enter.
    """
    shape = (len(panel.specimens), len(analytes))
    readings = panel.readings
    position = {analyte: k for k, analyte in enumerate(analytes)}
    column = np.fromiter(map(position.get, readings.analyte, repeat(-1)), dtype=np.intp, count=len(readings))
    usable = (
        (column >= 0)
        & np.isin(readings.state, (State.MEASURED, State.BELOW_LOQ, State.ABOVE_RANGE))
        & np.isfinite(readings.mol_per_l)
    )
    chosen = np.flatnonzero(usable)
    at = (readings.specimen[chosen], column[chosen])
    code = {basis: k for k, basis in enumerate(BASES)}

    ln_c = np.full(shape, np.nan)
    sd = np.zeros(shape)
    shared = np.zeros(shape)
    basis = np.zeros(shape, dtype=np.int8)
    below = np.zeros(shape, dtype=bool)
    above = np.zeros(shape, dtype=bool)
    reading = np.full(shape, -1, dtype=np.int64)
    ln_c[at] = np.log(readings.mol_per_l[chosen])
    sd[at] = np.nan_to_num(readings.sd_ln[chosen])
    shared[at] = np.nan_to_num(readings.shared_sd_ln[chosen])
    basis[at] = np.fromiter(map(code.get, readings.basis[chosen], repeat(0)), dtype=np.int8, count=len(chosen))
    below[at] = readings.state[chosen] == State.BELOW_LOQ
    above[at] = readings.state[chosen] == State.ABOVE_RANGE
    reading[at] = chosen
    return Concentrations(analytes, ln_c, sd, shared, basis, below, above, reading)
