"""Steps, calls and pools of a review as a reader names them."""

from __future__ import annotations

from panelview.assess.calls import Assessability
from panelview.assess.review import Review
from panelview.assess.sentences import call_words
from panelview.output.text import shown_id


def step_name(review: Review, column: int) -> str:
    """The step's short label; with its compartment where the review holds the step twice."""
    step = review.columns[column].step
    return f"{step.short}{_place(review, column, ' ({})')}"


def step_title(review: Review, column: int) -> str:
    """Enzyme and EC number; with its compartment where the review holds the step twice."""
    step = review.columns[column].step
    return f"{step.enzyme[0].upper()}{step.enzyme[1:]} (EC {step.ec}{_place(review, column, ', {}')})"


def _place(review: Review, column: int, pattern: str) -> str:
    entry = review.columns[column]
    twice = sum(c.index == entry.index for c in review.columns) > 1
    return pattern.format(shown_id(entry.compartment)) if twice else ""


def call_text(review: Review, specimen: int, column: int) -> str:
    """The call, with "(proxy)" where the step is only a stand-in."""
    words = call_words(review, specimen, column)
    is_proxy = review.findings.assessability[specimen, column] == Assessability.PROXY
    return f"{words} (proxy)" if is_proxy else words


def matrix_name(review: Review, specimen: int) -> str:
    """The specimen's matrix in words."""
    record = review.catalogue.matrices.get(review.specimens[specimen].matrix)
    return record.name if record is not None else "not stated"


def versions(review: Review) -> str:
    """Program, catalogue and constants versions on one line."""
    constants = review.catalogue.constants
    own = f" with {len(constants.own)} of the reviewer's own" if constants.own else ""
    return (
        f"Panelview {review.program_version} · catalogue {review.catalogue.version} · constants "
        f"{constants.version}{own}"
    )
