"""What the current should do: the target against temperature."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeVar

import numpy as np

from tcopt.arrays import Array
from tcopt.laws import generated
from tcopt.laws.numbers import resistance_ratio, resistance_ratio_slope, thermal_voltage
from tcopt.laws.roots import inversion_bend, inversion_root

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
    them. ``bipolar transconductance``: I_0 T/T_0, since g_m = I/V_T. ``mos
    transconductance``: what holds ``g_m = I G(IC)/(n V_T)`` of a MOS transistor, its
    mobility and V_T moving; like T in weak inversion, like 1/mobility in strong. ``slew
    into capacitor``: I_0 (1 + a (T - T_0) + b (T - T_0)^2), the capacitor's law.

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


def _bipolar_transconductance(target: Target, reference: float) -> TargetCurrent:
    if target.current is not None:
        return _ptat(target, reference)
    I_0 = _present(target.transconductance) * float(thermal_voltage(reference))
    return TargetCurrent(lambda T: I_0 * T / reference, lambda T: 1 / T)


def _mos_transconductance(target: Target, reference: float) -> TargetCurrent:
    """Hold ``I_spec s (1 - exp(-s))/(n V_T)``, of which ``IC = s^2`` and ``I = W I_spec s^2``.

    With ``I_spec ~ T^(2 - m)`` that is ``s (1 - exp(-s)) ~ T^(m - 1)``.
    """
    transistor = target.transistor
    if transistor is None or transistor.kind != "mos":
        raise AssertionError("the gate for input lets no such target through")
    m = transistor.mobility_exponent
    s_0 = _present(target.inversion_coefficient) ** 0.5
    share = float(generated.transconductance_share(s_0))
    I_0 = target.current
    if I_0 is None:
        n_V_T = transistor.slope_factor * float(thermal_voltage(reference))
        I_0 = _present(target.transconductance) * n_V_T / share

    def root(T: Array) -> Array:
        return np.asarray(inversion_root(s_0**2 * share * (T / reference) ** (m - 1)))

    def slope(T: Array) -> Array:
        return np.asarray((2 * (m - 1) / inversion_bend(root(T)) + 2 - m) / T)

    def current(T: Array) -> Array:
        grown = generated.specific_current_ratio(T, reference, m)
        return np.asarray(I_0 * (root(T) / s_0) ** 2 * grown)

    return TargetCurrent(current, slope)


def _slew(target: Target, reference: float) -> TargetCurrent:
    I_0 = target.current
    if I_0 is None:
        I_0 = _present(target.slew_rate) * _present(target.capacitance)
    a, b = target.capacitor_tc1 or 0.0, target.capacitor_tc2 or 0.0

    def ratio(T: Array) -> Array:
        return 1 + a * (T - reference) + b * (T - reference) ** 2

    return TargetCurrent(
        lambda T: I_0 * ratio(T), lambda T: (a + 2 * b * (T - reference)) / ratio(T)
    )


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
    "bipolar transconductance": _bipolar_transconductance,
    "mos transconductance": _mos_transconductance,
    "slew into capacitor": _slew,
}
