"""What the reference group says of each column: mean, spread, limits, and a specimen's place against it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from panelview.assess.calls import LEAST_CONTROLS_FOR_INTERVAL, LEAST_CONTROLS_FOR_TEST, Z95
from panelview.assess.student import t_quantile, two_sided_p

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]

#: Fewer than this: the interval is robust (Horn and Pesce), from here on nonparametric (CLSI EP28-A3c).
_LEAST_FOR_RANKS = 120

#: A spread under this (kJ/mol) means that the controls are copies of one another, not that they agree.
_NO_SPREAD = 1e-6


@dataclass(frozen=True)
class Reference:
    """The reference group's ΔG′, arrays [specimen, column] (leave-one-out for controls themselves).

    n: controls with a complete uncensored value (0 where published and unstated); mean, sd; lower,
    upper: 95 % reference limits, NaN where none is claimed; tested: whether a test may be made; df:
    degrees of freedom of `sd`, inf where it is taken as known.
    """

    n: NDArray[np.int32]
    mean: Array
    sd: Array
    lower: Array
    upper: Array
    tested: Flags
    df: Array


def from_controls(delta_g: Array, complete: Flags, member: NDArray[np.intp]) -> Reference:
    """Reference from controls evaluated with the specimens' own plan.

    delta_g, complete: [control, column]; member[specimen]: index of the specimen among the controls,
    −1 for all others. A control is compared with the others, never with itself.
    """
    values = np.where(complete, delta_g, np.nan)
    n = complete.sum(axis=0).astype(float)
    with np.errstate(invalid="ignore", divide="ignore"):
        mean = np.where(complete, delta_g, 0.0).sum(axis=0) / n
        squares = np.where(complete, (delta_g - mean) ** 2, 0.0).sum(axis=0)
        lower, upper = _limits(values, n)
        is_member = member >= 0
        left_out = is_member[:, None] & complete[np.maximum(member, 0)]
        own = np.where(left_out, delta_g[np.maximum(member, 0)] - mean, 0.0)
        n_used = n - left_out
        mean_used = mean - own / np.maximum(n_used, 1)
        squares_used = squares - own**2 * n / np.maximum(n_used, 1)
        sd = np.sqrt(np.maximum(squares_used, 0.0) / (n_used - 1))
    sd[n_used < 2] = np.nan
    mean_used[n_used < 1] = np.nan
    shape = mean_used.shape
    return Reference(
        n=n_used.astype(np.int32),
        mean=mean_used,
        sd=sd,
        lower=np.broadcast_to(lower, shape),
        upper=np.broadcast_to(upper, shape),
        tested=n_used >= LEAST_CONTROLS_FOR_TEST,
        df=n_used - 1,
    )


def from_published(mean: Array, sd: Array, n: NDArray[np.int32]) -> Reference:
    """Reference from published concentrations; mean, sd: [specimen, column], NaN where none is known."""
    known = np.isfinite(mean) & np.isfinite(sd)
    return Reference(
        n=n,
        mean=mean,
        sd=sd,
        lower=mean - Z95 * sd,
        upper=mean + Z95 * sd,
        tested=known,
        df=np.full(mean.shape, np.inf),
    )


def no_reference(shape: tuple[int, int]) -> Reference:
    """Nothing to compare with."""
    nothing = np.full(shape, np.nan)
    return Reference(
        n=np.zeros(shape, dtype=np.int32),
        mean=nothing,
        sd=nothing,
        lower=nothing,
        upper=nothing,
        tested=np.zeros(shape, dtype=bool),
        df=nothing,
    )


def shift_sd(reference: Reference, assay_sd: Array) -> Array:
    """Standard deviation of (a healthy specimen − reference mean): s √((n+1)/n), kJ/mol.

    Source: Crawford and Howell (1998). Where the reference has no spread at all (copies of one
    specimen) the specimen's assay uncertainty stands in for it.
    """
    with np.errstate(divide="ignore", invalid="ignore"):
        spread = np.where(reference.sd > _NO_SPREAD, reference.sd, assay_sd)
        widened = np.where(np.isfinite(reference.df), np.sqrt(1 + 1 / reference.n), 1.0)
        return np.where(np.isfinite(reference.sd), spread * widened, np.nan)


def p_values(shift: Array, sd: Array, reference: Reference) -> Array:
    """Two-sided p of each shift (Crawford–Howell's t, or normal where sd is known); NaN where untested."""
    p = np.full(shift.shape, np.nan)
    use = reference.tested & np.isfinite(shift) & (sd > 0)
    p[use] = two_sided_p(shift[use] / sd[use], reference.df[use])
    return p


def _limits(values: Array, n: Array) -> tuple[Array, Array]:
    """95 % reference limits of each column: ranks from 120 controls on, robust from 20, else none.

    values: [control, column], NaN where incomplete; n: [column].
    """
    lower = np.full(values.shape[1], np.nan)
    upper = np.full(values.shape[1], np.nan)
    for c in np.flatnonzero(n >= _LEAST_FOR_RANKS):
        column = values[np.isfinite(values[:, c]), c]
        lower[c], upper[c] = np.quantile(column, (0.025, 0.975), method="weibull")
    robust = np.flatnonzero((n >= LEAST_CONTROLS_FOR_INTERVAL) & (n < _LEAST_FOR_RANKS))
    if len(robust):
        lower[robust], upper[robust] = robust_limits(values[:, robust])
    return lower, upper


def robust_limits(values: Array) -> tuple[Array, Array]:
    """95 % reference limits by the robust method: T ± t(n−1, 0.975) √(S² + S_T²).

    values: [control, column], NaN where missing, n ≥ 20 each. Biweight location (c = 3.7) iterated to
    convergence, biweight spreads with c = 205.6 (between subjects) and c = 3.7 (of the location).
    Source: Horn, Pesce and Copeland (1998); CLSI EP28-A3c. Constants from memory.
    """
    n = np.isfinite(values).sum(axis=0)
    median = _median(values, n)
    mad = np.maximum(_median(np.abs(values - median), n) / 0.6745, _NO_SPREAD)
    location = median
    for _ in range(100):
        weight = _biweight((values - location) / (3.7 * mad)) ** 2
        new = np.nansum(weight * values, axis=0) / weight.sum(axis=0)
        settled = np.abs(new - location).max() < 1e-9
        location = new
        if settled:
            break
    between = _biweight_spread(values, median, mad, 205.6, n)
    of_location = _biweight_spread(values, location, between, 3.7, n) / np.sqrt(n)
    half = t_quantile(0.975, n - 1.0) * np.hypot(between, of_location)
    return location - half, location + half


def _median(values: Array, n: NDArray[np.intp]) -> Array:
    """Median of each column's n numbers, NaN left out (numpy's own brings in its masked arrays)."""
    ordered = np.sort(values, axis=0)  # NaN last
    columns = np.arange(values.shape[1])
    return np.asarray((ordered[(n - 1) // 2, columns] + ordered[n // 2, columns]) / 2)


def _biweight(u: Array) -> Array:
    """1 − u² inside ±1, else 0 (0 for NaN)."""
    return np.where(np.abs(u) < 1, 1 - u**2, 0.0)


def _biweight_spread(values: Array, centre: Array, scale: Array, c: float, n: Array) -> Array:
    """Biweight midvariance of each column, as a standard deviation."""
    u = (values - centre) / (c * scale)
    inside = np.abs(u) < 1
    square = np.where(inside, (values - centre) ** 2, 0.0)
    u2 = np.where(inside, u**2, 0.0)
    top = n * np.sum(square * (1 - u2) ** 4, axis=0)
    bottom = np.sum(np.where(inside, (1 - u2) * (1 - 5 * u2), 0.0), axis=0)
    return np.asarray(np.sqrt(top / (bottom * np.maximum(1.0, bottom - 1))))
