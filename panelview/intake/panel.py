"""The panel: specimens and their readings, as reported and as understood, cell by cell."""

from __future__ import annotations

from dataclasses import dataclass
from enum import IntEnum

import numpy as np
from numpy.typing import NDArray

from panelview.intake.problems import Problem

Array = NDArray[np.float64]


class State(IntEnum):
    """What a reading is. `word` is how tables and files spell it."""

    MEASURED = 0
    BELOW_LOQ = 1
    ABOVE_RANGE = 2
    MISSING = 3
    SUM = 4
    UNMATCHED = 5
    REFUSED = 6

    @property
    def word(self) -> str:
        return self.name.lower()


@dataclass(frozen=True, slots=True)
class SpecimenFacts:
    """What a file says of one specimen.

    code: the specimen's id as written; matrix: matrix id, "" where the file does not say;
    group: "" where none; collected: as written; the conditions are None where the file does not
    give them (temperature in K); row: first row of the file that holds it; source: file name.
    """

    code: str
    participant: str
    group: str
    matrix: str
    collected: str
    ph: float | None
    temperature: float | None
    ionic_strength: float | None
    pmg: float | None
    source: str
    row: int


@dataclass(frozen=True)
class Readings:
    """All reported values in file order; every array has shape [reading].

    specimen: index into Panel.specimens; analyte: catalogue metabolite id, "" where unmatched (object
    array); name, value, unit, flag: as written (object arrays of str); state: `State` codes;
    mol_per_l: mol/L of the pool's water, the limit for BELOW_LOQ and ABOVE_RANGE, NaN otherwise
    without a number; sd_ln: standard uncertainty of ln c from the assay (NaN without a number);
    sd_is_default: whether sd_ln is the program's default, not the laboratory's; shared_sd_ln: relative
    uncertainty of the conversion factor, shared by the specimen's readings with the same basis;
    basis: reporting basis the conversion used (object array, see catalogue.matrices.Conversion);
    row: 1-based row of the file; column: heading as written; note: what was assumed or refused.
    """

    specimen: NDArray[np.intp]
    analyte: NDArray[np.object_]
    name: NDArray[np.object_]
    value: NDArray[np.object_]
    unit: NDArray[np.object_]
    flag: NDArray[np.object_]
    state: NDArray[np.int8]
    mol_per_l: Array
    sd_ln: Array
    sd_is_default: NDArray[np.bool_]
    shared_sd_ln: Array
    basis: NDArray[np.object_]
    row: NDArray[np.int64]
    column: NDArray[np.object_]
    note: NDArray[np.object_]

    def __len__(self) -> int:
        return len(self.specimen)


@dataclass(frozen=True, slots=True)
class SourceFile:
    """A file as received: name without folders, size in bytes, SHA-256 in hex."""

    name: str
    size: int
    sha256: str


@dataclass(frozen=True, slots=True)
class Match:
    """How one name in the file was understood.

    how: "id", "name", "abbreviation", "synonym", "spelling" (differs in case, blanks, hyphens only),
    "sum", "ambiguous", "unknown"; candidates: offered where not matched (never taken).
    """

    written: str
    analyte: str
    how: str
    candidates: tuple[str, ...]


@dataclass(frozen=True)
class Panel:
    """Specimens × readings of one or more files, with everything noticed while reading them.

    layout: e.g. "long, comma-separated, UTF-8, decimal point"; refused_specimens: codes left out whole.
    """

    sources: tuple[SourceFile, ...]
    layout: str
    specimens: tuple[SpecimenFacts, ...]
    readings: Readings
    matches: tuple[Match, ...]
    problems: tuple[Problem, ...]
    refused_specimens: tuple[str, ...]
