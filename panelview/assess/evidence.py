"""The evidence for one step of one specimen, in numbers and in plain words."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from panelview.assess.drivers import Driver, drivers, reference_ln_c
from panelview.assess.effectors import EffectorFinding, effector_findings
from panelview.assess.review import Review
from panelview.assess.sentences import call_words, cautions, equation, equation_numbers, sentence
from panelview.catalogue.couples import RATIO_POOLS, pool_name
from panelview.catalogue.measurements import MeasuredConstant
from panelview.intake.panel import State
from panelview.thermo.physical import GAS_CONSTANT

#: Turning points further off than this factor say nothing ("at any concentration that cells hold").
_FAR_OFF = 1e9


@dataclass(frozen=True, slots=True)
class Term:
    """One reactant in the step's mass-action ratio.

    nu: as written in the step; concentration: mol/L, NaN where none; sd_ln: relative uncertainty;
    origin: "measured", "below LOQ", "above range", "missing", "measured total", "free, inferred",
    "set by the reviewer", "unit activity"; reported: value and unit as written with row and column;
    reference: mol/L of the reference group, NaN where none; turning_point: mol/L at which the step
    would be at equilibrium, the others held, NaN where not defined.
    """

    metabolite_id: str
    symbol: str
    name: str
    nu: float
    concentration: float
    sd_ln: float
    origin: str
    reported: str
    reference: float
    turning_point: float


@dataclass(frozen=True)
class Evidence:
    """Everything shown for one step of one specimen; text is final, views only lay it out."""

    title: str
    call: str
    sentence: str
    equation: str
    equation_numbers: str
    terms: tuple[Term, ...]
    drivers: tuple[Driver, ...]
    effectors: tuple[EffectorFinding, ...]
    regulation: str
    constant: str
    constant_source: str
    constant_basis: str
    measurements: tuple[MeasuredConstant, ...]
    pools: tuple[str, ...]
    cautions: tuple[str, ...]


def evidence(review: Review, specimen: int, column: int) -> Evidence:
    """Gather the evidence for a column of a specimen."""
    entry = review.columns[column]
    step = entry.step
    moved = drivers(review, specimen, column)
    findings = review.findings
    basis = review.catalogue.constants.basis(entry.index)
    regulation = [r for r in review.catalogue.regulation if step.id in r.step_ids]
    return Evidence(
        title=f"{step.enzyme[0].upper()}{step.enzyme[1:]} (EC {step.ec})",
        call=call_words(review, specimen, column),
        sentence=sentence(review, specimen, column, moved),
        equation=equation(review, column),
        equation_numbers=equation_numbers(review, specimen, column),
        terms=_terms(review, specimen, column),
        drivers=moved,
        effectors=effector_findings(review, specimen, column),
        regulation=regulation[0].level_control if regulation else "",
        constant=_constant_words(
            float(findings.ln_k_prime[specimen, column]),
            float(findings.delta_g0_prime[specimen, column]),
            float(findings.delta_g0_prime_sd[specimen, column]),
        ),
        constant_source=review.constant_source(column),
        constant_basis={
            "measured": "measured, carried to the specimen's conditions",
            "estimated": "estimated from formation energies and neighbouring steps",
            "own": "the reviewer's own value, used as given",
            "none": "no constant known",
        }[basis],
        measurements=tuple(m for m in review.catalogue.measurements if m.step_id == step.id),
        pools=_pool_words(review, specimen, column),
        cautions=cautions(review, specimen, column),
    )


def _constant_words(ln_k: float, delta_g0: float, sd: float) -> str:
    if not math.isfinite(delta_g0):
        return "no constant known"
    k = math.exp(ln_k)
    digits = _power(k) if not 1e-3 <= k < 1e5 else f"{k:.3g}" if k < 1e3 else f"{k:.0f}"
    return f"K′eq = {digits}, ΔrG′° = {_signed(delta_g0)} ± {sd:.1f} kJ/mol (standard uncertainty)"


def _power(value: float) -> str:
    exponent = math.floor(math.log10(value))
    superscript = str(exponent).translate(str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"))
    return f"{value / 10**exponent:.2f}·10{superscript}"


def _signed(value: float) -> str:
    text = f"{value:.1f}"
    return text.replace("-0.0", "0.0").replace("-", "−")


def _terms(review: Review, specimen: int, column: int) -> tuple[Term, ...]:
    """The step's own reactants, then the measured pair that an inferred pool rests on."""
    plan = review.plans[review.plan_of[specimen]]
    step = review.columns[column].step
    own = dict(step.stoichiometry)
    through = [a for k, a in enumerate(review.concentrations.analytes) if plan.nu[column, k] and a not in own]
    reference = reference_ln_c(review, specimen, column)
    nu_of = [*own.items(), *((a, 0.0) for a in through)]
    return tuple(_term(review, specimen, column, a, nu, reference) for a, nu in nu_of)


