"""Mismatch from drawn area.

The difference between two equal devices side by side has a standard deviation
of ``A/sqrt(area)``; see Pelgrom, Duinmaijer, Welbers, "Matching properties of MOS
transistors", IEEE J. Solid-State Circuits 24 (1989), equation for short
distances. Each device by itself therefore departs by ``A/sqrt(2 area)``.
"""

from __future__ import annotations

from math import hypot, sqrt

__all__ = ["device_deviation", "pair_deviation"]


def device_deviation(coefficient: float, area: float) -> float:
    """Return one standard deviation of a device from its neighbours [1].

    Parameters
    ----------
    coefficient : A, of the relative difference of a pair [m]
    area : of the device [m^2]

    >>> round(device_deviation(2e-8, 2e-10), 9)  # 2 % um and 200 um^2
    0.001
    """
    return coefficient / sqrt(2 * area)


def pair_deviation(coefficient: float, first: float, second: float) -> float:
    """Return one standard deviation of the difference between devices of two areas [1].

    Parameters
    ----------
    coefficient : A [m]
    first, second : areas [m^2]

    >>> round(pair_deviation(2e-8, 4e-10, 4e-10), 9)  # equal: A/sqrt(area)
    0.001
    """
    return hypot(device_deviation(coefficient, first), device_deviation(coefficient, second))
