"""Published worked examples, recomputed by the engine with the constants of their own tables.

The figures stand in data/worked_examples.json, each with its source and how well it is known.
"""

from __future__ import annotations

import json
import math
from pathlib import Path

import numpy as np
import pytest
from panels import RED_CELL, Specimen, panel_of, value

from panelview.assess.assess import assess
from panelview.assess.calls import Direction, Distance
from panelview.assess.review import Review
from panelview.assess.settings import ConditionChoice, FreeRatio, Settings
from panelview.catalogue.constants import OwnConstant
from panelview.catalogue.load import Catalogue

DATA = json.loads((Path(__file__).parent / "data" / "worked_examples.json").read_text(encoding="utf-8"))


def of_kind(kind: str) -> list:
    return [
        pytest.param(case, id=f"{case['id']} ({case['source'][:40]}…)")
        for case in DATA
        if case["kind"] == kind
    ]


def own(step: str, *, delta_g0: float | None = None, k_prime: float | None = None) -> OwnConstant:
    return OwnConstant(step, delta_g0, None if k_prime is None else math.log(k_prime), 0.5, "the table's own")


def review_of(
    catalogue: Catalogue,
    case: dict,
    values: dict[str, float],
    constants: list[OwnConstant],
    matrix: str = "erythrocyte",
) -> Review:
    settings = Settings(
        conditions={
            "ph": ConditionChoice(case.get("ph"), None, "test"),
            "temperature": ConditionChoice(case.get("temperature_c", 37.0) + 273.15, None, "test"),
        },
        free_ratios={pool: FreeRatio(ratio) for pool, ratio in case.get("free_ratios", {}).items()},
        own_constants={constant.step_id: constant for constant in constants},
    )
    return assess(panel_of([Specimen("X", values, matrix=matrix)]), catalogue, settings)


def values_with_ratio(catalogue: Catalogue, step_id: str, ratio: float) -> dict[str, float]:
    """1 mmol/L of each measured reactant, but the first product such that Γ is `ratio` (mol/L)."""
    step = next(s for s in catalogue.steps if s.id == step_id)
    measured = {
        m: nu
        for m, nu in step.stoichiometry
        if not catalogue.metabolites[m].unit_activity and m not in ("nad", "nadh", "nadp", "nadph")
    }
    product, nu = next((m, n) for m, n in measured.items() if n > 0)
    at_one_millimolar = 1e-3 ** sum(measured.values())
    return dict.fromkeys(measured, 1.0) | {product: (ratio / at_one_millimolar) ** (1 / nu)}


@pytest.mark.parametrize("case", of_kind("step"))
def test_a_tables_step_with_the_tables_constant(catalogue, case):
    constant = own(case["step"], delta_g0=case.get("delta_g0_prime"), k_prime=case.get("k_prime"))
    review = review_of(catalogue, case, case["values_mmol_per_l"], [constant])
    delta_g = value(review, "delta_g", "X", case["step"])
    assert delta_g == pytest.approx(case["recomputed"], abs=case["tolerance"])
    if case["printed"] is not None:
        assert delta_g == pytest.approx(case["printed"], abs=case["printed_tolerance"])


@pytest.mark.parametrize("case", of_kind("class"))
def test_a_heart_step_falls_into_its_published_class(catalogue, case):
    values = values_with_ratio(catalogue, case["step"], case["mass_action_ratio"])
    review = review_of(catalogue, case, values, [own(case["step"], k_prime=case["k_prime"])])
    delta_g = value(review, "delta_g", "X", case["step"])
    assert delta_g == pytest.approx(case["recomputed"], abs=case["tolerance"])
    assert delta_g == pytest.approx(case["printed"], abs=case["printed_tolerance"])
    assert value(review, "distance", "X", case["step"]) == Distance[case["distance"].upper()]
    assert value(review, "direction", "X", case["step"]) == Direction[case["direction"].upper()]


