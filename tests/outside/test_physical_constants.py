"""Physical constants against CODATA, and the arithmetic every textbook shows."""

from __future__ import annotations

import math

import numpy as np
import pytest
import scipy.constants

from panelview.catalogue.formula import ATOMIC_WEIGHTS, molar_mass
from panelview.thermo.physical import (
    FARADAY_CONSTANT,
    GAS_CONSTANT,
    LN10,
    TABLE_TEMPERATURE,
    ZERO_CELSIUS,
)
from panelview.thermo.transform import debye_hueckel_energy, reaction_energy

KCAL = 4.184  # kJ, thermochemical calorie (scipy.constants.calorie, exact by definition)


def test_gas_and_faraday_constants_are_those_of_codata() -> None:
    assert pytest.approx(scipy.constants.R, rel=1e-12) == GAS_CONSTANT * 1e3
    faraday = scipy.constants.e * scipy.constants.N_A
    assert pytest.approx(faraday, rel=1e-12) == FARADAY_CONSTANT * 1e3
    assert pytest.approx(scipy.constants.calorie) == KCAL
    assert scipy.constants.zero_Celsius == ZERO_CELSIUS
    assert pytest.approx(scipy.constants.zero_Celsius + 25) == TABLE_TEMPERATURE


def test_debye_hueckel_parameter_at_25_degrees_is_the_published_one() -> None:
    # α = 1.17582 (mol/L)^−½ at 298.15 K: Alberty 2003, table of coefficients; the polynomial used
    # for its course with temperature (p. 55) meets it within 0.01 %.
    alpha = float(debye_hueckel_energy(TABLE_TEMPERATURE)) / (GAS_CONSTANT * TABLE_TEMPERATURE)
    assert alpha == pytest.approx(1.17582, rel=1e-4)


def test_2_303_rt_is_1_36_kcal_at_25_degrees() -> None:
    # common practice, no source
    factor = GAS_CONSTANT * TABLE_TEMPERATURE * LN10 / KCAL
    assert factor == pytest.approx(1.36, abs=0.005)


@pytest.mark.parametrize(("products_over_substrates", "change_kcal"), [(0.1, -1.36), (10.0, 1.36)])
def test_a_tenfold_excess_moves_the_reaction_energy_by_1_36_kcal(
    products_over_substrates: float, change_kcal: float
) -> None:
    # common practice, no source
    ln_gamma = np.array([[math.log(products_over_substrates)]])
    zero = np.zeros((1, 1))
    moved = reaction_energy(zero, ln_gamma, np.array([[TABLE_TEMPERATURE]]))
    assert moved[0, 0] / KCAL == pytest.approx(change_kcal, abs=0.005)


def test_oxidation_of_glucose_has_a_log10_constant_of_503_and_nothing_overflows() -> None:
    # ΔG° = −686 kcal/mol, log10 K about 503 (common practice, no source)
    log10_k = 686 * KCAL / (GAS_CONSTANT * TABLE_TEMPERATURE * LN10)
    assert log10_k == pytest.approx(503, abs=1)
    at_equilibrium = reaction_energy(
        np.array([[-686 * KCAL]]), np.array([[log10_k * LN10]]), np.array([[TABLE_TEMPERATURE]])
    )
    assert at_equilibrium[0, 0] == pytest.approx(0, abs=1e-9)


@pytest.mark.parametrize(
    ("formula", "mass"),
    [("H2O", 18.015), ("C6H12O6", 180.156), ("C10H16N5O13P3", 507.18), ("C21H36N7O16P3S", 767.5)],
)
def test_molar_masses_are_the_usual_ones(formula: str, mass: float) -> None:
    # common practice, no source
    assert molar_mass(formula) == pytest.approx(mass, rel=1e-4)


def test_atomic_weights_are_the_abridged_iupac_ones() -> None:
    # IUPAC 2021, abridged to five figures (memory)
    rounded = {element: round(weight, 3) for element, weight in ATOMIC_WEIGHTS.items()}
    assert rounded == {
        "H": 1.008,
        "C": 12.011,
        "N": 14.007,
        "O": 15.999,
        "Mg": 24.305,
        "P": 30.974,
        "S": 32.06,
    }
