"""Molecular formulas: element counts."""

from __future__ import annotations

import re
from collections import Counter

_PART = re.compile(r"([A-Z][a-z]?)(\d*)")


def element_counts(formula: str) -> Counter[str]:
    """Atoms of each element in a formula without brackets or charge. Raises ValueError.

    >>> sorted(element_counts("C6H13O9P").items())
    [('C', 6), ('H', 13), ('O', 9), ('P', 1)]
    """
    parts = _PART.findall(formula)
    if "".join(e + n for e, n in parts) != formula or not formula:
        raise ValueError(f"not a molecular formula: {formula!r}")
    counts: Counter[str] = Counter()
    for element, number in parts:
        counts[element] += int(number or 1)
    return counts
