"""Functions that scipy has not, or not fast: two roots, and a logarithm."""

from __future__ import annotations

from typing import Any

import numpy as np

__all__ = ["inversion_bend", "inversion_root", "log_expm1", "upper_root"]

_STEPS = 6
_INVERSION_STEPS = 8


def upper_root(u: Any) -> Any:
    """Return the root above 1 of ``y - ln y = u``, that is ``-W_{-1}(-exp(-u))``; nan for u < 1.

    In u itself, so that nothing underflows where ``exp(-u)`` would. Start: the
    expansion at the branch point, or the asymptotic series; then Newton steps,
    which converge from above and quadratically.

    Parameters
    ----------
    u : array of any shape [1]

    >>> round(float(upper_root(2.0)), 12)  # W_{-1}(-exp(-2)) = -3.146193...
    3.146193220621
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


def inversion_root(c: Any) -> Any:
    """Return the root s of ``s (1 - exp(-s)) = c``: what a MOS transistor's g_m asks for.

    ``c = g_m n V_T/I_spec``; s is the root of its inversion coefficient. Newton's method on
    ``ln s + ln(1 - exp(-s)) = ln c`` in ln s: that is concave, of a slope between 1 and 2, so
    from a guess below the root it climbs without overshoot.

    Parameters
    ----------
    c : above 0, array of any shape [1]

    >>> round(float(inversion_root(1 - 0.36787944117144233)), 12)  # s = 1
    1.0
    """
    log_c = np.log(np.asarray(c, dtype=float))
    log_s = np.maximum(log_c / 2, log_c)
    for _ in range(_INVERSION_STEPS):
        s = np.exp(log_s)
        log_s = log_s - (log_s + np.log(-np.expm1(-s)) - log_c) / inversion_bend(s)
    return np.exp(log_s)


def inversion_bend(s: Any) -> Any:
    """Return ``d ln(s (1 - exp(-s)))/d ln s = 1 + s/(exp(s) - 1)``, without overflow.

    >>> float(inversion_bend(1000.0))
    1.0
    """
    return 1 - s * np.exp(-s) / np.expm1(-s)


def log_expm1(s: Any) -> Any:
    """Return ``ln(exp(s) - 1)`` without overflow and without loss for small s.

    >>> float(log_expm1(1000.0)), round(float(log_expm1(1e-3)), 9)
    (1000.0, -6.907255237)
    """
    return s + np.log(-np.expm1(-s))