@pytest.mark.parametrize("case", of_kind("ratio"))
def test_a_models_step_with_the_models_constant(catalogue, case):
    values = values_with_ratio(catalogue, case["step"], case["mass_action_ratio"])
    review = review_of(catalogue, case, values, [own(case["step"], k_prime=case["k_prime"])])
    assert value(review, "delta_g", "X", case["step"]) == pytest.approx(
        case["recomputed"], abs=case["tolerance"]
    )
    assert value(review, "ln_gamma", "X", case["step"]) == pytest.approx(math.log(case["mass_action_ratio"]))


@pytest.mark.parametrize("case", of_kind("state"))
def test_a_redox_or_energy_quantity_with_its_sources_constant(catalogue, case):
    constants = [own(step, k_prime=k) for step, k in case["k_prime_of"].items()]
    review = review_of(catalogue, case, case["values_mmol_per_l"], constants, case["matrix"])
    rows = [
        r
        for r in review.state_of(0)
        if r.quantity == case["quantity"] and case.get("compartment") in (None, r.compartment)
    ]
    assert len(rows) == 1
    assert rows[0].value == pytest.approx(case["recomputed"], abs=case["tolerance"])
    assert rows[0].lower95 < rows[0].value < rows[0].upper95
    assert case["unit"] in (rows[0].unit, "ratio", "-")


@pytest.mark.parametrize("case", of_kind("total_ratio"))
def test_a_ratio_of_extract_totals_is_shown_as_one(catalogue, case):
    """Adenylate kinase on totals is far from 1 in muscle because ADP is bound, not because it is
    displaced."""
    review = review_of(catalogue, case, case["values_mmol_per_l"], [], case["matrix"])
    ratio = math.exp(value(review, "ln_gamma", "X", case["step"]))
    assert ratio == pytest.approx(case["recomputed"], abs=case["tolerance"])
    column = next(c for c, entry in enumerate(review.columns) if entry.step.id == case["step"])
    assert "measured total read as free" in review.reason(0, column)


def test_gradient_between_compartments_of_one_redox_state_is_the_quotient_of_the_constants(catalogue):
    """C05: K of 3-hydroxybutyrate over K of lactate dehydrogenase is 444 (Krebs et al. 1968 Biochem J
    108:513).

    Equal pairs in both compartments, so the two free ratios differ by the constants alone.
    """
    constants = [
        own("lactate_dehydrogenase", k_prime=1 / 1.11e-4),
        own("hydroxybutyrate_dehydrogenase", k_prime=4.93e-2),
    ]
    pairs = dict.fromkeys(("lactate", "pyruvate", "hydroxybutyrate_3", "acetoacetate"), 1.0)
    rows = review_of(catalogue, {"ph": 7.0}, pairs, constants, "liver").state_of(0)
    free = {r.compartment: r.value for r in rows if r.quantity == "nad_nadh_free"}
    assert free["cytosol"] / free["mitochondrial_matrix"] == pytest.approx(444, abs=1)


def test_gradient_of_a_blood_pair(catalogue):
    """C06: lactate/pyruvate 12 and 3-hydroxybutyrate/acetoacetate 2 give a gradient of 6.0, within the 4.7
    to 21 seen in intact rat liver (Krebs et al. 1968 Biochem J 108:513)."""
    pairs = {"lactate": 1.2, "pyruvate": 0.1, "hydroxybutyrate_3": 0.2, "acetoacetate": 0.1}
    rows = {r.quantity: r.value for r in review_of(catalogue, {}, pairs, [], "plasma").state_of(0)}
    gradient = rows["lactate_pyruvate_ratio"] / rows["hydroxybutyrate_acetoacetate_ratio"]
    assert gradient == pytest.approx(6.0)


