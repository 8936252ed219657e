"""Free cofactor ratios as the dialog lists them."""

from __future__ import annotations

from panelview.assess.assess import assess
from panelview.assess.review import ORIGIN_REVIEWER
from panelview.assess.settings import FreeRatio, Settings
from panelview.desktop.free_ratios import pool_rows
from panelview.output.text import state_value


def test_a_ratio_from_a_couple_says_its_value_interval_and_enzyme(review, specimen):
    i = specimen("P1-a")
    row = next(r for r in pool_rows(review, i, {}) if r.pool == "nad_cytosol")
    state = next(r for r in review.state_of(i) if r.quantity == "nad_nadh_free")
    assert row.value.startswith(state_value(state.value, state.unit))
    assert " to " in row.value
    assert row.origin == "from L-lactate dehydrogenase"


def test_an_unknown_ratio_is_not_known_and_never_guessed(review, specimen):
    row = next(r for r in pool_rows(review, specimen("P1-a"), {}) if r.pool == "nadp_cytosol")
    assert row.value == "not known"


def test_a_ratio_of_the_reviewers_own_is_marked_as_such(review, specimen, catalogue):
    settings = Settings(free_ratios={"nad_cytosol": FreeRatio(900.0)})
    own = assess(review.panel, catalogue, settings)
    row = next(r for r in pool_rows(own, specimen("P1-a"), {"nad_cytosol": 900.0}) if r.pool == "nad_cytosol")
    assert (row.value, row.origin) == ("900", ORIGIN_REVIEWER)
