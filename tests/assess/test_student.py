"""Normal and Student-t probabilities against scipy's, and against printed tables."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.special import ndtr, stdtr, stdtrit

from panelview.assess import student

DF = np.array([1.0, 2.0, 3.0, 4.0, 7.0, 19.0, 23.0, 119.0, 1000.0])


def test_the_normal_distribution_agrees_with_scipy_into_the_far_tail():
    z = np.concatenate([np.linspace(-37, 37, 1481), [np.inf, -np.inf, 0.0]])
    np.testing.assert_allclose(student.normal_cdf(z), ndtr(z), rtol=2e-13)
    assert np.isnan(student.normal_cdf(np.array([np.nan]))).all()


@pytest.mark.parametrize("df", [*DF[1:], np.inf])
def test_student_tails_agree_with_scipy(df):
    t = np.concatenate([-np.geomspace(1e-8, 300, 400), [0.0], np.geomspace(1e-8, 300, 400)])
    expected = 2 * (ndtr(-np.abs(t)) if np.isinf(df) else stdtr(df, -np.abs(t)))
    np.testing.assert_allclose(student.two_sided_p(t, np.full(t.shape, df)), expected, rtol=1e-11, atol=1e-300)


def test_one_degree_of_freedom_is_the_cauchy_distribution():
    """p = 1 − (2/π) arctan t; scipy's own value is wrong by 3e-9 for |t| under 1e-8."""
    t = np.geomspace(1e-8, 1e6, 400)
    expected = 2 / np.pi * np.arctan(1 / t)
    np.testing.assert_allclose(student.two_sided_p(t, np.ones_like(t)), expected, rtol=1e-12)


def test_many_values_go_through_scipy_to_the_same_numbers(monkeypatch):
    rng = np.random.default_rng(3)
    t, df = rng.normal(0, 3, 500), rng.choice([*DF, np.inf], 500)
    few = student.two_sided_p(t, df), student.normal_cdf(t)
    monkeypatch.setattr(student, "_MANY", 10)
    np.testing.assert_allclose(student.two_sided_p(t, df), few[0], rtol=1e-11)
    np.testing.assert_allclose(student.normal_cdf(t), few[1], rtol=1e-12)


@pytest.mark.parametrize("p", [0.9, 0.95, 0.975, 0.995])
def test_student_quantiles_agree_with_scipy(p):
    np.testing.assert_allclose(student.t_quantile(p, DF), stdtrit(DF, p), rtol=1e-11)


@pytest.mark.parametrize(
    ("df", "expected"),
    [(4.0, 2.776), (7.0, 2.365), (19.0, 2.093), (23.0, 2.069)],
    ids=["4", "7", "19", "23"],
)
def test_student_quantiles_are_those_of_the_printed_table(df, expected):
    """97.5 % points of t as printed in statistics textbooks (common practice, no source)."""
    assert float(student.t_quantile(0.975, np.array([df]))[0]) == pytest.approx(expected, abs=5e-4)


def test_shapes_are_kept_and_nothing_is_made_of_nothing():
    assert student.two_sided_p(np.zeros((3, 2)), np.full((3, 2), 5.0)).shape == (3, 2)
    assert student.two_sided_p(np.zeros(0), np.zeros(0)).shape == (0,)
    assert student.t_quantile(0.975, np.full((2, 2), 7.0)).shape == (2, 2)
