"""Normal and Student-t probabilities. Sizes that a window shows need numpy alone; larger ones use scipy.

scipy.special takes as long to import as everything else a window needs until its first review, so it is
imported only where its speed is worth that.
"""

from __future__ import annotations

import functools
import math

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

#: From so many values on scipy's compiled functions are worth their import.
_MANY = 50_000

#: Terms of the continued fraction; it has converged to the last digit well before.
_MOST_TERMS = 300


def normal_cdf(z: Array) -> Array:
    """Φ(z)."""
    z = np.asarray(z, dtype=np.float64)
    if z.size >= _MANY:
        from scipy.special import ndtr

        return np.asarray(ndtr(z), dtype=np.float64)
    scaled = z.ravel() * -math.sqrt(0.5)
    return 0.5 * np.fromiter(map(math.erfc, scaled), dtype=np.float64, count=z.size).reshape(z.shape)


def two_sided_p(t: Array, df: Array) -> Array:
    """Two-sided p of Student's t with df degrees of freedom (≥ 1); df = inf is the normal distribution."""
    t = np.abs(np.asarray(t, dtype=np.float64))
    df = np.broadcast_to(np.asarray(df, dtype=np.float64), t.shape)
    if t.size >= _MANY:
        from scipy.special import ndtr, stdtr

        tail = np.where(np.isfinite(df), stdtr(np.where(np.isfinite(df), df, 1.0), -t), ndtr(-t))
        return np.asarray(2 * tail, dtype=np.float64)
    p = 2 * normal_cdf(-t)
    finite = np.isfinite(df)
    p[finite] = _two_sided_t(t[finite], df[finite])
    return p


def t_quantile(p: float, df: Array) -> Array:
    """Quantile (0.5 < p < 1) of Student's t with df degrees of freedom, whole numbers ≥ 1."""
    unique, inverse = np.unique(np.asarray(df, dtype=np.int64), return_inverse=True)
    found = np.array([_one_quantile(p, int(v)) for v in unique], dtype=np.float64)
    return np.asarray(found[inverse].reshape(np.shape(df)), dtype=np.float64)


@functools.lru_cache(maxsize=4096)
def _one_quantile(p: float, df: int) -> float:
    """Newton's iteration on the two-sided tail in ln t, in which the tail is nearly straight."""
    wanted = math.log(2 * (1 - p))
    t = 2.0
    log_c = math.lgamma((df + 1) / 2) - math.lgamma(df / 2) - 0.5 * math.log(df * math.pi)
    for _ in range(60):
        tail = 1 - _central_part(t, df)
        density = math.exp(log_c - (df + 1) / 2 * math.log1p(t * t / df))
        step = (wanted - math.log(tail)) * tail / (-2 * t * density)
        t *= math.exp(min(max(step, -2.0), 2.0))
        if abs(step) < 1e-13:
            break
    return t


def _central_part(t: float, df: int) -> float:
    """P(|T| < t) for a whole number of degrees of freedom, in closed form.

    Source: Abramowitz and Stegun (1964), 26.7.3 and 26.7.4.
    """
    angle = math.atan(t / math.sqrt(df))
    cosine = math.cos(angle)
    is_odd = df % 2 == 1
    term = total = (cosine if is_odd else 1.0) * (df > 1)
    for k in range(3 if is_odd else 2, df - 1, 2):
        term *= cosine * cosine * (k - 1) / k
        total += term
    if is_odd:
        return 2 / math.pi * (angle + math.sin(angle) * total)
    return math.sin(angle) * total


def _two_sided_t(t: Array, df: Array) -> Array:
    """P(|T| > t) = I_x(df/2, 1/2) with x = df/(df + t²); from the other end where that converges faster."""
    x = df / (df + t**2)
    a, b = df / 2, np.full_like(df, 0.5)
    swap = x > (a + 1) / (a + b + 2)
    first, second = np.where(swap, b, a), np.where(swap, a, b)
    at = np.where(swap, t**2 / (df + t**2), x)
    other = np.where(swap, x, t**2 / (df + t**2))
    with np.errstate(divide="ignore"):
        front = first * np.log(at) + second * np.log(other)
    log_beta = _log_gamma(a) + _log_gamma(b) - _log_gamma(a + b)
    part = np.exp(front - log_beta) / first * _continued_fraction(first, second, at)
    return np.asarray(np.where(swap, 1 - part, part), dtype=np.float64)


def _continued_fraction(a: Array, b: Array, x: Array) -> Array:
    """The continued fraction of the incomplete beta function by Lentz's method.

    Source: DLMF 8.17.22; Lentz (1976), in the form of Thompson and Barnett (1986).
    """
    tiny = 1e-300
    c = np.ones_like(x)
    d = 1 - (a + b) * x / (a + 1)
    d = 1 / np.where(np.abs(d) < tiny, tiny, d)
    value = d.copy()
    done = np.zeros(x.shape, dtype=bool)  # each value ends by itself, whatever stands beside it
    for m in range(1, _MOST_TERMS):
        even = m * (b - m) * x / ((a + 2 * m - 1) * (a + 2 * m))
        odd = -(a + m) * (a + b + m) * x / ((a + 2 * m) * (a + 2 * m + 1))
        change = np.ones_like(x)
        for term in (even, odd):
            d = 1 + term * d
            d = 1 / np.where(np.abs(d) < tiny, tiny, d)
            c = 1 + term / c
            c = np.where(np.abs(c) < tiny, tiny, c)
            change = c * d
            value = np.where(done, value, value * change)
        done |= np.abs(change - 1) < 1e-15
        if done.all():
            break
    return value


def _log_gamma(a: Array) -> Array:
    unique, inverse = np.unique(a, return_inverse=True)
    return np.array([math.lgamma(v) for v in unique], dtype=np.float64)[inverse].reshape(np.shape(a))
