"""Indicator couples: the classic constants, and what free ratios do with pH and with the pair."""

from __future__ import annotations

import math

import numpy as np
import pytest
from panels import Specimen, panel_of

from panelview.assess.assess import assess
from panelview.assess.review import StateRow
from panelview.assess.settings import ConditionChoice, Settings
from panelview.catalogue.load import Catalogue
from panelview.thermo.conditions import Conditions

#: Dissolved CO₂ in total CO₂ at pH 7, 37 °C, I 0.25 (recomputed from pK′ 6.0 to 6.1): constants printed on
#: dissolved CO₂ are divided by it.
DISSOLVED = 0.0955

WLK = "Williamson, Lund and Krebs 1967 (Biochem J 103:514), memory"
CLASSIC = [
    pytest.param("lactate_dehydrogenase", 1 / 1.11e-4, id=f"LDH, {WLK}"),
    pytest.param("hydroxybutyrate_dehydrogenase", 4.93e-2, id=f"BDH, {WLK}"),
    pytest.param("malate_dehydrogenase", 2.78e-5, id=f"MDH, {WLK}"),
    pytest.param("glutamate_dehydrogenase_nad", 3.87e-6, id=f"GDH, {WLK}"),
    pytest.param("glycerol_3_phosphate_dehydrogenase", 1.35e-4, id="GPD, Krebs school, memory"),
    pytest.param("isocitrate_dehydrogenase_nadp", 1.17 / DISSOLVED, id="ICDH, Veech et al. 1969, memory"),
    pytest.param("malic_enzyme_nadp", 3.44e-2 / DISSOLVED, id="ME, Veech et al. 1969, memory"),
    pytest.param("phosphogluconate_dehydrogenase", 0.172 / DISSOLVED, id="PGD, Veech et al. 1969, memory"),
    pytest.param("creatine_kinase", 166.0, id="CK, Lawson and Veech 1979, memory"),
    pytest.param("adenylate_kinase", 1.05, id="AK, Lawson and Veech 1979, memory"),
    pytest.param("alanine_transaminase", 0.67, id="ALT, memory"),
    pytest.param("aspartate_transaminase", 0.15, id="AST, memory"),
    pytest.param("triose_phosphate_isomerase", 1 / 22, id="TPI, textbook, memory"),
]


@pytest.mark.parametrize(("step", "k_prime"), CLASSIC)
def test_a_classic_constant_lies_within_the_uncertainty_of_ours(catalogue, step, k_prime):
    """At its own conditions: pH 7.0, 38 °C, I 0.25 mol/L, 1 mmol/L free Mg²⁺; within 95 %."""
    where = Conditions.of(ph=7.0, temperature=311.15, ionic_strength=0.25, pmg=3.0)
    constants = catalogue.constants.at(where)
    index = [s.id for s in catalogue.steps].index(step)
    classic = -8.314462618e-3 * 311.15 * math.log(k_prime)
    assert abs(constants.delta_g0_prime[0, index] - classic) < 1.96 * constants.sd[0, index]


def state(
    catalogue: Catalogue, values: dict[str, float], matrix: str, ph: float = 7.0
) -> dict[tuple[str, str], StateRow]:
    settings = Settings(conditions={"ph": ConditionChoice(ph, None, "test")})
    rows = assess(panel_of([Specimen("X", values, matrix=matrix)]), catalogue, settings).state_of(0)
    return {(r.quantity, r.couple): r for r in rows}


LP = ("nad_nadh_free", "lactate_dehydrogenase")


def test_at_the_same_pair_a_higher_ph_means_a_lower_free_ratio(catalogue):
    """C10: K′ of lactate dehydrogenase is K[H⁺]⁻¹, so 0.2 pH units turn 725 into 457 (recomputed from K
    1.11e-11 mol/L).

    The program takes the pH effect from the species table, which lets a little H⁺ binding change too: 1 %.
    """
    pair = {"lactate": 1.243, "pyruvate": 0.1}
    ratio = state(catalogue, pair, "liver", 7.2)[LP].value / state(catalogue, pair, "liver", 7.0)[LP].value
    assert ratio == pytest.approx(457 / 725, rel=0.01)


def test_fed_liver_with_our_own_constant(catalogue):
    """Free NAD⁺/NADH 725 in fed rat liver (Williamson, Lund and Krebs 1967) lies inside our 95 % interval."""
    row = state(catalogue, {"lactate": 1.243, "pyruvate": 0.1}, "liver")[LP]
    assert row.lower95 < 725 < row.upper95
    assert row.validity == "valid"


