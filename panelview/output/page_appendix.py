"""The appendix of a page: values as reported and as used, constants with source, reference, provenance."""

from __future__ import annotations

import math
from collections.abc import Mapping

import numpy as np
from reportlab.platypus import Flowable

from panelview.assess import calls
from panelview.assess.review import Review
from panelview.intake.panel import State
from panelview.output.labels import matrix_name, step_name
from panelview.output.layout import SMALL, facts, paragraph, section, small_table
from panelview.output.page_head import readings_of
from panelview.output.page_steps import readable_columns
from panelview.output.sheet import WIDTH
from panelview.output.text import concentration, condition, fixed, interval, ratio_from_ln, relative, with_sd
from panelview.thermo.conditions import FIELDS, LABELS

_NO_VALUE = {
    State.MISSING: "not used: no value",
    State.SUM: "not used: a sum of several",
    State.UNMATCHED: "not used: name not matched",
    State.REFUSED: "not used: refused",
}

_BASIS = {
    "measured": "measured K′",
    "estimated": "estimated",
    "own": "reviewer's own",
    "none": "none known",
}


def reported_values(review: Review, specimen: int) -> list[Flowable]:
    """Every value as reported and as used, with its place in the file."""
    known = {a.id: a.name for a in review.catalogue.known_analytes}
    rows = [_reading(review, k, known) for k in readings_of(review, specimen)]
    headings = (
        "Analyte",
        "As written",
        "Reported",
        "Place",
        "Used, mol per litre of the pool's water",
        "Remark",
    )
    story = section("Appendix A. Values as reported and as used")
    if not rows:
        return [*story, paragraph("The file holds no value for this specimen.")]
    factor = (
        "± is the relative standard uncertainty of the assay, with “default” where the file gives none; "
        "values converted with a factor that the specimen shares carry that factor's uncertainty besides."
    )
    widths = (92, 84, 72, 82, 92, WIDTH - 422)
    return [*story, paragraph(factor, SMALL), small_table(headings, rows, widths)]


def _reading(review: Review, k: int, known: Mapping[str, str]) -> tuple[str, ...]:
    r = review.panel.readings
    record = review.catalogue.metabolites.get(str(r.analyte[k]))
    other = known.get(str(r.analyte[k]), str(r.analyte[k]) or "–")
    analyte = f"{record.symbol}: {record.name}" if record else other
    flag = f" {r.flag[k]}" if r.flag[k] else ""
    reported = f"{r.value[k]} {r.unit[k]}{flag}".strip() or "empty"
    facts_ = review.specimens[int(r.specimen[k])]
    place = f"{facts_.source}, row {int(r.row[k])}, {r.column[k]}"
    return analyte, str(r.name[k]), reported, place, _used(review, k), str(r.note[k])


def _used(review: Review, k: int) -> str:
    r = review.panel.readings
    state = State(int(r.state[k]))
    amount, sd = float(r.mol_per_l[k]), float(r.sd_ln[k])
    if state in _NO_VALUE:
        return _NO_VALUE[state]
    if not math.isfinite(amount):
        return "beyond a limit that is not stated: not used"
    if state == State.BELOW_LOQ:
        return f"below {concentration(amount)}"
    if state == State.ABOVE_RANGE:
        return f"above {concentration(amount)}"
    default = " (default)" if r.sd_is_default[k] else ""
    shared = float(r.shared_sd_ln[k])
    factor = f", factor ± {relative(shared)}" if math.isfinite(shared) and shared > 0 else ""
    return f"{concentration(amount)} ± {relative(sd)}{default}{factor}"


def constants_used(review: Review, specimen: int) -> list[Flowable]:
    """Every constant that the readable steps and the free pools rest on, at the specimen's conditions."""
    plan = review.plans[review.plan_of[specimen]]
    own = {review.columns[c].index for c in readable_columns(review, specimen)}
    used = set(own)
    for c in readable_columns(review, specimen):
        used |= {int(s) for s in np.flatnonzero(plan.combination[c])}
    first = {entry.index: c for c, entry in reversed(list(enumerate(review.columns)))}
    rows = [_constant(review, specimen, first[s]) for s in sorted(used)]
    conditions = ", ".join(_condition(review, specimen, field) for field in FIELDS)
    story = section("Appendix B. Equilibrium constants used")
    if not rows:
        return [*story, paragraph("No step was read, so no constant was used.")]
    headings = ("Step", "K′eq", "ΔrG′°, kJ/mol", "Basis", "Source", "Remark")
    anchors = review.catalogue.constants.anchors
    sources = dict.fromkeys(anchors[s].source for s in sorted(used) if anchors[s].source)
    lead = (
        f"At {conditions}. K′eq in powers of mol/L, water left out; ± is the standard uncertainty of the "
        f"constant. Source codes and constants are from: {'; '.join(sources) or 'no source stated'}."
    )
    return [*story, paragraph(lead, SMALL), small_table(headings, rows, (88, 52, 62, 56, 140, WIDTH - 398))]


