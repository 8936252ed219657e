"""What one balance strip shows, read from a review: marks and limits in kJ/mol, and the same in words."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Any

import numpy as np

from panelview.assess.calls import LEAST_CONTROLS_FOR_INTERVAL, LN_NEAR, Z95, Assessability, Direction, Shift
from panelview.assess.review import Review
from panelview.assess.sentences import call_words, signed
from panelview.output.scale import Axis
from panelview.thermo.physical import GAS_CONSTANT

_NOTHING = (math.nan, math.nan)


@dataclass(frozen=True, slots=True)
class Strip:
    """One strip on one axis, kJ/mol.

    reason: text shown in place of marks ("" where there are marks); value: NaN where only a bound is
    known; lower, upper: interval, ±inf on an open side; band: reference interval, NaN where none is
    claimed; spread: mean and standard deviation of the reference shown in its place (NaN: none); controls:
    single controls, shown where no interval is claimed; limits: the two hairlines; side: "back",
    "forward" or "" for a step that is not highlighted; proxy, inferred: the point is drawn hollow,
    hollow and dashed.
    """

    reason: str
    value: float = math.nan
    lower: float = math.nan
    upper: float = math.nan
    band: tuple[float, float] = _NOTHING
    spread: tuple[float, float] = _NOTHING
    controls: tuple[float, ...] = ()
    limits: tuple[float, float] = _NOTHING
    side: str = ""
    proxy: bool = False
    inferred: bool = False

    @property
    def has_mark(self) -> bool:
        """Whether there is a point or a bound to draw."""
        return math.isfinite(self.value) or math.isfinite(self.lower) or math.isfinite(self.upper)


def strip_of(review: Review, specimen: int, column: int, axis: Axis) -> Strip:
    """The strip of one step of one specimen."""
    found = review.findings
    level = Assessability(int(found.assessability[specimen, column]))
    if level > Assessability.PROXY:
        return Strip(reason=review.reason(specimen, column) or call_words(review, specimen, column))
    common: dict[str, Any] = {
        "controls": _controls(review, specimen, column, axis),
        "limits": _limits(review, specimen, axis),
        "side": _side(review, specimen, column),
        "proxy": level == Assessability.PROXY,
        "inferred": bool(found.inferred[specimen, column]),
    }
    made = (_on_shift if axis is Axis.SHIFT else _on_distance)(review, specimen, column, common)
    if made.has_mark:
        return made
    return Strip(reason=_why_nothing(review, specimen, column, axis))


def strip_words(review: Review, specimen: int, column: int, axis: Axis) -> str:
    """The strip as a sentence, for readers who do not see it."""
    strip = strip_of(review, specimen, column, axis)
    if strip.reason:
        return f"{call_words(review, specimen, column)}: {strip.reason}."
    what = "Shift against controls" if axis is Axis.SHIFT else "ΔG′"
    parts = [_value_words(what, strip, axis)]
    if math.isfinite(strip.band[0]):
        parts.append(f"reference interval {signed(strip.band[0])} to {signed(strip.band[1])}")
    elif math.isfinite(strip.spread[0]):
        spread = f" ± {strip.spread[1]:.1f}" if math.isfinite(strip.spread[1]) else ""
        n = int(review.findings.reference_n[specimen, column])
        parts.append(
            f"reference mean {signed(strip.spread[0])}{spread} ({n} controls)"
            if n
            else f"published mean {signed(strip.spread[0])}{spread}"
        )
    parts.append(call_words(review, specimen, column))
    kinds = [word for word, is_so in (("proxy", strip.proxy), ("rests on an inferred pool", strip.inferred)) if is_so]
    return "; ".join(parts + kinds) + "."


def _value_words(what: str, strip: Strip, axis: Axis) -> str:
    if math.isfinite(strip.value):
        told = f"{what} {signed(strip.value)} kJ/mol"
        if axis is Axis.SHIFT:  # the bar is what healthy specimens differ by, not an error of this shift
            half = strip.upper - strip.value
            return f"{told}, 95 % of healthy specimens differ by less than {half:.1f}" if half > 0 else told
        return f"{told}, 95 % interval {signed(strip.lower)} to {signed(strip.upper)}"
    if math.isfinite(strip.upper):
        return f"{what} at most {signed(strip.upper)} kJ/mol"
    return f"{what} at least {signed(strip.lower)} kJ/mol"


def _on_shift(review: Review, specimen: int, column: int, common: dict[str, Any]) -> Strip:
    at = specimen, column
    found = review.findings
    shift, sd = float(found.shift[at]), float(found.shift_sd[at])
    half = Z95 * sd if math.isfinite(sd) else 0.0
    lower, upper = shift - half, shift + half
    if not math.isfinite(shift):
        lower, upper = float(found.shift_lower[at]), float(found.shift_upper[at])
    band = float(found.band_lower[at]), float(found.band_upper[at])
    spread = (0.0, float(found.reference_sd[at])) if math.isnan(band[0]) else _NOTHING
    return Strip("", shift, lower, upper, band, spread, **common)


def _on_distance(review: Review, specimen: int, column: int, common: dict[str, Any]) -> Strip:
    at = specimen, column
    found = review.findings
    band = float(found.reference_lower[at]), float(found.reference_upper[at])
    spread = _NOTHING
    if math.isnan(band[0]):
        spread = float(found.reference_mean[at]), float(found.reference_sd[at])
    return Strip(
        "",
        float(found.delta_g[at]),
        float(found.delta_g_lower95[at]),
        float(found.delta_g_upper95[at]),
        band,
        spread,
        **common,
    )


def _controls(review: Review, specimen: int, column: int, axis: Axis) -> tuple[float, ...]:
    """Single controls of the study on this axis, of the same matrix, where no interval is claimed."""
    if review.findings.reference_n[specimen, column] >= LEAST_CONTROLS_FOR_INTERVAL:
        return ()
    members = review.reference.members.get(review.specimens[specimen].matrix)
    if members is None:
        return ()
    index = np.array([k for k in members[1] if k >= 0 and k != specimen], dtype=np.intp)
    values = (review.findings.shift if axis is Axis.SHIFT else review.findings.delta_g)[index, column]
    return tuple(float(v) for v in values if math.isfinite(v))


def _limits(review: Review, specimen: int, axis: Axis) -> tuple[float, float]:
    """The hairlines: the highlight floor on the shift axis, Γ/K′eq = 1/5 and 5 on the other."""
    if axis is Axis.SHIFT:
        return -review.shift_floor, review.shift_floor
    near = GAS_CONSTANT * float(review.conditions.temperature[specimen]) * LN_NEAR
    return -near, near


def _side(review: Review, specimen: int, column: int) -> str:
    if not review.findings.highlighted[specimen, column]:
        return ""
    call = Shift(int(review.findings.shift_call[specimen, column]))
    return {Shift.PUSHED_BACK: "back", Shift.PUSHED_FORWARD: "forward"}.get(call, "")


def _why_nothing(review: Review, specimen: int, column: int, axis: Axis) -> str:
    found = review.findings
    if axis is Axis.SHIFT:
        return "no reference to compare with: see the distance from equilibrium"
    if found.defines_pool[specimen, column]:
        return "defines the free pool, so it is not judged by it: see the shift"
    if found.direction[specimen, column] == Direction.NONE:
        return "no equilibrium constant is known: see the shift against controls"
    return "values beyond their limits leave ΔG′ open on both sides"
