"""Mass-action ratios and ΔG′ of all columns for specimens that share one plan."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.assess.plan import Plan
from panelview.assess.review import Concentrations
from panelview.catalogue.constants import ConstantSet, StepConstants
from panelview.thermo.conditions import FIELDS, Conditions
from panelview.thermo.physical import GAS_CONSTANT

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]


@dataclass(frozen=True)
class ConditionConstants:
    """Step constants at the distinct conditions of a study.

    steps: at the distinct conditions; row[specimen]: index into them; rt[specimen]: kJ/mol.
    """

    steps: StepConstants
    sd: Array
    row: NDArray[np.intp]
    rt: Array

    @classmethod
    def of(cls, constants: ConstantSet, conditions: Conditions) -> ConditionConstants:
        """Evaluate every step once for each distinct set of conditions."""
        values = np.stack(
            [getattr(conditions, f) for f in FIELDS] + [getattr(conditions, f"{f}_sd") for f in FIELDS]
        ).T
        distinct, first, row = np.unique(values, axis=0, return_index=True, return_inverse=True)
        return cls(
            steps=constants.at(conditions[first]),
            sd=distinct[:, len(FIELDS) :],
            row=row.reshape(-1),
            rt=GAS_CONSTANT * conditions.temperature,
        )


@dataclass(frozen=True)
class MassAction:
    """Γ and ΔG′ of a plan's active columns; arrays are [specimen, active column], energies kJ/mol.

    active: indices of the columns evaluated. delta_g and ln_gamma stand at the limit where a value is
    censored; open_below, open_above: ΔG′ may lie anywhere under (over) it. compared: ΔG′ with unknown
    constants taken as zero, so that differences between specimens stand where ΔG′ itself is unknown;
    constant_total: the part of it that comes from constants. assay_sd: the part of the
    uncertainty that concentrations and factors bring; sd: all of it. missing: some reactant has no
    value. Defining columns have the measured pair only in ln_gamma, so their delta_g is no ΔG′ of the step.
    """

    active: NDArray[np.intp]
    ln_gamma: Array
    delta_g: Array
    compared: Array
    constant_total: Array
    sd: Array
    assay_sd: Array
    missing: Flags
    open_below: Flags
    open_above: Flags


def evaluate(
    plan: Plan,
    used: Concentrations,
    rows: NDArray[np.intp],
    constants: ConditionConstants,
    active: NDArray[np.intp] | None = None,
) -> MassAction:
    """Γ and ΔG′ = Σ combination·ΔrG′° + RT (ν·ln c + offset) of the rows (specimens) given.

    Var(ΔG′) = Var(constants) + (RT)² (ν² σ² + Σ_factor (ν σ_f)²) + Σ_k (∂ΔrG′°/∂k)² σ_k²
    with k = pH, T, I, pMg (method of propagation: GUM, JCGM 100:2008). Without `active`, the columns
    for which at least one of the specimens could have all reactants are evaluated.
    """
    ln_c = used.ln_c[rows]
    is_missing = np.isnan(ln_c)
    if active is None:
        active = _computable(plan, np.asarray(~is_missing.all(axis=0)))
    touched = np.flatnonzero((plan.nu[active] != 0).any(axis=0))
    nu = plan.nu[np.ix_(active, touched)]

    ln_c = np.where(is_missing, 0.0, ln_c)[:, touched]
    ln_q = ln_c @ nu.T + plan.offset[active]
    missing = _any_term(is_missing[:, touched], nu != 0)
    at = constants.row[rows]
    rt = constants.rt[rows][:, None]

    const = _constant_part(plan, active, constants)
    constant_total = const.known_total[at]
    compared = constant_total + rt * ln_q
    delta_g = np.where(const.unknown[at], np.nan, compared)
    ln_gamma = ln_q + const.inferred[at] / rt

    assay_variance = _rows_product(used.sd[np.ix_(rows, touched)] ** 2, nu**2)
    assay_variance += plan.offset_sd[active] ** 2
    assay_variance += _shared_variance(used, rows, touched, nu)
    assay_sd = rt * np.sqrt(assay_variance)
    sd = np.sqrt(assay_sd**2 + const.variance[at])

    below = used.below[np.ix_(rows, touched)]
    above = used.above[np.ix_(rows, touched)]
    open_below = _any_term(below, nu > 0) | _any_term(above, nu < 0)
    open_above = _any_term(above, nu > 0) | _any_term(below, nu < 0)
    return MassAction(
        active=active,
        ln_gamma=ln_gamma,
        delta_g=delta_g,
        compared=compared,
        constant_total=constant_total,
        sd=sd,
        assay_sd=assay_sd,
        missing=missing,
        open_below=open_below,
        open_above=open_above,
    )


@dataclass(frozen=True)
class _ConstantPart:
    """Constants of the active columns at the distinct conditions, [condition, active column].

    known_total: Σ combination·ΔrG′° over steps with a constant; unknown: some step has none; inferred: the
    part of steps other than the column's own, through which free pools are inferred.
    """

    known_total: Array
    unknown: Flags
    inferred: Array
    variance: Array


def _constant_part(plan: Plan, active: NDArray[np.intp], constants: ConditionConstants) -> _ConstantPart:
    combination = plan.combination[active]
    steps = np.flatnonzero((combination != 0).any(axis=0))
    combination = combination[:, steps]
    g0 = constants.steps.delta_g0_prime[:, steps]
    sd = constants.steps.sd[:, steps]
    by = constants.steps.by[:, steps]
    # A step without a constant spoils the columns that use it, not the whole product.
    missing = np.isnan(g0)
    known_total = np.where(missing, 0.0, g0) @ combination.T
    unknown = (missing.astype(float) @ (combination != 0).T) > 0
    variance = np.where(missing, 0.0, sd**2) @ (combination**2).T
    slope = np.einsum("csf,as->caf", np.where(missing[..., None], 0.0, by), combination)
    variance = variance + np.einsum("caf,cf->ca", slope**2, constants.sd**2)
    own = constants.steps.delta_g0_prime[:, plan.owner[active]]
    return _ConstantPart(
        known_total=known_total,
        unknown=unknown,
        inferred=known_total - np.nan_to_num(own),
        variance=variance,
    )


def _computable(plan: Plan, seen: Flags) -> NDArray[np.intp]:
    """Columns that are not blocked and whose analytes have all been seen in some specimen."""
    blocked = np.array([bool(b) for b in plan.blocked])
    uses = plan.nu != 0
    return np.flatnonzero(~blocked & uses.any(axis=1) & ~(uses & ~seen).any(axis=1))


def _any_term(flags: Flags, used: Flags) -> Flags:
    """Whether any flagged analyte takes part: [specimen, analyte] × [column, analyte] → [specimen, column]."""
    if not flags.any():
        return np.zeros((len(flags), len(used)), dtype=bool)
    return (flags.astype(np.float32) @ used.astype(np.float32).T) > 0


def _rows_product(left: Array, right: Array) -> Array:
    """left @ rightᵀ, computed once where all rows of `left` are the same (default uncertainties)."""
    if len(left) > 1 and (left == left[0]).all():
        return np.repeat(left[:1] @ right.T, len(left), axis=0)
    return left @ right.T


def _shared_variance(
    used: Concentrations, rows: NDArray[np.intp], touched: NDArray[np.intp], nu: Array
) -> Array:
    """(Σ ν σ_f)² summed over conversion factors: one error for all values converted with the same factor."""
    shared = used.shared_sd[np.ix_(rows, touched)]
    basis = used.basis[np.ix_(rows, touched)]
    variance = np.zeros((len(rows), len(nu)))
    for code in sorted(set(basis[shared > 0].tolist())):
        variance += _rows_product(np.where(basis == code, shared, 0.0), nu) ** 2
    return variance
