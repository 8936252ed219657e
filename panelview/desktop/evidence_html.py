"""The evidence for a step laid out as rich text; the texts are the evidence's own."""

from __future__ import annotations

import math
from collections.abc import Sequence

from panelview.assess.drivers import Driver
from panelview.assess.effectors import EffectorFinding
from panelview.assess.evidence import Evidence, Term
from panelview.catalogue.measurements import MeasuredConstant
from panelview.desktop.palette import Colours
from panelview.output.text import concentration, fixed, power_of_ten, relative, signed, significant
from panelview.thermo.physical import ZERO_CELSIUS

#: Where each kind of value comes from, as a mark beside its words: solid for measured, hollow for inferred.
_MARKS = {
    "measured": "●",
    "measured total": "◐",
    "free, inferred": "◇",
    "set by the reviewer": "✎",
    "below LOQ": "‹",
    "above range": "›",
    "missing": "–",
    "unit activity": "1",
}

#: So many measurements are listed; the rest are counted.
MOST_MEASUREMENTS = 8

#: Scheme of the pictures of driver bars: `bar:contribution/largest`.
BAR_SCHEME = "bar"


def escape(text: str) -> str:
    """Text that cannot become markup (the standard library's own brings in all named entities)."""
    for sign, entity in (("&", "&amp;"), ("<", "&lt;"), (">", "&gt;"), ('"', "&quot;"), ("'", "&#x27;")):
        text = text.replace(sign, entity)
    return text


def evidence_html(evidence: Evidence, colours: Colours) -> str:
    """The whole panel as HTML that QTextDocument knows."""
    parts = [
        f"<h2>{escape(evidence.title)}</h2>",
        f'<p class="call">{escape(_capital(evidence.call))}</p>',
        f"<p>{escape(evidence.sentence)}</p>",
        _equation(evidence),
        _terms(evidence.terms),
        _drivers(evidence.drivers),
        _effectors(evidence.effectors, evidence.regulation),
        _constant(evidence),
        _list("Free pools", evidence.pools),
        _list("Cautions", evidence.cautions),
    ]
    return f"<style>{_css(colours)}</style>" + "".join(p for p in parts if p)


def _css(colours: Colours) -> str:
    return (
        f"h2 {{ font-size: large; margin: 0 0 2px 0; color: {colours.text}; }}"
        f"h3 {{ font-size: medium; margin: 14px 0 3px 0; color: {colours.muted}; }}"
        f"p {{ margin: 3px 0; color: {colours.text}; }}"
        f".call {{ font-weight: bold; font-size: medium; margin: 2px 0 6px 0; }}"
        f".muted, th {{ color: {colours.muted}; font-weight: normal; }}"
        f".caution {{ color: {colours.caution}; }}"
        f"td, th {{ padding: 1px 8px 1px 0; text-align: left; vertical-align: top; }}"
        f".whole, th {{ white-space: nowrap; }}"
        f"li {{ margin: 2px 0; color: {colours.text}; }}"
    )


def _equation(evidence: Evidence) -> str:
    numbers = f'<p class="muted">{escape(evidence.equation_numbers)}</p>' if evidence.equation_numbers else ""
    return f"<h3>Equation</h3><p>{escape(evidence.equation)}</p>{numbers}"


def _terms(terms: Sequence[Term]) -> str:
    rows = "".join(_term(t) for t in terms if t.origin != "unit activity")
    if not rows:
        return ""
    head = "<tr><th>Reactant</th><th>Used</th><th>Reference</th></tr>"
    return f"<h3>Reactants</h3><table cellspacing='0' width='100%'>{head}{rows}</table>"


def _term(term: Term) -> str:
    """A line of what was used, and one of where it comes from."""
    used = concentration(term.concentration)
    used = {"below LOQ": "under ", "above range": "over "}.get(term.origin, "") + used if used else "no value"
    sure = f" ± {relative(term.sd_ln)}" if used and math.isfinite(term.sd_ln) else ""
    told = [f"{term.origin}{sure}", term.reported]
    if not term.nu:
        told.insert(0, "by way of the pool")
    if math.isfinite(term.turning_point):
        factor = term.turning_point / term.concentration
        told.append(f"at equilibrium with {concentration(term.turning_point)} ({_factor(factor)})")
    times = f"{signed(term.nu, 0)} " if abs(term.nu) > 1 else ""
    return (
        f"<tr><td class='whole'><b>{times}{escape(term.symbol)}</b> {_MARKS.get(term.origin, '')}</td>"
        f"<td class='whole'>{escape(used)}</td>"
        f"<td class='whole'>{escape(concentration(term.reference) or 'none')}</td></tr>"
        f"<tr><td colspan='3' class='muted'>{escape('; '.join(t for t in told if t))}</td></tr>"
    )


