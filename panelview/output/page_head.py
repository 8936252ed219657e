"""The first block of a page: what the specimen is, its conditions with origin, and what was left out."""

from __future__ import annotations

from collections import Counter
from datetime import datetime

import numpy as np
from reportlab.platypus import Flowable, Table

from panelview.assess.calls import Assessability
from panelview.assess.review import Review
from panelview.catalogue.couples import pool_name
from panelview.intake.panel import State
from panelview.intake.problems import Problem, Severity
from panelview.output.labels import matrix_name, versions
from panelview.output.layout import (
    BOXED,
    SMALL,
    SMALL_RIGHT,
    SMALL_STRONG,
    SUBTITLE,
    TITLE,
    beside,
    bold,
    facts,
    gap,
    marked,
    paragraph,
    plain,
    section,
    table,
)
from panelview.output.sheet import WIDTH
from panelview.output.text import CAUTION, condition
from panelview.thermo.conditions import FIELDS, LABELS

NOT_RECORDED = "not recorded"

#: What a case conference asks about the handling and no panel column carries: spelled out, so that nobody
#: takes silence for "in order".
_HANDLING = (
    "fasting, exercise, drugs",
    "tube and anticoagulant",
    "delay to acid or freezing",
    "storage temperature and days",
    "thaws",
    "haemolysis",
)


def head(review: Review, specimen: int, when: datetime | None) -> list[Flowable]:
    """Title, caution, specimen beside conditions, and what was left out."""
    return [
        _title(review, specimen, when),
        gap(7),
        paragraph(CAUTION, BOXED),
        gap(8),
        _specimen_and_conditions(review, specimen),
        gap(4),
        *_left_out(review, specimen),
    ]


def printed(when: datetime | None) -> str:
    """When the page was made, with its offset from UTC where that is known."""
    if when is None:
        return "time of printing not stated"
    zone = when.strftime("%z")
    offset = f" UTC{zone[:3]}:{zone[3:5]}".replace("-", "−") if zone else ""
    return f"printed {when:%Y-%m-%d %H:%M}{offset}"


def _title(review: Review, specimen: int, when: datetime | None) -> Table:
    facts_ = review.specimens[specimen]
    left = [
        paragraph("Metabolite panel review", TITLE),
        gap(3),
        marked(f"Specimen {bold(facts_.code)} · participant {bold(facts_.participant or NOT_RECORDED)}", SUBTITLE),
    ]
    right = [
        paragraph(versions(review), SMALL_RIGHT),
        paragraph(printed(when), SMALL_RIGHT),
        paragraph("☐ draft   ☐ final", SMALL_RIGHT),
    ]
    return beside([left, right], [WIDTH * 0.58, WIDTH * 0.42])


def _specimen_and_conditions(review: Review, specimen: int) -> Table:
    facts_ = review.specimens[specimen]
    half = WIDTH / 2
    rows = [
        ("Matrix", matrix_name(review, specimen)),
        ("Group", facts_.group or NOT_RECORDED),
        ("Collected", facts_.collected or NOT_RECORDED),
        *((label[0].upper() + label[1:], NOT_RECORDED) for label in _HANDLING),
        ("Read from", f"{facts_.source}, row {facts_.row}"),
    ]
    left = [paragraph("Specimen", SMALL_STRONG), gap(1), facts(rows, (122, half - 134))]
    right = [
        paragraph("Conditions, ± standard uncertainty, and their origin", SMALL_STRONG),
        gap(1),
        facts(_conditions(review, specimen), (82, half - 82)),
    ]
    return beside([left, right], [half, half])


def _conditions(review: Review, specimen: int) -> list[tuple[str, str]]:
    rows = []
    for field in FIELDS:
        value = float(getattr(review.conditions, field)[specimen])
        sd = float(getattr(review.conditions, f"{field}_sd")[specimen])
        origin = review.condition_origin[field][specimen]
        label = LABELS[field]
        label = label if label.startswith("p") else label[0].upper() + label[1:]
        rows.append((label, f"{condition(field, value, sd)}, {origin}"))
    rows += _pools(review, specimen)
    rows.append(("Compared with", review.reference.label))
    return rows


