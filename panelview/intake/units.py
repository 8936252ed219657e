"""Units as laboratories write them: UCUM codes and the trade's spellings, with the basis kept.

A closed grammar: what it does not know is refused, never guessed. The basis (per litre, per kg wet or dry,
per kg protein or haemoglobin, per 10⁹ cells) is part of the meaning and is never dropped.
"""

from __future__ import annotations

import functools
import re
import unicodedata
from dataclasses import dataclass

#: Basis of an amount per mass where wet or dry is not said; the matrix's usual basis is then assumed.
MASS_UNSTATED = "kg_unstated"

_PREFIX = {"": 0, "k": 3, "d": -1, "c": -2, "m": -3, "u": -6, "n": -9, "p": -12, "f": -15}

#: Words behind a volume: red cells as such, or the water of the pool.
_CELL_VOLUME = r"(?:packed)?(?:red)?(?:rbcs?|cells?|erythrocytes?|ery|redcells?|rcs?|cellvolume)"
_PLAIN_VOLUME = (
    r"(?:plasma|serum|blood|wholeblood|csf|fluid|cellwater|icw|intracellularwater|water|poolwater)?"
)
_MASS_BASES = (
    (r"(?:ww|wwt|wet|wetwt|wetweight|wettissue|freshweight|fw)", "kg_wet"),
    (r"(?:dw|dwt|dry|drywt|dryweight|drymuscle|drytissue|dm|dryw)", "kg_dry"),
    (r"(?:prot|protein|proteins|cellprotein|totalprotein)", "kg_protein"),
    (r"(?:hb|hgb|haemoglobin|hemoglobin)", "kg_haemoglobin"),
    (r"(?:tissue)?", MASS_UNSTATED),
)
_AMOUNT = re.compile(r"([kmunpf]?)(mols?|moles?|g|grams?|M)\Z")
_VOLUME = re.compile(r"(?:(100))?([dcmun]?)l(.*)\Z", re.IGNORECASE)
_MASS = re.compile(r"(?:(100))?([kmun]?)g(.*)\Z")
_CELLS = re.compile(
    r"(?:10(?:\^|\*\*|\*|e)?(6|9)|1e0?(6|9)|(million|billion)|(mio|mrd))(?:x)?(?:rbcs?|cells?|platelets?)?\Z"
)

#: What cannot be an amount, and why it is refused.
_NO_AMOUNT = (
    (r"%|percent|pct", "a percentage is no concentration", "export the concentrations behind it"),
    (
        r"a\.?u\.?|arb.*|area|peakarea.*|counts?|intensit.*|response.*|cps",
        "a peak area or intensity is no concentration",
        "export calibrated concentrations",
    ),
    (
        r"ratio|1|fold|rel.*|foldchange|log2.*|zscore|z",
        "a ratio is no concentration",
        "export the concentrations behind it",
    ),
    (
        r"[mku]?iu(/.*)?|u/.*|[mu]?kat(/.*)?|eu/.*",
        "an enzyme activity is no concentration",
        "leave enzyme activities out of the panel",
    ),
    (r"mg%", "mg% may mean mg/dL", "write mg/dL if that is meant"),
)


@dataclass(frozen=True, slots=True)
class Unit:
    """One unit: a value times `factor` is mol (or g where `is_mass`) per unit of `basis`.

    basis: of catalogue.matrices.Conversion, or MASS_UNSTATED; per_billion for cells is folded into factor.
    """

    factor: float
    is_mass: bool
    basis: str


class UnknownUnit(ValueError):
    """A unit that cannot be used: `what` is wrong and the `remedy`."""

    def __init__(self, text: str, what: str, remedy: str) -> None:
        super().__init__(text, what, remedy)
        self.text = text
        self.what = what
        self.remedy = remedy


@functools.lru_cache(maxsize=4096)
def read_unit(text: str) -> Unit:
    """Understand a unit. Raises UnknownUnit.

    >>> read_unit("umol/L")
    Unit(factor=1e-06, is_mass=False, basis='litre')
    >>> read_unit("nmol/mL RBC").basis
    'litre_cells'
    """
    plain = _plain(text)
    if not plain:
        raise UnknownUnit(text, "no unit is given", "add it in the heading, a units row or a unit column")
    for pattern, what, remedy in _NO_AMOUNT:
        if re.fullmatch(pattern, plain, re.IGNORECASE):
            raise UnknownUnit(text, f"“{text.strip()}”: {what}", remedy)
    numerator, slash, denominator = plain.partition("/")
    amount = _AMOUNT.match(numerator)
    if amount is None:
        raise _unknown(text)
    exponent = _PREFIX[amount[1]]
    is_mass = amount[2].startswith("g")
    if amount[2] == "M":
        if slash:
            raise _unknown(text)
        return Unit(_power(exponent), False, "litre")
    if not slash:
        raise _unknown(text)
    per, basis = _denominator(denominator, text)
    return Unit(_power(exponent + per), is_mass, basis)


def _power(exponent: int) -> float:
    return float(f"1e{exponent}")


def _unknown(text: str) -> UnknownUnit:
    return UnknownUnit(
        text,
        f"the unit “{text.strip()}” is not known",
        "write it as mmol/L, µmol/L, mg/dL, µmol/g wet weight …",
    )


def _plain(text: str) -> str:
    """One spelling: micro as u, no blanks, braces and brackets off, powers as a slash."""
    made = unicodedata.normalize("NFKC", text.replace("⁻", "-")).replace("−", "-").replace("μ", "u")
    made = re.sub(r"\s*(?:\bper\b)\s*", "/", made.strip(), flags=re.IGNORECASE)
    made = re.sub(r"[·.\s]*([dcmun]?[lLgG]|kg)\s*\^?-1", r"/\1", made)
    made = re.sub(r"mcmol|micromol", "umol", made, flags=re.IGNORECASE)
    made = re.sub(r"millimol", "mmol", made, flags=re.IGNORECASE)
    made = re.sub(r"nanomol", "nmol", made, flags=re.IGNORECASE)
    return re.sub(r"[\s_{}\[\]()'-]", "", made)


def _denominator(text: str, whole: str) -> tuple[int, str]:
    """Power of ten and basis: mL → (3, litre); mg protein → (6, kg_protein)."""
    cells = _CELLS.match(text.lower())
    if cells:
        is_million = "6" in (cells[1], cells[2]) or cells[3] == "million" or cells[4] == "mio"
        return (3 if is_million else 0), "billion_cells"
    volume = _VOLUME.match(text)
    if volume:
        rest = volume[3].lower()
        for pattern, basis in ((_PLAIN_VOLUME, "litre"), (_CELL_VOLUME, "litre_cells")):
            if re.fullmatch(pattern, rest):
                return -_PREFIX[volume[2].lower()] - (2 if volume[1] else 0), basis
    mass = _MASS.match(text)
    if mass:
        for pattern, basis in _MASS_BASES:
            if re.fullmatch(pattern, mass[3].lower()):
                return 3 - _PREFIX[mass[2]] - (2 if mass[1] else 0), basis
    raise _unknown(whole)
