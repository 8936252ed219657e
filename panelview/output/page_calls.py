"""The highlighted steps of a specimen: strip on both axes, call, evidence sentence, what it rests on."""

from __future__ import annotations

import math

import numpy as np
from reportlab.platypus import Flowable, KeepTogether

from panelview.assess.evidence import Evidence, Term, evidence
from panelview.assess.review import Review
from panelview.assess.sentences import signed
from panelview.output.labels import call_text, step_title
from panelview.output.layout import (
    BODY,
    CALL,
    CALL_RIGHT,
    SMALL,
    beside,
    bold,
    gap,
    marked,
    paragraph,
    plain,
    section,
    table,
)
from panelview.output.scale import Axis, Scale, scale_of
from panelview.output.sheet import WIDTH
from panelview.output.strip import strip_of
from panelview.output.strips import AxisDrawing, StripDrawing
from panelview.output.text import as_sentences, concentration, relative

_STRIP_HEIGHT = 15.0
_BETWEEN = 10.0

#: Turning points outside this range, mol/L, are told as beyond it: no solution holds more, and less is
#: under one molecule in a cell of a picolitre.
_MOST_IN_SOLUTION = 10.0
_LEAST_IN_SOLUTION = 1e-12


class Axes:
    """Both axes of one review, so that all strips of its pages share them."""

    def __init__(self, review: Review) -> None:
        self.scales = {axis: scale_of(review, axis) for axis in Axis}
        self.published = review.reference.kind == "published"

    def scale(self, axis: Axis) -> Scale:
        return self.scales[axis]

    def drawing(self, axis: Axis, width: float) -> AxisDrawing:
        """The axis, `width` pt wide."""
        title = axis.title
        if axis is Axis.SHIFT and self.published:
            title = "Shift against published values, kJ/mol"
        return AxisDrawing(self.scales[axis], width, title, axis.left, axis.right)


def has_shift(review: Review, specimen: int) -> bool:
    """Whether any step of the specimen can be compared with a reference."""
    f = review.findings
    return bool((np.isfinite(f.shift[specimen]) | ~np.isnan(f.shift_lower[specimen])).any())


def highlighted_columns(review: Review, specimen: int) -> list[int]:
    """The highlighted columns, the largest shift first (bounds by their known side)."""
    f = review.findings
    size = np.abs(np.where(np.isfinite(f.shift), f.shift, _known_side(f.shift_lower, f.shift_upper)))
    columns = np.flatnonzero(f.highlighted[specimen])
    return [int(c) for c in sorted(columns, key=lambda c: (-float(size[specimen, c]), int(c)))]


def _known_side(lower: np.ndarray, upper: np.ndarray) -> np.ndarray:
    return np.where(np.isfinite(lower), lower, np.where(np.isfinite(upper), upper, 0.0))


def calls(review: Review, specimen: int, axes: Axes) -> list[Flowable]:
    """The section "Steps that are off"."""
    columns = highlighted_columns(review, specimen)
    story = section("Steps that are off", least=110)
    if not columns:
        return [*story, paragraph(_none_off(review, specimen))]
    for column in columns:
        story += [_block(review, specimen, column, axes), gap(7)]
    return story


def _none_off(review: Review, specimen: int) -> str:
    if not has_shift(review, specimen):
        return (
            "No step is highlighted: there is no reference to compare with. The position of each step "
            "against equilibrium stands in the table below."
        )
    return (
        f"No step is shifted by {review.shift_floor:g} kJ/mol or more at a false discovery rate of 5 %. "
        "Absence of a shift excludes nothing."
    )


def _block(review: Review, specimen: int, column: int, axes: Axes) -> Flowable:
    found = evidence(review, specimen, column)
    head = beside(
        [
            [paragraph(step_title(review, column), CALL)],
            [paragraph(call_text(review, specimen, column), CALL_RIGHT)],
        ],
        [WIDTH * 0.6, WIDTH * 0.4],
    )
    parts: list[Flowable] = [
        head,
        gap(1),
        paragraph(found.equation, BODY),
        gap(2),
        _strips(review, specimen, column, axes),
        gap(3),
        paragraph(found.sentence, BODY),
        gap(2),
        _terms(found),
        *_lines(found),
    ]
    return KeepTogether(parts)


