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

#: No unit is written with more characters.
_LONGEST = 60

_PREFIX = {"": 0, "k": 3, "d": -1, "c": -2, "m": -3, "u": -6, "n": -9, "p": -12, "f": -15}

#: Words behind a volume, the basis they mean, and the matrix that they name ("" where they name none).
_VOLUMES = (
    (r"(?:fluid|cellwater|icw|intracellularwater|water|poolwater)?", "litre", ""),
    (r"(?:blood)?plasma|serum", "litre", "plasma"),
    (r"(?:whole)?blood|wb", "litre", "whole_blood"),
    (r"csf", "litre", "csf"),
    (r"urine", "litre", "urine"),
    (r"(?:packed)?(?:red)?(?:rbcs?|(?:blood)?cells?|erythrocytes?|ery|rcs?|cellvolume)", "litre_cells", ""),
)
_MASSES = (
    (r"(?:ww|wwt|wet|wetwt|wetweight|wettissue|wettissueweight|freshweight|fw)", "kg_wet"),
    (r"(?:dw|dwt|dry|drywt|dryweight|drymuscle|drytissue|dm|dryw)", "kg_dry"),
    (r"(?:prot|protein|proteins|cellprotein|totalprotein)", "kg_protein"),
    (r"(?:hb|hgb|haemoglobin|hemoglobin)", "kg_haemoglobin"),
    (r"(?:tissue)?", MASS_UNSTATED),
)
_AMOUNT = re.compile(r"(?:([munpf]?)(mol|mols|mole|moles|Mol|gram|grams|g|M)|(kg))\Z")
_VOLUME = re.compile(r"(100)?([dcmun]?)[lL]([A-Za-z]*)\Z")
_MASS = re.compile(r"(100)?([kmun]?)g([A-Za-z]*)\Z")
_CELLS = re.compile(
    r"(?:10(?:\^|\*\*|\*)?([69])|1e0?([69])|(million|billion|mio|mrd)\.?)x?(?:rbcs?|cells?|platelets?)?\Z"
)

#: What cannot be a concentration, and why it is refused.
_NO_AMOUNT = (
    (r"mg%", "mg% may mean mg/dL", "write mg/dL if that is meant"),
    (r"[a-z.]*%|percent|pct", "a percentage is no concentration", "export the concentrations behind it"),
    (
        r"a\.?u\.?|arb.*|(?:peak)?area.*|counts?|intensit.*|response.*|cps",
        "a peak area or intensity is no concentration",
        "export calibrated concentrations",
    ),
    (
        r"ratio|1|(?:fold|rel|log2|log10|zscore|ratio).*|z",
        "a ratio is no concentration",
        "export the concentrations behind it",
    ),
    (
        r"[mku]?iu(?:/.*)?|[mku]?u/.*|[munp]?kat(?:/.*)?|eu/.*",
        "an enzyme activity is no concentration",
        "leave enzyme activities out of the panel",
    ),
    (
        r".*/.*creat.*",
        "an amount per creatinine is no concentration",
        "export the concentrations per litre",
    ),
    (r".*/(?:s|sec|min|h|hr|hour|d|day|24h)(?:/.*)?", "a rate is no concentration", "leave rates out of the panel"),
    (r"m?eq/.*|m?val/.*", "an equivalent is no amount of substance", "write it in mmol"),
    (r".*/10e[69].*", "10e6 may mean 10⁶ or 10⁷", "write 10^6 or 1e6 as meant"),
)


@dataclass(frozen=True, slots=True)
class Unit:
    """One unit: a value times 10^exponent is mol (or g where `is_mass`) per unit of `basis`.

    basis: of catalogue.matrices.Conversion, or MASS_UNSTATED; matrix: id of the matrix that the unit's own
    words name (per litre of blood), "" where they name none.
    """

    exponent: int
    is_mass: bool
    basis: str
    matrix: str = ""


class UnknownUnit(ValueError):
    """A unit that cannot be used: `what` is wrong and the `remedy`; `is_known`: refused for what it means."""

    def __init__(self, text: str, what: str, remedy: str, *, is_known: bool = False) -> None:
        super().__init__(text, what, remedy)
        self.text = text
        self.what = what
        self.remedy = remedy
        self.is_known = is_known


