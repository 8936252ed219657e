"""How free pools are known, and what that makes of each step's stoichiometry."""

from __future__ import annotations

import numpy as np
import pytest
from panels import RED_CELL, Specimen, at, panel_of, value

from panelview.assess.assess import assess
from panelview.assess.calls import Assessability
from panelview.assess.plan import Plan, couple_analytes, step_columns
from panelview.assess.review import Review
from panelview.assess.settings import FreeRatio, Settings

MUSCLE = {
    "atp": 8.0,
    "adp": 1.05,
    "amp": 0.03,
    "phosphocreatine": 25.0,
    "creatine": 16.0,
    "phosphate": 4.0,
    "glucose": 0.5,
    "glucose_6_phosphate": 0.4,
    "lactate": 1.5,
    "pyruvate": 0.13,
    "glycerol_3_phosphate": 0.4,
    "dihydroxyacetone_phosphate": 0.05,
    "malate": 0.2,
    "oxaloacetate": 0.001,
}

LIVER = {
    "lactate": 1.2,
    "pyruvate": 0.1,
    "hydroxybutyrate_3": 0.26,
    "acetoacetate": 0.1,
    "malate": 0.3,
    "oxaloacetate": 0.004,
    "glutamate": 3.0,
    "oxoglutarate_2": 0.3,
    "ammonia": 0.6,
    "isocitrate": 0.02,
    "co2_total": 25.0,
}


def plan_of(review: Review) -> Plan:
    return review.plans[review.plan_of[0]]


def reviewed(catalogue, values, matrix="erythrocyte", **ratios) -> Review:
    chosen = Settings(free_ratios={pool: FreeRatio(ratio) for pool, ratio in ratios.items()})
    return assess(panel_of([Specimen("X", values, matrix=matrix)]), catalogue, chosen)


def exponents(review: Review, step: str, compartment: str | None = None) -> dict[str, float]:
    _, column = at(review, "X", step, compartment)
    nu = plan_of(review).nu[column]
    return {review.concentrations.analytes[k]: float(nu[k]) for k in np.flatnonzero(nu)}


def test_a_step_in_two_compartments_has_two_columns_where_a_cofactor_pool_differs(catalogue):
    columns = step_columns(catalogue)
    assert [c.step.id for c in columns[: len(catalogue.steps)]] == [s.id for s in catalogue.steps]
    twice = {c.step.id for c in columns[len(catalogue.steps) :]}
    assert "malate_dehydrogenase" in twice
    assert "fumarase" not in twice  # two compartments, no cofactor pool
    assert "adenylate_kinase" not in twice


def test_lactate_dehydrogenase_reports_the_cytosols_ratio(catalogue):
    review = reviewed(catalogue, RED_CELL)
    assert exponents(review, "gapdh") == {
        "glyceraldehyde_3_phosphate": -1,
        "phosphate": -1,
        "bisphosphoglycerate_1_3": 1,
        "lactate": 1,
        "pyruvate": -1,
    }
    _, column = at(review, "X", "gapdh")
    steps = [s.id for s in catalogue.steps]
    combined = plan_of(review).combination[column]
    assert {steps[k]: combined[k] for k in np.flatnonzero(combined)} == {
        "gapdh": 1.0,
        "lactate_dehydrogenase": 1.0,
    }
    assert review.findings.inferred[at(review, "X", "gapdh")]


def test_each_compartment_has_its_own_ratio(catalogue):
    """Malate dehydrogenase goes with lactate/pyruvate in the cytosol, with ketone bodies in the matrix."""
    review = reviewed(catalogue, LIVER, "liver")
    own = {"malate": -1, "oxaloacetate": 1}
    assert exponents(review, "malate_dehydrogenase", "cytosol") == own | {"lactate": 1, "pyruvate": -1}
    assert exponents(review, "malate_dehydrogenase", "mitochondrial_matrix") == own | {
        "hydroxybutyrate_3": 1,
        "acetoacetate": -1,
    }
    energies = [
        review.findings.delta_g[at(review, "X", "malate_dehydrogenase", side)]
        for side in ("cytosol", "mitochondrial_matrix")
    ]
    assert energies[0] != pytest.approx(energies[1], abs=1)


def test_the_couple_of_first_priority_goes_before_the_next(catalogue):
    both = reviewed(catalogue, MUSCLE, "skeletal_muscle")
    assert both.findings.defines_pool[at(both, "X", "lactate_dehydrogenase")]
    assert not both.findings.defines_pool[at(both, "X", "glycerol_3_phosphate_dehydrogenase")]
    second = {k: v for k, v in MUSCLE.items() if k != "pyruvate"}
    only = reviewed(catalogue, second, "skeletal_muscle")
    assert only.findings.defines_pool[at(only, "X", "glycerol_3_phosphate_dehydrogenase")]
    assert value(only, "assessability", "X", "lactate_dehydrogenase") == Assessability.MISSING


def test_the_reviewers_ratio_goes_before_every_couple(catalogue):
    review = reviewed(catalogue, RED_CELL, nad_cytosol=700.0)
    use = next(u for u in plan_of(review).pools if u.pool == "nad_cytosol")
    assert (use.kind, use.couple) == ("reviewer", None)
    _, column = at(review, "X", "gapdh")
    assert plan_of(review).offset[column] == pytest.approx(-np.log(700))  # NADH is a product
    _, column = at(review, "X", "lactate_dehydrogenase")
    assert plan_of(review).offset[column] == pytest.approx(np.log(700))  # NADH is a substrate


