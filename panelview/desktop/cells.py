"""The text of every cell of the step table, on screen, on the clipboard and for screen readers."""

from __future__ import annotations

import math
from enum import IntEnum

from panelview.assess.review import Review
from panelview.output.labels import call_text, step_name
from panelview.output.scale import Axis
from panelview.output.strip import strip_of, strip_words
from panelview.output.text import ratio_from_ln, signed, with_sd


class Cell(IntEnum):
    """Columns of the step table, left to right."""

    STEP = 0
    STRIP = 1
    GAMMA = 2
    K_PRIME = 3
    DELTA_G = 4
    SHIFT = 5
    CALL = 6


#: Columns of numbers, set to the right.
NUMBERS = (Cell.GAMMA, Cell.K_PRIME, Cell.DELTA_G, Cell.SHIFT)

HEADINGS = {
    Cell.STEP: "Step",
    Cell.STRIP: "Balance strip",
    Cell.GAMMA: "Γ",
    Cell.K_PRIME: "K′eq",
    Cell.DELTA_G: "ΔG′\nkJ/mol",
    Cell.SHIFT: "Shift\nkJ/mol",
    Cell.CALL: "Call",
}

TOOLTIPS = {
    Cell.STEP: "Enzyme-catalysed step, written in its usual direction",
    Cell.STRIP: "The step on the axis chosen above; the numbers stand beside it",
    Cell.GAMMA: "Mass-action ratio Γ of the specimen, concentrations in mol/L",
    Cell.K_PRIME: "Apparent equilibrium constant K′eq at the specimen's conditions, mol/L",
    Cell.DELTA_G: "ΔG′ = RT ln(Γ/K′eq) ± standard uncertainty, kJ/mol",
    Cell.SHIFT: "ΔG′ less the mean of the controls, ± the standard deviation of that difference "
    "among healthy specimens, kJ/mol",
    Cell.CALL: "What may be said of the step",
}


def cell_text(review: Review, specimen: int, column: int, cell: Cell, axis: Axis) -> str:
    """What a cell says; for the strip, its reason or nothing (its marks are painted)."""
    found = review.findings
    at = specimen, column
    if cell is Cell.STEP:
        return step_name(review, column)
    if cell is Cell.STRIP:
        return strip_of(review, specimen, column, axis).reason
    if cell is Cell.CALL:
        return call_text(review, specimen, column)
    if cell is Cell.K_PRIME:
        return ratio_from_ln(float(found.ln_k_prime[at]))
    if cell is Cell.GAMMA:
        return ratio_from_ln(float(found.ln_gamma[at]))
    if cell is Cell.DELTA_G:
        return _with_bounds(
            float(found.delta_g[at]),
            float(found.delta_g_sd[at]),
            float(found.delta_g_lower95[at]),
            float(found.delta_g_upper95[at]),
        )
    return _with_bounds(
        float(found.shift[at]),
        float(found.shift_sd[at]),
        float(found.shift_lower[at]),
        float(found.shift_upper[at]),
    )


def spoken(review: Review, specimen: int, column: int, cell: Cell, axis: Axis) -> str:
    """The cell for a screen reader: full names, units, and "not known" in place of nothing."""
    if cell is Cell.STEP:
        return f"{review.columns[column].step.enzyme}. {call_text(review, specimen, column)}"
    if cell is Cell.STRIP:
        return strip_words(review, specimen, column, axis)
    text = cell_text(review, specimen, column, cell, axis) or "not known"
    label = HEADINGS[cell].replace("\n", " in ")
    return f"{label}: {text}"


def _with_bounds(value: float, sd: float, lower: float, upper: float) -> str:
    """ "−3.1 ± 0.6", "< −8.2" or "> 4.0" for bounds, "" where nothing is known."""
    if math.isfinite(value):
        return with_sd(value, sd)
    if math.isinf(lower) and math.isfinite(upper):
        return f"< {signed(upper)}"
    if math.isinf(upper) and math.isfinite(lower):
        return f"> {signed(lower)}"
    return ""