@functools.lru_cache(maxsize=4096)
def read_unit(text: str) -> Unit:
    """Understand a unit. Raises UnknownUnit.

    >>> read_unit("umol/L")
    Unit(exponent=-6, is_mass=False, basis='litre', matrix='')
    >>> read_unit("nmol/mL RBC").basis
    'litre_cells'
    """
    if len(text) > _LONGEST:
        raise _unknown(text)
    plain = _plain(text)
    if not plain:
        raise UnknownUnit(text, "no unit is given", "add it in the heading, a units row or a unit column")
    for pattern, what, remedy in _NO_AMOUNT:
        if re.fullmatch(pattern, plain, re.IGNORECASE):
            raise UnknownUnit(text, f"“{text.strip()}”: {what}", remedy, is_known=True)
    numerator, slash, denominator = plain.partition("/")
    amount = _AMOUNT.match(numerator)
    if amount is None:
        raise _unknown(text)
    exponent = 3 if amount[3] else _PREFIX[amount[1]]
    if amount[2] == "M":
        if slash:
            raise _unknown(text)
        return Unit(exponent, False, "litre")
    if not slash:
        raise _unknown(text)
    per, basis, matrix = _denominator(denominator, text)
    is_mass = amount[3] is not None or amount[2].startswith("g")
    return Unit(exponent + per, is_mass, basis, matrix)


def is_unit(text: str) -> bool:
    """Whether the text is a unit, be it one that is refused for what it means."""
    try:
        read_unit(text)
    except UnknownUnit as error:
        return error.is_known
    return True


def _unknown(text: str) -> UnknownUnit:
    what = f"the unit “{text.strip()}” is not known" if len(text) <= _LONGEST else "this unit is not known"
    return UnknownUnit(text, what, "write it as mmol/L, µmol/L, mg/dL, µmol/g wet weight …")


def _plain(text: str) -> str:
    """One spelling: micro as u, no blanks, braces and brackets off, powers as a slash."""
    made = unicodedata.normalize("NFKC", text.replace("⁻", "-")).replace("−", "-").replace("μ", "u").strip()
    if re.fullmatch(r"[MUNP]?(?:MOL|G)/[DMU]?L", made):  # UCUM's case-insensitive codes
        made = made.replace("MOL", "mol").replace("L", "l").lower()
    made = re.sub(r"\s*\bper\b\s*", "/", made, flags=re.IGNORECASE)
    made = re.sub(r"[·.\s]*([dcmun]?[lL]|[kmun]?g)\s*\^?-1", r"/\1", made)
    made = re.sub(r"mcmol|micromol", "umol", made, flags=re.IGNORECASE)
    made = re.sub(r"lit(?:re|er)s?", "L", made, flags=re.IGNORECASE)
    made = re.sub(r"millimol", "mmol", made, flags=re.IGNORECASE)
    made = re.sub(r"nanomol", "nmol", made, flags=re.IGNORECASE)
    made = re.sub(r"\bmcg\b", "ug", made)
    return re.sub(r"[\s_{}\[\]()'-]", "", made)


def _denominator(text: str, whole: str) -> tuple[int, str, str]:
    """Power of ten, basis and named matrix: mL → (3, litre, ""); mg protein → (3 + 3, kg_protein, "")."""
    cells = _CELLS.match(text.lower())
    if cells:
        is_million = "6" in (cells[1], cells[2]) or cells[3] in ("million", "mio")
        return (3 if is_million else 0), "billion_cells", ""
    volume = _VOLUME.match(text)
    if volume:
        for pattern, basis, matrix in _VOLUMES:
            if re.fullmatch(pattern, volume[3].lower()):
                return -_PREFIX[volume[2]] - (2 if volume[1] else 0), basis, matrix
    mass = _MASS.match(text)
    if mass:
        for pattern, basis in _MASSES:
            if re.fullmatch(pattern, mass[3].lower()):
                return 3 - _PREFIX[mass[2]] - (2 if mass[1] else 0), basis, ""
    raise _unknown(whole)
