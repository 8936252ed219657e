"""Normal and Student-t probabilities (scipy's special functions, imported when first needed)."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def normal_cdf(z: Array) -> Array:
    """Φ(z)."""
    from scipy.special import ndtr

    return np.asarray(ndtr(z), dtype=np.float64)


def two_sided_p(t: Array, df: Array) -> Array:
    """Two-sided p of Student's t with df degrees of freedom; df = inf is the normal distribution."""
    from scipy.special import ndtr, stdtr

    tail = np.where(np.isfinite(df), stdtr(np.where(np.isfinite(df), df, 1.0), -np.abs(t)), ndtr(-np.abs(t)))
    return np.asarray(2 * tail, dtype=np.float64)


def t_quantile(p: float, df: Array) -> Array:
    """Quantile of Student's t."""
    from scipy.special import stdtrit

    return np.asarray(stdtrit(df, p), dtype=np.float64)
