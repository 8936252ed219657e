"""ATP hydrolysis from the bare species table against published values and their course with pH and pMg."""

from __future__ import annotations

import numpy as np
import pytest

from panelview.catalogue.load import load_catalogue
from panelview.thermo.conditions import Conditions
from panelview.thermo.transform import formation_energies, reaction_energies

NO_MAGNESIUM = 20.0


def hydrolysis(ph: float, pmg: float, temperature: float = 298.15) -> float:
    """ΔrG′° of atp + water = adp + phosphate, kJ/mol, I = 0.25 mol/L, uncorrected table."""
    catalogue = load_catalogue()
    step = catalogue.constants.step_ids.index("atp_hydrolysis")
    at = Conditions.of(ph=ph, temperature=temperature, ionic_strength=0.25, pmg=pmg)
    formed = formation_energies(catalogue.constants.species, at)
    return float(reaction_energies(catalogue.constants.stoichiometry[[step]], formed).value[0, 0])


def test_hydrolysis_at_ph_7_without_magnesium_is_the_published_value() -> None:
    # −36.04 kJ/mol: Alberty 2003, 298.15 K, pH 7, I = 0.25
    assert hydrolysis(7.0, NO_MAGNESIUM) == pytest.approx(-36.04, abs=0.02)


def test_hydrolysis_at_one_millimolar_magnesium_is_about_the_published_value() -> None:
    # about −32.5 kJ/mol at pMg 3: Alberty 2003 (memory)
    assert hydrolysis(7.0, 3.0) == pytest.approx(-32.5, abs=0.1)


@pytest.mark.parametrize(
    ("ph", "without_magnesium", "at_pmg_3"),
    [(5, -32.57, -31.99), (6, -33.22, -31.00), (7, -36.04, -32.45), (8, -41.07, -37.21), (9, -46.71, -42.81)],
)
def test_course_with_ph(ph: float, without_magnesium: float, at_pmg_3: float) -> None:
    # A second, separate computation with Alberty's species and the magnesium constants of species.csv;
    # the column without magnesium agrees with Alberty's published table (memory).
    assert hydrolysis(ph, NO_MAGNESIUM) == pytest.approx(without_magnesium, abs=0.02)
    assert hydrolysis(ph, 3.0) == pytest.approx(at_pmg_3, abs=0.02)


@pytest.mark.parametrize(
    ("pmg", "expected"),
    [(2, -30.82), (2.5, -31.41), (3, -32.45), (3.5, -33.83), (4, -35.00), (5, -35.90), (6, -36.02)],
)
def test_course_with_pmg_at_ph_7(pmg: float, expected: float) -> None:
    # The same second computation.
    assert hydrolysis(7.0, pmg) == pytest.approx(expected, abs=0.02)


def test_hydrolysis_at_37_degrees_and_one_millimolar_magnesium() -> None:
    # The same second computation, 310.15 K: −32.53 kJ/mol
    assert hydrolysis(7.0, 3.0, 310.15) == pytest.approx(-32.53, abs=0.02)


def test_far_above_its_pk_each_ph_unit_makes_hydrolysis_more_favourable_by_2_3_rt() -> None:
    # One H⁺ is released at high pH: slope −RT ln10 = −5.71 kJ/mol at 25 °C (common practice, no source).
    slope = np.diff([hydrolysis(ph, NO_MAGNESIUM) for ph in (8.5, 9.0)])[0] / 0.5
    assert slope == pytest.approx(-5.71, abs=0.1)
