"""The shared axis of the balance strips: linear around zero, compressed beyond the breaks."""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import Enum

import numpy as np

from panelview.assess.review import Array, Review


class Axis(Enum):
    """What the strips show. `title` heads the axis; `left`, `right` say what the sides mean."""

    SHIFT = "shift"
    DISTANCE = "distance"

    @property
    def title(self) -> str:
        return "Shift against controls, kJ/mol" if self is Axis.SHIFT else "ΔG′, kJ/mol"

    @property
    def left(self) -> str:
        return "pushed forward" if self is Axis.SHIFT else "usual way"

    @property
    def right(self) -> str:
        return "pushed back" if self is Axis.SHIFT else "turned round"


#: Half-width of the linear part, kJ/mol: holds the near-equilibrium zone (± 4.2) and the limit of "far"
#: (± 7.7) at 37 °C.
LINEAR = 10.0

#: How much narrower a kJ/mol is drawn beyond the breaks.
COMPRESSION = 6.0

#: The axis ends on a multiple of this, kJ/mol.
_ROUND_TO = 10.0


@dataclass(frozen=True, slots=True)
class Scale:
    """kJ/mol to a share of the strip's width. lower ≤ −LINEAR and upper ≥ LINEAR are the ends, kJ/mol."""

    lower: float
    upper: float

    def at(self, value: float) -> float:
        """Position of `value` between 0 (left end) and 1; values beyond an end sit on it."""
        low = _squeezed(self.lower)
        high = _squeezed(self.upper)
        return min(max((_squeezed(value) - low) / (high - low), 0.0), 1.0)

    def value_at(self, share: float) -> float:
        """The value drawn at a share of the width; the inverse of `at`."""
        low = _squeezed(self.lower)
        high = _squeezed(self.upper)
        return _stretched(low + share * (high - low))

    def is_beyond(self, value: float) -> bool:
        return not self.lower <= value <= self.upper

    @property
    def breaks(self) -> tuple[float, ...]:
        """Where the scale changes, kJ/mol."""
        low = (-LINEAR,) if self.lower < -LINEAR else ()
        high = (LINEAR,) if self.upper > LINEAR else ()
        return low + high

    def ticks(self, width: float, label_width: float) -> tuple[float, ...]:
        """Values to label: the linear part in steps of 2 or 5, the compressed parts as room allows."""
        per_unit = width * (self.at(1.0) - self.at(0.0))
        step = next((s for s in (2.0, 5.0) if per_unit * s >= label_width * 1.25), LINEAR)
        count = int(LINEAR // step)
        inner = [step * k for k in range(-count, count + 1)]
        outer = [*self._outer_ticks(self.lower, width, label_width)]
        outer += self._outer_ticks(self.upper, width, label_width)
        return tuple(sorted(inner + outer))

    def _outer_ticks(self, end: float, width: float, label_width: float) -> list[float]:
        """Labels of the compressed part up to `end`: its end, then every 20 kJ/mol with room between."""
        side = math.copysign(1.0, end)
        kept = [side * LINEAR]
        between = [side * size for size in range(20, int(abs(end)), 20)]
        for value in (end, *between):
            if abs(value) > LINEAR and all(width * abs(self.at(value) - self.at(k)) >= label_width * 1.3 for k in kept):
                kept.append(value)
        return kept[1:]


def scale_of(review: Review, axis: Axis) -> Scale:
    """An axis that holds every interval of the review, the same for all specimens."""
    found = review.findings
    arrays: tuple[Array, ...]
    if axis is Axis.SHIFT:
        arrays = (found.shift, found.shift_lower, found.shift_upper, found.band_lower, found.band_upper)
    else:
        arrays = (
            found.delta_g_lower95,
            found.delta_g_upper95,
            found.reference_lower,
            found.reference_upper,
        )
    values = np.concatenate([a[np.isfinite(a)] for a in arrays])
    lowest = float(values.min()) if values.size else 0.0
    highest = float(values.max()) if values.size else 0.0
    return Scale(
        lower=min(-LINEAR, math.floor(lowest / _ROUND_TO) * _ROUND_TO),
        upper=max(LINEAR, math.ceil(highest / _ROUND_TO) * _ROUND_TO),
    )


def _squeezed(value: float) -> float:
    size = abs(value)
    return math.copysign(min(size, LINEAR) + max(size - LINEAR, 0.0) / COMPRESSION, value)


def _stretched(value: float) -> float:
    size = abs(value)
    return math.copysign(min(size, LINEAR) + max(size - LINEAR, 0.0) * COMPRESSION, value)
