"""Which steps the table shows and in which order: pathway order or by how far off, filtered as asked."""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import Enum

import numpy as np

from panelview.assess.calls import Assessability
from panelview.assess.review import Review, StepColumn


class Order(Enum):
    PATHWAY = "pathway order"
    HOW_FAR = "how far off"


@dataclass(frozen=True, slots=True)
class Arrangement:
    """What the reader asked for. text: words that must all occur in the step's names or analytes;
    pathway: "" for all; hide_unread: leave out what is not assessable or not measured."""

    order: Order = Order.PATHWAY
    text: str = ""
    pathway: str = ""
    hide_unread: bool = False


@dataclass(frozen=True, slots=True)
class Heading:
    """A row that only names the pathway of the rows under it."""

    text: str


Row = Heading | int


def pathways(review: Review) -> tuple[str, ...]:
    """All pathways in the order of the catalogue."""
    return tuple(dict.fromkeys(p for column in review.columns for p in column.step.pathways))


def arranged(review: Review, specimen: int, asked: Arrangement) -> tuple[Row, ...]:
    """Rows of the table: columns of the review, and headings in pathway order."""
    shown = [c for c in range(len(review.columns)) if is_shown(review, specimen, c, asked)]
    if asked.order is Order.HOW_FAR:
        return tuple(sorted(shown, key=lambda c: _how_far(review, specimen, c)))
    if asked.pathway:
        return (Heading(asked.pathway), *shown) if shown else ()
    rows: list[Row] = []
    for pathway in pathways(review):
        own = [c for c in shown if review.columns[c].step.pathways[0] == pathway]
        if own:
            rows += [Heading(pathway), *own]
    return tuple(rows)


def is_shown(review: Review, specimen: int, column: int, asked: Arrangement) -> bool:
    """Whether a column passes the filters."""
    entry = review.columns[column]
    if asked.pathway and asked.pathway not in entry.step.pathways:
        return False
    if asked.hide_unread and is_unread(review, specimen, column):
        return False
    words = asked.text.casefold().split()
    return not words or all(w in _searched(review, entry) for w in words)


def is_unread(review: Review, specimen: int, column: int) -> bool:
    """Not assessable here, or not measured."""
    return bool(review.findings.assessability[specimen, column] > Assessability.PROXY)


def unread_count(review: Review, specimen: int) -> int:
    return int(np.count_nonzero(review.findings.assessability[specimen] > Assessability.PROXY))


def _searched(review: Review, entry: StepColumn) -> str:
    step = entry.step
    names = [step.id, step.enzyme, step.short, step.ec, entry.compartment, *step.pathways]
    for metabolite in step.metabolite_ids:
        record = review.catalogue.metabolites[metabolite]
        names += [record.symbol, record.name, metabolite]
    return " ".join(names).casefold()


def _how_far(review: Review, specimen: int, column: int) -> tuple[bool, bool, float, int]:
    """Unread last; highlighted first; then by the size of the shift (of its bound where censored)."""
    found = review.findings
    sizes = [abs(float(a[specimen, column])) for a in (found.shift, found.shift_lower, found.shift_upper)]
    size = next((s for s in sizes if math.isfinite(s)), -1.0)
    return (
        is_unread(review, specimen, column),
        not bool(found.highlighted[specimen, column]),
        -size,
        column,
    )
