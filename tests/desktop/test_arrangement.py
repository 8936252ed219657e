"""Which steps are shown, and in which order."""

from __future__ import annotations

import numpy as np

from panelview.assess.calls import Assessability
from panelview.desktop.arrangement import Arrangement, Heading, Order, arranged, pathways, unread_count


def columns_of(rows):
    return [r for r in rows if isinstance(r, int)]


def test_every_step_is_shown_once_whatever_the_order(review, specimen):
    for order in Order:
        shown = columns_of(arranged(review, specimen("P1-a"), Arrangement(order)))
        assert sorted(shown) == list(range(len(review.columns)))


def test_furthest_off_first_puts_highlighted_steps_first_and_unread_last(review, specimen):
    i = specimen("P1-a")
    shown = columns_of(arranged(review, i, Arrangement(Order.HOW_FAR)))
    off = review.findings.highlighted[i, shown]
    assert off[0]
    assert not np.any(np.diff(off.astype(int)) > 0)  # never a highlighted step after one that is not
    unread = review.findings.assessability[i, shown] > Assessability.PROXY
    assert not np.any(np.diff(unread.astype(int)) < 0)
    sizes = np.abs(review.findings.shift[i, shown])[off]
    assert np.all(np.diff(sizes) <= 0)


def test_pathway_order_heads_each_pathway_and_keeps_the_catalogues_order(review, specimen):
    rows = arranged(review, specimen("P1-a"), Arrangement(Order.PATHWAY))
    assert [r.text for r in rows if isinstance(r, Heading)] == [
        p for p in pathways(review) if any(c.step.pathways[0] == p for c in review.columns)
    ]
    heading = ""
    for row in rows:
        if isinstance(row, Heading):
            heading = row.text
        else:
            assert review.columns[row].step.pathways[0] == heading


def test_the_text_filter_finds_steps_by_enzyme_symbol_and_analyte(review, specimen, column):
    i = specimen("P1-a")

    def found(text):
        return set(columns_of(arranged(review, i, Arrangement(text=text))))

    assert column("pyruvate_kinase") in found("pyruvate kinase")
    assert column("pyruvate_kinase") in found("PEP")
    assert column("hexokinase") not in found("pyruvate kinase")
    assert found("no such thing") == set()


def test_a_pathway_shows_its_steps_wherever_they_come_first(review, specimen):
    shown = columns_of(arranged(review, specimen("P1-a"), Arrangement(pathway="gluconeogenesis")))
    assert shown
    assert all("gluconeogenesis" in review.columns[c].step.pathways for c in shown)
    assert any(review.columns[c].step.pathways[0] != "gluconeogenesis" for c in shown)


def test_hiding_unread_steps_leaves_out_as_many_as_are_counted(review, specimen):
    i = specimen("P3")
    shown = columns_of(arranged(review, i, Arrangement(hide_unread=True)))
    assert len(review.columns) - len(shown) == unread_count(review, i)
    assert unread_count(review, i) > unread_count(review, specimen("P1-a"))
