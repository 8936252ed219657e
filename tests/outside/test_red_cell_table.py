"""The textbook's healthy red cell, read with the program's own constants."""

from __future__ import annotations

import numpy as np
import pytest
from panels import RED_CELL, Specimen, at, panel_of, spread, value

from panelview.assess.assess import assess
from panelview.assess.calls import Direction, Distance, Shift
from panelview.assess.settings import FreeRatio, ReferenceChoice, Settings

#: What is generally said of glycolysis in red cells (biochemistry textbooks; Minakami and Yoshikawa 1965):
#: three steps far from equilibrium and forward, the others within reach of it.
FAR = ("hexokinase", "phosphofructokinase_1", "pyruvate_kinase")
NEAR = (
    "glucose_6_phosphate_isomerase",
    "aldolase_fbp",
    "triose_phosphate_isomerase",
    "gapdh",
    "phosphoglycerate_kinase",
    "gapdh_pgk_combined",
    "phosphoglycerate_mutase",
)

#: ΔG′ as printed with the textbook's constants at 25 °C, kJ/mol (Garrett and Grisham, table of glycolysis
#: in the erythrocyte). Ours differ through the constants alone: hexokinase and pyruvate kinase most (the
#: textbook's −16.7 and −31.7 against −22.0 and −20.3 of the measured K′ carried to pH 7.2, 37 °C, pMg 3.5).
PRINTED = {
    "hexokinase": -33.9,
    "glucose_6_phosphate_isomerase": -2.92,
    "phosphofructokinase_1": -18.8,
    "aldolase_fbp": -0.23,
    "triose_phosphate_isomerase": 2.41,
    "phosphoglycerate_kinase": 0.1,
    "phosphoglycerate_mutase": 0.83,
}


@pytest.fixture(scope="module", params=["none", "published", "controls"])
def review(request, catalogue):
    """The table read alone, against published values, and beside 24 controls scattered around it."""
    specimens = [Specimen("X", RED_CELL)]
    if request.param == "controls":
        specimens = [*spread(RED_CELL, 24, np.random.default_rng(11)), *specimens]
    kind = "auto" if request.param == "controls" else request.param
    return assess(panel_of(specimens), catalogue, Settings(reference=ReferenceChoice(kind)))


@pytest.mark.parametrize("step", FAR)
def test_the_committed_steps_are_far_and_forward(review, step):
    assert value(review, "distance", "X", step) == Distance.FAR
    assert value(review, "direction", "X", step) == Direction.FORWARD


@pytest.mark.parametrize("step", NEAR)
def test_the_others_are_near_equilibrium(review, step):
    """Γ/K′eq within 1/5 and 5 (Rolleston 1972)."""
    assert value(review, "distance", "X", step) == Distance.NEAR


@pytest.mark.parametrize("step", PRINTED)
def test_own_constants_agree_with_the_textbooks_within_their_uncertainty(review, step):
    """Two 95 % half-widths of ours: the textbook's constants are uncertain as well, by as much at least."""
    delta_g, sd = value(review, "delta_g", "X", step), value(review, "delta_g_sd", "X", step)
    assert abs(delta_g - PRINTED[step]) < 2 * 1.96 * sd


def test_nothing_in_a_healthy_cell_is_called_reversed(review):
    """Negative control: triose-phosphate isomerase (+2.4), mutase (+0.8) and enolase (+1.1) lie above zero
    in the printed table, and isomerase and mutase with our constants too, through errors of constants and
    assays."""
    row, _ = at(review, "X", "hexokinase")
    reversed_steps = [
        review.columns[c].step.id
        for c in np.flatnonzero(review.findings.direction[row] == Direction.REVERSED)
    ]
    assert reversed_steps == []


def test_isomerase_and_mutase_do_lie_above_zero(review):
    """So the test above is not empty: by its sign alone each would be called reversed."""
    assert value(review, "p_reversed", "X", "triose_phosphate_isomerase") > 0.95
    assert value(review, "p_reversed", "X", "phosphoglycerate_mutase") > 0.95


def test_beside_controls_nothing_is_shifted(catalogue):
    specimens = [*spread(RED_CELL, 24, np.random.default_rng(11)), Specimen("X", RED_CELL)]
    review = assess(panel_of(specimens), catalogue)
    assert set(review.findings.shift_call[-1][review.findings.assessability[-1] == 0]) <= {Shift.WITHIN}
    assert not review.findings.highlighted[-1].any()


def test_lactate_dehydrogenase_is_assessed_only_when_the_reviewer_sets_the_ratio(catalogue):
    """One ratio a compartment: the couple that defines it cannot be judged by it."""
    panel = panel_of([Specimen("X", RED_CELL)])
    alone = assess(panel, catalogue)
    given = assess(panel, catalogue, Settings(free_ratios={"nad_cytosol": FreeRatio(1000.0)}))
    where = at(alone, "X", "lactate_dehydrogenase")
    assert np.isnan(alone.findings.delta_g[where])
    assert alone.findings.defines_pool[where]
    assert "defines the ratio" in alone.reason(*where)
    assert np.isfinite(given.findings.delta_g[where])
    assert not given.findings.defines_pool[where]
    assert "defines" not in given.reason(*where)


@pytest.mark.parametrize("total", [1e-6, 0.02, 5.0])
def test_total_nadh_of_an_extract_never_changes_a_result(catalogue, total):
    """Most NADH of a cell is bound; a total is never read as the free pool (Williamson, Lund and Krebs
    1967)."""
    controls = spread(RED_CELL, 8, np.random.default_rng(3))
    plain = assess(panel_of([*controls, Specimen("X", RED_CELL)]), catalogue)
    totals = {"nad": 60 * total, "nadh": total, "nadp": total, "nadph": 3 * total}
    with_totals = assess(panel_of([*controls, Specimen("X", RED_CELL | totals)]), catalogue)
    for name in ("ln_gamma", "delta_g", "delta_g_sd", "shift", "q_value", "assessability", "direction"):
        np.testing.assert_array_equal(
            getattr(plain.findings, name), getattr(with_totals.findings, name), name
        )
    assert plain.state_of(8) == with_totals.state_of(8)
