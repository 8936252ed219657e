"""The reviewer's edits of settings."""

from __future__ import annotations

import pytest

from panelview.assess.review import ORIGIN_COMMAND, ORIGIN_REVIEWER
from panelview.assess.settings import ConditionChoice, FreeRatio, Settings
from panelview.desktop import choices

START = Settings(conditions={"ph": ConditionChoice(7.0, None, ORIGIN_COMMAND)})


def test_a_condition_for_one_specimen_leaves_the_others_alone():
    made = choices.with_condition(START, "ph", 7.2, None, "P1")
    assert made.specimen_conditions == {"P1": {"ph": ConditionChoice(7.2, None, ORIGIN_REVIEWER)}}
    assert made.conditions == START.conditions


def test_value_and_uncertainty_are_chosen_apart_and_kept_together():
    made = choices.with_condition(START, "ph", 7.2, None, "P1")
    made = choices.with_condition(made, "ph", None, 0.1, "P1")
    assert made.specimen_conditions["P1"]["ph"] == ConditionChoice(7.2, 0.1, ORIGIN_REVIEWER)


def test_a_condition_for_all_goes_in_place_of_those_for_single_specimens():
    made = choices.with_condition(START, "ph", 7.2, None, "P1")
    made = choices.with_condition(made, "pmg", 3.2, None, "P1")
    made = choices.with_condition(made, "ph", 7.4, None, None)
    assert made.conditions["ph"] == ConditionChoice(7.4, None, ORIGIN_REVIEWER)
    assert set(made.specimen_conditions["P1"]) == {"pmg"}


def test_an_uncertainty_alone_for_all_keeps_the_value_given_on_the_command_line():
    made = choices.with_condition(START, "ph", None, 0.2, None)
    assert made.conditions["ph"] == ConditionChoice(7.0, 0.2, ORIGIN_REVIEWER)


def test_resetting_conditions_goes_back_to_the_start_and_keeps_the_rest():
    made = choices.with_shift_floor(choices.with_condition(START, "ph", 7.4, None, None), 4.0)
    back = choices.without_conditions(made, START)
    assert back.conditions == START.conditions
    assert back.shift_floor == pytest.approx(4.0)


def test_a_free_ratio_is_marked_as_the_reviewers_and_can_be_put_back():
    start = Settings(free_ratios={"nad_cytosol": FreeRatio(500.0)})
    made = choices.with_free_ratio(start, "nad_cytosol", 700.0)
    made = choices.with_free_ratio(made, "nadp_cytosol", 0.01)
    assert made.free_ratios["nad_cytosol"] == FreeRatio(700.0, 0.0, ORIGIN_REVIEWER)
    back = choices.without_free_ratio(made, start, "nad_cytosol")
    assert back.free_ratios["nad_cytosol"].value == pytest.approx(500.0)
    assert set(choices.without_free_ratio(back, start, "nadp_cytosol").free_ratios) == {"nad_cytosol"}


def test_settings_that_equal_the_start_count_as_unchanged():
    made = choices.with_shift_floor(START, 4.0)
    assert choices.is_changed(made, START)
    assert not choices.is_changed(choices.with_shift_floor(made, START.shift_floor), START)
