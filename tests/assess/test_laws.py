"""Laws that every review obeys, whatever the panel: scaling, adding, reversing, order, reference."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from panels import RED_CELL, Assay, Specimen, at, panel_of, spread, value

from panelview.assess.assess import assess
from panelview.assess.drivers import drivers
from panelview.assess.review import Review
from panelview.assess.settings import ConditionChoice, FreeRatio, ReferenceChoice, Settings
from panelview.catalogue.constants import OwnConstant
from panelview.catalogue.load import Catalogue
from panelview.intake.panel import Panel, Readings

RT = 8.314462618e-3 * 310.15

#: A whole specimen: every analyte anywhere within a factor of twenty of the table.
cells = st.fixed_dictionaries({analyte: st.floats(v / 20, v * 20, allow_nan=False) for analyte, v in RED_CELL.items()})

few = settings(max_examples=25, deadline=None, suppress_health_check=[HealthCheck.function_scoped_fixture])


@few
@given(cells, st.floats(1e-3, 1e3))
def test_scaling_all_concentrations_moves_a_step_by_its_count_alone(catalogue, values, factor):
    """ΔG′ changes by RT Σν ln(factor): not at all for as many products as substrates."""
    scaled = {analyte: v * factor for analyte, v in values.items()}
    review = assess(panel_of([Specimen("A", values), Specimen("B", scaled)]), catalogue)
    moved = review.findings.delta_g[1] - review.findings.delta_g[0]
    for c, column in enumerate(review.columns):
        if np.isfinite(moved[c]):
            count = sum(
                nu
                for metabolite, nu in column.step.stoichiometry
                if metabolite not in ("nad", "nadh") and not catalogue.metabolites[metabolite].unit_activity
            )
            assert moved[c] == pytest.approx(RT * count * np.log(factor), abs=1e-6), column.step.id


@few
@given(cells)
def test_two_steps_add_up_to_their_sum(catalogue, values):
    """GAPDH + PGK is the combined step: ΔG′ adds up to what the three constants leave open."""
    review = assess(panel_of([Specimen("A", values)]), catalogue)
    parts = ("gapdh", "phosphoglycerate_kinase")
    added = sum(value(review, "delta_g", "A", step) for step in parts)
    constants = sum(value(review, "delta_g0_prime", "A", step) for step in parts)
    combined = value(review, "delta_g", "A", "gapdh_pgk_combined")
    of_combined = value(review, "delta_g0_prime", "A", "gapdh_pgk_combined")
    assert added - constants == pytest.approx(combined - of_combined, abs=1e-9)


@few
@given(cells, st.floats(0.1, 1e4))
def test_a_closed_cycle_sums_to_zero(catalogue, values, ratio):
    """Hexokinase − glucose-6-phosphatase − ATP hydrolysis leaves nothing over but the constants' own sum."""
    own = {"hexokinase": -20.0, "glucose_6_phosphatase": -12.0, "atp_hydrolysis": -32.0}
    constants = {step: OwnConstant(step, g0, None, 0.5, "test") for step, g0 in own.items()}
    chosen = Settings(own_constants=constants, free_ratios={"nad_cytosol": FreeRatio(ratio)})
    review = assess(panel_of([Specimen("A", values, matrix="")]), catalogue, chosen)
    steps = {step: value(review, "delta_g", "A", step) for step in own}
    cycle = steps["hexokinase"] + steps["glucose_6_phosphatase"] - steps["atp_hydrolysis"]
    assert cycle == pytest.approx(0.0, abs=1e-9)


def reversed_catalogue(catalogue: Catalogue, step_id: str) -> Catalogue:
    """The same catalogue with one step written the other way round."""
    index = [s.id for s in catalogue.steps].index(step_id)
    step = catalogue.steps[index]
    turned = replace(step, stoichiometry=tuple((m, -nu) for m, nu in step.stoichiometry))
    held = catalogue.constants
    anchor = held.anchors[index]
    turned_anchor = replace(anchor, ln_k_prime=-anchor.ln_k_prime, enthalpy=-anchor.enthalpy)
    stoichiometry = held.stoichiometry.copy()
    stoichiometry[index] *= -1
    constants = replace(
        held,
        anchors=(*held.anchors[:index], turned_anchor, *held.anchors[index + 1 :]),
        stoichiometry=stoichiometry,
    )
    steps = (*catalogue.steps[:index], turned, *catalogue.steps[index + 1 :])
    return replace(catalogue, steps=steps, constants=constants)


