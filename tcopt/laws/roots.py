"""Two functions that scipy has not, or not fast: a root of ``y - ln y = u``, and a logarithm."""

from __future__ import annotations

from typing import Any

import numpy as np

__all__ = ["log_expm1", "upper_root"]

_STEPS = 6


def upper_root(u: Any) -> Any:
    """Return the root above 1 of ``y - ln y = u``, that is ``-W_{-1}(-exp(-u))``; nan for u < 1.

    In u itself, so that nothing underflows where ``exp(-u)`` would. Start: the
    expansion at the branch point, or the asymptotic series; then Newton steps,
    which converge from above and quadratically.

    Parameters
    ----------
    u : array of any shape [1]

    >>> float(upper_root(2.0))  # W_{-1}(-exp(-2)) = -3.146193...
    3.146193220620583
    """
    u = np.asarray(u, dtype=float)
    u = np.where(u < 1, np.nan, u)
    p = np.sqrt(2 * (u - 1))
    with np.errstate(invalid="ignore", divide="ignore"):
        y = np.where(u < 4, 1 + p + p * p / 3, u + np.log(u) + np.log(u) / u)
        for _ in range(_STEPS):
            step = (y - np.log(y) - u) * y / (y - 1)
            y = np.where(u > 1, y - np.where(np.isnan(step), 0, step), y)
    return y


def log_expm1(s: Any) -> Any:
    """Return ``ln(exp(s) - 1)`` without overflow and without loss for small s.

    >>> float(log_expm1(1000.0)), round(float(log_expm1(1e-3)), 9)
    (1000.0, -6.907255237)
    """
    return s + np.log(-np.expm1(-s))
