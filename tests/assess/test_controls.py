"""The reference group: limits by sample size, one specimen against few controls, leave-one-out."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy import stats

from panelview.assess.controls import (
    Reference,
    from_controls,
    from_published,
    no_reference,
    p_values,
    robust_limits,
    shift_sd,
)


def reference(values: np.ndarray, specimens: int = 1, member: list[int] | None = None) -> Reference:
    """Reference from values [control, column], all complete, for specimens that are (not) controls."""
    index = np.array(member if member is not None else [-1] * specimens, dtype=np.intp)
    return from_controls(values, np.isfinite(values), index)


def test_eight_controls_widen_the_limit_to_2_51_standard_deviations():
    """Crawford and Howell (1998): t(7, 0.975) √(9/8) = 2.365 × 1.061 = 2.51, not 1.96."""
    values = np.array([-1.7, -0.9, -0.4, -0.1, 0.2, 0.5, 0.8, 1.6])[:, None]
    held = reference(values)
    s = values.std(ddof=1)
    sd = shift_sd(held, np.array([[0.1]]))
    assert sd[0, 0] == pytest.approx(s * np.sqrt(9 / 8))
    at_the_limit = np.array([[2.508 * s]])
    assert p_values(at_the_limit, sd, held)[0, 0] == pytest.approx(0.05, abs=1e-4)
    assert p_values(np.array([[1.96 * s]]), sd, held)[0, 0] > 0.10


@settings(max_examples=50, deadline=None)
@given(st.integers(5, 40), st.integers(0, 2**32 - 1), st.floats(-6, 6))
def test_the_p_value_is_that_of_a_two_sample_t_test_with_one_specimen(n, start, x):
    """Crawford–Howell's test is the two-sample t-test with a group of one (scipy as the outside witness)."""
    values = np.random.default_rng(start).normal(size=n)
    held = reference(values[:, None])
    shift = np.array([[x - values.mean()]])
    p = p_values(shift, shift_sd(held, np.array([[0.0]])), held)[0, 0]
    t = (x - values.mean()) / (values.std(ddof=1) * np.sqrt((n + 1) / n))
    assert p == pytest.approx(2 * stats.t.sf(abs(t), n - 1), rel=1e-9)


def test_the_test_holds_its_level_for_few_controls():
    """Of healthy specimens against six controls 5 % fall beyond p = 0.05, not the 11 % of a plain z-score."""
    rng = np.random.default_rng(8)
    values = rng.normal(size=(6, 40_000))
    healthy = rng.normal(size=(1, 40_000))
    held = reference(values)
    p = p_values(healthy - held.mean, shift_sd(held, np.zeros_like(healthy)), held)
    assert np.mean(p < 0.05) == pytest.approx(0.05, abs=0.004)
    z = (healthy - held.mean) / held.sd
    assert np.mean(np.abs(z) > 1.96) > 0.10


@pytest.mark.parametrize(
    ("n", "tested", "interval"),
    [
        (1, False, False),
        (4, False, False),
        (5, True, False),
        (19, True, False),
        (20, True, True),
        (120, True, True),
    ],
)
def test_what_is_claimed_grows_with_the_number_of_controls(n, tested, interval):
    """Under 5 controls values only, under 20 no interval (CLSI EP28-A3c practice)."""
    held = reference(np.random.default_rng(n).normal(size=(n, 1)))
    assert bool(held.tested[0, 0]) is tested
    assert bool(np.isfinite(held.lower[0, 0])) is interval
    assert held.n[0, 0] == n


@pytest.mark.parametrize("n", [20, 40, 80, 119])
def test_robust_limits_of_a_normal_sample_are_those_of_prediction(n):
    """T ± t √(S² + S_T²) tends to mean ± t(n−1, 0.975) σ √(1 + 1/n): over many samples within 4 %."""
    values = np.random.default_rng(n).normal(10.0, 2.0, size=(n, 4000))
    lower, upper = robust_limits(values)
    half = stats.t.ppf(0.975, n - 1) * 2.0 * np.sqrt(1 + 1 / n)
    assert lower.mean() == pytest.approx(10 - half, abs=0.04 * half)
    assert upper.mean() == pytest.approx(10 + half, abs=0.04 * half)


