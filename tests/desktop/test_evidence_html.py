"""The evidence laid out: everything the engine says is there, and nothing unescaped."""

from __future__ import annotations

from dataclasses import replace

import pytest
from PySide6.QtGui import QTextDocument

from panelview.assess.evidence import evidence
from panelview.desktop.evidence_html import MOST_MEASUREMENTS, evidence_html
from panelview.desktop.palette import LIGHT
from panelview.output.text import signed


def plain(html: str) -> str:
    document = QTextDocument()
    document.setHtml(html)
    return document.toPlainText()


@pytest.fixture
def held_back(review, specimen, column):
    return evidence(review, specimen("P1-a"), column("pyruvate_kinase"))


def test_all_that_the_evidence_says_is_shown(held_back, qapp):
    text = plain(evidence_html(held_back, LIGHT))
    wanted = [held_back.title, held_back.sentence, held_back.equation, held_back.equation_numbers]
    wanted += [held_back.constant, held_back.constant_source]
    assert all(w in text for w in wanted)
    for term in held_back.terms:
        assert term.symbol in text
        assert term.origin in text
        assert term.reported in text
    for driver in held_back.drivers:
        assert signed(driver.contribution) in text
    for caution in held_back.cautions:
        assert caution[1:] in text


def test_a_bar_is_drawn_for_every_driver_to_the_scale_of_the_largest(held_back):
    html = evidence_html(held_back, LIGHT)
    largest = max(abs(d.contribution) for d in held_back.drivers)
    for driver in held_back.drivers:
        assert f"bar:{driver.contribution:.4f}/{largest:.4f}" in html


def test_measurements_beyond_the_listed_are_counted(held_back, qapp):
    one = held_back.measurements[0]
    many = replace(held_back, measurements=(one,) * (MOST_MEASUREMENTS + 3))
    assert "and 3 more" in plain(evidence_html(many, LIGHT))


def test_text_of_a_panel_cannot_become_markup(held_back, qapp):
    term = replace(held_back.terms[0], reported="<img src=x> & <b>5</b> mmol/L")
    html = evidence_html(replace(held_back, terms=(term,)), LIGHT)
    assert "<img src=x>" not in html
    assert "<img src=x> & <b>5</b> mmol/L" in plain(html)


def test_an_unread_step_is_explained_without_numbers(review, specimen, column, qapp):
    k = column("pyruvate_carboxylase")
    text = plain(evidence_html(evidence(review, specimen("P1-a"), k), LIGHT))
    assert review.reason(specimen("P1-a"), k).rstrip(".") in text
    assert "What carries the shift" not in text
