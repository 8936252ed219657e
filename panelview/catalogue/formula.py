"""Molecular formulas: element counts and molar masses."""

from __future__ import annotations

import re
from collections import Counter

#: Standard atomic weights, abridged, g/mol (IUPAC 2021).
ATOMIC_WEIGHTS = {
    "H": 1.008,
    "C": 12.011,
    "N": 14.007,
    "O": 15.999,
    "Mg": 24.305,
    "P": 30.973762,
    "S": 32.06,
}

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


def molar_mass(formula: str) -> float:
    """Molar mass, g/mol, from `ATOMIC_WEIGHTS`. Raises ValueError, KeyError for an element not listed.

    >>> round(molar_mass("C6H12O6"), 3)
    180.156
    """
    return sum(ATOMIC_WEIGHTS[element] * n for element, n in element_counts(formula).items())
