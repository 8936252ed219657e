"""Which conditions a specimen is read at, and where each value is said to come from."""

from __future__ import annotations

import pytest
from panels import RED_CELL, Specimen, panel_of

from panelview.assess.assess import assess
from panelview.assess.review import ORIGIN_COMMAND, ORIGIN_DEFAULT, ORIGIN_FILE, ORIGIN_REVIEWER, ORIGIN_UNSTATED
from panelview.assess.settings import ConditionChoice, Settings
from panelview.thermo.conditions import FIELDS, OutOfModelRange


def reviewed(catalogue, specimen: Specimen, **chosen):
    return assess(panel_of([specimen]), catalogue, Settings(**chosen))


def test_without_a_word_the_matrix_gives_its_defaults(catalogue):
    review = reviewed(catalogue, Specimen("X", RED_CELL))
    matrix = catalogue.matrices["erythrocyte"]
    for field in FIELDS:
        assert getattr(review.conditions, field)[0] == getattr(matrix, field)
        assert getattr(review.conditions, f"{field}_sd")[0] == getattr(matrix, f"{field}_sd")
        assert review.condition_origin[field] == (ORIGIN_DEFAULT,)


def test_a_specimen_without_a_matrix_says_that_its_conditions_are_assumed(catalogue):
    review = reviewed(catalogue, Specimen("X", RED_CELL, matrix=""))
    assert {review.condition_origin[field][0] for field in FIELDS} == {ORIGIN_UNSTATED}
    assert review.conditions.ph_sd[0] >= 0.2


def test_the_reviewer_goes_before_the_file_and_the_file_before_the_matrix(catalogue):
    stated = Specimen("X", RED_CELL, ph=7.05)
    for_all = {"ph": ConditionChoice(7.3, None, ORIGIN_COMMAND)}
    for_one = {"X": {"ph": ConditionChoice(6.9, None, ORIGIN_REVIEWER)}}
    file = reviewed(catalogue, stated)
    command = reviewed(catalogue, stated, conditions=for_all)
    reviewer = reviewed(catalogue, stated, conditions=for_all, specimen_conditions=for_one)
    told = [(float(r.conditions.ph[0]), r.condition_origin["ph"][0]) for r in (file, command, reviewer)]
    assert told == [(7.05, ORIGIN_FILE), (7.3, ORIGIN_COMMAND), (6.9, ORIGIN_REVIEWER)]


def test_a_choice_for_one_specimen_leaves_the_others(catalogue):
    panel = panel_of([Specimen("X", RED_CELL), Specimen("Y", RED_CELL)])
    chosen = {"X": {"pmg": ConditionChoice(2.9, None, ORIGIN_REVIEWER)}}
    review = assess(panel, catalogue, Settings(specimen_conditions=chosen))
    assert review.condition_origin["pmg"] == (ORIGIN_REVIEWER, ORIGIN_DEFAULT)
    assert review.conditions.pmg[1] == catalogue.matrices["erythrocyte"].pmg


def test_an_uncertainty_can_be_chosen_alone(catalogue):
    review = reviewed(catalogue, Specimen("X", RED_CELL), conditions={"ph": ConditionChoice(None, 0.3, ORIGIN_COMMAND)})
    assert review.conditions.ph[0] == catalogue.matrices["erythrocyte"].ph
    assert review.conditions.ph_sd[0] == 0.3


@pytest.mark.parametrize(("field", "value"), [("ph", 4.9), ("temperature", 330.0), ("ionic_strength", 0.4)])
def test_conditions_outside_the_model_are_refused(catalogue, field, value):
    with pytest.raises(OutOfModelRange):
        reviewed(catalogue, Specimen("X", RED_CELL), conditions={field: ConditionChoice(value, None, "test")})
