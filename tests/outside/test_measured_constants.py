"""The steps' constants against the measurements behind them, each at the measurement's own conditions.

Source of the measurements: Goldberg, Tewari and Bhat 2004 (NIST Standard Reference Database 74). The
constants were drawn from the same data, so this shows how far one constant a step, carried by the
transform, can stand for all laboratories; it is no independent prediction. Yardstick from leaving out a
whole paper at a time: median 0.57, root mean square 1.27 kJ/mol.
"""

from __future__ import annotations

from collections import defaultdict

import numpy as np
import pytest
from numpy.typing import NDArray

from panelview.catalogue.load import load_catalogue
from panelview.catalogue.measurements import MeasuredConstant
from panelview.thermo.conditions import LIMITS, Conditions
from panelview.thermo.physical import GAS_CONSTANT

Residuals = tuple[list[MeasuredConstant], NDArray[np.float64]]


def _within_model(measured: MeasuredConstant) -> bool:
    at = {
        "ph": measured.ph,
        "temperature": measured.temperature,
        "ionic_strength": measured.ionic_strength,
        "pmg": measured.pmg,
    }
    return all(LIMITS[field][0] <= value <= LIMITS[field][1] for field, value in at.items())


@pytest.fixture(scope="module")
def residuals() -> Residuals:
    """Measurements of grade A or B within the model's range, and carried minus measured ΔrG′°, kJ/mol."""
    catalogue = load_catalogue()
    constants = catalogue.constants
    step = {step_id: k for k, step_id in enumerate(constants.step_ids)}
    chosen = [
        m
        for m in catalogue.measurements
        if not m.set_aside
        and m.evaluation in "AB"
        and constants.anchors[step[m.step_id]].basis == "measured"
        and _within_model(m)
    ]
    at = Conditions.of(
        ph=[m.ph for m in chosen],
        temperature=[m.temperature for m in chosen],
        ionic_strength=[m.ionic_strength for m in chosen],
        pmg=[m.pmg for m in chosen],
    )
    carried = constants.at(at).delta_g0_prime[np.arange(len(chosen)), [step[m.step_id] for m in chosen]]
    measured = -GAS_CONSTANT * at.temperature * np.log([m.k_prime for m in chosen])
    return chosen, carried - measured


def test_most_measurements_lie_within_the_models_range(residuals: Residuals) -> None:
    assert len(residuals[0]) >= 1000


def test_carried_constants_meet_the_measurements_as_well_as_laboratories_meet_each_other(
    residuals: Residuals,
) -> None:
    off = residuals[1]
    assert np.median(np.abs(off)) < 0.5
    assert np.sqrt(np.mean(off**2)) < 1.25


def test_hardly_any_measurement_lies_beyond_5_kj(residuals: Residuals) -> None:
    off = residuals[1]
    assert np.sum(np.abs(off) > 5) <= 0.01 * len(off)


def test_no_laboratory_as_a_whole_lies_beyond_4_kj(residuals: Residuals) -> None:
    of_paper = defaultdict(list)
    for measured, off in zip(*residuals, strict=True):
        of_paper[measured.step_id, measured.reference_id].append(off)
    medians = {paper: float(np.median(offs)) for paper, offs in of_paper.items()}
    assert max(abs(median) for median in medians.values()) < 4


def test_no_step_is_biased_by_more_than_its_own_uncertainty(residuals: Residuals) -> None:
    constants = load_catalogue().constants
    sd = {anchor.step_id: anchor.sd for anchor in constants.anchors}
    of_step = defaultdict(list)
    for measured, off in zip(*residuals, strict=True):
        of_step[measured.step_id].append(off)
    # Twice the standard uncertainty: about one step in twenty may lie outside.
    outside = [step for step, offs in of_step.items() if abs(np.median(offs)) > 2 * sd[step]]
    assert len(outside) <= len(of_step) / 20


@pytest.mark.parametrize(
    ("step", "quoted", "per_total_co2"),
    [
        ("lactate_dehydrogenase", 1 / 1.11e-4, False),
        ("malate_dehydrogenase", 2.78e-5, False),
        ("hydroxybutyrate_dehydrogenase", 4.93e-2, False),
        ("glutamate_dehydrogenase_nad", 3.87e-6, False),
        ("glycerol_3_phosphate_dehydrogenase", 1.35e-4, False),
        ("isocitrate_dehydrogenase_nadp", 1.17, True),
        ("malic_enzyme_nadp", 3.44e-2, True),
        ("phosphogluconate_dehydrogenase", 0.172, True),
        ("creatine_kinase", 166.0, False),
        ("adenylate_kinase", 1.05, False),
    ],
)
def test_indicator_constants_agree_with_the_classic_ones(
    step: str, quoted: float, per_total_co2: bool
) -> None:
    # 38 °C, pH 7.0, I = 0.25 mol/L, 1 mmol/L free Mg²⁺: Williamson, Lund and Krebs 1967; Veech, Eggleston
    # and Krebs 1969; Lawson and Veech 1979 (all from memory). Constants on dissolved CO₂ are brought to total
    # CO₂ by its share of about 0.0955 (pH 7, I = 0.25).
    constants = load_catalogue().constants
    k = constants.step_ids.index(step)
    at = constants.at(Conditions.of(7.0, 311.15, 0.25, 3.0))
    k_classic = quoted / 0.0955 if per_total_co2 else quoted
    classic = -GAS_CONSTANT * 311.15 * np.log(k_classic)
    assert at.delta_g0_prime[0, k] == pytest.approx(classic, abs=2 * constants.anchors[k].sd)
    assert at.delta_g0_prime[0, k] == pytest.approx(classic, abs=1.3)
