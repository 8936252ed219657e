"""Specimen facts: matrix words, conditions, and what contradicts itself."""

from __future__ import annotations

import math
import re
from collections.abc import Mapping

from panelview.catalogue.load import Catalogue
from panelview.thermo.conditions import LIMITS, OutOfModelRange
from panelview.thermo.physical import ZERO_CELSIUS

#: Usual words for a matrix (common practice, no source), without case, blanks, hyphens and underscores.
_MATRIX_WORDS = {
    "erythrocyte": "erythrocyte erythrocytes redcell redcells redbloodcell redbloodcells rbc rbcs packedcells "
    "packedredcells ery erythrozyten érythrocytes",
    "whole_blood": "wholeblood blood vollblut deproteinisedblood deproteinizedblood",
    "plasma": "plasma serum bloodplasma heparinplasma edtaplasma serumplasma plasmaserum",
    "csf": "csf liquor cerebrospinalfluid",
    "urine": "urine urin",
    "skeletal_muscle": "skeletalmuscle muscle musclebiopsy skeletalmusclebiopsy muskel",
    "heart": "heart myocardium heartmuscle",
    "liver": "liver liverbiopsy leber",
    "brain_tissue": "braintissue brain",
    "platelet_or_pbmc": "plateletorpbmc platelet platelets pbmc pbmcs lymphocytes thrombocytes",
    "cultured_cells": "culturedcells cells fibroblast fibroblasts cellculture skinfibroblasts myotubes",
}
_MATRIX_OF = {word: matrix for matrix, words in _MATRIX_WORDS.items() for word in words.split()}


class UnreadableFact(ValueError):
    """A metadata cell that cannot be used: `what` is wrong and the `remedy`."""

    def __init__(self, what: str, remedy: str) -> None:
        super().__init__(what, remedy)
        self.what = what
        self.remedy = remedy


def matrix_of(text: str, catalogue: Catalogue) -> str:
    """Matrix id of a word; "" for a blank cell. Raises UnreadableFact."""
    word = re.sub(r"[\s_\-/().,]", "", text.strip().casefold())
    if not word:
        return ""
    if text.strip() in catalogue.matrices:
        return text.strip()
    matrix = _MATRIX_OF.get(word, "")
    if matrix not in catalogue.matrices:
        known = ", ".join(catalogue.matrices)
        raise UnreadableFact(f"the matrix “{text.strip()}” is not known", f"write one of {known}")
    return matrix


def condition_of(field: str, text: str) -> float | None:
    """A condition from a cell (temperature from °C to K); None for a blank cell. Raises UnreadableFact."""
    plain = text.strip().replace("−", "-")
    if not plain or plain.casefold() in ("na", "n/a", "nan"):
        return None
    plain = re.sub(r"\s*(?:°\s*)?C\Z|\s*mol/L\Z|\s*M\Z", "", plain)
    if "," in plain and "." not in plain:
        plain = plain.replace(",", ".")
    try:
        value = float(plain)
    except ValueError:
        value = math.nan
    if not math.isfinite(value):
        raise UnreadableFact(f"“{text.strip()}” is not a number", "correct the cell or leave it blank")
    if field == "temperature":
        value += ZERO_CELSIUS
    lower, upper = LIMITS[field]
    if not lower <= value <= upper:
        problem = OutOfModelRange(field, value, lower, upper)
        raise UnreadableFact(str(problem), "correct it, or leave it blank to take the matrix's default")
    return value


def disagreement(first: Mapping[str, object], later: Mapping[str, object]) -> str:
    """The first field in which two rows of one specimen contradict each other; "" where they agree."""
    for field, value in later.items():
        known = first.get(field)
        if value not in (None, "") and known not in (None, "") and value != known:
            return field
    return ""
