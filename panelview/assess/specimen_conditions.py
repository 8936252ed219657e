"""The conditions of each specimen, and where each value came from."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from panelview.assess.review import (
    ORIGIN_DEFAULT,
    ORIGIN_FILE,
    ORIGIN_UNSTATED,
)
from panelview.assess.settings import ConditionChoice, Settings
from panelview.catalogue.matrices import Matrix
from panelview.intake.panel import SpecimenFacts
from panelview.thermo.conditions import FIELDS, Conditions

#: Used where the matrix of a specimen is not stated: the conditions to which biochemical constants are
#: customarily referred, with uncertainties wide enough for any cell (common practice, no source).
UNSTATED: dict[str, tuple[float, float]] = {
    "ph": (7.0, 0.2),
    "temperature": (310.15, 0.5),
    "ionic_strength": (0.25, 0.05),
    "pmg": (3.0, 0.3),
}


def resolve_conditions(
    specimens: Sequence[SpecimenFacts], matrices: Mapping[str, Matrix], settings: Settings
) -> tuple[Conditions, dict[str, tuple[str, ...]]]:
    """Conditions of every specimen and, by field, the origin of every value.

    A choice for the specimen goes before a choice for all, that before the file, that before the
    default of the matrix. Where only a value is given, the uncertainty stays the matrix's.
    Raises OutOfModelRange.
    """
    numbers = np.empty((2 * len(FIELDS), len(specimens)))
    origins: list[tuple[str, ...]] = []
    # Most specimens of a study share everything that matters here, so each distinct case is resolved once.
    resolved: dict[tuple[object, ...], tuple[list[float], tuple[str, ...]]] = {}
    for i, facts in enumerate(specimens):
        own = settings.specimen_conditions.get(facts.code)
        key = (facts.matrix, facts.ph, facts.temperature, facts.ionic_strength, facts.pmg, facts.code if own else "")
        if key not in resolved:
            resolved[key] = _resolve(facts, matrices.get(facts.matrix), own or {}, settings)
        numbers[:, i], origin = resolved[key]
        origins.append(origin)
    names = [*FIELDS, *(f"{field}_sd" for field in FIELDS)]
    words = zip(*origins, strict=True) if origins else ((),) * len(FIELDS)
    return Conditions.of(**dict(zip(names, numbers, strict=True))), dict(zip(FIELDS, words, strict=True))


def _resolve(
    facts: SpecimenFacts, matrix: Matrix | None, own: Mapping[str, ConditionChoice], settings: Settings
) -> tuple[list[float], tuple[str, ...]]:
    """Values, then standard uncertainties of all conditions of one specimen, and the values' origins."""
    found = [_one(field, facts, matrix, [own.get(field), settings.conditions.get(field)]) for field in FIELDS]
    values, spreads, origins = zip(*found, strict=True)
    return [*values, *spreads], origins


def _one(
    field: str, facts: SpecimenFacts, matrix: Matrix | None, choices: list[ConditionChoice | None]
) -> tuple[float, float, str]:
    """Value, standard uncertainty and origin of one condition of one specimen."""
    if matrix is None:
        value, sd = UNSTATED[field]
        origin = ORIGIN_UNSTATED
    else:
        value, sd = getattr(matrix, field), getattr(matrix, f"{field}_sd")
        origin = ORIGIN_DEFAULT
    stated = getattr(facts, field)
    if stated is not None:
        value, origin = stated, ORIGIN_FILE
    for choice in reversed(choices):
        if choice is None:
            continue
        if choice.value is not None:
            value, origin = choice.value, choice.origin
        if choice.sd is not None:
            sd = choice.sd
    return value, sd, origin