@pytest.mark.parametrize("step", ["pyruvate_kinase", "aldolase_fbp", "gapdh", "phosphoglycerate_mutase"])
def test_reversing_a_step_flips_its_signs(catalogue, step):
    rng = np.random.default_rng(2)
    panel = panel_of([*spread(RED_CELL, 8, rng), Specimen("X", RED_CELL | {"pyruvate": 0.2})])
    forward, backward = assess(panel, catalogue), assess(panel, reversed_catalogue(catalogue, step))
    for name in ("ln_gamma", "ln_k_prime", "delta_g0_prime", "delta_g", "shift", "reference_mean"):
        assert value(backward, name, "X", step) == pytest.approx(-value(forward, name, "X", step)), name
    for name in ("delta_g_sd", "shift_sd", "p_near", "q_value"):
        assert value(backward, name, "X", step) == pytest.approx(value(forward, name, "X", step)), name
    assert value(backward, "p_reversed", "X", step) == pytest.approx(1 - value(forward, "p_reversed", "X", step))


def reordered(panel: Panel, rng: np.random.Generator) -> tuple[Panel, np.ndarray]:
    """The panel with specimens and readings shuffled; where each specimen of the old panel went."""
    order = rng.permutation(len(panel.specimens))
    place = np.argsort(order)
    rows = rng.permutation(len(panel.readings))
    arrays = {name: getattr(panel.readings, name)[rows] for name in Readings.__dataclass_fields__}
    arrays["specimen"] = place[arrays["specimen"]]
    specimens = tuple(panel.specimens[k] for k in order)
    return replace(panel, specimens=specimens, readings=Readings(**arrays)), place


@pytest.mark.parametrize("start", range(3))
def test_order_of_specimens_and_readings_does_not_matter(catalogue, start):
    rng = np.random.default_rng(start)
    specimens = [
        *spread(RED_CELL, 9, rng),
        Specimen("X", RED_CELL | {"fructose_1_6_bisphosphate": "<0.01"}),
        Specimen("Y", {"lactate": 2.0, "pyruvate": 0.1}),
        Specimen("Z", {"atp": 24.0, "phosphocreatine": 70.0, "creatine": 50.0}, matrix="skeletal_muscle"),
    ]
    panel = panel_of(specimens)
    shuffled, place = reordered(panel, rng)
    one, other = assess(panel, catalogue), assess(shuffled, catalogue)
    for name in (
        "assessability",
        "ln_gamma",
        "delta_g",
        "delta_g_sd",
        "direction",
        "shift_call",
        "highlighted",
    ):
        np.testing.assert_allclose(
            getattr(other.findings, name)[place].astype(float),
            getattr(one.findings, name).astype(float),
            rtol=1e-9,
            atol=1e-9,
            err_msg=name,
        )
    for i, where in enumerate(place):
        reasons = [one.reason(i, c) for c in range(len(one.columns))]
        assert [other.reason(int(where), c) for c in range(len(other.columns))] == reasons


def test_controls_in_another_file_give_the_same_shifts_as_in_this_one(catalogue):
    rng = np.random.default_rng(21)
    controls = spread(RED_CELL, 10, rng)
    others = [Specimen("X", RED_CELL | {"pyruvate": 0.2}), Specimen("Y", RED_CELL | {"lactate": 9.0})]
    together = assess(panel_of([*controls, *others]), catalogue)
    choice = ReferenceChoice("file", "controls.csv", panel_of(controls))
    apart = assess(panel_of(others), catalogue, Settings(reference=choice))
    for name in (
        "shift",
        "shift_sd",
        "p_value",
        "q_value",
        "shift_call",
        "highlighted",
        "reference_n",
        "reference_mean",
    ):
        np.testing.assert_allclose(
            getattr(apart.findings, name), getattr(together.findings, name)[-2:], rtol=1e-12, err_msg=name
        )
    assert apart.reference.kind == "file"


def test_a_control_is_compared_with_the_others_as_if_it_were_not_one(catalogue):
    """Leave one out: the closed form equals taking the specimen out of the group by hand."""
    rng = np.random.default_rng(22)
    controls = spread(RED_CELL, 9, rng, sd=0.2)
    together = assess(panel_of(controls), catalogue)
    for i, control in enumerate(controls):
        rest = [c for c in controls if c is not control]
        alone = assess(panel_of([*rest, replace(control, group="")]), catalogue)
        for name in ("shift", "shift_sd", "q_value", "reference_n", "reference_mean", "reference_sd"):
            np.testing.assert_allclose(
                getattr(together.findings, name)[i],
                getattr(alone.findings, name)[-1],
                rtol=1e-9,
                atol=1e-9,
                err_msg=name,
            )


