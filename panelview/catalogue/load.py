"""resources/ → Catalogue: every row checked, errors with file, row and column."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from panelview.catalogue.constants import ConstantSet
from panelview.catalogue.couples import IndicatorCouple
from panelview.catalogue.effectors import Effector, Regulation
from panelview.catalogue.matrices import Applicability, Conversion, Matrix
from panelview.catalogue.measurements import MeasuredConstant
from panelview.catalogue.metabolites import KnownAnalyte, Metabolite, Name
from panelview.catalogue.published import PublishedConcentration
from panelview.catalogue.steps import Step


@dataclass(frozen=True)
class Catalogue:
    """All that is known, immutable. `version` and `sha256` identify the data files it was read from."""

    version: str
    sha256: str
    metabolites: Mapping[str, Metabolite]
    names: tuple[Name, ...]
    known_analytes: tuple[KnownAnalyte, ...]
    steps: tuple[Step, ...]
    constants: ConstantSet
    measurements: tuple[MeasuredConstant, ...]
    matrices: Mapping[str, Matrix]
    conversions: Mapping[tuple[str, str], Conversion]
    applicability: Mapping[tuple[str, str], Applicability]
    effectors: tuple[Effector, ...]
    regulation: tuple[Regulation, ...]
    couples: tuple[IndicatorCouple, ...]
    published: tuple[PublishedConcentration, ...]
