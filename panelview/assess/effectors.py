"""What a panel says of the known effectors of a step: consistent with, against, within, not measured."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from panelview.assess.calls import Shift
from panelview.assess.review import Review

#: Smaller changes of an effector than this are called "near the reference": 20 % covers the assay and
#: conversion errors of most panels (common practice, no source).
_LEAST_CHANGE = math.log(1.2)


@dataclass(frozen=True, slots=True)
class EffectorFinding:
    """What the panel says of one known effector: "consistent with", "against", "not measured", "within"."""

    effector: str
    effect: str
    kind: str
    tissue: str
    finding: str
    detail: str


def effector_findings(review: Review, specimen: int, column: int) -> tuple[EffectorFinding, ...]:
    """Known effectors of the column's step and whether each would go with the shift seen.

    A step held back piles up its substrates and moves forward (more negative ΔG′); so a raised
    inhibitor goes with "pushed forward", a raised activator with "pushed back".
    """
    plan = review.plans[review.plan_of[specimen]]
    ln_reference = review.reference.ln_c.get(plan.matrix)
    call = Shift(int(review.findings.shift_call[specimen, column]))
    found = []
    for effector in review.catalogue.effectors:
        if effector.step_id != review.columns[column].step.id:
            continue
        finding, detail = "not measured", ""
        if effector.metabolite_id is not None:
            k = review.concentrations.analytes.index(effector.metabolite_id)
            ln_c = float(review.concentrations.ln_c[specimen, k])
            if math.isfinite(ln_c):
                reference = float(ln_reference[k]) if ln_reference is not None else math.nan
                finding, detail = _judge(effector.effect, ln_c - reference, call)
        found.append(
            EffectorFinding(
                effector.effector, effector.effect, effector.kind, effector.tissue, finding, detail
            )
        )
    return tuple(found)


def _judge(effect: str, change: float, call: Shift) -> tuple[str, str]:
    """change: ln(c/reference) of the effector, NaN without a reference."""
    if not math.isfinite(change):
        return "not compared", "no reference value"
    detail = f"{np.exp(change):.2g} × reference"
    if abs(change) < _LEAST_CHANGE:
        return "near the reference", detail
    if call not in (Shift.PUSHED_BACK, Shift.PUSHED_FORWARD):
        return ("raised" if change > 0 else "lowered"), detail
    held = (change > 0) == (effect == "inhibits")
    agrees = held == (call == Shift.PUSHED_FORWARD)
    return ("consistent with" if agrees else "against"), detail
