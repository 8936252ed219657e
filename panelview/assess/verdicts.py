"""Numbers to calls, by the limits of `calls`: direction, distance, shift, false discovery rate."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from panelview.assess.calls import (
    DIRECTION_LEVEL,
    FALSE_DISCOVERY_RATE,
    LN_FAR,
    LN_NEAR,
    Direction,
    Distance,
    Shift,
)
from panelview.assess.student import normal_cdf

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Codes = NDArray[np.int8]


def probability_reversed(delta_g: Array, sd: Array) -> Array:
    """P(ΔG′ > 0) = Φ(ΔG′/sd)."""
    with np.errstate(divide="ignore", invalid="ignore"):
        return normal_cdf(np.where(sd > 0, delta_g / sd, np.sign(delta_g) * np.inf))


def probability_near(delta_g: Array, sd: Array, rt: Array) -> Array:
    """P(1/5 ≤ Γ/K′eq ≤ 5); delta_g, sd [specimen, column] and rt [specimen, 1] in kJ/mol."""
    limit = LN_NEAR * rt
    with np.errstate(divide="ignore", invalid="ignore"):
        return normal_cdf((limit - delta_g) / sd) - normal_cdf((-limit - delta_g) / sd)


def directions(p_reversed: Array, open_below: Flags, open_above: Flags) -> Codes:
    """Direction of every column; with a side open, only if every value on that side agrees.

    p_reversed at the limit where a value is censored.
    """
    forward = (p_reversed <= 1 - DIRECTION_LEVEL) & ~open_above
    reversed_ = (p_reversed >= DIRECTION_LEVEL) & ~open_below
    code = np.where(forward, Direction.FORWARD, np.where(reversed_, Direction.REVERSED, Direction.UNDECIDED))
    return np.where(np.isfinite(p_reversed), code, Direction.NONE).astype(np.int8)


def without_usual_direction(direction: Codes, either: Flags, ln_ratio: Array, shift_call: Codes) -> Codes:
    """Take back “reversed” from steps that have no usual direction, unless more than the sign supports it.

    Such a step counts as reversed only if it is also pushed back against the reference, or, where nothing
    can be compared, if Γ/K′eq lies outside the near-equilibrium zone: in published tables healthy
    isomerases lie up to 3 kJ/mol above zero through the errors of constants and assays alone.
    either: [column]; ln_ratio: ln(Γ/K′eq), at the limit where censored; the others [specimen, column].
    """
    supported = np.where(shift_call == Shift.NO_REFERENCE, ln_ratio > LN_NEAR, shift_call == Shift.PUSHED_BACK)
    taken_back = either & (direction == Direction.REVERSED) & ~supported
    return np.where(taken_back, Direction.UNDECIDED, direction).astype(np.int8)


def distances(ln_ratio: Array, open_below: Flags, open_above: Flags) -> Codes:
    """Near, between or far by ln(Γ/K′eq); with a side open, only "far" can be true of every value."""
    size = np.abs(ln_ratio)
    code = np.where(size <= LN_NEAR, Distance.NEAR, np.where(size > LN_FAR, Distance.FAR, Distance.BETWEEN))
    far_below = open_below & ~open_above & (ln_ratio < -LN_FAR)
    far_above = open_above & ~open_below & (ln_ratio > LN_FAR)
    is_open = open_below | open_above
    code = np.where(is_open, np.where(far_below | far_above, Distance.FAR, Distance.NONE), code)
    return np.where(np.isfinite(ln_ratio), code, Distance.NONE).astype(np.int8)


def false_discovery(p: Array) -> Array:
    """Benjamini–Hochberg q-values along the last axis; NaN stays NaN and is no part of the family.

    Source: Benjamini and Hochberg (1995).

    >>> p = np.array([[0.001, 0.008, 0.039, 0.041, 0.042, 0.06, 0.074, 0.205, 0.212, 0.216]])
    >>> int((false_discovery(p) <= 0.05).sum())
    2
    """
    if p.shape[-1] == 0:
        return p.copy()
    family = np.isfinite(p).sum(axis=-1, keepdims=True)
    order = np.argsort(p, axis=-1)  # NaN sorts last
    rank = np.arange(1, p.shape[-1] + 1)
    ordered = np.take_along_axis(p, order, axis=-1) * family / rank
    filled = np.where(np.isnan(ordered), np.inf, ordered)
    falling = np.minimum.accumulate(filled[..., ::-1], axis=-1)[..., ::-1]
    q = np.empty_like(p)
    np.put_along_axis(q, order, np.minimum(falling, 1.0), axis=-1)
    return np.where(np.isnan(p), np.nan, q)


def shift_calls(shift: Array, q: Array, tested: Flags) -> Codes:
    """Within, pushed back (less favourable) or pushed forward, at the false discovery rate."""
    moved = np.where(shift > 0, Shift.PUSHED_BACK, Shift.PUSHED_FORWARD)
    code = np.where(q <= FALSE_DISCOVERY_RATE, moved, Shift.WITHIN)
    return np.where(tested & np.isfinite(shift), code, Shift.NO_REFERENCE).astype(np.int8)
