"""What is wrong with an input, where, and what to do about it."""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum


class Severity(Enum):
    """How far a problem reaches.

    NOTE: something was assumed or is worth knowing; VALUE: this value is left out; SPECIMEN: this
    specimen is left out; FILE: nothing of the file can be used.
    """

    NOTE = "note"
    VALUE = "value left out"
    SPECIMEN = "specimen left out"
    FILE = "file refused"


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing wrong (or assumed), at one place of one file.

    row: 1-based line or row of the file, 0 for the file as a whole; column: heading or 1-based
    number as text, "" for the row as a whole; what: what is wrong; remedy: what to do.
    """

    severity: Severity
    file: str
    row: int
    column: str
    what: str
    remedy: str
    specimen: str = ""

    def __str__(self) -> str:
        """`FILE:ROW:COLUMN: what is wrong; what to do`, on one line."""
        row = str(self.row) if self.row else ""
        line = f"{self.file}:{row}:{self.column}: {self.what}; {self.remedy}"
        return " ".join(line.split())


class InputRefused(Exception):
    """The input as a whole cannot be used; `problems` says why (at least one with Severity.FILE)."""

    def __init__(self, problems: tuple[Problem, ...]) -> None:
        super().__init__(problems)
        self.problems = problems

    def __str__(self) -> str:
        return "\n".join(str(p) for p in self.problems)