def test_creatine_kinase_follows_ph_by_its_proton(catalogue):
    """D01, D02: K′ 166 at pH 7.0 and 104.7 at pH 7.2 (Lawson and Veech 1979): one H⁺ taken up, less what
    Mg²⁺ and phosphate groups bind on the way (5 %)."""
    where = Conditions.of(ph=[7.0, 7.2], temperature=311.15, ionic_strength=0.25, pmg=3.0)
    index = [s.id for s in catalogue.steps].index("creatine_kinase")
    low, high = np.exp(catalogue.constants.at(where).ln_k_prime(where)[:, index])
    assert high / low == pytest.approx(104.7 / 166, rel=0.05)
    assert low == pytest.approx(166, rel=0.35)  # 0.8 kJ/mol of our constant


def test_free_adp_of_resting_muscle_with_our_own_constants(catalogue):
    """D04: 8 to 20 µmol/L (³¹P magnetic-resonance literature, memory); extract ADP is some 60 times that."""
    values = {"atp": 8.2, "phosphocreatine": 33.0, "creatine": 9.5, "phosphate": 4.0}
    rows = state(catalogue, values, "skeletal_muscle", 7.05)
    assert 8e-6 < rows["adp_free", "creatine_kinase"].value < 20e-6
    assert 5e4 < rows["phosphorylation_potential", "creatine_kinase"].value < 2e5
    hydrolysis = rows["atp_hydrolysis_delta_g", "atp_hydrolysis"].value
    assert -66 < hydrolysis < -60  # D08: −62 to −64 published, ± 2


def test_lactate_pyruvate_of_little_lactate_is_shown_and_not_called(catalogue):
    """Below 2.5 mmol/L lactate the ratio does not separate causes (Debray et al. 2007 Clin Chem 53:916)."""
    ratio = ("lactate_pyruvate_ratio", "lactate_dehydrogenase")
    low = state(catalogue, {"lactate": 2.4, "pyruvate": 0.08}, "plasma")[ratio]
    high = state(catalogue, {"lactate": 2.6, "pyruvate": 0.08}, "plasma")[ratio]
    assert low.value == pytest.approx(30.0)
    assert "2.5 mmol/L" in low.reason
    assert "2.5 mmol/L" not in high.reason
    assert {low.validity, high.validity} == {"proxy"}


@pytest.mark.parametrize("matrix", ["erythrocyte", "skeletal_muscle"])
def test_ketone_couple_reports_no_mitochondria_where_there_are_none_or_no_enzyme(catalogue, matrix):
    """Red cells have no mitochondria; muscle has too little 3-hydroxybutyrate dehydrogenase (biochemistry
    textbooks)."""
    rows = state(catalogue, {"hydroxybutyrate_3": 1.0, "acetoacetate": 0.4}, matrix)
    assert not [r for r in rows.values() if r.compartment == "mitochondrial_matrix"]
    assert rows["hydroxybutyrate_acetoacetate_ratio", "hydroxybutyrate_dehydrogenase"].validity == "not_valid"


@pytest.mark.parametrize("matrix", ["plasma", "whole_blood", "csf"])
def test_fluids_report_proxies_only(catalogue, matrix):
    values = {"lactate": 3.0, "pyruvate": 0.1, "hydroxybutyrate_3": 1.0, "acetoacetate": 0.4}
    validities = {r.validity for (q, _), r in state(catalogue, values, matrix).items()}
    assert "valid" not in validities


def test_opposite_shifts_of_the_two_compartments_stay_apart(catalogue):
    """Pyruvate carboxylase deficiency type B: lactate/pyruvate raised, 3-hydroxybutyrate/acetoacetate
    lowered, so cytosol reduced and matrix oxidised (direction from memory; figures invented): a gradient of
    80."""
    values = {"lactate": 12.0, "pyruvate": 0.30, "hydroxybutyrate_3": 0.8, "acetoacetate": 1.6}
    rows = state(catalogue, values, "plasma")
    usual = state(
        catalogue, {"lactate": 1.2, "pyruvate": 0.1, "hydroxybutyrate_3": 0.2, "acetoacetate": 0.1}, "plasma"
    )
    matrix = ("nad_nadh_free", "hydroxybutyrate_dehydrogenase")
    assert rows[LP].value < usual[LP].value
    assert rows[matrix].value > usual[matrix].value
    pairs = [rows[q].value for q in rows if q[0].endswith("_ratio")]
    assert max(pairs) / min(pairs) == pytest.approx(80)
