"""What a balance strip shows, and where its scale puts it."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.assess.review import Review
from panelview.output.scale import LINEAR, Axis, Scale, scale_of
from panelview.output.strip import strip_of, strip_words

ends = st.tuples(st.floats(-300, -LINEAR), st.floats(LINEAR, 300))


def _at(review: Review, code: str, step: str) -> tuple[int, int]:
    row = next(k for k, s in enumerate(review.specimens) if s.code == code)
    return row, next(c for c, e in enumerate(review.columns) if e.step.id == step)


@given(ends=ends, values=st.lists(st.floats(-300, 300), min_size=2, max_size=6))
def test_the_scale_keeps_the_order_of_values(ends: tuple[float, float], values: list[float]) -> None:
    scale = Scale(*ends)
    places = [scale.at(v) for v in sorted(values)]
    assert places == sorted(places)
    assert all(0 <= p <= 1 for p in places)


@given(ends=ends, share=st.floats(0, 1))
def test_a_place_leads_back_to_its_value(ends: tuple[float, float], share: float) -> None:
    scale = Scale(*ends)
    assert scale.at(scale.value_at(share)) == pytest.approx(share, abs=1e-9)


def test_a_kilojoule_is_equally_wide_between_the_breaks_and_narrower_beyond() -> None:
    scale = Scale(-40.0, 40.0)
    inner = scale.at(1.0) - scale.at(0.0)
    assert scale.at(9.0) - scale.at(8.0) == pytest.approx(inner)
    assert scale.at(21.0) - scale.at(20.0) < inner / 3
    assert scale.breaks == (-LINEAR, LINEAR)


def test_no_value_of_the_review_lies_beyond_its_scale(red_cells: Review) -> None:
    for axis in Axis:
        scale = scale_of(red_cells, axis)
        for i in range(len(red_cells.specimens)):
            for c in range(len(red_cells.columns)):
                value = strip_of(red_cells, i, c, axis).value
                assert math.isnan(value) or not scale.is_beyond(value)


def test_zero_on_the_distance_axis_is_equilibrium_and_hairlines_are_a_factor_of_five(
    red_cells: Review,
) -> None:
    strip = strip_of(red_cells, *_at(red_cells, "P1-a", "enolase"), Axis.DISTANCE)
    # RT ln 5 at 37 °C: 0.0083145 × 310.15 × 1.6094 = 4.150 kJ/mol
    assert strip.limits == pytest.approx((-4.150, 4.150), abs=0.001)
    assert strip.lower < strip.value < strip.upper


def test_a_censored_step_has_a_bound_and_no_point(red_cells: Review) -> None:
    strip = strip_of(red_cells, *_at(red_cells, "P3 <ß & µ>", "pyruvate_kinase"), Axis.SHIFT)
    assert math.isnan(strip.value)
    assert strip.lower == -math.inf
    assert math.isfinite(strip.upper)
    assert "at most −" in strip_words(red_cells, *_at(red_cells, "P3 <ß & µ>", "pyruvate_kinase"), Axis.SHIFT)


def test_a_step_that_cannot_be_read_has_a_reason_and_no_mark(red_cells: Review) -> None:
    for code, step in (("P4", "phosphofructokinase_1"), ("P1-a", "glucose_6_phosphatase")):
        strip = strip_of(red_cells, *_at(red_cells, code, step), Axis.DISTANCE)
        assert strip.reason
        assert not strip.has_mark


def test_a_step_on_an_inferred_pool_is_drawn_unlike_a_measured_one(red_cells: Review) -> None:
    combined = next(e.step.id for e in red_cells.columns if e.step.short == "GAPDH+PGK")
    assert strip_of(red_cells, *_at(red_cells, "P1-a", combined), Axis.DISTANCE).inferred
    assert not strip_of(red_cells, *_at(red_cells, "P1-a", "enolase"), Axis.DISTANCE).inferred


def test_the_couple_that_defines_a_pool_has_no_place_on_the_distance_axis(red_cells: Review) -> None:
    at = _at(red_cells, "P1-a", "lactate_dehydrogenase")
    assert "defines the free pool" in strip_of(red_cells, *at, Axis.DISTANCE).reason
    assert strip_of(red_cells, *at, Axis.SHIFT).has_mark
