"""Specimen codes as file names that every system takes: no path, no reserved name, no two alike."""

from __future__ import annotations

import unicodedata
from collections.abc import Iterable

#: Names that Windows keeps for devices, with any extension.
_RESERVED = frozenset(["con", "prn", "aux", "nul"] + [f"{port}{k}" for port in ("com", "lpt") for k in "0123456789¹²³"])

#: UTF-8 bytes of a name without its ending; most systems take 255 with it.
_LONGEST = 120


def safe_name(code: str) -> str:
    """One code as a file name without ending: letters, digits, `.`, `_`, `-`; anything else becomes `_`.

    >>> safe_name("../P 01/d3"), safe_name("con"), safe_name("…")
    ('P_01_d3', '_con', 'specimen')
    """
    normal = unicodedata.normalize("NFC", code)
    kept = "".join(c if c.isalnum() or c in "._-" else "_" for c in normal)
    kept = kept.strip("._- ")
    while len(kept.encode()) > _LONGEST:
        kept = kept[:-1]
    kept = kept.rstrip("._- ") or "specimen"
    return f"_{kept}" if kept.split(".")[0].casefold() in _RESERVED else kept


def page_names(codes: Iterable[str], taken: Iterable[str] = ("cohort",)) -> list[str]:
    """A PDF file name for each code, in order; names that differ only in case are numbered apart."""
    used = {name.casefold() for name in taken}
    names = []
    for code in codes:
        base = name = safe_name(code)
        number = 2
        while name.casefold() in used:
            name = f"{base}-{number}"
            number += 1
        used.add(name.casefold())
        names.append(f"{name}.pdf")
    return names
