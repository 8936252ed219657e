"""One specimen's review as a printed page: vector PDF, the same bytes for the same review and time."""

from __future__ import annotations

from datetime import datetime
from pathlib import Path
from typing import BinaryIO

from reportlab.platypus import Flowable, PageBreak

from panelview.assess.review import Review
from panelview.output.fonts import register_fonts
from panelview.output.labels import matrix_name, versions
from panelview.output.page_appendix import constants_used, provenance, reference_of_steps, reported_values
from panelview.output.page_calls import Axes, calls
from panelview.output.page_end import cautions, discussion, signatures, state
from panelview.output.page_head import head, notes, printed
from panelview.output.page_steps import not_read, steps
from panelview.output.sheet import Running, build


def write_page(review: Review, specimen: int, target: Path | BinaryIO, *, when: datetime | None) -> None:
    """Write the summary of one specimen (index into Review.specimens) to a file or an open binary stream.

    when: the time that is printed; None prints none. Raises OSError.
    """
    register_fonts()
    build(_story(review, specimen, when), target, _running(review, specimen, when), when)


def _story(review: Review, specimen: int, when: datetime | None) -> list[Flowable]:
    axes = Axes(review)
    return [
        *head(review, specimen, when),
        *calls(review, specimen, axes),
        *steps(review, specimen, axes),
        *state(review, specimen),
        *not_read(review, specimen),
        *cautions(),
        *discussion(),
        *signatures(),
        PageBreak(),
        *reported_values(review, specimen),
        *notes(review, specimen),
        *constants_used(review, specimen),
        *reference_of_steps(review, specimen),
        *provenance(review),
    ]


def _running(review: Review, specimen: int, when: datetime | None) -> Running:
    facts = review.specimens[specimen]
    who = f" · participant {facts.participant}" if facts.participant else ""
    matrix = matrix_name(review, specimen)
    hashes = " ".join(s.sha256 for s in review.panel.sources)
    return Running(
        title=f"Metabolite panel review of specimen {facts.code}",
        left=f"Panel review · specimen {facts.code}{who}",
        foot=f"{versions(review)} · {printed(when)}",
        subject=f"Enzyme-catalysed steps of specimen {facts.code} ({matrix}). Research use only.",
        identity=f"{facts.code} {hashes} {review.catalogue.sha256} {review.catalogue.constants.sha256}",
    )
