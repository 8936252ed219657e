"""Laws of the transform, its derivatives, and limits of the conditions."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.thermo.conditions import FIELDS, LIMITS, Conditions, OutOfModelRange
from panelview.thermo.physical import GAS_CONSTANT, LN10
from panelview.thermo.species import MAGNESIUM_FORMATION_ENERGY, MAGNESIUM_FORMATION_ENTHALPY, SpeciesTable
from panelview.thermo.transform import (
    bound_hydrogen,
    debye_hueckel_energy,
    formation_energies,
    reaction_energies,
    reaction_energy,
)

# A weak acid HA ⇌ A⁻ + H⁺ with pK 7 at I = 0, its magnesium complex, and a neutral bystander.
PK = 7.0
RT25 = GAS_CONSTANT * 298.15
TABLE = SpeciesTable(
    reactants=("acid", "bystander"),
    formation_energy=np.array([0.0, -RT25 * LN10 * PK, MAGNESIUM_FORMATION_ENERGY - RT25 * LN10 * 2.0, -10.0]),
    formation_enthalpy=np.array([0.0, -20.0, -470.0, -10.0]),
    charge=np.array([-1.0, 0.0, 1.0, 0.0]),
    hydrogen=np.array([0.0, 1.0, 0.0, 3.0]),
    magnesium=np.array([0.0, 0.0, 1.0, 0.0]),
    reactant=np.array([0, 0, 0, 1]),
)

conditions = st.builds(
    Conditions.of,
    ph=st.floats(5.2, 8.8),
    temperature=st.floats(275, 322),
    ionic_strength=st.floats(0.01, 0.34),
    pmg=st.floats(1.5, 6.0),
)


@given(conditions)
def test_derivatives_agree_with_finite_differences(at: Conditions) -> None:
    exact = formation_energies(TABLE, at).by[0]
    for k, (field, step) in enumerate(zip(FIELDS, (1e-5, 1e-3, 1e-6, 1e-5), strict=True)):
        value = getattr(at, field)
        up = formation_energies(TABLE, at.replace(**{field: value + step})).value[0]
        down = formation_energies(TABLE, at.replace(**{field: value - step})).value[0]
        assert np.allclose((up - down) / (2 * step), exact[:, k], rtol=1e-5, atol=1e-5)


@given(conditions)
def test_slope_with_ph_is_the_hydrogen_bound(at: Conditions) -> None:
    rt = GAS_CONSTANT * at.temperature[0]
    bound = bound_hydrogen(TABLE, at)[0]
    assert np.allclose(formation_energies(TABLE, at).by[0, :, 0], rt * LN10 * bound)
    assert 0 <= bound[0] <= 1
    assert bound[1] == pytest.approx(3)


def test_half_of_a_weak_acid_is_protonated_at_its_pk() -> None:
    at = Conditions.of(ph=PK, temperature=298.15, ionic_strength=0.0, pmg=20.0)
    assert bound_hydrogen(TABLE, at)[0, 0] == pytest.approx(0.5, abs=1e-6)


def test_a_group_is_never_less_stable_than_its_best_species() -> None:
    at = Conditions.of(ph=[5, 7, 9], temperature=298.15, ionic_strength=0.1, pmg=3)
    alone = SpeciesTable(
        ("acid",), *(getattr(TABLE, n)[:1] for n in ("formation_energy", "formation_enthalpy")),
        TABLE.charge[:1], TABLE.hydrogen[:1], TABLE.magnesium[:1], np.array([0]),
    )
    assert np.all(formation_energies(TABLE, at).value[:, 0] < formation_energies(alone, at).value[:, 0])


@given(conditions, st.lists(st.floats(-3, 3), min_size=2, max_size=2))
def test_reversing_a_reaction_flips_every_sign(at: Conditions, nu: list[float]) -> None:
    formed = formation_energies(TABLE, at)
    there = reaction_energies(np.array([nu]), formed)
    back = reaction_energies(-np.array([nu]), formed)
    assert np.allclose(there.value, -back.value)
    assert np.allclose(there.by, -back.by)


def test_many_conditions_at_once_equal_each_alone() -> None:
    many = Conditions.of(ph=[6.5, 7.0, 7.4], temperature=[298.15, 310.15, 305.0], ionic_strength=0.2, pmg=3.2)
    together = formation_energies(TABLE, many)
    for k in range(3):
        alone = formation_energies(TABLE, many[k])
        assert np.allclose(together.value[k], alone.value[0])
        assert np.allclose(together.by[k], alone.by[0])


def test_debye_hueckel_slope_at_25_degrees() -> None:
    """α(298.15 K) = 1.17582 (mol/L)^−½; Alberty, Thermodynamics of Biochemical Reactions (2003).

    The book's own polynomial in T (p. 55), used here, rounds to 1.17585.
    """
    assert float(debye_hueckel_energy(298.15)) / RT25 == pytest.approx(1.17582, abs=4e-5)


@pytest.mark.parametrize(
    ("log10_ratio", "kcal"),
    [(0.0, 0.0), (-1.0, -1.36), (1.0, 1.36)],
    ids=["equal amounts", "tenfold substrate", "tenfold product"],
)
def test_a_tenfold_excess_moves_the_energy_by_1_36_kcal(log10_ratio: float, kcal: float) -> None:
    """2.303 RT = 1.36 kcal/mol at 25 °C: common practice, no source."""
    moved = reaction_energy(np.zeros((1, 1)), np.array([[log10_ratio * LN10]]), np.array([[298.15]]))
    assert moved[0, 0] / 4.184 == pytest.approx(kcal, abs=0.005)


def test_the_oxidation_of_glucose_overflows_nothing() -> None:
    """ΔG° = −686 kcal/mol gives log10 K ≈ 503: common practice, no source. Computed in logarithms."""
    log10_k = 686 * 4.184 / (RT25 * LN10)
    assert log10_k == pytest.approx(503, abs=0.5)
    delta_g = reaction_energy(np.array([[-686 * 4.184]]), np.array([[log10_k * LN10]]), np.array([[298.15]]))
    assert delta_g[0, 0] == pytest.approx(0.0, abs=1e-9)


@pytest.mark.parametrize("field", FIELDS)
def test_conditions_outside_the_model_are_refused_by_name(field: str) -> None:
    lower, upper = LIMITS[field]
    for value in (lower - 0.5, upper + 0.5, float("nan")):
        with pytest.raises(OutOfModelRange) as caught:
            Conditions.of(**{field: value})
        assert caught.value.field == field
        assert "outside the model's range" in str(caught.value)


def test_species_out_of_order_are_refused() -> None:
    with pytest.raises(ValueError, match="sorted"):
        SpeciesTable(("a", "b"), *([np.zeros(2)] * 5), np.array([1, 0]))


def test_a_species_without_enthalpy_takes_that_of_its_reactant() -> None:
    nan = float("nan")
    table = SpeciesTable(
        ("known in part", "unknown"),
        np.array([-100.0, -140.0, -500.0, -30.0]),
        np.array([-200.0, -220.0, nan, nan]),
        np.array([-1.0, 0.0, 1.0, 0.0]),
        np.array([0.0, 1.0, 0.0, 0.0]),
        np.array([0.0, 0.0, 1.0, 0.0]),
        np.array([0, 0, 0, 1]),
    )
    assert table.enthalpy == pytest.approx([-200, -220, -210 + MAGNESIUM_FORMATION_ENTHALPY, -30])
