"""The table of all steps that can be read, with a strip each, and the list of those that cannot."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence

from reportlab.platypus import Flowable

from panelview.assess.calls import Assessability
from panelview.assess.review import Review
from panelview.assess.sentences import equation
from panelview.output.labels import call_text, step_name
from panelview.output.layout import (
    HEAD_GROUND,
    SMALL,
    SMALL_STRONG,
    TINY,
    gap,
    marked,
    paragraph,
    plain,
    section,
    table,
)
from panelview.output.page_calls import Axes, has_shift
from panelview.output.scale import Axis
from panelview.output.sheet import WIDTH
from panelview.output.strip import strip_of
from panelview.output.strips import StripDrawing
from panelview.output.text import bounds, ratio_from_ln

_STRIP_HEIGHT = 17.0
#: Empty room at each side of a strip, pt.
_BESIDE = 3.0
_STEP, _RATIO, _ENERGY, _CALL = 112.0, 50.0, 74.0, 60.0


def readable_columns(review: Review, specimen: int) -> list[int]:
    """Assessed and proxy columns of a specimen, in pathway order."""
    levels = review.findings.assessability[specimen]
    return in_pathway_order(review, [c for c in range(len(review.columns)) if levels[c] <= Assessability.PROXY])


def in_pathway_order(review: Review, columns: Sequence[int]) -> list[int]:
    """Columns by pathway, in the order in which the catalogue first names each pathway."""
    order = {name: k for k, name in enumerate(dict.fromkeys(_pathway(review, c) for c in range(len(review.columns))))}
    return sorted(columns, key=lambda c: (order[_pathway(review, c)], review.columns[c].index, c))


def _pathway(review: Review, column: int) -> str:
    names = review.columns[column].step.pathways
    return names[0] if names else ""


def steps(review: Review, specimen: int, axes: Axes) -> list[Flowable]:
    """The section with all steps that can be read."""
    columns = readable_columns(review, specimen)
    story = section("All steps that can be read, in pathway order", least=120)
    if not columns:
        return [*story, paragraph("No step can be read in this specimen; the reasons stand below.")]
    return [
        *story,
        marked(plain(_legend(review, specimen)), TINY),
        gap(3),
        _table(review, specimen, columns, axes),
    ]


def _legend(review: Review, specimen: int) -> str:
    shift = (
        " On the shift axis the hairlines are the floor of a highlight and the interval is ± 1.96 standard "
        "deviations of a healthy specimen about the reference mean."
        if has_shift(review, specimen)
        else ""
    )
    return (
        "Point: the specimen with its 95 % interval (large: highlighted; open: proxy; dashed diamond: rests "
        "on an inferred free pool; bracket and arrow: a bound, from a value beyond a limit of "
        "quantification). Band: 95 % reference interval; without one, bar and tick: reference mean ± SD, "
        f"ticks below: single controls. On the ΔG′ axis the hairlines are Γ/K′eq = 1/5 and 5.{shift} Grey "
        "ends beyond ± 10 kJ/mol: scale compressed sixfold. ± after a number is a standard uncertainty, "
        "after a shift the standard deviation among healthy specimens; n: controls."
    )


def _table(review: Review, specimen: int, columns: list[int], axes: Axes) -> Flowable:
    shown = (Axis.DISTANCE, Axis.SHIFT) if has_shift(review, specimen) else (Axis.DISTANCE,)
    room = WIDTH - _STEP - _RATIO - _ENERGY - _CALL
    width = room / len(shown) - 2 * _BESIDE
    heads = [
        paragraph("Step", SMALL_STRONG),
        *(axes.drawing(axis, width) for axis in shown),
        marked(f"{plain('Γ')}<br/>{plain('K′eq')}", SMALL_STRONG),
        marked(f"{plain('ΔG′')}<br/>{plain('shift (n)') if len(shown) > 1 else ''}<br/>kJ/mol", SMALL_STRONG),
        paragraph("Call", SMALL_STRONG),
    ]
    rows: list[list[Flowable | str]] = [heads]
    extra: list[tuple[object, ...]] = []
    for side in ("LEFTPADDING", "RIGHTPADDING"):
        extra.append((side, (1, 0), (len(shown), -1), _BESIDE))
    for pathway, of_pathway in _grouped(review, columns):
        at = len(rows)
        rows.append([paragraph(_heading(pathway), SMALL_STRONG), *[""] * (len(heads) - 1)])
        extra += [
            ("SPAN", (0, at), (-1, at)),
            ("BACKGROUND", (0, at), (-1, at), HEAD_GROUND),
            ("NOSPLIT", (0, at), (-1, at + 1)),
        ]
        rows += [_row(review, specimen, c, axes, shown, width) for c in of_pathway]
    extra.append(("VALIGN", (0, 1), (-1, -1), "MIDDLE"))
    return table(rows, [_STEP, *[width + 2 * _BESIDE] * len(shown), _RATIO, _ENERGY, _CALL], extra=extra)


def _heading(pathway: str) -> str:
    return f"{pathway[:1].upper()}{pathway[1:]}" if pathway else "Other steps"


def _grouped(review: Review, columns: list[int]) -> Iterator[tuple[str, list[int]]]:
    for pathway in dict.fromkeys(_pathway(review, c) for c in columns):
        yield pathway, [c for c in columns if _pathway(review, c) == pathway]


def _row(
    review: Review, specimen: int, column: int, axes: Axes, shown: tuple[Axis, ...], width: float
) -> list[Flowable | str]:
    f = review.findings
    at = specimen, column
    gamma, k = ratio_from_ln(float(f.ln_gamma[at])), ratio_from_ln(float(f.ln_k_prime[at]))
    energy = bounds(
        float(f.delta_g[at]),
        float(f.delta_g_sd[at]),
        float(f.delta_g_lower95[at]),
        float(f.delta_g_upper95[at]),
    )
    energies = plain(energy or "not known")
    if Axis.SHIFT in shown:
        shift = bounds(float(f.shift[at]), float(f.shift_sd[at]), float(f.shift_lower[at]), float(f.shift_upper[at]))
        energies += f"<br/>{plain(_shift_with_n(review, specimen, column, shift))}"
    strips = []
    for axis in shown:
        strip = strip_of(review, specimen, column, axis)
        strips.append(
            StripDrawing(strip, axes.scale(axis), width, _STRIP_HEIGHT, _note(review, at, axis, strip.reason))
        )
    style = SMALL_STRONG if f.highlighted[at] else SMALL
    return [
        [
            paragraph(step_name(review, column), SMALL_STRONG),
            paragraph(equation(review, column), TINY),
        ],
        *strips,
        marked(f"{plain(gamma or '–')}<br/>{plain(k or '–')}", SMALL),
        marked(energies, SMALL),
        paragraph(call_text(review, specimen, column), style),
    ]


def _shift_with_n(review: Review, specimen: int, column: int, shift: str) -> str:
    if not shift:
        return "no reference"
    n = int(review.findings.reference_n[specimen, column])
    return f"{shift} ({n})" if n else shift


def _note(review: Review, at: tuple[int, int], axis: Axis, reason: str) -> str:
    """Why a strip holds no mark, short enough for its width."""
    if not reason:
        return ""
    if axis is Axis.SHIFT:
        return "no reference"
    if review.findings.defines_pool[at]:
        return "defines the free pool"
    if not math.isfinite(review.findings.ln_k_prime[at]):
        return "no constant known"
    return "open on both sides"


def not_read(review: Review, specimen: int) -> list[Flowable]:
    """The steps that cannot be read, grouped by reason; what was not measured first, as it can be added."""
    f = review.findings
    by_reason: dict[tuple[int, str], list[str]] = {}
    lacking: list[str] = []
    seen: set[int] = set()
    for c, entry in enumerate(review.columns):
        is_second = entry.index in seen
        seen.add(entry.index)
        level = int(f.assessability[specimen, c])
        if level <= Assessability.PROXY or is_second:
            continue
        reason = review.reason(specimen, c)
        if level == Assessability.MISSING and reason.startswith(_NOT_MEASURED):
            lacking.append(f"{entry.step.short} ({reason.removeprefix(_NOT_MEASURED)})")
        else:
            by_reason.setdefault((-level, reason), []).append(entry.step.short)
    story = section("Steps not read, and why")
    if lacking:
        story.append(
            marked(
                f"<b>Not measured ({len(lacking)} steps; what lacks in brackets):</b> {plain('; '.join(lacking))}.",
                SMALL,
            )
        )
    rows = [
        [paragraph(_reason_words(-level, reason), SMALL), paragraph(", ".join(names), SMALL)]
        for (level, reason), names in sorted(by_reason.items(), key=lambda item: item[0][0])
    ]
    if rows:
        heads = [paragraph(h, SMALL_STRONG) for h in ("Reason", "Steps")]
        story += [gap(3), table([heads, *rows], (WIDTH * 0.52, WIDTH * 0.48), padding=1)]
    if not lacking and not rows:
        story.append(paragraph("Every step could be read."))
    return story


#: How assess.readability opens the reason of a step whose reactants were not measured.
_NOT_MEASURED = "not measured: "


def _reason_words(level: int, reason: str) -> str:
    state = "Not assessable here" if level == Assessability.NOT_ASSESSABLE else "Missing"
    return f"{state}: {reason}" if reason else state