def test_an_unknown_ratio_blocks_the_step_and_says_what_would_help(catalogue):
    values = {k: v for k, v in RED_CELL.items() if k != "pyruvate"}
    review = reviewed(catalogue, values)
    where = at(review, "X", "gapdh")
    assert review.findings.assessability[where] == Assessability.MISSING
    reason = review.reason(*where)
    assert "free NAD⁺/NADH of the cytosol is not known" in reason
    assert "set by the reviewer" in reason
    assert "would be known from Pyr and Lac" in reason


def test_only_pairs_that_the_matrix_can_be_read_by_are_asked_for(catalogue):
    """Isocitrate dehydrogenase reports liver's NADP⁺/NADPH; in red cells only 6-phosphogluconate does."""
    values = RED_CELL | {"glutathione_reduced": 3.0, "glutathione_disulfide": 0.006}
    red_cell = reviewed(catalogue, values)
    reason = red_cell.reason(*at(red_cell, "X", "glutathione_reductase"))
    assert "6PG" in reason
    assert "iCit" not in reason
    liver = reviewed(catalogue, values, "liver")
    assert "iCit" in liver.reason(*at(liver, "X", "glutathione_reductase"))


def test_free_adp_comes_from_creatine_kinase_at_the_specimens_own_ph(catalogue):
    review = reviewed(catalogue, MUSCLE, "skeletal_muscle")
    assert exponents(review, "hexokinase") == {
        "glucose": -1,
        "glucose_6_phosphate": 1,
        "creatine": 1,
        "phosphocreatine": -1,
    }
    assert exponents(review, "atp_hydrolysis") == {"creatine": 1, "phosphocreatine": -1, "phosphate": 1}
    assert plan_of(review).totals[at(review, "X", "hexokinase")[1]] == ()
    acid = assess(panel_of([Specimen("X", MUSCLE, matrix="skeletal_muscle", ph=6.7)]), catalogue)
    adp = [next(r.value for r in made.state_of(0) if r.quantity == "adp_free") for made in (review, acid)]
    # One H⁺ is taken up, so free ADP falls 10^0.35-fold from pH 7.05 to 6.7 (Lawson and Veech 1979).
    assert adp[0] / adp[1] == pytest.approx(10**0.35, rel=0.08)


def test_without_phosphocreatine_the_total_stands_in_and_says_so(catalogue):
    values = {k: v for k, v in MUSCLE.items() if k != "phosphocreatine"}
    review = reviewed(catalogue, values, "skeletal_muscle")
    where = at(review, "X", "atp_hydrolysis")
    assert exponents(review, "atp_hydrolysis")["adp"] == 1
    assert review.findings.assessability[where] == Assessability.PROXY
    assert "measured total read as free" in review.reason(*where)
    assert "bound" in review.reason(*where)


def test_red_cells_read_totals_as_customary(catalogue):
    review = reviewed(catalogue, RED_CELL)
    where = at(review, "X", "hexokinase")
    assert review.findings.assessability[where] == Assessability.ASSESSED
    assert "measured total read as free" in review.reason(*where)


def test_adenylate_kinase_cannot_be_judged_by_the_free_amp_it_gives(catalogue):
    review = reviewed(catalogue, MUSCLE, "skeletal_muscle")
    where = at(review, "X", "adenylate_kinase")
    assert np.isnan(review.findings.delta_g[where])
    assert "defines the pool" in review.reason(*where)


def test_a_couple_needs_every_reactant_but_its_pool(catalogue):
    couples = {(c.pool, c.step_id): couple_analytes(catalogue, c) for c in catalogue.couples}
    assert set(couples["nad_cytosol", "lactate_dehydrogenase"]) == {"lactate", "pyruvate"}
    assert set(couples["adp_cytosol", "creatine_kinase"]) == {"phosphocreatine", "creatine", "atp"}
    assert set(couples["amp_cytosol", "adenylate_kinase"]) == {"atp"}
    assert set(couples["nadp_cytosol", "phosphogluconate_dehydrogenase"]) == {
        "phosphogluconate_6",
        "ribulose_5_phosphate",
        "co2_total",
    }


def test_specimens_with_different_pools_get_different_plans(catalogue):
    specimens = [
        Specimen("A", RED_CELL),
        Specimen("B", {k: v for k, v in RED_CELL.items() if k != "lactate"}),
        Specimen("C", RED_CELL),
    ]
    review = assess(panel_of(specimens), catalogue)
    assert review.plan_of[0] == review.plan_of[2] != review.plan_of[1]


def test_a_specimen_without_a_matrix_is_read_as_a_proxy_with_the_first_couple_only(catalogue):
    review = reviewed(catalogue, RED_CELL | LIVER, "")
    used = {u.pool for u in plan_of(review).pools if u.kind == "couple"}
    assert used == {"nad_cytosol"}
    where = at(review, "X", "hexokinase")
    assert review.findings.assessability[where] == Assessability.PROXY
    assert "matrix is not stated" in review.reason(*where)
