"""From numbers to calls: direction, distance, shift and the false discovery rate."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from panelview.assess import verdicts
from panelview.assess.calls import LN_FAR, LN_NEAR, Direction, Distance, Shift

NO = np.array([False])
YES = np.array([True])


def one(value: float) -> np.ndarray:
    return np.array([value])


@pytest.mark.parametrize(
    ("delta_g", "sd", "expected"),
    [
        pytest.param(-3.3, 2.0, Direction.FORWARD, id="1.65 uncertainties below zero"),
        pytest.param(-3.2, 2.0, Direction.UNDECIDED, id="1.60 uncertainties below zero"),
        pytest.param(0.0, 2.0, Direction.UNDECIDED, id="at equilibrium"),
        pytest.param(3.2, 2.0, Direction.UNDECIDED, id="1.60 uncertainties above zero"),
        pytest.param(3.3, 2.0, Direction.REVERSED, id="1.65 uncertainties above zero"),
        pytest.param(-0.1, 0.0, Direction.FORWARD, id="no uncertainty at all"),
        pytest.param(np.nan, 1.0, Direction.NONE, id="nothing known"),
    ],
)
def test_direction_needs_ninety_five_per_cent(delta_g, sd, expected):
    """One-sided 95 % of the normal distribution lies at 1.645 standard deviations (any table of it)."""
    p = verdicts.probability_reversed(one(delta_g), one(sd))
    assert verdicts.directions(p, NO, NO)[0] == expected


@pytest.mark.parametrize(
    ("delta_g", "below", "above", "expected"),
    [
        pytest.param(-9.0, True, False, Direction.FORWARD, id="even the limit is forward"),
        pytest.param(9.0, True, False, Direction.UNDECIDED, id="the limit is reversed, the value may not be"),
        pytest.param(9.0, False, True, Direction.REVERSED, id="even the limit is reversed"),
        pytest.param(-9.0, False, True, Direction.UNDECIDED, id="the limit is forward, the value may not be"),
        pytest.param(-9.0, True, True, Direction.UNDECIDED, id="open on both sides"),
    ],
)
def test_a_censored_step_has_a_direction_only_where_the_whole_bound_agrees(delta_g, below, above, expected):
    p = verdicts.probability_reversed(one(delta_g), one(1.0))
    assert verdicts.directions(p, one(below).astype(bool), one(above).astype(bool))[0] == expected


def test_distance_limits_are_those_of_rolleston_and_newsholme():
    """Near within 1/5 and 5, far beyond 1/20 and 20 (Rolleston 1972; Newsholme and Start 1973)."""
    ln_ratio = np.log([1 / 21, 1 / 19, 1 / 5.01, 1 / 4.99, 1.0, 4.99, 5.01, 19, 21])
    no = np.zeros(9, dtype=bool)
    expected = [
        Distance.FAR,
        *[Distance.BETWEEN] * 2,
        *[Distance.NEAR] * 3,
        *[Distance.BETWEEN] * 2,
        Distance.FAR,
    ]
    assert verdicts.distances(ln_ratio, no, no).tolist() == expected


def test_distance_limits_in_energy():
    """ln 5 and ln 20 are 4.15 and 7.73 kJ/mol at 37 °C (recomputed from the factors)."""
    rt = 8.314462618e-3 * 310.15
    assert LN_NEAR * rt == pytest.approx(4.15, abs=0.005)
    assert LN_FAR * rt == pytest.approx(7.73, abs=0.006)


def test_probability_of_being_near_is_the_normal_mass_between_the_limits():
    p = verdicts.probability_near(one(0.0), one(LN_NEAR * 2.5), one(2.5))
    assert p[0] == pytest.approx(0.6827, abs=1e-4)  # ± 1 standard deviation (any normal table)


class TestStepsWithoutAUsualDirection:
    """Healthy isomerases lie above zero in published tables; the sign alone must not call them reversed."""

    def call(self, ratio: float, shift: Shift, either: bool = True, direction: Direction = Direction.REVERSED):
        return verdicts.without_usual_direction(
            np.array([[direction]], dtype=np.int8),
            np.array([either]),
            np.array([[np.log(ratio)]]),
            np.array([[shift]], dtype=np.int8),
        )[0, 0]

    def test_as_the_controls_they_are_undecided(self):
        assert self.call(3.0, Shift.WITHIN) == Direction.UNDECIDED
        assert self.call(8.0, Shift.WITHIN) == Direction.UNDECIDED

    def test_pushed_back_against_the_controls_they_are_reversed(self):
        assert self.call(3.0, Shift.PUSHED_BACK) == Direction.REVERSED

    def test_without_controls_they_are_reversed_beyond_the_near_zone_only(self):
        assert self.call(4.9, Shift.NO_REFERENCE) == Direction.UNDECIDED
        assert self.call(5.1, Shift.NO_REFERENCE) == Direction.REVERSED

    def test_steps_with_a_usual_direction_are_left_alone(self):
        assert self.call(1.5, Shift.WITHIN, either=False) == Direction.REVERSED

    def test_forward_is_left_alone(self):
        assert self.call(0.2, Shift.WITHIN, direction=Direction.FORWARD) == Direction.FORWARD


def test_benjamini_hochberg_rejects_the_first_two_of_the_worked_list():
    """p-values and number of rejections as in Benjamini and Hochberg's procedure at 0.05, computed by hand:
    2 · 0.05/10 = 0.010 ≥ 0.008, while 0.039 > 0.015 and so on."""
    p = np.array([0.001, 0.008, 0.039, 0.041, 0.042, 0.06, 0.074, 0.205, 0.212, 0.216])
    q = verdicts.false_discovery(p)
    assert (q <= 0.05).tolist() == [True] * 2 + [False] * 8
    assert q[0] == pytest.approx(0.010)
    assert q[1] == pytest.approx(0.040)
    assert q[2] == q[3] == q[4] == pytest.approx(0.084)


def test_steps_that_are_not_tested_do_not_swell_the_family():
    tested = np.array([0.004, 0.03])
    padded = np.array([0.004, np.nan, 0.03, np.nan, np.nan])
    q = verdicts.false_discovery(padded)
    assert q[[0, 2]] == pytest.approx(verdicts.false_discovery(tested))
    assert np.isnan(q[[1, 3, 4]]).all()


@given(arrays(float, st.integers(1, 12), elements=st.floats(0, 1)))
def test_false_discovery_agrees_with_its_definition(p):
    """q of a hypothesis is the least level at which the step-up procedure rejects it."""
    q = verdicts.false_discovery(p)
    m = len(p)
    for level in (0.01, 0.05, 0.3):
        passing = [k for k, value in enumerate(sorted(p), 1) if value * m / k <= level]
        cut = sorted(p)[max(passing) - 1] if passing else -1.0
        assert ((q <= level) == (p <= cut)).all()


@given(arrays(float, (3, 6), elements=st.floats(0, 1)))
def test_each_specimen_is_its_own_family(p):
    together = verdicts.false_discovery(p)
    for row in range(3):
        assert together[row] == pytest.approx(verdicts.false_discovery(p[row]))


def test_shift_calls_name_the_side():
    shift = np.array([4.0, -4.0, 4.0, -4.0, np.nan])
    q = np.array([0.04, 0.04, 0.06, 0.04, 0.01])
    tested = np.array([True, True, True, False, True])
    expected = [Shift.PUSHED_BACK, Shift.PUSHED_FORWARD, Shift.WITHIN, Shift.NO_REFERENCE, Shift.NO_REFERENCE]
    assert verdicts.shift_calls(shift, q, tested).tolist() == expected
