"""Numbers, units and names as a reader sees them: true minus, fitting prefixes, uncertainty beside."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterable, Mapping

from panelview.assess.sentences import signed
from panelview.thermo.physical import ZERO_CELSIUS

__all__ = [
    "CAUTION",
    "CAUTIONS",
    "MINUS",
    "as_sentences",
    "bounds",
    "concentration",
    "condition",
    "fixed",
    "interval",
    "power_of_ten",
    "quantity_name",
    "ratio_from_ln",
    "relative",
    "shown_id",
    "signed",
    "significant",
    "state_interval",
    "state_value",
    "with_sd",
]

#: Stands on the screen and on every page.
CAUTION = "Research use only. Not for diagnosis or treatment. Licensed clinical judgement and local regulations govern."

#: What every reader should keep in mind; printed on the page and shown in the window's help.
CAUTIONS = (
    (
        "A mass-action ratio tells how far a step is from equilibrium and which way it can run; it tells "
        "nothing of flux or of enzyme activity."
    ),
    "A whole-specimen concentration averages compartments and cells that may differ.",
    "A step far from equilibrium need not be the one that controls the flux.",
    (
        "Measured total nucleotides are not the free ones; free pools here are inferred from couples taken "
        "to be at equilibrium, or set by the reviewer."
    ),
    "That no shift is seen excludes nothing.",
    (
        "Equilibrium constants come from experiments in vitro, carried to the stated conditions; their "
        "uncertainty is part of each interval."
    ),
    (
        "A pattern is not specific: fasting, exercise, drugs, hypoxia, haemolysis, delay before quenching "
        "and a wrong unit can each give it."
    ),
    "A comparison is no better than its controls: see their number, matrix and handling.",
)

MINUS = "−"
_SUPERSCRIPT = str.maketrans("-0123456789", "⁻⁰¹²³⁴⁵⁶⁷⁸⁹")

#: Prefixes for concentrations, largest first: (least mol/L shown with it, factor, unit).
_PREFIXES = (
    (1.0, 1.0, "mol/L"),
    (1e-3, 1e3, "mmol/L"),
    (1e-6, 1e6, "µmol/L"),
    (1e-9, 1e9, "nmol/L"),
    (0.0, 1e12, "pmol/L"),
)

_QUANTITIES: Mapping[str, str] = {
    "nad_nadh_free": "free NAD⁺/NADH",
    "nadp_nadph_free": "free NADP⁺/NADPH",
    "nad_potential": "potential of NAD⁺/NADH",
    "nadp_potential": "potential of NADP⁺/NADPH",
    "adp_free": "free ADP",
    "amp_free": "free AMP",
    "phosphorylation_potential": "phosphorylation potential [ATP]/([ADP][Pi])",
    "atp_hydrolysis_delta_g": "ΔG′ of ATP hydrolysis",
    "adenylate_energy_charge": "adenylate energy charge",
    "lactate_pyruvate_ratio": "lactate/pyruvate",
    "hydroxybutyrate_acetoacetate_ratio": "3-hydroxybutyrate/acetoacetate",
}


def fixed(value: float, digits: int) -> str:
    """A number with `digits` decimals, a true minus and never “−0.0”; "" for NaN, ∞ for infinity.

    >>> fixed(-3.14159, 2), fixed(-0.004, 1), fixed(float("inf"), 1)
    ('−3.14', '0.0', '∞')
    """
    if math.isnan(value):
        return ""
    if math.isinf(value):
        return "∞" if value > 0 else f"{MINUS}∞"
    text = f"{value:.{digits}f}"
    if float(text) == 0.0:
        text = f"{0.0:.{digits}f}"
    return text.replace("-", MINUS)


def significant(value: float, digits: int = 3) -> str:
    """A positive number in plain notation with at least `digits` significant digits, trailing zeros kept.

    >>> significant(0.0312), significant(4.0), significant(1234.0)
    ('0.0312', '4.00', '1234')
    """
    if value == 0 or not math.isfinite(value):
        return fixed(value, 0)
    rounded = float(f"{value:.{digits - 1}e}")
    exponent = math.floor(math.log10(abs(rounded)))
    return fixed(value, max(digits - 1 - exponent, 0))


def power_of_ten(log10: float, digits: int = 2) -> str:
    """10^log10 as a number: plain between 0.01 and 10 000, else mantissa · power of ten; nothing overflows.

    >>> power_of_ten(503.0), power_of_ten(-4.5), power_of_ten(2.0)
    ('1.0·10⁵⁰³', '3.2·10⁻⁵', '100')
    """
    if math.isnan(log10):
        return ""
    if math.isinf(log10):
        return "∞" if log10 > 0 else "0"
    if -2 <= log10 < 4:
        return significant(10**log10, digits + 1)
    exponent = math.floor(log10)
    mantissa = f"{10 ** (log10 - exponent):.{digits - 1}f}"
    if float(mantissa) >= 10:
        exponent += 1
        mantissa = f"{1.0:.{digits - 1}f}"
    return f"{mantissa}·10{str(exponent).translate(_SUPERSCRIPT)}"


def ratio_from_ln(ln_value: float) -> str:
    """Γ or K′eq from its natural logarithm."""
    return power_of_ten(ln_value / math.log(10))


def with_sd(value: float, sd: float, digits: int = 1, *, sign: bool = True) -> str:
    """Value ± standard uncertainty, both with `digits` decimals; "" for NaN, no ± where sd is unknown."""
    if math.isnan(value):
        return ""
    shown = signed(value, digits) if sign and math.isfinite(value) else fixed(value, digits)
    return f"{shown} ± {fixed(sd, digits)}" if math.isfinite(sd) else shown


def interval(lower: float, upper: float, digits: int = 1, *, sign: bool = True) -> str:
    """A 95 % interval; an open side is told as a bound.

    >>> interval(-3.25, 1.0), interval(float("-inf"), 1.0)
    ('−3.2 to +1.0', 'at most +1.0')
    """

    return _interval(lower, upper, lambda value: signed(value, digits) if sign else fixed(value, digits))


def bounds(value: float, sd: float, lower: float, upper: float, digits: int = 1) -> str:
    """A signed value ± sd; where only a bound is known, "< …" or "> …"; "" where nothing is.

    >>> bounds(-3.14, 0.62, 0, 0), bounds(float("nan"), 0.5, float("-inf"), -8.2)
    ('−3.1 ± 0.6', '< −8.2')
    """
    if math.isfinite(value):
        return with_sd(value, sd, digits)
    if math.isinf(lower) and math.isfinite(upper):
        return f"< {signed(upper, digits)}"
    if math.isinf(upper) and math.isfinite(lower):
        return f"> {signed(lower, digits)}"
    return ""


def _interval(lower: float, upper: float, shown: Callable[[float], str]) -> str:
    if math.isnan(lower) or math.isnan(upper):
        return ""
    if math.isinf(lower) and math.isinf(upper):
        return "open on both sides"
    if math.isinf(lower):
        return f"at most {shown(upper)}"
    if math.isinf(upper):
        return f"at least {shown(lower)}"
    first, last = shown(lower), shown(upper)
    unit = last[last.index(" ") :] if " " in last else ""
    return f"{first.removesuffix(unit)} to {last}"


def concentration(mol_per_l: float, digits: int = 3) -> str:
    """A concentration with the prefix that fits; "" for NaN.

    >>> concentration(0.0052), concentration(3.1e-5), concentration(9.9996e-4)
    ('5.20 mmol/L', '31.0 µmol/L', '1.00 mmol/L')
    """
    if math.isnan(mol_per_l):
        return ""
    rounded = float(f"{mol_per_l:.{digits - 1}e}")
    for least, factor, unit in _PREFIXES:
        if rounded >= least:
            return f"{significant(rounded * factor, digits)} {unit}"
    return f"{fixed(mol_per_l, digits)} mol/L"


def relative(sd_ln: float) -> str:
    """A relative standard uncertainty in per cent; "" for NaN."""
    return "" if math.isnan(sd_ln) else f"{significant(100 * sd_ln, 2)} %"


def condition(field: str, value: float, sd: float) -> str:
    """One condition with its standard uncertainty, in the units of the reader (°C, mol/L).

    field: of thermo.conditions.FIELDS; value and sd as Conditions holds them (temperature in K).
    """
    if field == "temperature":
        return f"{fixed(value - ZERO_CELSIUS, 1)} ± {fixed(sd, 1)} °C"
    if field == "ionic_strength":
        return f"{fixed(value, 3)} ± {fixed(sd, 3)} mol/L"
    return f"{fixed(value, 2)} ± {fixed(sd, 2)}"


def state_value(value: float, unit: str) -> str:
    """A redox or energy quantity with its unit as a reader knows it."""
    if math.isnan(value):
        return ""
    if unit == "mol/L":
        return concentration(value)
    if unit == "mV":
        return f"{fixed(value, 0)} mV"
    if unit == "kJ/mol":
        return f"{fixed(value, 1)} kJ/mol"
    shown = power_of_ten(math.log10(value)) if value > 0 else fixed(value, 0)
    return shown if unit == "1" else f"{shown} {unit}"


def state_interval(lower: float, upper: float, unit: str) -> str:
    """The 95 % interval of a redox or energy quantity."""
    if unit in ("1", "L/mol", "mol/L") and lower <= 0:
        lower = -math.inf  # a positive quantity open towards zero
    return _interval(lower, upper, lambda value: state_value(value, unit))


def quantity_name(quantity: str) -> str:
    """The words for a quantity id of state.csv."""
    return _QUANTITIES.get(quantity, shown_id(quantity))


def as_sentences(parts: Iterable[str]) -> str:
    """Texts as sentences after one another, each with a capital and one full stop.

    >>> as_sentences(["free ADP is better", "Seen in vitro."])
    'Free ADP is better. Seen in vitro.'
    """
    return " ".join(f"{p[0].upper()}{p[1:].rstrip('. ')}." for p in parts if p)


def shown_id(identifier: str) -> str:
    """A catalogue id as words: `mitochondrial_matrix` → "mitochondrial matrix"."""
    return identifier.replace("_", " ")
