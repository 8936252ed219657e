"""Published patterns: the right step is called, in the right direction, and nothing else is accused.

In a deficiency the substrates of the step rise and its products fall, so its ΔG′ becomes more negative;
steps before it that lie far from equilibrium become less so. The red-cell panels are constructed on the
textbook table (data/red_cell_cases.json says from what); they test the logic and are no patients.
"""

from __future__ import annotations

import json
from pathlib import Path

import numpy as np
import pytest
from panels import Specimen, at, panel_of, spread, value

from panelview.assess.assess import assess
from panelview.assess.calls import Assessability, Direction, Shift
from panelview.assess.review import Review
from panelview.catalogue.load import Catalogue

DATA = json.loads((Path(__file__).parent / "data" / "red_cell_cases.json").read_text(encoding="utf-8"))
CASES = {case["id"]: case for case in DATA["cases"]}

#: Isomerases, mutases and their like: near equilibrium, and unmoved unless they are the step themselves.
STEADY = ("glucose_6_phosphate_isomerase", "triose_phosphate_isomerase", "phosphoglycerate_mutase", "enolase")


def beside_controls(
    catalogue: Catalogue, values: dict[str, float | str], count: int = 12, start: int = 5
) -> Review:
    """The specimen X beside controls scattered by 8 % an analyte around the textbook table."""
    rng = np.random.default_rng(start)
    return assess(panel_of([*spread(DATA["control"], count, rng, sd=0.08), Specimen("X", values)]), catalogue)


@pytest.fixture(scope="module", params=CASES)
def case(request):
    return CASES[request.param]


@pytest.fixture(scope="module")
def review(case, catalogue):
    return beside_controls(catalogue, case["specimen"])


def test_the_step_itself_has_the_most_negative_shift(case, review):
    row, column = at(review, "X", case["step"])
    shifts = review.findings.shift[row]
    assert np.nanargmin(shifts) == column


def test_the_step_is_called_pushed_forward_and_highlighted(case, review):
    assert value(review, "shift_call", "X", case["step"]) == Shift.PUSHED_FORWARD
    assert value(review, "highlighted", "X", case["step"])
    assert value(review, "direction", "X", case["step"]) == Direction.FORWARD


def test_every_shift_is_that_of_the_constructed_ratio(case, review):
    """Within the standard error that twelve scattered controls leave: they are not the table itself.

    The pair GAPDH + PGK is left out: the constructed figure holds one fixed free NAD⁺/NADH, the review
    takes the specimen's own from lactate and pyruvate.
    """
    for step, expected in case["shift_kj_per_mol"].items():
        if step == "gapdh_pgk_combined":
            continue
        error = value(review, "reference_sd", "X", step) / np.sqrt(12)
        assert value(review, "shift", "X", step) == pytest.approx(expected, abs=3 * error + 0.02), step


def test_healthy_isomerases_stay_within(case, review):
    for step in STEADY:
        if step != case["step"]:
            assert value(review, "shift_call", "X", step) == Shift.WITHIN, step


def test_nothing_is_called_reversed(case, review):
    row, _ = at(review, "X", case["step"])
    assert not (review.findings.direction[row] == Direction.REVERSED).any()


def test_pyruvate_kinase_case_does_not_accuse_the_kinases_before_it(catalogue):
    """Hexokinase and phosphofructokinase move by +2.0 kJ/mol through ATP/ADP alone."""
    review = beside_controls(catalogue, CASES["PK"]["specimen"])
    for step in ("hexokinase", "phosphofructokinase_1"):
        assert not value(review, "highlighted", "X", step)
        assert value(review, "shift_call", "X", step) != Shift.PUSHED_FORWARD


def test_phosphofructokinase_case_pushes_hexokinase_back(catalogue):
    """Glucose 6-phosphate piles up before the step and holds hexokinase back."""
    review = beside_controls(catalogue, CASES["PFK"]["specimen"])
    assert value(review, "shift_call", "X", "hexokinase") == Shift.PUSHED_BACK


def test_fructose_bisphosphate_below_its_limit_still_allows_the_call(catalogue):
    """Katz et al. 1991: fructose 1,6-bisphosphate not detectable; the ratio is then an upper bound."""
    values = CASES["PFK"]["specimen"] | {"fructose_1_6_bisphosphate": "<0.006"}
    review = beside_controls(catalogue, values)
    where = at(review, "X", "phosphofructokinase_1")
    findings = review.findings
    assert findings.censored[where]
    assert np.isnan(findings.delta_g[where])
    assert np.isneginf(findings.shift_lower[where])
    assert findings.shift_upper[where] == pytest.approx(-10.17, abs=0.3)
    assert findings.shift_call[where] == Shift.PUSHED_FORWARD
    assert findings.highlighted[where]
    assert findings.direction[where] == Direction.FORWARD
    aldolase = at(review, "X", "aldolase_fbp")  # the bound lies on its substrate: nothing may be called
    assert findings.shift_call[aldolase] == Shift.WITHIN
    assert findings.direction[aldolase] != Direction.FORWARD