def test_robust_limits_step_by_step():
    """The recipe of Horn and Pesce written out for one column (constants 3.7 and 205.6, from memory)."""
    x = np.random.default_rng(3).normal(size=30)
    median = np.median(x)
    mad = np.median(np.abs(x - median)) / 0.6745
    location = median
    for _ in range(200):
        u = (x - location) / (3.7 * mad)
        weight = np.where(np.abs(u) < 1, (1 - u**2) ** 2, 0)
        location = (weight * x).sum() / weight.sum()

    def spread(centre, scale, c):
        u = (x - centre) / (c * scale)
        keep = np.abs(u) < 1
        top = len(x) * ((x[keep] - centre) ** 2 * (1 - u[keep] ** 2) ** 4).sum()
        bottom = ((1 - u[keep] ** 2) * (1 - 5 * u[keep] ** 2)).sum()
        return np.sqrt(top / (bottom * max(1, bottom - 1)))

    between = spread(median, mad, 205.6)
    of_location = spread(location, between, 3.7) / np.sqrt(30)
    half = stats.t.ppf(0.975, 29) * np.hypot(between, of_location)
    lower, upper = robust_limits(x[:, None])
    assert (lower[0], upper[0]) == pytest.approx((location - half, location + half), rel=1e-6)


def test_one_wild_control_does_not_drag_the_middle_of_robust_limits():
    """The location is robust (c = 3.7); the spread with c = 205.6 still feels it, as the published method has it."""
    x = np.random.default_rng(5).normal(size=40)
    wild = x.copy()
    wild[0] = 30.0
    clean, spoilt = (np.mean(robust_limits(v[:, None])) for v in (x, wild))
    assert abs(spoilt - clean) < 0.1
    assert wild.mean() - x.mean() > 0.7


def test_from_120_controls_on_the_limits_are_ranks():
    """Ranks 0.025 (n+1) and 0.975 (n+1): of 1 … 120 these are 3.025 and 117.975 (CLSI EP28-A3c)."""
    held = reference(np.random.default_rng(0).permutation(np.arange(1.0, 121.0))[:, None])
    assert held.lower[0, 0] == pytest.approx(3.025)
    assert held.upper[0, 0] == pytest.approx(117.975)


def test_controls_with_a_missing_or_censored_value_are_left_out_of_that_column_only():
    values = np.random.default_rng(1).normal(size=(8, 2))
    complete = np.ones((8, 2), dtype=bool)
    complete[3, 1] = False
    held = from_controls(values, complete, np.array([-1]))
    assert held.n.tolist() == [[8, 7]]
    assert held.mean[0, 1] == pytest.approx(np.delete(values[:, 1], 3).mean())


def test_a_control_is_left_out_of_its_own_reference():
    values = np.random.default_rng(2).normal(size=(7, 3))
    held = reference(values, member=list(range(7)))
    for i in range(7):
        rest = np.delete(values, i, axis=0)
        assert held.mean[i] == pytest.approx(rest.mean(axis=0))
        assert held.sd[i] == pytest.approx(rest.std(axis=0, ddof=1))
    assert (held.n == 6).all()
    assert (held.df == 5).all()


def test_copies_of_one_specimen_have_no_spread_and_the_assay_stands_in():
    held = reference(np.full((6, 1), -3.0))
    assert shift_sd(held, np.array([[0.4]]))[0, 0] == pytest.approx(0.4 * np.sqrt(7 / 6))


def test_published_values_are_tested_as_known():
    held = from_published(np.array([[-5.0]]), np.array([[1.0]]), np.array([[0]], dtype=np.int32))
    sd = shift_sd(held, np.array([[0.1]]))
    assert sd[0, 0] == 1.0
    assert p_values(np.array([[1.959964]]), sd, held)[0, 0] == pytest.approx(0.05, abs=1e-6)
    assert (held.lower[0, 0], held.upper[0, 0]) == pytest.approx((-6.96, -3.04), abs=0.001)


def test_published_values_without_a_spread_are_not_tested():
    held = from_published(np.array([[-5.0]]), np.array([[np.nan]]), np.array([[30]], dtype=np.int32))
    assert not held.tested[0, 0]


def test_without_controls_nothing_is_tested():
    held = no_reference((2, 3))
    assert not held.tested.any()
    assert np.isnan(p_values(np.ones((2, 3)), np.ones((2, 3)), held)).all()


@pytest.mark.parametrize("complete", [0, 1])
def test_steps_that_hardly_any_control_holds_are_not_tested(complete):
    values = np.zeros((6, 1))
    known = np.zeros((6, 1), dtype=bool)
    known[:complete] = True
    held = from_controls(values, known, np.array([-1]))
    assert held.n[0, 0] == complete
    assert not held.tested[0, 0]
    assert np.isnan(shift_sd(held, np.array([[0.0]]))).all()
