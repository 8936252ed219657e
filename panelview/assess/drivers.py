"""What carries a shift: one exact, additive contribution an analyte, and one for the conditions."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.assess.review import Review
from panelview.thermo.physical import GAS_CONSTANT

Array = NDArray[np.float64]


@dataclass(frozen=True, slots=True)
class Driver:
    """Contribution of one analyte (or of "conditions") to the shift, kJ/mol; they add up to it."""

    term: str
    label: str
    contribution: float


def drivers(review: Review, specimen: int, column: int) -> tuple[Driver, ...]:
    """Contributions to the shift of a column, kJ/mol, largest first; () where there is no shift.

    ΔΔG′ = RT Σ ν ln(c/c_ref) + conditions; the last term is what remains: the change of ΔrG′° (and of RT)
    between the specimen's conditions and the reference's. c_ref is the geometric mean over the very
    controls that the shift rests on, so that the contributions add up to it exactly.
    """
    shift = review.findings.shift[specimen, column]
    if not np.isfinite(shift):
        return ()
    plan = review.plans[review.plan_of[specimen]]
    nu = plan.nu[column]
    used = np.flatnonzero(nu)
    reference = reference_ln_c(review, specimen, column)
    rt = GAS_CONSTANT * review.conditions.temperature[specimen]
    terms = rt * nu[used] * (review.concentrations.ln_c[specimen, used] - reference[used])
    made = [
        Driver(review.concentrations.analytes[a], _label(review, int(a)), float(t))
        for a, t in zip(used, terms, strict=True)
    ]
    made.sort(key=lambda d: -abs(d.contribution))
    return (*made, Driver("conditions", "conditions", float(shift - terms.sum())))


def reference_ln_c(review: Review, specimen: int, column: int) -> Array:
    """Geometric mean of the reference's concentrations for one column, [analyte], NaN where unknown."""
    plan = review.plans[review.plan_of[specimen]]
    nothing = np.full(len(review.concentrations.analytes), np.nan)
    if plan.matrix not in review.reference.members:
        return np.asarray(review.reference.ln_c.get(plan.matrix, nothing))
    values, index = review.reference.members[plan.matrix]
    used = np.flatnonzero(plan.nu[column])
    counted = np.isfinite(values[:, used]).all(axis=1) & (index != specimen)
    if counted.any():
        nothing[used] = values[np.ix_(counted, used)].mean(axis=0)
    return nothing


def _label(review: Review, analyte: int) -> str:
    return review.catalogue.metabolites[review.concentrations.analytes[analyte]].symbol
