"""The close of a page: redox and energy state, cautions, room for the discussion, signatures."""

from __future__ import annotations

from reportlab.lib.colors import black
from reportlab.platypus import Flowable, KeepTogether

from panelview.assess.review import Review
from panelview.output.layout import BODY, SMALL, gap, marked, paragraph, plain, section, small_table, table
from panelview.output.layout import RULE as _RULE
from panelview.output.sheet import WIDTH
from panelview.output.text import CAUTIONS, quantity_name, shown_id, state_interval, state_value

_VALIDITY = {"valid": "valid", "proxy": "proxy", "not_valid": "not valid here"}
SIGNATURE = "Signature confirms review of this page, not a diagnosis."


def state(review: Review, specimen: int) -> list[Flowable]:
    """The section on redox and energy state."""
    rows = review.state_of(specimen)
    story = section("Redox and energy state")
    if not rows:
        return [*story, paragraph("No redox or energy quantity follows from what was measured.")]
    enzyme = {s.id: s.enzyme for s in review.catalogue.steps}
    cells = [
        (
            quantity_name(r.quantity),
            f"{shown_id(r.compartment)}{', from ' + enzyme[r.couple] if r.couple in enzyme else ''}",
            state_value(r.value, r.unit) or "bound only",
            state_interval(r.lower95, r.upper95, r.unit),
            f"{_VALIDITY.get(r.validity, shown_id(r.validity))}{': ' + r.reason if r.reason else ''}",
        )
        for r in rows
    ]
    headings = ("Quantity", "Where and from", "Value", "95 % interval", "Validity")
    return [*story, small_table(headings, cells, (104, 100, 62, 92, WIDTH - 358))]


def cautions() -> list[Flowable]:
    """The standing cautions, numbered."""
    numbered = " ".join(f"({k}) {text}" for k, text in enumerate(CAUTIONS, start=1))
    return [*section("Cautions"), paragraph(numbered, SMALL)]


def discussion() -> list[Flowable]:
    """Room to write by hand, framed and so apart from everything computed."""
    labels = ("Question asked", "Discussion", "Agreed next step")
    rows = [[[paragraph(label, SMALL), gap(30)]] for label in labels]
    frame = table(
        rows,
        (WIDTH,),
        head=0,
        padding=3,
        rules=False,
        extra=[("BOX", (0, 0), (-1, -1), 0.9, black), ("INNERGRID", (0, 0), (-1, -1), 0.5, _RULE)],
    )
    return [
        KeepTogether([*section("For the case conference (written by people, not computed)", least=0), frame]),
    ]


def signatures() -> list[Flowable]:
    """Lines for those who prepared and reviewed the page."""
    heads = [paragraph(h, SMALL) for h in ("", "Name", "Role", "Signature", "Date")]
    who = ("Prepared by", "Laboratory reviewer", "Clinical reviewer")
    rows = [[[paragraph(w, SMALL), gap(9)], "", "", "", ""] for w in who]
    lines = table(
        [heads, *rows],
        (86, 112, 100, 142, WIDTH - 440),
        head=0,
        extra=[("INNERGRID", (0, 0), (-1, -1), 0.4, _RULE), ("BOX", (0, 0), (-1, -1), 0.6, _RULE)],
    )
    return [
        KeepTogether(
            [
                *section("Signatures", least=0),
                marked(f"{plain(SIGNATURE)} Conference date: {'_' * 22}", BODY),
                gap(3),
                lines,
            ]
        )
    ]
