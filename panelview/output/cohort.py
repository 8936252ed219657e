"""All specimens of a study on one overview: steps × specimens, a mark each, and the steps that are off."""

from __future__ import annotations

import math
from collections.abc import Sequence
from datetime import datetime
from pathlib import Path
from typing import Any, BinaryIO

import numpy as np
from reportlab.lib.pagesizes import A4
from reportlab.pdfbase.pdfmetrics import stringWidth
from reportlab.platypus import Flowable

from panelview.assess.calls import Assessability, Direction, Shift
from panelview.assess.review import Review
from panelview.assess.sentences import signed
from panelview.output.fonts import BOLD, REGULAR, register_fonts
from panelview.output.labels import call_text, matrix_name, step_name, versions
from panelview.output.layout import (
    BOXED,
    HEAD_GROUND,
    SMALL,
    SMALL_STRONG,
    TITLE,
    gap,
    paragraph,
    section,
    small_table,
    table,
)
from panelview.output.page_calls import highlighted_columns
from panelview.output.page_head import NOT_RECORDED, printed
from panelview.output.page_steps import in_pathway_order
from panelview.output.sheet import SIDE, Running, build, fitted
from panelview.output.text import CAUTION

_WIDTH = A4[1] - 2 * SIDE
_LABEL = 118.0
_NARROWEST = 26.0
_WIDEST = 54.0
_CELL_SIZE = 5.8

#: How tall a column's turned head may grow, pt; longer codes are shortened there and listed in full below.
_TALLEST = 96.0

_LEGEND = (
    "▲ pushed back, ▼ pushed forward, with the shift in kJ/mol: filled and on grey where highlighted, △ ▽ "
    "where significant but under the floor. • as usual. Without a reference: fwd forward, rev reversed, und "
    "undecided, ? no constant known. In brackets: a proxy. – not measured; blank: not assessable in that "
    "matrix. ≥, ≤: a bound from a value beyond a limit of quantification. def: defines the free pool."
)


def write_cohort(review: Review, target: Path | BinaryIO, *, when: datetime | None) -> None:
    """Write the overview to a file or an open binary stream. Raises OSError."""
    register_fonts()
    count = len(review.specimens)
    names = ", ".join(s.name for s in review.panel.sources)
    running = Running(
        title="Metabolite panel review: all specimens",
        left=f"Panel review · all {count} specimens · {names}",
        foot=f"{versions(review)} · {printed(when)}",
        subject=f"Overview of {count} specimens. Research use only.",
        identity=" ".join(s.sha256 for s in review.panel.sources) + " cohort",
    )
    story: list[Flowable] = [
        paragraph("Metabolite panel review: all specimens", TITLE),
        gap(5),
        paragraph(CAUTION, BOXED),
        gap(7),
        paragraph(f"{count} specimens from {names}. Compared with: {review.reference.label}.", SMALL),
        *_overview(review),
        *_steps_off(review),
        *_specimens(review),
    ]
    build(story, target, running, when, wide=True)


def _overview(review: Review) -> list[Flowable]:
    is_read = np.asarray(review.findings.assessability <= Assessability.PROXY).any(axis=0)
    columns = in_pathway_order(review, np.flatnonzero(is_read).tolist())
    story = section("Steps and specimens")
    if not columns:
        return [*story, paragraph("No step can be read in any specimen.")]
    story += [paragraph(_LEGEND, SMALL), gap(4)]
    for block in _blocks(review):
        story += [_matrix(review, columns, block), gap(8)]
    return story


