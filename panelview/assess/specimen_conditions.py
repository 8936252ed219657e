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
    values = {name: np.empty(len(specimens)) for field in FIELDS for name in (field, f"{field}_sd")}
    origins: dict[str, list[str]] = {field: [] for field in FIELDS}
    for i, facts in enumerate(specimens):
        own = settings.specimen_conditions.get(facts.code, {})
        for field in FIELDS:
            choices = [own.get(field), settings.conditions.get(field)]
            value, sd, origin = _one(field, facts, matrices.get(facts.matrix), choices)
            values[field][i] = value
            values[f"{field}_sd"][i] = sd
            origins[field].append(origin)
    return Conditions.of(**values), {field: tuple(words) for field, words in origins.items()}


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
