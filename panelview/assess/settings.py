"""What the reviewer chose: conditions, reference, free ratios, own constants, the floor of a highlight."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

from panelview.assess.calls import SHIFT_FLOOR
from panelview.catalogue.constants import OwnConstant
from panelview.intake.panel import Panel


@dataclass(frozen=True, slots=True)
class ConditionChoice:
    """A condition chosen in place of the file's or the matrix's; None leaves that part as it was.

    value, sd: in the units of thermo.conditions; origin: one of the ORIGIN_ words of review.py.
    """

    value: float | None
    sd: float | None
    origin: str


@dataclass(frozen=True, slots=True)
class FreeRatio:
    """A free cofactor ratio of the reviewer's own, oxidised over reduced.

    value: > 0; sd_ln: standard uncertainty of its logarithm (0 where none was stated).
    """

    value: float
    sd_ln: float = 0.0
    source: str = "set by the reviewer"


@dataclass(frozen=True, slots=True)
class ReferenceChoice:
    """Which controls to compare with.

    kind: "auto" (a control group in the study, else published values), "group", "file", "published" or
    "none"; name: of the group or file; panel: the controls, for "file".
    """

    kind: str = "auto"
    name: str = ""
    panel: Panel | None = None


@dataclass(frozen=True)
class Settings:
    """All choices of one review.

    conditions: field → choice for all specimens; specimen_conditions: specimen code → field → choice,
    going before it; free_ratios: pool id (catalogue.couples.RATIO_POOLS) → ratio; own_constants: step
    id → constant; shift_floor: kJ/mol.
    """

    conditions: Mapping[str, ConditionChoice] = field(default_factory=dict)
    specimen_conditions: Mapping[str, Mapping[str, ConditionChoice]] = field(default_factory=dict)
    reference: ReferenceChoice = ReferenceChoice()
    free_ratios: Mapping[str, FreeRatio] = field(default_factory=dict)
    own_constants: Mapping[str, OwnConstant] = field(default_factory=dict)
    shift_floor: float = SHIFT_FLOOR


class UnknownReference(ValueError):
    """The chosen reference group does not exist in the panel; `name` and the `known` groups."""

    def __init__(self, name: str, known: tuple[str, ...]) -> None:
        super().__init__(name, known)
        self.name = name
        self.known = known

    def __str__(self) -> str:
        known = ", ".join(self.known) if self.known else "none"
        return f"no specimen belongs to the group “{self.name}” (groups in the file: {known})"