def _strips(review: Review, specimen: int, column: int, axes: Axes) -> Flowable:
    """The strip on the shift axis beside the one on the ΔG′ axis, each under its axis."""
    width = (WIDTH - _BETWEEN) / 2
    blocks: list[list[Flowable]] = []
    for axis in (Axis.SHIFT, Axis.DISTANCE):
        strip = strip_of(review, specimen, column, axis)
        note = "no position on this axis: see the text" if strip.reason else ""
        blocks.append([axes.drawing(axis, width), StripDrawing(strip, axes.scale(axis), width, _STRIP_HEIGHT, note)])
    return beside([blocks[0], [gap(1)], blocks[1]], [width, _BETWEEN, width])


def _terms(found: Evidence) -> Flowable:
    """Each reactant with its value, its origin, the reference and the turning point."""
    driven = {d.term: d.contribution for d in found.drivers}
    rows = [
        [
            paragraph(f"{term.symbol} ({_nu(term)})", SMALL),
            paragraph(_amount(term), SMALL),
            paragraph(term.origin, SMALL),
            paragraph(concentration(term.reference), SMALL),
            paragraph(_turning_point(term), SMALL),
            paragraph(signed(driven[term.metabolite_id]) if term.metabolite_id in driven else "", SMALL),
        ]
        for term in found.terms
    ]
    if "conditions" in driven:
        rows.append([paragraph(t, SMALL) for t in ("conditions", "", "", "", "", signed(driven["conditions"]))])
    headings = ("Reactant (ν)", "Specimen", "Origin", "Reference", "At equilibrium if", "Carries, kJ/mol")
    widths = (78, 100, 96, 78, 82, WIDTH - 434)
    return table([[paragraph(h, SMALL) for h in headings], *rows], widths, padding=0.9)


def _nu(term: Term) -> str:
    return f"{term.nu:+g}".replace("-", "−") if term.nu else "through the pool"


def _turning_point(term: Term) -> str:
    """The concentration that would bring the step to equilibrium, where a solution can hold it."""
    if math.isnan(term.turning_point):
        return ""
    if term.turning_point > _MOST_IN_SOLUTION:
        return f"over {_MOST_IN_SOLUTION:g} mol/L"
    if term.turning_point < _LEAST_IN_SOLUTION:
        return f"under {concentration(_LEAST_IN_SOLUTION, 1)}"
    return concentration(term.turning_point)


def _amount(term: Term) -> str:
    if math.isnan(term.concentration):
        return ""
    sign = {"below LOQ": "< ", "above range": "> "}.get(term.origin, "")
    unsure = f" ± {relative(term.sd_ln)}" if math.isfinite(term.sd_ln) and not sign else ""
    return f"{sign}{concentration(term.concentration)}{unsure}"


def _lines(found: Evidence) -> list[Flowable]:
    """The equation with its numbers, the constant, effectors that the panel holds, and the cautions."""
    lines = []
    if found.equation_numbers:
        lines.append(marked(plain(found.equation_numbers), SMALL))
    lines.append(
        marked(
            f"{bold('Constant.')} {plain(found.constant)}; {plain(found.constant_basis)}; source: "
            f"{plain(found.constant_source)}.",
            SMALL,
        )
    )
    told = [
        f"{e.effector} {e.effect}: {e.finding}" + (f" ({e.detail})" if e.detail else "")
        for e in found.effectors
        if e.finding != "not measured"
    ]
    if told:
        lines.append(marked(f"{bold('Known effectors in the panel.')} {plain('; '.join(told))}.", SMALL))
    if found.pools:
        lines.append(marked(f"{bold('Free pools.')} {plain(as_sentences(found.pools))}", SMALL))
    if found.cautions:
        lines.append(marked(f"{bold('Cautions.')} {plain(as_sentences(found.cautions))}", SMALL))
    return [gap(2), *lines]
