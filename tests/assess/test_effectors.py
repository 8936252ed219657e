"""What a panel says of the known effectors of a step: context, never a call of its own."""

from __future__ import annotations

import numpy as np
from panels import RED_CELL, Specimen, at, panel_of, spread

from panelview.assess.assess import assess
from panelview.assess.effectors import effector_findings

#: Glucose 6-phosphate inhibits hexokinase I and II (biochemistry textbooks); the values are invented.
PRODUCT_UP = RED_CELL | {"glucose_6_phosphate": 0.4}


def finding(catalogue, values, step: str, effector: str):
    controls = spread(RED_CELL, 8, np.random.default_rng(1), sd=0.05)
    review = assess(panel_of([*controls, Specimen("X", values)]), catalogue)
    return next(f for f in effector_findings(review, *at(review, "X", step)) if f.effector == effector)


def test_a_raised_inhibitor_of_a_step_that_is_pushed_back_goes_against_it(catalogue):
    """Raised product pushes the step back by mass action; a held-back step would be pushed forward."""
    told = finding(catalogue, PRODUCT_UP, "hexokinase", "D-glucose 6-phosphate")
    assert told.effect == "inhibits"
    assert told.finding == "against"
    assert told.detail == "4.8 × reference"  # 0.4 over the geometric mean of the controls


def test_a_raised_inhibitor_of_a_step_that_is_pushed_forward_is_consistent_with_it(catalogue):
    """ATP inhibits phosphofructokinase (biochemistry textbooks); raised ATP beside a step held back agrees."""
    values = RED_CELL | {"fructose_6_phosphate": 0.2, "atp": 3.0}
    told = finding(catalogue, values, "phosphofructokinase_1", "adenosine 5′-triphosphate")
    assert told.effect == "inhibits"
    assert told.finding == "consistent with"


def test_of_a_usual_step_only_the_change_is_told(catalogue):
    told = finding(
        catalogue, RED_CELL | {"atp": 2.4, "adp": 0.18}, "phosphofructokinase_1", "adenosine 5′-triphosphate"
    )
    assert told.finding == "raised"


def test_a_small_change_is_near_the_reference(catalogue):
    told = finding(catalogue, RED_CELL, "hexokinase", "D-glucose 6-phosphate")
    assert told.finding == "near the reference"


def test_what_is_not_measured_is_told_as_such(catalogue):
    controls = spread(RED_CELL, 8, np.random.default_rng(1))
    review = assess(panel_of([*controls, Specimen("X", RED_CELL)]), catalogue)
    found = effector_findings(review, *at(review, "X", "phosphofructokinase_1"))
    unmeasured = [f for f in found if f.finding == "not measured"]
    assert unmeasured
    assert all(f.detail == "" for f in unmeasured)


def test_without_any_reference_nothing_is_compared(catalogue):
    review = assess(panel_of([Specimen("X", RED_CELL, matrix="platelet_or_pbmc")]), catalogue)
    found = effector_findings(review, *at(review, "X", "phosphofructokinase_1"))
    assert {f.finding for f in found} <= {"not measured", "not compared"}