def driver_sum(review: Review, code: str, step: str) -> tuple[float, float]:
    where = at(review, code, step)
    parts = drivers(review, *where)
    return sum(d.contribution for d in parts), float(review.findings.shift[where])


@few
@given(cells, st.sampled_from(["hexokinase", "gapdh_pgk_combined", "pyruvate_kinase", "aldolase_fbp"]))
def test_drivers_add_up_to_the_shift(catalogue, values, step):
    controls = spread(RED_CELL, 6, np.random.default_rng(1))
    warm = Specimen("X", values, ph=7.0, temperature=308.0)
    total, shift = driver_sum(assess(panel_of([*controls, warm]), catalogue), "X", step)
    assert total == pytest.approx(shift, abs=1e-9)


def test_at_equal_conditions_the_conditions_contribute_nothing(catalogue):
    """So the analytes alone add up to the shift: for a control, too, and where some controls lack a value."""
    controls = spread(RED_CELL, 7, np.random.default_rng(1))
    gaps = {k: v for k, v in controls[2].values.items() if k not in ("adp", "pyruvate")}
    controls[2] = replace(controls[2], values=gaps)
    review = assess(panel_of([*controls, Specimen("X", RED_CELL | {"atp": 1.0})]), catalogue)
    for code in ("X", "C01"):
        for step in ("hexokinase", "gapdh_pgk_combined", "pyruvate_kinase", "lactate_dehydrogenase"):
            parts = {d.term: d.contribution for d in drivers(review, *at(review, code, step))}
            assert parts["conditions"] == pytest.approx(0.0, abs=1e-9), (code, step)
            assert len(parts) > 2


def test_the_constant_drops_out_of_the_shift(catalogue):
    """At equal conditions the shift is RT ln(Γ/Γ of the controls), whatever K′eq is taken."""
    panel = panel_of([*spread(RED_CELL, 6, np.random.default_rng(4)), Specimen("X", RED_CELL | {"adp": 0.4})])
    usual = assess(panel, catalogue)
    own = {"pyruvate_kinase": OwnConstant("pyruvate_kinase", 3.0, None, 9.0, "test")}
    other = assess(panel, catalogue, Settings(own_constants=own))
    for name in ("shift", "shift_sd", "q_value"):
        assert value(other, name, "X", "pyruvate_kinase") == pytest.approx(value(usual, name, "X", "pyruvate_kinase"))
    assert value(other, "delta_g", "X", "pyruvate_kinase") != pytest.approx(
        value(usual, "delta_g", "X", "pyruvate_kinase")
    )


def test_a_shared_factor_cancels_where_counts_are_equal(catalogue):
    """Litres of cell water per litre of cells: one error for all values, so isomerases do not feel it."""
    exact = assess(panel_of([Specimen("X", RED_CELL)], Assay(sd=0.05)), catalogue)
    vague = assess(panel_of([Specimen("X", RED_CELL)], Assay(sd=0.05, shared_sd=0.3)), catalogue)
    for step in ("glucose_6_phosphate_isomerase", "hexokinase", "pyruvate_kinase", "phosphoglycerate_mutase"):
        assert value(vague, "delta_g_sd", "X", step) == pytest.approx(value(exact, "delta_g_sd", "X", step))
    extra = value(vague, "delta_g_sd", "X", "aldolase_fbp") ** 2 - value(exact, "delta_g_sd", "X", "aldolase_fbp") ** 2
    assert np.sqrt(extra) == pytest.approx(RT * 0.3)


@few
@given(st.floats(6.0, 8.0), st.floats(280.0, 320.0))
def test_an_own_energy_holds_at_all_conditions(catalogue, ph, temperature):
    """A ΔrG′° of the reviewer's own is used as given, not carried to other conditions."""
    own = {"hexokinase": OwnConstant("hexokinase", -16.7, None, 0.5, "test")}
    conditions = {
        "ph": ConditionChoice(ph, None, "test"),
        "temperature": ConditionChoice(temperature, None, "test"),
    }
    review = assess(panel_of([Specimen("X", RED_CELL)]), catalogue, Settings(conditions=conditions, own_constants=own))
    assert value(review, "delta_g0_prime", "X", "hexokinase") == -16.7