def _blocks(review: Review) -> list[list[int]]:
    """Specimens in blocks of equal width that fit the sheet; controls of the study come last."""
    controls = set(review.reference.specimens)
    order = sorted(range(len(review.specimens)), key=lambda i: i in controls)
    count = math.ceil(len(order) / ((_WIDTH - _LABEL) // _NARROWEST))
    size = math.ceil(len(order) / count)
    return [order[start : start + size] for start in range(0, len(order), size)]


def _matrix(review: Review, columns: Sequence[int], specimens: Sequence[int]) -> Flowable:
    width = min((_WIDTH - _LABEL) / len(specimens), _WIDEST)
    height = min(max(stringWidth(review.specimens[i].code, BOLD, 6.6) for i in specimens) + 6, _TALLEST)
    heads = [_TurnedText(review.specimens[i].code, width, height) for i in specimens]
    rows: list[list[Any]] = [[paragraph("Step", SMALL_STRONG), *heads]]
    extra: list[tuple[Any, ...]] = [
        ("FONT", (1, 1), (-1, -1), REGULAR, _CELL_SIZE, 7),
        ("ALIGN", (1, 0), (-1, -1), "CENTER"),
        ("VALIGN", (0, 1), (-1, -1), "MIDDLE"),
        *((side, (1, 0), (-1, -1), 0) for side in ("LEFTPADDING", "RIGHTPADDING")),
    ]
    for row, c in enumerate(columns, start=1):
        rows.append([paragraph(step_name(review, c), SMALL), *(cell_mark(review, i, c) for i in specimens)])
        for k, i in enumerate(specimens, start=1):
            if review.findings.highlighted[i, c]:
                extra.append(("BACKGROUND", (k, row), (k, row), HEAD_GROUND))
                extra.append(("FONT", (k, row), (k, row), BOLD, _CELL_SIZE, 7))
    return table(rows, [_LABEL, *[width] * len(specimens)], extra=extra, padding=1.2)


def cell_mark(review: Review, specimen: int, column: int) -> str:
    """The mark of one step in one specimen; `_LEGEND` says what each means."""
    f = review.findings
    level = Assessability(int(f.assessability[specimen, column]))
    if level == Assessability.NOT_ASSESSABLE:
        return ""
    if level == Assessability.MISSING:
        return "–"
    mark = _shift_mark(review, specimen, column)
    return f"({mark})" if level == Assessability.PROXY else mark


def _shift_mark(review: Review, specimen: int, column: int) -> str:
    f = review.findings
    at = specimen, column
    call = Shift(int(f.shift_call[at]))
    if call == Shift.WITHIN:
        return "•"
    if call == Shift.NO_REFERENCE:
        if f.defines_pool[at]:
            return "def"
        words = {Direction.FORWARD: "fwd", Direction.REVERSED: "rev", Direction.UNDECIDED: "und"}
        return words.get(Direction(int(f.direction[at])), "?")
    is_back = call == Shift.PUSHED_BACK
    filled, outline = ("▲", "△") if is_back else ("▼", "▽")
    size = float(f.shift[at])
    bound = ""
    if not math.isfinite(size):
        size = float((f.shift_lower if is_back else f.shift_upper)[at])
        bound = "≥" if is_back else "≤"
    return f"{filled if f.highlighted[at] else outline}{bound}{signed(size)}"


def _steps_off(review: Review) -> list[Flowable]:
    story = section("Steps that are off")
    rows = []
    for i, facts in enumerate(review.specimens):
        for c in highlighted_columns(review, i):
            q, n = float(review.findings.q_value[i, c]), int(review.findings.reference_n[i, c])
            rows.append(
                (
                    facts.code,
                    facts.participant or NOT_RECORDED,
                    step_name(review, c),
                    call_text(review, i, c),
                    "< 0.001" if q < 0.001 else f"{q:.3f}",
                    str(n) if n else "published",
                )
            )
    if not rows:
        return [*story, paragraph("No step of any specimen is highlighted. That excludes nothing.")]
    headings = ("Specimen", "Participant", "Step", "Call, kJ/mol", "q", "Controls")
    return [*story, small_table(headings, rows, (110, 110, 190, 190, 60, _WIDTH - 660))]


def _specimens(review: Review) -> list[Flowable]:
    f = review.findings
    rows = [
        (
            facts.code,
            facts.participant or NOT_RECORDED,
            facts.group or NOT_RECORDED,
            matrix_name(review, i),
            facts.collected or NOT_RECORDED,
            str(int((f.assessability[i] == Assessability.ASSESSED).sum())),
            str(int((f.assessability[i] == Assessability.PROXY).sum())),
            str(int(f.highlighted[i].sum())),
        )
        for i, facts in enumerate(review.specimens)
    ]
    headings = ("Specimen", "Participant", "Group", "Matrix", "Collected", "Assessed", "Proxy", "Highlighted")
    widths = (120, 110, 90, 150, 120, 55, 50, _WIDTH - 695)
    return [*section("Specimens"), small_table(headings, rows, widths)]


class _TurnedText(Flowable):
    """One line of bold text turned by a quarter, reading upwards, at the foot of its cell."""

    def __init__(self, text: str, width: float, height: float) -> None:
        super().__init__()
        self.width = width
        self.height = height
        self._text = fitted(text, BOLD, 6.6, height - 3)

    def wrap(self, _width: float, _height: float) -> tuple[float, float]:
        """Its own size."""
        return self.width, self.height

    def draw(self) -> None:
        """Write the text from the bottom up."""
        self.canv.saveState()
        self.canv.setFont(BOLD, 6.6)
        self.canv.translate(self.width / 2 + 2.3, 2)
        self.canv.rotate(90)
        self.canv.drawString(0, 0, self._text)
        self.canv.restoreState()