def _term(
    review: Review, specimen: int, column: int, metabolite: str, nu: float, reference: np.ndarray
) -> Term:
    record = review.catalogue.metabolites[metabolite]
    held = review.concentrations
    k = held.analytes.index(metabolite)
    plan = review.plans[review.plan_of[specimen]]
    effective = float(plan.nu[column, k])
    reading = int(held.reading[specimen, k])
    concentration = float(np.exp(held.ln_c[specimen, k]))
    sd = float(held.sd[specimen, k]) if reading >= 0 else math.nan
    reported = _reported(review, reading)
    if record.unit_activity:
        return Term(
            metabolite,
            record.symbol,
            record.name,
            nu,
            math.nan,
            math.nan,
            "unit activity",
            "",
            math.nan,
            math.nan,
        )
    origin = _origin(review, specimen, column, metabolite, effective, reading)
    if origin in ("free, inferred", "set by the reviewer"):
        reported = f"total {reported}, not used" if reported else ""
        concentration = sd = math.nan
    turning = math.nan
    delta_g = float(review.findings.delta_g[specimen, column])
    if effective and math.isfinite(delta_g) and math.isfinite(concentration):
        rt = GAS_CONSTANT * float(review.conditions.temperature[specimen])
        ln_factor = -delta_g / (rt * effective)
        if abs(ln_factor) < math.log(_FAR_OFF):
            turning = concentration * math.exp(ln_factor)
    reference_c = float(np.exp(reference[k])) if math.isfinite(reference[k]) else math.nan
    return Term(
        metabolite, record.symbol, record.name, nu, concentration, sd, origin, reported, reference_c, turning
    )


def _origin(
    review: Review, specimen: int, column: int, metabolite: str, effective: float, reading: int
) -> str:
    plan = review.plans[review.plan_of[specimen]]
    for use in plan.pools:
        forms = RATIO_POOLS[use.pool][:2] if use.pool in RATIO_POOLS else (use.pool.split("_")[0],)
        if metabolite in forms and not effective:
            is_side = use.pool not in RATIO_POOLS or RATIO_POOLS[use.pool][2] == _side(review, column)
            if is_side:
                return {"reviewer": "set by the reviewer", "couple": "free, inferred"}.get(
                    use.kind, "missing"
                )
    if reading < 0:
        return "missing"
    if metabolite in plan.totals[column]:
        return "measured total"
    state = State(int(review.panel.readings.state[reading]))
    return {State.BELOW_LOQ: "below LOQ", State.ABOVE_RANGE: "above range"}.get(state, "measured")


def _side(review: Review, column: int) -> str:
    return "mitochondrial_matrix" if review.columns[column].compartment.startswith("mito") else "cytosol"


def _reported(review: Review, reading: int) -> str:
    if reading < 0:
        return ""
    r = review.panel.readings
    return f"{r.value[reading]} {r.unit[reading]} (row {r.row[reading]}, {r.column[reading]})".replace(
        "  ", " "
    )


def _pool_words(review: Review, specimen: int, column: int) -> tuple[str, ...]:
    plan = review.plans[review.plan_of[specimen]]
    words = []
    for couple in plan.rests_on[column]:
        enzyme = next(s.enzyme for s in review.catalogue.steps if s.id == couple.step_id)
        words.append(f"{', '.join(pool_name(couple.pool))}: from {enzyme}; {couple.assumption}")
    step = {i for i, _ in review.columns[column].step.stoichiometry}
    for use in plan.pools:
        if use.kind == "reviewer" and step & set(RATIO_POOLS[use.pool][:2]):
            words.append(f"{', '.join(pool_name(use.pool))}: set by the reviewer")
    return tuple(words)
