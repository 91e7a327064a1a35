"""A current over a range, turned into figures of drift.

Extrema are located, not sampled: the function is replaced by its Chebyshev
interpolant, refined until it stands still to rounding, and the roots of the
interpolant's derivative are where the extrema can be. So no figure depends on
a number of points. (L. N. Trefethen, *Approximation Theory and Approximation
Practice*, chapters 8 and 18.)
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np
from numpy.polynomial import Chebyshev

from tcopt.arrays import Array
from tcopt.errors import NoSolutionError

__all__ = ["Drift", "Extreme", "drift_of", "extreme_points"]

_SETTLED = 3e-14
"""Size of the last coefficients, relative to the largest, at which the rest is rounding."""
_ROUNDING = 1e-16
_NOISE = 1e-10
"""Size of coefficients that stand still at the highest degree, below which they are noise."""
_SPILL = 10
"""How far the sum of many small coefficients may exceed one of them."""
_DEGREES = (16, 32, 64, 128, 256)
_BETWEEN = np.array([0.0712, 0.2347, 0.4183, 0.6139, 0.8051, 0.9573])
"""Places in a stretch, in no pattern, at which an interpolant has to be right as well."""


@dataclass(frozen=True, slots=True)
class Extreme:
    """A place where a function is largest or smallest: temperature [K] and value."""

    temperature: float
    value: float


@dataclass(frozen=True, slots=True)
class Drift:
    """The four figures over a range, and where the extremes lie.

    Attributes
    ----------
    deviation_ppm : ``max |I/I_target - 1|``
    box_ppm_per_K : ``(max - min)/(I(T_ref) (T_max - T_min))``, the box method
    endpoint_ppm_per_K : ``(I(T_max) - I(T_min))/(I(T_ref) (T_max - T_min))``, signed
    slope_ppm_per_K : ``(dI/dT)/I`` at T_ref
    lowest, highest : where the box touches
    """

    deviation_ppm: float
    box_ppm_per_K: float
    endpoint_ppm_per_K: float
    slope_ppm_per_K: float
    lowest: Extreme
    highest: Extreme


def extreme_points(
    function: Callable[[Array], Array], low: float, high: float, knots: Sequence[float] = ()
) -> Array:
    """Return all temperatures [K] where an extremum can be: both ends, knots, stationary points.

    Parameters
    ----------
    function : takes and returns an array; smooth between the knots
    low, high : the range [K]
    knots : temperatures where the function has a kink [K]

    Raises
    ------
    NoSolutionError
        If the function does not settle, so that no extremum can be trusted.
    """
    edges = [low, *(k for k in knots if low < k < high), high]
    found = list(edges)
    for left, right in pairwise(edges):
        proxy = _interpolant(function, left, right)
        roots = proxy.deriv().roots()
        real = roots.real[np.abs(roots.imag) < 1e-6 * (right - left)]
        found += [float(r) for r in real if left < r < right]
    return np.array(sorted(set(found)))


def _interpolant(function: Callable[[Array], Array], left: float, right: float) -> Chebyshev:
    """Return the function as a polynomial, but for what is rounding."""
    between = left + (right - left) * _BETWEEN
    values = function(between)
    tail = scale = np.inf
    for degree in _DEGREES:
        proxy = Chebyshev.interpolate(function, degree, domain=[left, right])
        size = np.abs(proxy.coef)
        scale, tail = float(size.max()), float(size[-4:].max())
        missed = np.abs(proxy(between) - values).max()
        if max(tail, missed / _SPILL) <= _SETTLED * scale:
            return proxy.truncate(_above(size, _ROUNDING * scale))
    if tail <= _NOISE * scale:
        # a solution that is good to so many digits: what is left of it is no shape
        return proxy.truncate(_above(size, _SPILL * tail))
    raise NoSolutionError(
        f"between {left:.2f} K and {right:.2f} K the curve is too rough for its "
        "extremes to be located; accepted: curves that are smooth between their points"
    )


def _above(size: Array, least: float) -> int:
    """Return how many of the coefficients are worth keeping."""
    return int(np.flatnonzero(size > least)[-1]) + 1


def drift_of(
    function: Callable[[Array], Array],
    slope: float,
    deviation: float,
    low: float,
    high: float,
    reference: float,
    knots: Sequence[float] = (),
) -> Drift:
    """Return the figures of drift of a function of temperature.

    Parameters
    ----------
    function : current, or current over target, against temperature [K]
    slope : its logarithmic slope at the reference [1/K]
    deviation : ``max |I/I_target - 1|`` [1]
    low, high, reference : temperatures [K]
    knots : as for `extreme_points`
    """
    points = extreme_points(function, low, high, knots)
    values = function(points)
    at_low, at_reference, at_high = function(np.array([low, reference, high]))
    scale = 1e6 / (at_reference * (high - low))
    lowest, highest = int(np.argmin(values)), int(np.argmax(values))
    return Drift(
        deviation_ppm=1e6 * deviation,
        box_ppm_per_K=float(scale * (values[highest] - values[lowest])),
        endpoint_ppm_per_K=float(scale * (at_high - at_low)),
        slope_ppm_per_K=1e6 * slope,
        lowest=Extreme(float(points[lowest]), float(values[lowest])),
        highest=Extreme(float(points[highest]), float(values[highest])),
    )