def _factor(factor: float) -> str:
    return f"× {significant(factor, 2)}" if factor < 1e4 else "far off"


def _drivers(drivers: Sequence[Driver]) -> str:
    if not drivers:
        return ""
    largest = max(abs(d.contribution) for d in drivers) or 1.0
    rows = "".join(
        f"<tr><td>{escape(d.label)}</td>"
        f"<td><img src='{BAR_SCHEME}:{d.contribution:.4f}/{largest:.4f}'></td>"
        f"<td align='right'>{escape(signed(d.contribution))}</td></tr>"
        for d in drivers
    )
    total = math.fsum(d.contribution for d in drivers)
    return (
        "<h3>What carries the shift, kJ/mol</h3>"
        f"<table cellspacing='0'>{rows}<tr><td><b>sum</b></td><td></td>"
        f"<td align='right'><b>{signed(total)}</b></td></tr></table>"
    )


def _effectors(effectors: Sequence[EffectorFinding], regulation: str) -> str:
    if not effectors and not regulation:
        return ""
    rows = "".join(
        f"<tr><td>{escape(_capital(e.effector.replace('_', ' ')))} {escape(e.effect)}<br>"
        f'<span class="muted">{escape(", ".join(w for w in (e.kind, e.tissue) if w))}</span></td>'
        f"<td>{escape(e.finding)}{_detail(e.detail)}</td></tr>"
        for e in effectors
    )
    table = f"<table cellspacing='0' width='100%'>{rows}</table>" if rows else ""
    level = f"<p class='muted'>{escape(_capital(regulation))}</p>" if regulation else ""
    return f"<h3>Substrate or enzyme: known effectors</h3>{table}{level}"


def _detail(detail: str) -> str:
    return f'<br><span class="muted">{escape(detail)}</span>' if detail else ""


def _constant(evidence: Evidence) -> str:
    count = len(evidence.measurements)
    measured = f"{count} measurement{'' if count == 1 else 's'} on record" if count else "no measurement on record"
    rows = "".join(_measurement(m) for m in evidence.measurements[:MOST_MEASUREMENTS])
    head = "<tr><th>K′</th><th>at</th><th>Source, grade</th></tr>"
    table = f"<table cellspacing='0' width='100%'>{head}{rows}</table>" if rows else ""
    rest = count - MOST_MEASUREMENTS
    more = f"<p class='muted'>and {rest} more</p>" if rest > 0 else ""
    return (
        f"<h3>What K′eq rests on</h3><p>{escape(evidence.constant)}</p>"
        f"<p class='muted'>{escape(_capital(evidence.constant_basis))}; {measured}. "
        f"Source: {escape(evidence.constant_source)}</p>{table}{more}"
    )


def _measurement(m: MeasuredConstant) -> str:
    conditions = (
        f"pH {fixed(m.ph, 2)}, {fixed(m.temperature - ZERO_CELSIUS, 0)} °C, "
        f"I {fixed(m.ionic_strength, 2)}, pMg {fixed(m.pmg, 1)}"
    )
    out = ", set aside" if m.set_aside else ""
    cells = (power_of_ten(math.log10(m.k_prime)), conditions, f"{m.reference_id}, {m.evaluation}{out}")
    return "<tr>" + "".join(f"<td>{escape(c)}</td>" for c in cells) + "</tr>"


def _list(title: str, texts: Sequence[str]) -> str:
    if not texts:
        return ""
    items = "".join(f"<li>{escape(_capital(t))}</li>" for t in texts)
    return f"<h3>{title}</h3><ul style='margin-left: -24px'>{items}</ul>"


def _capital(text: str) -> str:
    return text[:1].upper() + text[1:]
