"""What was read of the files, as rows of text: problems and assumptions first, then every value."""

from __future__ import annotations

from collections.abc import Sequence
from typing import overload

import numpy as np

from panelview.intake.panel import Panel, State
from panelview.intake.problems import Severity
from panelview.output.text import concentration, relative, shown_id

PROBLEM_HEADINGS = ("Kind", "Row", "Column", "Specimen", "What", "What to do")
VALUE_HEADINGS = ("Row", "Specimen", "As written", "Value", "Understood as", "Used", "±", "State", "Note")

#: The order in which kinds of problems are listed: what is left out goes before what is only noted.
_ORDER = (Severity.FILE, Severity.SPECIMEN, Severity.VALUE, Severity.NOTE)


def summary(panel: Panel) -> str:
    """One sentence: which files, how they are laid out, how much was read and how much left out."""
    files = ", ".join(f"{s.name} ({s.size / 1024:.0f} kB)" for s in panel.sources)
    states = panel.readings.state
    measured = int(np.count_nonzero(states == State.MEASURED))
    beyond = int(np.count_nonzero((states == State.BELOW_LOQ) | (states == State.ABOVE_RANGE)))
    parts = [counted(len(panel.specimens), "specimen"), counted(measured, "value")]
    if beyond:
        parts.append(f"{beyond} beyond a limit of quantification")
    for state, words in (
        (State.MISSING, "missing"),
        (State.SUM, "sums"),
        (State.UNMATCHED, "not matched"),
        (State.REFUSED, "refused"),
    ):
        count = int(np.count_nonzero(states == state))
        if count:
            parts.append(f"{count} {words}")
    if panel.refused_specimens:
        parts.append(f"{len(panel.refused_specimens)} specimens left out")
    return f"{files}: {panel.layout}. {', '.join(parts)}."


def problem_rows(panel: Panel) -> list[tuple[str, ...]]:
    """One row a problem or assumption, the gravest first, in file order within a kind."""
    ordered = sorted(panel.problems, key=lambda p: (_ORDER.index(p.severity), p.file, p.row))
    return [(p.severity.value, str(p.row) if p.row else "", p.column, p.specimen, p.what, p.remedy) for p in ordered]


def left_out(panel: Panel) -> str:
    """How many values and specimens were left out, in words; "" where none was."""
    values = sum(p.severity is Severity.VALUE for p in panel.problems)
    specimens = sum(p.severity is Severity.SPECIMEN for p in panel.problems)
    parts = [counted(n, what) for n, what in ((values, "value"), (specimens, "specimen")) if n]
    return " and ".join(parts)


def counted(count: int, what: str) -> str:
    """A number of things in words: "1 value", "3 values"."""
    return f"1 {what}" if count == 1 else f"{count} {what}s"


class ValueRows(Sequence[tuple[str, ...]]):
    """One row a value, in file order: as written, as understood, as used. Made when looked at: a cohort has
    very many."""

    def __init__(self, panel: Panel) -> None:
        self._panel = panel

    def __len__(self) -> int:
        return len(self._panel.readings)

    @overload
    def __getitem__(self, k: int) -> tuple[str, ...]: ...

    @overload
    def __getitem__(self, k: slice) -> list[tuple[str, ...]]: ...

    def __getitem__(self, k: int | slice) -> tuple[str, ...] | list[tuple[str, ...]]:
        if isinstance(k, slice):
            return [self._row(j) for j in range(*k.indices(len(self)))]
        return self._row(k)

    def _row(self, k: int) -> tuple[str, ...]:
        r = self._panel.readings
        state = State(int(r.state[k]))
        used = concentration(float(r.mol_per_l[k]))
        sign = {State.BELOW_LOQ: "< ", State.ABOVE_RANGE: "> "}.get(state, "")
        sd = relative(float(r.sd_ln[k])) + (" (default)" if r.sd_is_default[k] else "")
        return (
            str(r.row[k]),
            self._panel.specimens[r.specimen[k]].code,
            str(r.name[k]),
            f"{r.value[k]} {r.unit[k]} {r.flag[k]}".strip(),
            shown_id(str(r.analyte[k])),
            f"{sign}{used}" if used else "",
            sd if used else "",
            shown_id(state.word),
            str(r.note[k]),
        )
