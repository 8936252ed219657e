"""Numbers as readers see them."""

from __future__ import annotations

import math
import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from panelview.output import text

numbers = st.floats(allow_nan=False, allow_infinity=False, min_value=-1e6, max_value=1e6)


@given(value=numbers, digits=st.integers(0, 4))
def test_a_number_has_a_true_minus_and_is_never_minus_zero(value: float, digits: int) -> None:
    shown = text.fixed(value, digits)
    assert "-" not in shown
    assert not re.fullmatch(r"−0(\.0*)?", shown)
    assert float(shown.replace("−", "-")) == pytest.approx(value, abs=0.51 * 10**-digits)


@pytest.mark.parametrize(
    ("mol_per_l", "shown"),
    [
        (5.2e-3, "5.20 mmol/L"),
        (3.1e-5, "31.0 µmol/L"),
        (4.567e-8, "45.7 nmol/L"),
        (2e-11, "20.0 pmol/L"),
        (1.5, "1.50 mol/L"),
        (9.9999e-4, "1.00 mmol/L"),
        (math.nan, ""),
    ],
)
def test_a_concentration_takes_the_prefix_that_fits(mol_per_l: float, shown: str) -> None:
    assert text.concentration(mol_per_l) == shown


@given(exponent=st.floats(-11.9, 2))
def test_a_shown_concentration_is_the_concentration(exponent: float) -> None:
    amount, unit = text.concentration(10**exponent).split()
    factor = {"mol/L": 1, "mmol/L": 1e-3, "µmol/L": 1e-6, "nmol/L": 1e-9, "pmol/L": 1e-12}[unit]
    assert float(amount) * factor == pytest.approx(10**exponent, rel=0.006)


def test_the_micro_sign_is_the_one_of_the_unit_standard() -> None:
    assert "\N{MICRO SIGN}mol/L" in text.concentration(1e-5)


@pytest.mark.parametrize(
    ("ln_value", "shown"),
    [
        (0.0, "1.00"),
        (math.log(2239), "2239"),
        (math.log(8.6e-5), "8.6·10⁻⁵"),
        (503 * math.log(10), "1.0·10⁵⁰³"),
    ],
    ids=["one", "hexokinase", "aldolase", "glucose oxidation: would overflow as a float"],
)
def test_a_ratio_is_shown_plain_or_as_a_power_of_ten(ln_value: float, shown: str) -> None:
    assert text.ratio_from_ln(ln_value) == shown


def test_an_open_side_is_told_as_a_bound() -> None:
    assert text.interval(-math.inf, -8.21) == "at most −8.2"
    assert text.interval(3.0, math.inf) == "at least +3.0"
    assert text.interval(-math.inf, math.inf) == "open on both sides"
    assert text.bounds(math.nan, 1.0, -math.inf, -8.21) == "< −8.2"
    assert text.bounds(math.nan, math.nan, math.nan, math.nan) == ""


def test_an_interval_names_its_unit_once() -> None:
    assert text.state_interval(-59.6, -53.04, "kJ/mol") == "−59.6 to −53.0 kJ/mol"
    assert text.state_interval(2e-5, 4e-5, "mol/L") == "20.0 to 40.0 µmol/L"
    assert text.state_interval(9e-4, 4e-3, "mol/L") == "900 µmol/L to 4.00 mmol/L"


def test_conditions_are_shown_in_the_reader_s_units() -> None:
    assert text.condition("temperature", 310.15, 0.5) == "37.0 ± 0.5 °C"
    assert text.condition("ionic_strength", 0.2, 0.05) == "0.200 ± 0.050 mol/L"
    assert text.condition("ph", 7.2, 0.05) == "7.20 ± 0.05"
