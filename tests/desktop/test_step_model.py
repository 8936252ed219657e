"""The step table as a model: what each cell says, to the eye and to a screen reader."""

from __future__ import annotations

import math

import pytest
from PySide6.QtCore import Qt
from pytestqt.modeltest import ModelTester

from panelview.assess.assess import assess
from panelview.assess.review import ORIGIN_REVIEWER
from panelview.assess.settings import ConditionChoice, Settings
from panelview.desktop.arrangement import Arrangement, Heading, Order, arranged
from panelview.desktop.cells import Cell
from panelview.desktop.step_model import LOOK_ROLE, STRIP_ROLE, StepModel
from panelview.output.scale import Axis
from panelview.output.text import ratio_from_ln, with_sd


@pytest.fixture
def shown(qapp, review, specimen):
    """A model that shows P1-a in pathway order, and a function to ask it by step."""
    model = StepModel()
    i = specimen("P1-a")
    model.show(review, i, arranged(review, i, Arrangement(Order.PATHWAY)))

    def ask(column, cell, role=Qt.ItemDataRole.DisplayRole):
        return model.index(model.row_of(column), cell).data(role)

    return model, ask


def test_the_model_keeps_qts_rules(shown, qapp):
    model, _ = shown
    tester = ModelTester(None)
    tester.check(model)


def test_the_cells_hold_the_reviews_own_numbers(shown, review, specimen, column):
    _, ask = shown
    at = specimen("P1-a"), column("pyruvate_kinase")
    found = review.findings
    assert ask(at[1], Cell.DELTA_G) == with_sd(found.delta_g[at], found.delta_g_sd[at])
    assert ask(at[1], Cell.SHIFT) == with_sd(found.shift[at], found.shift_sd[at])
    assert ask(at[1], Cell.GAMMA) == ratio_from_ln(found.ln_gamma[at])
    assert ask(at[1], Cell.K_PRIME) == ratio_from_ln(found.ln_k_prime[at])
    assert ask(at[1], Cell.CALL).startswith("pushed forward")


def test_a_held_back_step_looks_off_by_word_and_by_weight(shown, column):
    _, ask = shown
    k = column("pyruvate_kinase")
    assert ask(k, Cell.CALL, LOOK_ROLE) == "forward"
    assert ask(k, Cell.CALL, Qt.ItemDataRole.FontRole).bold()
    assert ask(column("triose_phosphate_isomerase"), Cell.CALL, Qt.ItemDataRole.FontRole) is None


def test_an_unread_step_shows_its_reason_and_no_marks(shown, review, specimen, column):
    _, ask = shown
    k = column("pyruvate_carboxylase")
    strip = ask(k, Cell.STRIP, STRIP_ROLE)
    assert strip.reason == review.reason(specimen("P1-a"), k)
    assert not strip.has_mark
    assert ask(k, Cell.STRIP) == strip.reason
    assert ask(k, Cell.DELTA_G) == ""
    assert ask(k, Cell.CALL, LOOK_ROLE) == "unread"


def test_every_strip_says_its_numbers_in_words(shown, review, column):
    model, ask = shown
    words = ask(column("pyruvate_kinase"), Cell.STRIP, Qt.ItemDataRole.AccessibleTextRole)
    assert "Shift against controls −" in words
    assert "kJ/mol" in words
    assert "pushed forward" in words
    for k in range(len(review.columns)):
        for cell in Cell:
            assert ask(k, cell, Qt.ItemDataRole.AccessibleTextRole)
    model.set_axis(Axis.DISTANCE)
    assert "ΔG′" in ask(column("pyruvate_kinase"), Cell.STRIP, Qt.ItemDataRole.AccessibleTextRole)


def test_a_value_below_its_limit_gives_a_bound_and_never_a_number(qapp, review, specimen, column):
    model = StepModel()
    i, k = specimen("P2"), column("pyruvate_kinase")
    model.show(review, i, arranged(review, i, Arrangement()))
    model.set_axis(Axis.DISTANCE)
    row = model.row_of(k)
    strip = model.index(row, Cell.STRIP).data(STRIP_ROLE)
    assert math.isnan(strip.value)
    assert math.isinf(strip.lower)
    assert math.isfinite(strip.upper)
    assert model.index(row, Cell.DELTA_G).data().startswith("< ")
    assert "at most" in model.index(row, Cell.STRIP).data(Qt.ItemDataRole.AccessibleTextRole)


def test_new_numbers_leave_every_row_in_its_place(shown, review, specimen, catalogue, column):
    model, ask = shown
    rows = model.rows
    before = ask(column("pyruvate_kinase"), Cell.DELTA_G)
    changed = []
    model.dataChanged.connect(lambda first, last: changed.append((first.row(), last.row())))
    settings = Settings(conditions={"ph": ConditionChoice(6.6, None, ORIGIN_REVIEWER)})
    model.update_review(assess(review.panel, catalogue, settings))
    assert model.rows == rows
    assert changed == [(0, len(rows) - 1)]
    assert ask(column("pyruvate_kinase"), Cell.DELTA_G) != before


def test_headings_can_be_neither_chosen_nor_mistaken_for_steps(shown):
    model, _ = shown
    row = next(k for k, r in enumerate(model.rows) if isinstance(r, Heading))
    assert model.flags(model.index(row, 0)) == Qt.ItemFlag.NoItemFlags
    assert model.index(row, 0).data() == model.rows[row].text


def test_with_few_controls_points_and_spread_stand_in_for_the_interval(few_controls, qapp):
    i = len(few_controls.specimens) - 1
    model = StepModel()
    model.show(few_controls, i, arranged(few_controls, i, Arrangement()))
    k = [c.step.id for c in few_controls.columns].index("pyruvate_kinase")
    strip = model.strip(k)
    assert math.isnan(strip.band[0])
    assert math.isfinite(strip.spread[1])
    assert len(strip.controls) == 8


def test_without_a_reference_the_shift_axis_says_so(no_controls, qapp):
    model = StepModel()
    model.show(no_controls, 0, arranged(no_controls, 0, Arrangement()))
    k = [c.step.id for c in no_controls.columns].index("pyruvate_kinase")
    assert "no reference" in model.strip(k).reason
    model.set_axis(Axis.DISTANCE)
    assert model.strip(k).has_mark