def test_a_thousandfold_slip_of_units_shows_in_aldolase_only(catalogue):
    """A04: mmol/L taken for mol/L moves aldolase by RT ln 1000 = 17.8 kJ/mol and steps with equal counts
    not at all."""
    right, wrong = (
        review_of(catalogue, {}, {a: v * factor for a, v in RED_CELL.items()}, []) for factor in (1.0, 1000.0)
    )
    slip = wrong.findings.delta_g[0] - right.findings.delta_g[0]
    rt_ln_1000 = 8.314462618e-3 * 310.15 * math.log(1000)
    assert rt_ln_1000 == pytest.approx(17.8, abs=0.02)
    moved = {}
    for c, column in enumerate(right.columns):
        if np.isfinite(slip[c]):
            moved[column.step.id] = slip[c]
    assert moved.pop("aldolase_fbp") == pytest.approx(rt_ln_1000)
    # One more product than substrates: ATP = ADP + phosphate, and triose + phosphate the other way round.
    assert moved.pop("atp_hydrolysis") == pytest.approx(rt_ln_1000)
    assert moved.pop("gapdh") == pytest.approx(-rt_ln_1000)
    assert moved.pop("gapdh_pgk_combined") == pytest.approx(-rt_ln_1000)
    assert len(moved) >= 8
    assert all(abs(shift) < 1e-9 for shift in moved.values())


def printed_table(catalogue: Catalogue, ratio: float, values: dict[str, float]) -> dict[str, float]:
    """ΔG′ of every step of the red-cell table with its own constants, at one free NAD⁺/NADH."""
    constants = [own(c["step"], delta_g0=c["delta_g0_prime"]) for c in DATA if "delta_g0_prime" in c]
    review = review_of(catalogue, {"free_ratios": {"nad_cytosol": ratio}}, values, constants)
    return {c["step"]: value(review, "delta_g", "X", c["step"]) for c in DATA if "delta_g0_prime" in c}


UPPER = (
    "hexokinase",
    "glucose_6_phosphate_isomerase",
    "phosphofructokinase_1",
    "aldolase_fbp",
    "triose_phosphate_isomerase",
)
LOWER = (
    "gapdh",
    "phosphoglycerate_kinase",
    "phosphoglycerate_mutase",
    "enolase",
    "pyruvate_kinase",
    "lactate_dehydrogenase",
)


def pathway_total(table: dict[str, float]) -> float:
    """Glucose to two lactate: the lower half runs twice."""
    return sum(table[s] for s in UPPER) + 2 * sum(table[s] for s in LOWER)


def test_the_printed_steps_add_up_to_the_pathway(catalogue):
    """A14: −127.6 kJ/mol, from the printed values; they use NAD⁺/NADH 1000 in one step and 1 in another."""
    table = printed_table(catalogue, 1000.0, RED_CELL)
    table["lactate_dehydrogenase"] = printed_table(catalogue, 1.0, RED_CELL)["lactate_dehydrogenase"]
    assert pathway_total(table) == pytest.approx(-127.6, abs=0.3)


def test_intermediates_and_the_free_ratio_cancel_from_the_pathway(catalogue):
    """Glucose + 2 ADP + 2 phosphate = 2 lactate + 2 ATP holds whatever lies between (A14)."""
    ends = {"glucose", "lactate", "atp", "adp", "phosphate"}
    moved = {a: v * (1 + 3 * (k + 1)) if a not in ends else v for k, (a, v) in enumerate(RED_CELL.items())}
    usual = pathway_total(printed_table(catalogue, 1000.0, RED_CELL))
    assert pathway_total(printed_table(catalogue, 7.0, moved)) == pytest.approx(usual, abs=1e-9)


def test_combined_step_stands_without_the_intermediate_that_is_never_measured(catalogue):
    """A13: the pair GAPDH + PGK must be computable when 1,3-bisphosphoglycerate is missing."""
    values = {a: v for a, v in RED_CELL.items() if a != "bisphosphoglycerate_1_3"}
    review = review_of(catalogue, {"free_ratios": {"nad_cytosol": 1000}}, values, [])
    assert np.isnan(value(review, "delta_g", "X", "gapdh"))
    assert np.isfinite(value(review, "delta_g", "X", "gapdh_pgk_combined"))


def test_a_models_placeholder_for_irreversible_is_no_constant_of_ours(catalogue):
    """E03: K′ 10⁵ of phosphofructokinase in the kinetic model (Holzhütter 2004) is no thermodynamic
    constant."""
    index = [s.id for s in catalogue.steps].index("phosphofructokinase_1")
    assert math.exp(catalogue.constants.anchors[index].ln_k_prime) < 2e3
