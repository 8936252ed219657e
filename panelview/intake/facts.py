"""What the words of a metadata cell say: matrix, conditions; and what cannot be used of them."""

from __future__ import annotations

import math
import re
from dataclasses import dataclass

from panelview.catalogue.load import Catalogue
from panelview.intake.decimal_marks import Mark, Marks
from panelview.intake.panel import State
from panelview.intake.values import read_value
from panelview.thermo.conditions import LIMITS, OutOfModelRange
from panelview.thermo.physical import ZERO_CELSIUS

#: Usual words for a matrix (common practice, no source), without case, blanks and punctuation.
_SAME_AS = {
    "erythrocyte": "erythrocyte erythrocytes redcell redcells redbloodcell redbloodcells rbc rbcs packedcells "
    "packedredcells ery erys erythrozyten érythrocytes",
    "whole_blood": "wholeblood blood vollblut wb",
    "plasma": "plasma bloodplasma",
    "csf": "csf liquor cerebrospinalfluid",
    "urine": "urine urin",
    "skeletal_muscle": "skeletalmuscle muscle musclebiopsy skeletalmusclebiopsy muskel",
    "heart": "heart myocardium heartmuscle herz",
    "liver": "liver liverbiopsy leber",
    "brain_tissue": "braintissue brain",
    "platelet_or_pbmc": "plateletorpbmc platelet platelets pbmc pbmcs thrombocytes",
    "cultured_cells": "culturedcells cells cellculture",
}

#: Words for something that is read as this matrix though it is not quite the same: worth a word to the reader.
_READ_AS = {
    "plasma": "serum heparinplasma edtaplasma fluorideplasma serumplasma plasmaserum",
    "whole_blood": "deproteinisedblood deproteinizedblood capillaryblood",
    "platelet_or_pbmc": "lymphocyte lymphocytes leukocytes leucocytes",
    "cultured_cells": "fibroblast fibroblasts skinfibroblast skinfibroblasts myoblasts myotubes lymphoblasts",
}
#: Words that say no more than “a specimen” (exports of instruments).
_NO_MATRIX = frozenset("na|nan|none|null|unknown|unk|sample|specimen|studysample|notstated".split("|"))
_MATRIX_OF = {
    word: matrix for table in (_SAME_AS, _READ_AS) for matrix, words in table.items() for word in words.split()
}
_IS_LIKE = frozenset(word for words in _READ_AS.values() for word in words.split())

_UNIT_BEHIND = {
    "ph": r"",
    "temperature": r"\s*(?:°\s*)?C",
    "ionic_strength": r"\s*(?:mol/[lL]|M)",
    "pmg": r"",
}


class UnreadableFact(ValueError):
    """A metadata cell that cannot be used: `what` is wrong and the `remedy`."""

    def __init__(self, what: str, remedy: str) -> None:
        super().__init__(what, remedy)
        self.what = what
        self.remedy = remedy


@dataclass(frozen=True, slots=True)
class MatrixWord:
    """The matrix that a word means; is_like: whether the word means something that is only read as it."""

    matrix: str
    is_like: bool = False


def matrix_of(text: str, catalogue: Catalogue) -> MatrixWord:
    """The matrix a word means; "" for a blank cell. Raises UnreadableFact."""
    word = re.sub(r"[\s_\-/().,]", "", text.strip().casefold())
    if not word or word in _NO_MATRIX:
        return MatrixWord("")
    if text.strip() in catalogue.matrices:
        return MatrixWord(text.strip())
    matrix = _MATRIX_OF.get(word, "")
    if matrix not in catalogue.matrices:
        shown = text.strip()[:40]
        known = ", ".join(catalogue.matrices)
        raise UnreadableFact(f"the matrix “{shown}” is not known", f"write one of {known}")
    return MatrixWord(matrix, word in _IS_LIKE)


def condition_of(field: str, text: str) -> float | None:
    """A condition from a cell (temperature from °C to K); None for a blank cell. Raises UnreadableFact.

    Conditions are small numbers, so a single comma is a decimal comma whatever the file's values use.
    """
    plain = re.sub(rf"{_UNIT_BEHIND[field]}\Z", "", text.strip())
    is_zero = re.fullmatch(r"0+(?:[.,]0*)?", plain) is not None
    found = read_value(plain, Marks(Mark.COMMA if "," in plain and "." not in plain else Mark.POINT))
    if found.state is State.MISSING:
        return None
    if is_zero:
        value = 0.0
    elif found.state is State.MEASURED and not found.flag:
        value = found.number
    else:
        value = _negative(plain)
    if not math.isfinite(value):
        raise UnreadableFact(f"“{text.strip()[:40]}” is not a number", "correct the cell or leave it blank")
    if field == "temperature":
        value += ZERO_CELSIUS
    lower, upper = LIMITS[field]
    if not lower - 1e-9 <= value <= upper + 1e-9:
        problem = OutOfModelRange(field, value, lower, upper)
        raise UnreadableFact(str(problem), "correct it, or leave it blank to take the matrix's default")
    return value


def _negative(plain: str) -> float:
    """A negative number, which is out of range and shall be told as that; NaN for what is no number."""
    text = plain.replace("−", "-").replace(",", ".")
    return float(text) if re.fullmatch(r"-[0-9]{1,9}(?:\.[0-9]{0,9})?", text) else math.nan
