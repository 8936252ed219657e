"""Redox and energy state: what is reported, how valid it is, and what a limit leaves open."""

from __future__ import annotations

import math

import numpy as np
import pytest
from panels import Specimen, panel_of

from panelview.assess.assess import assess
from panelview.assess.settings import ConditionChoice, FreeRatio, Settings
from panelview.thermo.physical import FARADAY_CONSTANT

RED_CELL = {"lactate": 1.3, "pyruvate": 0.07, "atp": 2.0, "adp": 0.3, "amp": 0.03, "phosphate": 1.0}


def rows(catalogue, values, matrix="erythrocyte", **settings):
    review = assess(panel_of([Specimen("X", values, matrix=matrix)]), catalogue, Settings(**settings))
    return {r.quantity: r for r in review.state_of(0)}


def test_red_cells_report_cytosol_and_totals(catalogue):
    found = rows(catalogue, RED_CELL)
    assert set(found) == {
        "nad_nadh_free",
        "nad_potential",
        "lactate_pyruvate_ratio",
        "phosphorylation_potential",
        "adenylate_energy_charge",
        "atp_hydrolysis_delta_g",
    }
    assert found["phosphorylation_potential"].value == pytest.approx(2.0 / (0.3 * 1e-3))
    assert found["phosphorylation_potential"].reason == "measured totals"
    assert {r.validity for r in found.values()} == {"valid"}


def test_every_value_lies_inside_its_interval(catalogue):
    for row in rows(catalogue, RED_CELL).values():
        assert row.lower95 < row.value < row.upper95, row


def test_energy_and_potential_are_the_same_statement(catalogue):
    """E = E′° + (RT/2F) ln(NAD⁺/NADH) (Nernst); E′° −0.320 V at pH 7 (biochemistry textbooks, memory)."""
    at_ph = {"conditions": {"ph": ConditionChoice(7.4, None, "test")}}
    found = rows(catalogue, RED_CELL, **at_ph)
    slope = 8.314462618 * 310.15 / (2 * 96485.33212)
    standard = -0.320 - slope * math.log(10) * 0.4
    expected = 1000 * (standard + slope * math.log(found["nad_nadh_free"].value))
    assert found["nad_potential"].value == pytest.approx(expected, abs=1e-6)
    assert pytest.approx(96.48533212) == FARADAY_CONSTANT


def test_a_pair_below_its_limit_gives_a_bound_and_no_value(catalogue):
    found = rows(catalogue, RED_CELL | {"pyruvate": "<0.02"})
    free = found["nad_nadh_free"]
    assert math.isnan(free.value)
    assert free.lower95 == 0.0  # pyruvate can lie anywhere under its limit
    assert math.isfinite(free.upper95)
    ratio = found["lactate_pyruvate_ratio"]
    assert math.isinf(ratio.upper95)
    assert 0 < ratio.lower95 < 1.3 / 0.02


def test_plasma_reports_proxies_only(catalogue):
    found = rows(catalogue, {"lactate": 3.0, "pyruvate": 0.1, "acetoacetate": 0.1, "hydroxybutyrate_3": 0.2}, "plasma")
    assert {r.validity for r in found.values()} == {"proxy"}
    assert found["lactate_pyruvate_ratio"].value == pytest.approx(30.0)
    assert found["hydroxybutyrate_acetoacetate_ratio"].value == pytest.approx(2.0)


def test_urine_reports_nothing(catalogue):
    assert rows(catalogue, RED_CELL, "urine") == {}


def test_the_energy_charge_stays_between_zero_and_one(catalogue):
    vague = rows(catalogue, {"atp": 3.0, "adp": 1e-4, "amp": 1e-5})["adenylate_energy_charge"]
    assert vague.upper95 <= 1.0
    assert vague.lower95 >= 0.0


def test_hydrolysis_agrees_with_the_step(catalogue):
    review = assess(panel_of([Specimen("X", RED_CELL, matrix="erythrocyte")]), catalogue)
    row = next(r for r in review.state_of(0) if r.quantity == "atp_hydrolysis_delta_g")
    column = next(c for c, k in enumerate(review.columns) if k.step.id == "atp_hydrolysis")
    assert row.value == review.findings.delta_g[0, column]


def test_the_reviewers_ratio_does_not_pose_as_the_couples(catalogue):
    """The measured pair still gives its own ratio; the steps use the reviewer's."""
    given = rows(catalogue, RED_CELL, free_ratios={"nad_cytosol": FreeRatio(1000.0)})
    measured = rows(catalogue, RED_CELL)
    assert given["nad_nadh_free"].value == measured["nad_nadh_free"].value != pytest.approx(1000.0)


def test_state_lists_every_specimen_in_order(catalogue):
    panel = panel_of([Specimen(f"S{k}", RED_CELL | {"lactate": 1.0 + k}) for k in range(3)])
    review = assess(panel, catalogue)
    assert [r.specimen for r in review.state] == sorted(r.specimen for r in review.state)
    ratios = [r.value for r in review.state if r.quantity == "lactate_pyruvate_ratio"]
    assert ratios == pytest.approx([(1.0 + k) / 0.07 for k in range(3)])
    assert np.all(np.diff(ratios) > 0)


def test_errors_of_the_conditions_are_shared_by_the_constants_of_one_quantity(catalogue):
    """Free AMP rests on creatine and adenylate kinase at one pH: K′(AK)/K′(CK)² moves with it as a whole."""
    muscle = {"phosphocreatine": 25.0, "creatine": 12.0, "atp": 8.0}
    panel = panel_of([Specimen("M", muscle, matrix="skeletal_muscle")])

    def ln_amp(ph: float, ph_sd: float) -> tuple[float, float]:
        exact = {f: ConditionChoice(None, 0.0, "x") for f in ("temperature", "ionic_strength", "pmg")}
        settings = Settings(conditions={**exact, "ph": ConditionChoice(ph, ph_sd, "x")})
        (row,) = [r for r in assess(panel, catalogue, settings).state if r.quantity == "amp_free"]
        return np.log(row.value), (np.log(row.upper95) - np.log(row.lower95)) / (2 * 1.959963984540054)

    slope = (ln_amp(7.06, 0.0)[0] - ln_amp(7.04, 0.0)[0]) / 0.02
    with_ph, without = ln_amp(7.05, 0.1)[1], ln_amp(7.05, 0.0)[1]
    assert with_ph**2 - without**2 == pytest.approx((0.1 * slope) ** 2, rel=1e-3)