def test_a_limit_that_is_too_high_allows_no_call(catalogue):
    """A limit of quantification above what healthy cells hold says nothing of the step."""
    values = CASES["PFK"]["specimen"] | {"fructose_1_6_bisphosphate": "<2.0"}
    review = beside_controls(catalogue, values)
    where = at(review, "X", "phosphofructokinase_1")
    assert not review.findings.highlighted[where]
    assert review.findings.shift_call[where] == Shift.WITHIN


@pytest.mark.parametrize("start", range(6))
def test_a_healthy_cell_is_quiet_whatever_the_controls(catalogue, start):
    review = beside_controls(catalogue, DATA["control"], start=start)
    row, _ = at(review, "X", "hexokinase")
    assert not review.findings.highlighted[row].any()
    assert not (review.findings.direction[row] == Direction.REVERSED).any()


FASTING = {
    "lactate": 0.9,
    "pyruvate": 0.065,
    "alanine": 0.32,
    "hydroxybutyrate_3": 0.09,
    "acetoacetate": 0.06,
    "glucose": 4.9,
}


def plasma(catalogue: Catalogue, values: dict[str, float]) -> Review:
    rng = np.random.default_rng(9)
    controls = [Specimen(c.code, c.values, c.group, "plasma") for c in spread(FASTING, 12, rng)]
    return assess(panel_of([*controls, Specimen("X", values, matrix="plasma")]), catalogue)


def test_pyruvate_oxidation_defect_leaves_lactate_over_pyruvate_alone(catalogue):
    """Lactate and pyruvate up together, L/P up to 20 in most of 371 published cases of pyruvate dehydrogenase
    deficiency (review, PMC4003492); the enzyme itself cannot be read in plasma."""
    values = {
        "lactate": 5.0,
        "pyruvate": 0.33,
        "alanine": 0.70,
        "hydroxybutyrate_3": 0.05,
        "acetoacetate": 0.04,
    }
    review = plasma(catalogue, values)
    assert value(review, "shift_call", "X", "lactate_dehydrogenase") == Shift.WITHIN
    assert value(review, "assessability", "X", "pyruvate_dehydrogenase") == Assessability.NOT_ASSESSABLE
    assert not review.findings.highlighted[at(review, "X", "lactate_dehydrogenase")[0]].any()


def test_respiratory_chain_pattern_reduces_both_compartments(catalogue):
    """L/P 32 and 3-hydroxybutyrate/acetoacetate 6 (constructed; L/P above 20 often, published): both free
    ratios fall, and the gradient between them stays within the 4.7 to 21 of intact liver (Krebs et al.
    1968)."""
    values = {"lactate": 5.5, "pyruvate": 0.17, "hydroxybutyrate_3": 0.60, "acetoacetate": 0.10}
    review = plasma(catalogue, values)
    # Written pyruvate → lactate, so a reduced cytosol pushes it back; written 3-hydroxybutyrate →
    # acetoacetate, so a reduced matrix pushes it forward.
    assert value(review, "shift_call", "X", "lactate_dehydrogenase") == Shift.PUSHED_BACK
    assert value(review, "shift_call", "X", "hydroxybutyrate_dehydrogenase") == Shift.PUSHED_FORWARD
    ratio = {r.quantity: r.value for r in review.state_of(12)}
    assert 4.7 < ratio["lactate_pyruvate_ratio"] / ratio["hydroxybutyrate_acetoacetate_ratio"] < 21


def test_haemolysed_plasma_yields_no_glycolysis(catalogue):
    """Phosphorylated intermediates in plasma are leakage: each step is refused with its reason."""
    values = FASTING | {k: v for k, v in DATA["control"].items() if k not in FASTING}
    review = plasma(catalogue, values)
    for step in ("hexokinase", "phosphofructokinase_1", "pyruvate_kinase", "adenylate_kinase"):
        where = at(review, "X", step)
        assert review.findings.assessability[where] == Assessability.NOT_ASSESSABLE
        assert review.reason(*where)
        assert np.isnan(review.findings.delta_g[where])
        assert not review.findings.highlighted[where]