def _condition(review: Review, specimen: int, field: str) -> str:
    at = review.conditions
    told = condition(field, float(getattr(at, field)[specimen]), float(getattr(at, f"{field}_sd")[specimen]))
    return f"{LABELS[field]} {told}"


def _constant(review: Review, specimen: int, column: int) -> tuple[str, ...]:
    f = review.findings
    index = review.columns[column].index
    constants = review.catalogue.constants
    return (
        step_name(review, column),
        ratio_from_ln(float(f.ln_k_prime[specimen, column])) or "–",
        with_sd(float(f.delta_g0_prime[specimen, column]), float(f.delta_g0_prime_sd[specimen, column])) or "–",
        _BASIS[constants.basis(index)],
        review.constant_source(column),
        "" if constants.basis(index) == "own" else constants.anchors[index].note,
    )


def reference_of_steps(review: Review, specimen: int) -> list[Flowable]:
    """What the reference says of each readable step: number, mean, spread, 95 % limits."""
    f = review.findings
    rows = []
    for c in readable_columns(review, specimen):
        n, sd = int(f.reference_n[specimen, c]), float(f.reference_sd[specimen, c])
        if not n and not math.isfinite(sd):
            continue
        rows.append(
            (
                step_name(review, c),
                str(n) if n else "not stated",
                with_sd(float(f.reference_mean[specimen, c]), sd) or f"position not known ± {fixed(sd, 1)}",
                interval(float(f.reference_lower[specimen, c]), float(f.reference_upper[specimen, c])) or "–",
                interval(float(f.band_lower[specimen, c]), float(f.band_upper[specimen, c])) or "–",
            )
        )
    story = section("Appendix C. Reference of each step")
    if not rows:
        return [*story, paragraph("No step could be compared with a reference.")]
    label = review.reference.label
    lead = (
        f"{label[:1].upper()}{label[1:]}; matrix: {matrix_name(review, specimen)}. Limits are the 2.5th and "
        f"97.5th percentiles; none are claimed under {calls.LEAST_CONTROLS_FOR_INTERVAL} controls. A control "
        "is compared with the others, never with itself."
    )
    headings = ("Step", "n", "Mean ΔG′ ± SD, kJ/mol", "95 % limits of ΔG′", "95 % limits of the shift")
    widths = (130, 60, 120, 100, WIDTH - 410)
    return [*story, paragraph(lead, SMALL), small_table(headings, rows, widths)]


def provenance(review: Review) -> list[Flowable]:
    """What the calls mean, and the files and versions behind the page."""
    constants = review.catalogue.constants
    rows = [
        ("Limits", _limits(review)),
        *(
            (f"Input file {k}", f"{s.name}, {s.size} bytes, SHA-256 {s.sha256}")
            for k, s in enumerate(review.panel.sources, start=1)
        ),
        ("Read as", review.panel.layout),
        ("Program", f"Panelview {review.program_version}"),
        ("Catalogue", f"{review.catalogue.version}, SHA-256 {review.catalogue.sha256}"),
        ("Constants", f"{constants.version}, SHA-256 {constants.sha256}"),
    ]
    own = [f"{s}: {o.source or 'no source given'}" for s, o in sorted(constants.own.items())]
    if own:
        rows.append(("Own constants", "; ".join(own)))
    return [*section("Appendix D. Limits and provenance"), facts(rows, (74, WIDTH - 80))]


def _limits(review: Review) -> str:
    level = calls.DIRECTION_LEVEL
    return (
        f"Direction: reversed where P(ΔG′ > 0) ≥ {level:g}, forward where it is ≤ {1 - level:.2g}, else "
        "undecided; a step without a usual direction is called reversed only if it is also pushed back "
        f"against the reference or, without one, if Γ/K′eq exceeds {calls.NEAR_FACTOR:g}. Distance: near "
        f"where Γ/K′eq lies within 1/{calls.NEAR_FACTOR:g} and {calls.NEAR_FACTOR:g}, far beyond "
        f"1/{calls.FAR_FACTOR:g} or {calls.FAR_FACTOR:g}. Shift: at a false discovery rate of "
        f"{100 * calls.FALSE_DISCOVERY_RATE:g} % over the specimen's steps; highlighted from "
        f"{review.shift_floor:g} kJ/mol on. No test under {calls.LEAST_CONTROLS_FOR_TEST} controls, no "
        f"reference interval under {calls.LEAST_CONTROLS_FOR_INTERVAL}."
    )
