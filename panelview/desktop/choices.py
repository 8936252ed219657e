"""The reviewer's edits as functions on Settings: each takes settings and gives new ones back."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

from panelview.assess.review import ORIGIN_REVIEWER
from panelview.assess.settings import ConditionChoice, FreeRatio, ReferenceChoice, Settings


def with_condition(
    settings: Settings, field: str, value: float | None, sd: float | None, specimen: str | None
) -> Settings:
    """Choose a condition (units of thermo.conditions) for one specimen, or for all where specimen is None.

    None for value or sd leaves that part as chosen before. A choice for all goes in place of what had
    been chosen for single specimens.
    """
    if specimen is None:
        earlier = settings.conditions.get(field)
        chosen = {**settings.conditions, field: _merged(earlier, value, sd)}
        single = {code: _without(own, field) for code, own in settings.specimen_conditions.items()}
        return replace(settings, conditions=chosen, specimen_conditions={c: own for c, own in single.items() if own})
    own = settings.specimen_conditions.get(specimen, {})
    changed = {**own, field: _merged(own.get(field), value, sd)}
    return replace(settings, specimen_conditions={**settings.specimen_conditions, specimen: changed})


def without_conditions(settings: Settings, start: Settings) -> Settings:
    """All conditions as they were at the start."""
    return replace(settings, conditions=start.conditions, specimen_conditions=start.specimen_conditions)


def with_free_ratio(settings: Settings, pool: str, value: float, sd_ln: float = 0.0) -> Settings:
    """Set a free cofactor ratio (oxidised over reduced, > 0) in place of what the couples say."""
    return replace(settings, free_ratios={**settings.free_ratios, pool: FreeRatio(value, sd_ln)})


def without_free_ratio(settings: Settings, start: Settings, pool: str) -> Settings:
    """The pool's ratio as it was at the start."""
    ratios = {k: v for k, v in settings.free_ratios.items() if k != pool}
    if pool in start.free_ratios:
        ratios[pool] = start.free_ratios[pool]
    return replace(settings, free_ratios=ratios)


def with_shift_floor(settings: Settings, floor: float) -> Settings:
    """Smallest shift that is highlighted, kJ/mol."""
    return replace(settings, shift_floor=floor)


def with_reference(settings: Settings, reference: ReferenceChoice) -> Settings:
    """Compare with other controls, with published values or with nothing."""
    return replace(settings, reference=reference)


def is_changed(settings: Settings, start: Settings) -> bool:
    """Whether the reviewer has changed anything that "reset" would undo."""
    return settings != start


def _merged(earlier: ConditionChoice | None, value: float | None, sd: float | None) -> ConditionChoice:
    if earlier is not None:
        value = earlier.value if value is None else value
        sd = earlier.sd if sd is None else sd
    return ConditionChoice(value, sd, ORIGIN_REVIEWER)


def _without(choices: Mapping[str, ConditionChoice], field: str) -> dict[str, ConditionChoice]:
    return {k: v for k, v in choices.items() if k != field}
