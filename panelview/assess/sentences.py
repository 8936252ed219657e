"""Findings in plain words: the call, the sentence, the equation; never more than the numbers say."""

from __future__ import annotations

import math

from panelview.assess.calls import DIRECTION_LEVEL, Assessability, Direction, Distance, Shift
from panelview.assess.drivers import Driver
from panelview.assess.review import Review

#: Standing cautions by what a column rests on; the page prints the general ones once.
_PROXY = "A stand-in, not the compartment itself: other organs and handling move it too."
_TOTAL = "Measured totals include bound nucleotide and overstate the free pool."
_COMMITTED = "A step far from equilibrium shows where control may lie; it does not prove that it lies there."
_NEAR = "A step near equilibrium follows its substrates; its position says nothing of flux."


def signed(value: float, digits: int = 1) -> str:
    """A number with a true minus, a plus where positive, never “−0.0”."""
    text = f"{value:+.{digits}f}"
    if float(text) == 0.0:
        return f"{0.0:.{digits}f}"
    return text.replace("-", "−")


def call_words(review: Review, specimen: int, column: int) -> str:
    """The call in a few words, as it stands beside the strip."""
    f = review.findings
    level = Assessability(int(f.assessability[specimen, column]))
    if level == Assessability.NOT_ASSESSABLE:
        return "not assessable here"
    if level == Assessability.MISSING:
        return "not measured"
    words = [_shift_words(review, specimen, column)]
    if f.defines_pool[specimen, column]:
        words.append("defines the pool")
    elif f.direction[specimen, column] == Direction.REVERSED:
        words.append("reversed")
    return ", ".join(w for w in words if w) or _direction_words(review, specimen, column)


def _shift_words(review: Review, specimen: int, column: int) -> str:
    f = review.findings
    call = Shift(int(f.shift_call[specimen, column]))
    lower, upper = f.shift_lower[specimen, column], f.shift_upper[specimen, column]
    if call == Shift.WITHIN:
        return "as usual"
    if call == Shift.PUSHED_BACK:
        size = f"at least {signed(lower)}" if math.isfinite(lower) else signed(f.shift[specimen, column])
        return f"pushed back {size}"
    if call == Shift.PUSHED_FORWARD:
        size = f"at least {signed(upper)}" if math.isfinite(upper) else signed(f.shift[specimen, column])
        return f"pushed forward {size}"
    return ""


def _direction_words(review: Review, specimen: int, column: int) -> str:
    f = review.findings
    direction = Direction(int(f.direction[specimen, column]))
    if direction == Direction.NONE:
        return "no constant known"
    if direction == Direction.UNDECIDED:
        return "undecided"
    return direction.word


def sentence(review: Review, specimen: int, column: int, moved: tuple[Driver, ...]) -> str:
    """One or two plain sentences composed from the numbers."""
    f = review.findings
    level = Assessability(int(f.assessability[specimen, column]))
    reason = review.reason(specimen, column)
    if level in (Assessability.NOT_ASSESSABLE, Assessability.MISSING):
        call = call_words(review, specimen, column)
        told = reason.removeprefix(f"{call}: ").rstrip(".")
        return f"{call.capitalize()}: {told}."
    parts = [_shift_sentence(review, specimen, column, moved), _position_sentence(review, specimen, column)]
    if level == Assessability.PROXY:
        parts.append(f"Read as a proxy: {reason.rstrip('.')}.")
    elif reason:
        parts.append(f"{reason[0].upper()}{reason[1:].rstrip('.')}.")
    return " ".join(p for p in parts if p)


def _shift_sentence(review: Review, specimen: int, column: int, moved: tuple[Driver, ...]) -> str:
    f = review.findings
    call = Shift(int(f.shift_call[specimen, column]))
    n = int(f.reference_n[specimen, column])
    kind = review.reference.kind
    whom = f"{n} controls" if kind in ("group", "file") else "published values"
    difference = f.shift[specimen, column]
    if call == Shift.NO_REFERENCE:
        if math.isfinite(difference) and n:
            return f"ΔG′ differs from the mean of {whom} by {signed(difference)} kJ/mol; too few for a test."
        return "No reference to compare with."
    if not math.isfinite(difference):
        bound = _shift_words(review, specimen, column)
        return f"Against {whom} the step is {bound} kJ/mol, whatever the value beyond the limit is."
    unsure = f" ± {f.shift_sd[specimen, column]:.1f}"
    q = f.q_value[specimen, column]
    told = f"Against {whom} ΔG′ is shifted by {signed(difference)}{unsure} kJ/mol"
    if call == Shift.WITHIN:
        return f"{told}: within what healthy specimens show (q {_q(q)})."
    way = "less favourable" if call == Shift.PUSHED_BACK else "more favourable"
    below = abs(difference) < review.shift_floor
    floor = f", but under the floor of {review.shift_floor:g} kJ/mol for a highlight" if below else ""
    return f"{told}, {way} than usual (q {_q(q)}){floor}{_carried(moved, difference)}."


