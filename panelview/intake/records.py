"""What every reader of a format hands on: what is said of the specimens, and the reported cells in columns."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from panelview.intake.panel import SourceFile
from panelview.intake.problems import Problem

#: What a file may say of a specimen.
METADATA = ("participant", "group", "matrix", "collected", "ph", "temperature", "ionic_strength", "pmg")


@dataclass(frozen=True, slots=True)
class Series:
    """What cells of one analyte share, as written: a column of a wide table, like rows of a long one.

    heading_unit: a unit that the heading states beside `unit`, "" where there is no second one; lloq in the same
    unit; cv in percent; comparator and compartment as in the long format.
    """

    name: str
    unit: str
    heading_unit: str = ""
    lloq: str = ""
    cv: str = ""
    comparator: str = ""
    compartment: str = ""


@dataclass(frozen=True, slots=True)
class Statement:
    """What one row says of one specimen: field of METADATA → text as written."""

    row: int
    code: str
    facts: dict[str, str]


@dataclass
class Records:
    """One file as records; arrays have shape [cell], in file order.

    columns: field → heading as written; specimen: index into codes; series_of: index into series; row: 1-based
    row of the file; column: heading as written; value, flag, status, replicate: texts (object arrays), without
    blanks around them; status and replicate are None where the file has none.
    """

    source: SourceFile
    layout: str
    columns: dict[str, str]
    statements: list[Statement]
    codes: list[str]
    series: list[Series]
    specimen: NDArray[np.intp]
    series_of: NDArray[np.intp]
    row: NDArray[np.int64]
    column: NDArray[np.object_]
    value: NDArray[np.object_]
    flag: NDArray[np.object_]
    status: NDArray[np.object_] | None = None
    replicate: NDArray[np.object_] | None = None
    problems: list[Problem] = field(default_factory=list)


def texts(values: Sequence[str]) -> NDArray[np.object_]:
    """An object array of strings."""
    made = np.empty(len(values), dtype=object)
    made[:] = values
    return made


def same_text(text: str, count: int) -> NDArray[np.object_]:
    """An object array that holds one string `count` times."""
    made = np.empty(count, dtype=object)
    made.fill(text)
    return made


def stripped(values: Sequence[str]) -> Sequence[str]:
    """The texts without blanks around them."""
    together = "".join(values)
    # One pass over long columns is cheaper than a call a cell; most hold no blank at all.
    return (
        values
        if together.split(None, 1) in ([], [together]) and together.strip() == together
        else [v.strip() for v in values]
    )
