"""What may be said of a step: the words, the limits behind them, and why the limits are what they are."""

from __future__ import annotations

import math
from enum import IntEnum


class _Word(IntEnum):
    @property
    def word(self) -> str:
        """How tables, files and the screen spell it; "" for "nothing said"."""
        return "" if self.name == "NONE" else self.name.lower()


class Assessability(_Word):
    """Whether the step can be read in this specimen."""

    ASSESSED = 0
    PROXY = 1
    NOT_ASSESSABLE = 2
    MISSING = 3


class Direction(_Word):
    """Which way the step can run."""

    NONE = 0
    FORWARD = 1
    REVERSED = 2
    UNDECIDED = 3


class Distance(_Word):
    """How far from equilibrium the step is."""

    NONE = 0
    NEAR = 1
    BETWEEN = 2
    FAR = 3


class Shift(_Word):
    """Where the step stands against the reference group."""

    NO_REFERENCE = 0
    WITHIN = 1
    PUSHED_BACK = 2
    PUSHED_FORWARD = 3


#: "Reversed" needs P(ΔG′ > 0) of at least this, "forward" at most 1 − this: one-sided 95 %, the
#: customary level for a statement that the measurement supports (common practice, no source).
DIRECTION_LEVEL = 0.95

#: Near equilibrium: Γ/K′eq within 1/5 and 5; far: beyond 1/20 or 20 (Rolleston 1972; Newsholme and Start 1973).
NEAR_FACTOR = 5.0
FAR_FACTOR = 20.0
LN_NEAR = math.log(NEAR_FACTOR)
LN_FAR = math.log(FAR_FACTOR)

#: False discovery rate over the specimen's assessed steps (Benjamini and Hochberg 1995).
FALSE_DISCOVERY_RATE = 0.05

#: Smallest shift that is highlighted, kJ/mol: a 2.6-fold change of the mass-action ratio at 37 °C. Twofold
#: changes of ATP/ADP alone move every kinase by 1.8 kJ/mol; the floor lies above that. The reviewer can set it.
SHIFT_FLOOR = 2.5

#: Fewer controls than this: values are shown, no test is made (CLSI EP28-A3c practice; Crawford and Howell 1998).
LEAST_CONTROLS_FOR_TEST = 5

#: Fewer controls than this: no reference interval is claimed (CLSI EP28-A3c).
LEAST_CONTROLS_FOR_INTERVAL = 20

#: Normal quantile of a central 95 % interval.
Z95 = 1.959963984540054
