"""What the current should do: the target against temperature."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeVar

import numpy as np

from tcopt.arrays import Array
from tcopt.laws.numbers import resistance_ratio, resistance_ratio_slope

if TYPE_CHECKING:
    from tcopt.study import Target

__all__ = ["TargetCurrent", "target_current"]

_Value = TypeVar("_Value")


@dataclass(frozen=True)
class TargetCurrent:
    """A target against temperature.

    Attributes
    ----------
    current : takes temperatures [K], returns currents [A]
    log_slope : takes temperatures [K], returns ``(dI/dT)/I`` [1/K]
    knots : temperatures where the curve has a kink in a derivative [K]
    """

    current: Callable[[Array], Array]
    log_slope: Callable[[Array], Array]
    knots: tuple[float, ...] = ()


def target_current(target: Target, reference: float) -> TargetCurrent:
    """Return the target's current against temperature.

    ``flat``: I_0. ``ptat``: I_0 T/T_0. ``slope``: I_0 (1 + a (T - T_0)).
    ``over material``: I_0 m(T_0)/m(T), which holds the drop across a resistor of
    that material. ``curve``: through the points of a table by monotone cubic
    pieces (Fritsch and Carlson 1980), so that no overshoot is invented between
    them.

    Parameters
    ----------
    target : as in the study
    reference : T_0, the reference of the study [K]
    """
    return _SHAPES[target.shape](target, reference)


def _flat(target: Target, reference: float) -> TargetCurrent:  # noqa: ARG001
    I_0 = _present(target.current)
    return TargetCurrent(lambda T: np.full_like(T, I_0), np.zeros_like)


def _ptat(target: Target, reference: float) -> TargetCurrent:
    I_0 = _present(target.current)
    return TargetCurrent(lambda T: I_0 * T / reference, lambda T: 1 / T)


def _slope(target: Target, reference: float) -> TargetCurrent:
    I_0, a = _present(target.current), _present(target.slope)
    return TargetCurrent(
        lambda T: I_0 * (1 + a * (T - reference)), lambda T: a / (1 + a * (T - reference))
    )


def _over_material(target: Target, reference: float) -> TargetCurrent:
    I_0, material = _present(target.current), _present(target.material)
    return TargetCurrent(
        lambda T: I_0 * resistance_ratio(material, reference) / resistance_ratio(material, T),
        lambda T: -resistance_ratio_slope(material, T) / resistance_ratio(material, T),
    )


def _curve(target: Target, reference: float) -> TargetCurrent:  # noqa: ARG001
    from scipy.interpolate import PchipInterpolator  # noqa: PLC0415  slow to import

    temperatures, table = _present(target.curve)
    through = PchipInterpolator(temperatures, table, extrapolate=False)
    slope = through.derivative()
    return TargetCurrent(through, lambda T: slope(T) / through(T), tuple(temperatures))


def _present(value: _Value | None) -> _Value:
    if value is None:
        raise AssertionError("the gate for input lets no such target through")
    return value


_SHAPES: dict[str, Callable[[Target, float], TargetCurrent]] = {
    "flat": _flat,
    "ptat": _ptat,
    "slope": _slope,
    "over material": _over_material,
    "curve": _curve,
}
