"""Γ and ΔG′: missing and censored values, conditions, steps without a constant."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from panels import RED_CELL, Assay, Specimen, at, panel_of, spread, value

from panelview.assess.assess import assess
from panelview.assess.calls import Assessability, Direction, Distance, Shift
from panelview.assess.settings import Settings
from panelview.catalogue.constants import OwnConstant

RT = 8.314462618e-3 * 310.15


def reviewed(catalogue, values, controls=0):
    rng = np.random.default_rng(6)
    return assess(panel_of([*spread(RED_CELL, controls, rng), Specimen("X", values)]), catalogue)


def test_delta_g_is_its_own_equation(catalogue):
    """ΔG′ = ΔrG′° + RT ln Γ = RT ln(Γ/K′eq) (IUPAC-IUBMB recommendations 1994)."""
    review = reviewed(catalogue, RED_CELL)
    for step in ("hexokinase", "aldolase_fbp", "gapdh_pgk_combined", "pyruvate_kinase"):
        g0, ln_gamma, ln_k, g = (
            value(review, name, "X", step) for name in ("delta_g0_prime", "ln_gamma", "ln_k_prime", "delta_g")
        )
        assert g == pytest.approx(g0 + RT * ln_gamma)
        assert g == pytest.approx(RT * (ln_gamma - ln_k))


def test_a_missing_reactant_makes_the_step_missing_and_names_it(catalogue):
    review = reviewed(catalogue, {k: v for k, v in RED_CELL.items() if k != "fructose_1_6_bisphosphate"})
    for step in ("phosphofructokinase_1", "aldolase_fbp"):
        where = at(review, "X", step)
        assert review.findings.assessability[where] == Assessability.MISSING
        assert np.isnan(review.findings.delta_g[where])
        symbol = catalogue.metabolites["fructose_1_6_bisphosphate"].symbol
        assert review.reason(*where) == f"not measured: {symbol}"
    assert value(review, "assessability", "X", "hexokinase") == Assessability.ASSESSED


class TestBelowALimit:
    """A value below its limit is an interval (0, limit]: the step has a bound, and a call only if all of it agrees."""

    def test_below_on_the_product_leaves_the_lower_side_open(self, catalogue):
        review = reviewed(catalogue, RED_CELL | {"fructose_1_6_bisphosphate": "<0.031"})
        exact = reviewed(catalogue, RED_CELL)
        where = at(review, "X", "phosphofructokinase_1")
        f = review.findings
        assert f.censored[where]
        assert np.isnan(f.delta_g[where])
        assert np.isnan(f.ln_gamma[where])
        assert np.isneginf(f.delta_g_lower95[where])
        assert f.delta_g_upper95[where] == pytest.approx(exact.findings.delta_g_upper95[where])
        assert f.direction[where] == Direction.FORWARD
        assert f.distance[where] == Distance.FAR

    def test_below_on_the_substrate_leaves_the_upper_side_open(self, catalogue):
        review = reviewed(catalogue, RED_CELL | {"fructose_6_phosphate": "<0.014"})
        exact = reviewed(catalogue, RED_CELL)
        where = at(review, "X", "phosphofructokinase_1")
        f = review.findings
        assert np.isposinf(f.delta_g_upper95[where])
        assert f.delta_g_lower95[where] == pytest.approx(exact.findings.delta_g_lower95[where])
        assert f.direction[where] == Direction.UNDECIDED
        assert f.distance[where] == Distance.NONE

    def test_one_on_each_side_leaves_nothing_to_say(self, catalogue):
        values = RED_CELL | {"fructose_6_phosphate": "<0.014", "fructose_1_6_bisphosphate": "<0.031"}
        review = reviewed(catalogue, values, controls=8)
        where = at(review, "X", "phosphofructokinase_1")
        f = review.findings
        assert (np.isneginf(f.delta_g_lower95[where]), np.isposinf(f.delta_g_upper95[where])) == (True, True)
        assert f.direction[where] == Direction.UNDECIDED
        assert np.isnan(f.q_value[where])
        assert f.shift_call[where] == Shift.WITHIN or f.shift_call[where] == Shift.NO_REFERENCE
        assert not f.highlighted[where]

    def test_a_couple_below_its_limit_bounds_every_step_that_rests_on_it(self, catalogue):
        review = reviewed(catalogue, RED_CELL | {"pyruvate": "<0.051"})
        where = at(review, "X", "gapdh_pgk_combined")  # NADH is a product, so pyruvate stands below the line
        assert np.isposinf(review.findings.delta_g_upper95[where])
        assert review.findings.censored[where]

    @settings(max_examples=20, deadline=None)
    @given(limit=st.floats(0.001, 0.2), share=st.floats(0.01, 1.0))
    def test_whatever_the_value_is_the_call_on_its_bound_holds(self, catalogue, limit, share):
        """A call made at the limit is made for every value under it as well."""
        bounded = reviewed(catalogue, RED_CELL | {"fructose_1_6_bisphosphate": f"<{limit!r}"}, controls=8)
        known = reviewed(catalogue, RED_CELL | {"fructose_1_6_bisphosphate": limit * share}, controls=8)
        where = at(bounded, "X", "phosphofructokinase_1")
        f, g = bounded.findings, known.findings
        assert f.delta_g_lower95[where] <= g.delta_g[where] <= f.delta_g_upper95[where]
        assert f.shift_lower[where] <= g.shift[where] <= f.shift_upper[where] + 1e-9
        if f.direction[where] in (Direction.FORWARD, Direction.REVERSED):
            assert g.direction[where] == f.direction[where]
        if f.distance[where] == Distance.FAR:
            assert g.distance[where] == Distance.FAR
        if f.shift_call[where] == Shift.PUSHED_FORWARD:
            assert g.shift[where] < 0

    def test_a_censored_control_is_no_member_of_the_reference(self, catalogue):
        controls = spread(RED_CELL, 8, np.random.default_rng(1))
        low = Specimen("C09", RED_CELL | {"fructose_1_6_bisphosphate": "<0.001"}, group="control")
        review = assess(panel_of([*controls, low, Specimen("X", RED_CELL)]), catalogue)
        assert value(review, "reference_n", "X", "phosphofructokinase_1") == 8
        assert value(review, "reference_n", "X", "hexokinase") == 9


def test_a_step_without_a_constant_keeps_its_ratio_and_its_shift(catalogue):
    """No equilibrium constant is known for 2,3-bisphosphoglycerate phosphatase; against controls it still shows."""
    shunt = RED_CELL | {"bisphosphoglycerate_2_3": 4.0}
    controls = spread(shunt, 8, np.random.default_rng(2))
    review = assess(panel_of([*controls, Specimen("X", shunt | {"bisphosphoglycerate_2_3": 16.0})]), catalogue)
    where = at(review, "X", "bisphosphoglycerate_phosphatase")
    f = review.findings
    assert np.isnan(f.delta_g[where])
    assert np.isnan(f.delta_g0_prime[where])
    assert f.direction[where] == Direction.NONE
    assert np.isfinite(f.ln_gamma[where])
    assert f.shift[where] == pytest.approx(-RT * np.log(4), abs=0.4)
    assert f.shift_call[where] == Shift.PUSHED_FORWARD
    assert "no equilibrium constant is known" in review.reason(*where)


def test_an_own_constant_fills_the_place_of_an_unknown_one(catalogue):
    own = {
        "bisphosphoglycerate_phosphatase": OwnConstant("bisphosphoglycerate_phosphatase", -18.0, None, 3.0, "a paper")
    }
    values = RED_CELL | {"bisphosphoglycerate_2_3": 4.0}
    review = assess(panel_of([Specimen("X", values)]), catalogue, Settings(own_constants=own))
    where = at(review, "X", "bisphosphoglycerate_phosphatase")
    assert np.isfinite(review.findings.delta_g[where])
    assert "no equilibrium constant" not in review.reason(*where)
    assert review.constant_source(where[1]) == "reviewer's own: a paper"


def test_each_specimen_is_read_at_its_own_conditions(catalogue):
    specimens = [Specimen("A", RED_CELL), Specimen("B", RED_CELL, ph=6.8), Specimen("C", RED_CELL)]
    review = assess(panel_of(specimens), catalogue)
    g0 = [value(review, "delta_g0_prime", code, "hexokinase") for code in "ABC"]
    assert g0[0] == g0[2] != g0[1]


def test_a_wider_assay_widens_the_interval_and_nothing_else(catalogue):
    narrow = assess(panel_of([Specimen("X", RED_CELL)], Assay(sd=0.02)), catalogue)
    wide = assess(panel_of([Specimen("X", RED_CELL)], Assay(sd=0.2)), catalogue)
    where = at(narrow, "X", "pyruvate_kinase")
    assert wide.findings.delta_g[where] == narrow.findings.delta_g[where]
    assert wide.findings.delta_g_sd[where] > narrow.findings.delta_g_sd[where]
    # Four reactants of equal uncertainty: RT · 2 · σ each way (GUM, JCGM 100:2008).
    added = wide.findings.delta_g_sd[where] ** 2 - narrow.findings.delta_g_sd[where] ** 2
    assert added == pytest.approx((RT * 2) ** 2 * (0.2**2 - 0.02**2))