def _pools(review: Review, specimen: int) -> list[tuple[str, str]]:
    """Where each free pool comes from; pools that nothing tells are named together."""
    enzyme = {s.id: s.enzyme for s in review.catalogue.steps}
    rows, unknown = [], []
    for use in review.plans[review.plan_of[specimen]].pools:
        name, place = pool_name(use.pool)
        if use.kind == "couple" and use.couple is not None:
            rows.append((name, f"{place}: from {enzyme[use.couple.step_id]}"))
        elif use.kind == "reviewer":
            rows.append((name, f"{place}: set by the reviewer"))
        elif use.kind == "unknown":
            unknown.append(f"{name.removeprefix('Free ')} ({place})")
        else:
            rows.append((name, "not known; the measured total stands in for it where one is given"))
    if unknown:
        rows.append(("Not known, free", ", ".join(unknown)))
    return rows


def _left_out(review: Review, specimen: int) -> list[Flowable]:
    """What was read, in numbers, then every value or line that was not used, with the reason."""
    states = review.panel.readings.state[readings_of(review, specimen)]
    count = Counter(State(int(s)) for s in states)
    levels = review.findings.assessability[specimen]
    assessed = int((levels == Assessability.ASSESSED).sum())
    proxies = int((levels == Assessability.PROXY).sum())
    off = int(review.findings.highlighted[specimen].sum())
    read = ", ".join(f"{n} {_STATE_WORDS[state]}" for state, n in sorted(count.items()))
    lines: list[Flowable] = [
        marked(
            f"{bold('What was read.')} {len(states)} values: {plain(read or 'none')}. Steps: {assessed} "
            f"assessed, {proxies} as proxy, {off} highlighted; the rest with their reasons below."
        )
    ]
    unused = _unused_values(review, specimen)
    problems = [p for p in problems_of(review, specimen) if p.severity is not Severity.NOTE]
    if not problems:
        return [*lines, marked(f"{bold('Left out.')} {plain(unused or 'Nothing.')}")]
    cells = [
        [paragraph(_place(p), SMALL), paragraph(f"{p.severity.value}: {p.what}; {p.remedy}", SMALL)] for p in problems
    ]
    left_out = marked(f"{bold('Left out.')} {plain(unused)}")
    return [*lines, left_out, table(cells, (130, WIDTH - 130), head=0, padding=1)]


def _unused_values(review: Review, specimen: int) -> str:
    """Values that entered no step, by name and reason; "" where there are none."""
    readings = review.panel.readings
    by_state: dict[State, list[str]] = {}
    for k in readings_of(review, specimen):
        state = State(int(readings.state[k]))
        if state in (State.SUM, State.UNMATCHED, State.REFUSED):
            by_state.setdefault(state, []).append(str(readings.name[k]))
    return " ".join(
        f"{_STATE_WORDS[state].capitalize()}: {', '.join(names)}." for state, names in sorted(by_state.items())
    )


_STATE_WORDS = {
    State.MEASURED: "measured",
    State.BELOW_LOQ: "below the limit of quantification",
    State.ABOVE_RANGE: "above the measuring range",
    State.MISSING: "empty or not determined",
    State.SUM: "a sum that is not split",
    State.UNMATCHED: "of an unknown name",
    State.REFUSED: "refused",
}


def readings_of(review: Review, specimen: int) -> list[int]:
    """Indices of the specimen's readings, in file order."""
    return [int(k) for k in np.flatnonzero(review.panel.readings.specimen == specimen)]


def problems_of(review: Review, specimen: int) -> list[Problem]:
    """Problems of this specimen and those of the file as a whole."""
    code = review.specimens[specimen].code
    return [p for p in review.panel.problems if p.specimen in ("", code)]


def _place(problem: Problem) -> str:
    row = f", row {problem.row}" if problem.row else ""
    column = f", {problem.column}" if problem.column else ""
    return f"{problem.file}{row}{column}"


def notes(review: Review, specimen: int) -> list[Flowable]:
    """What was assumed or noticed while reading the file."""
    found = [p for p in problems_of(review, specimen) if p.severity is Severity.NOTE]
    if not found:
        return []
    cells = [[paragraph(_place(p), SMALL), paragraph(f"{p.what}; {p.remedy}", SMALL)] for p in found]
    return [
        *section("Assumed or noticed while reading"),
        table(cells, (130, WIDTH - 130), head=0, padding=1),
    ]