def _q(q: float) -> str:
    return "< 0.001" if q < 0.001 else f"= {q:.3f}"


def _carried(moved: tuple[Driver, ...], shift: float) -> str:
    """The two largest contributions that go the shift's way, in kJ/mol."""
    same = [d for d in moved if d.contribution * shift > 0 and abs(d.contribution) >= 0.1 * abs(shift)][:2]
    if not same:
        return ""
    told = " and ".join(f"{d.label} ({signed(d.contribution)})" for d in same)
    return f", carried by {told}"


def _position_sentence(review: Review, specimen: int, column: int) -> str:
    f = review.findings
    if f.defines_pool[specimen, column]:
        return ""
    direction = Direction(int(f.direction[specimen, column]))
    if direction == Direction.NONE:
        return ""
    g, sd = f.delta_g[specimen, column], f.delta_g_sd[specimen, column]
    if not math.isfinite(g):
        lower, upper = f.delta_g_lower95[specimen, column], f.delta_g_upper95[specimen, column]
        if math.isfinite(upper):
            told = f"ΔG′ lies under {signed(upper)} kJ/mol"
        elif math.isfinite(lower):
            told = f"ΔG′ lies over {signed(lower)} kJ/mol"
        else:
            return "Values beyond their limits leave ΔG′ open on both sides."
        return f"{told}; {_direction_told(direction)}."
    distance = Distance(int(f.distance[specimen, column]))
    place = {
        Distance.NEAR: "near equilibrium",
        Distance.BETWEEN: "between near and far from equilibrium",
        Distance.FAR: "far from equilibrium",
        Distance.NONE: "",
    }[distance]
    told = _direction_told(direction)
    if direction == Direction.UNDECIDED and f.p_reversed[specimen, column] >= DIRECTION_LEVEL:
        told = (
            "above zero, but the step has no usual direction and is not pushed back enough to say that it is turned"
        )
    return f"ΔG′ is {signed(g)} ± {sd:.1f} kJ/mol, {place}; {told}."


def _direction_told(direction: Direction) -> str:
    return {
        Direction.FORWARD: "it can run as written",
        Direction.REVERSED: "as it stands it can only run backwards",
        Direction.UNDECIDED: "its direction is undecided",
        Direction.NONE: "",
    }[direction]


def equation(review: Review, column: int) -> str:
    """The reaction in symbols: Glc + ATP ⇌ G6P + ADP."""
    step = review.columns[column].step
    return f"{_side(review, step.stoichiometry, -1)} ⇌ {_side(review, step.stoichiometry, 1)}"


def _side(review: Review, stoichiometry: tuple[tuple[str, float], ...], sign: int) -> str:
    terms = []
    for metabolite, nu in stoichiometry:
        if nu * sign > 0:
            symbol = review.catalogue.metabolites[metabolite].symbol
            terms.append(symbol if abs(nu) == 1 else f"{abs(nu):g} {symbol}")
    return " + ".join(terms)


def equation_numbers(review: Review, specimen: int, column: int) -> str:
    """ΔG′ = ΔrG′° + RT ln Γ with the numbers of this specimen."""
    f = review.findings
    g0, ln_gamma = f.delta_g0_prime[specimen, column], f.ln_gamma[specimen, column]
    g = f.delta_g[specimen, column]
    if not (math.isfinite(g0) and math.isfinite(ln_gamma) and math.isfinite(g)):
        return ""
    rt = (g - g0) / ln_gamma if abs(ln_gamma) > 1e-9 else math.nan
    product = signed(g - g0, 2)
    rt_words = f"{rt:.3f}" if math.isfinite(rt) else "RT"
    return (
        f"ΔG′ = ΔrG′° + RT ln Γ = {signed(g0, 2)} + {rt_words} × ({signed(ln_gamma, 2)}) "
        f"= {signed(g0, 2)} + ({product}) = {signed(g, 2)} kJ/mol"
    )


def cautions(review: Review, specimen: int, column: int) -> tuple[str, ...]:
    """The cautions that apply to this column in this specimen."""
    entry = review.columns[column]
    plan = review.plans[review.plan_of[specimen]]
    level = Assessability(int(review.findings.assessability[specimen, column]))
    found = []
    if level == Assessability.PROXY:
        found.append(_PROXY)
    if plan.totals[column] and plan.matrix != "erythrocyte":
        found.append(_TOTAL)
    for couple in plan.rests_on[column]:
        if couple.limits:
            found.append(couple.limits)
    if plan.matrix:
        record = review.catalogue.applicability[entry.step.id, plan.matrix]
        if record.caution:
            found.append(record.caution)
    found.append(_COMMITTED if entry.step.disposition == "committed" else _NEAR)
    anchor = review.catalogue.constants.anchors[entry.index]
    if anchor.note:
        found.append(f"Constant: {anchor.note}.")
    return tuple(dict.fromkeys(found))
