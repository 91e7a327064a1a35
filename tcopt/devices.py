"""What a study's transistor adds to a circuit's quantities, and how it goes with temperature."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import ArrayLike

from tcopt.arrays import Array
from tcopt.laws import generated
from tcopt.laws.numbers import (
    log_saturation_current,
    log_saturation_slope,
    thermal_voltage,
)
from tcopt.symbols import INVERSE

if TYPE_CHECKING:
    from tcopt.study import CircuitChoices, MosTransistor, Transistor

__all__ = ["DeviceQuantity", "device_quantities", "diode_voltage"]


@dataclass(frozen=True)
class DeviceQuantity:
    """One quantity of the loops.

    Attributes
    ----------
    value : takes temperatures [K], returns the quantity in SI units
    slope : ``d ln q/dT`` [1/K]; of ``log_I_S`` the slope itself
    cause : the name of its share in the budget of causes; empty for a constant
    """

    value: Callable[[Array], Array]
    slope: Callable[[Array], Array]
    cause: str


def diode_voltage(
    made: CircuitChoices, current: ArrayLike, area: float, temperature: ArrayLike
) -> Array:
    """Return the base-emitter or gate-source voltage [V] that a current takes.

    Without Early effect; the source of a MOS transistor together with its bulk.

    Parameters
    ----------
    made : the circuit of a study, with a transistor
    current : [A]
    area : of the transistor, in units [1]
    temperature : [K]
    """
    T = np.asarray(temperature, dtype=float)
    found = {name: quantity.value(T) for name, quantity in device_quantities(made).items()}
    V_T = thermal_voltage(T)
    if made.device == "mos":
        parts = (V_T, found["V_TH"], found["n"], found["I_spec"])
        return np.asarray(generated.gate_source_voltage(current, area, *parts))
    return np.asarray(generated.base_emitter_voltage(current, area, V_T, found["log_I_S"]))


def _constant(value: float) -> DeviceQuantity:
    return DeviceQuantity(lambda T: np.asarray(value), np.zeros_like, "")  # noqa: ARG005


def device_quantities(made: CircuitChoices) -> dict[str, DeviceQuantity]:
    """Return the quantities of a study's transistor by symbol; what is not in effect is ideal.

    Parameters
    ----------
    made : the circuit of a study
    """
    transistor = made.transistor
    if transistor is None:
        return {}
    found = _mos(transistor, made) if transistor.kind == "mos" else _bipolar(transistor, made)
    early = transistor.early_voltage if "early effect" in made.effects else None
    found[INVERSE["V_A"]] = _constant(0.0 if early is None else 1 / early)
    found["V_out"] = _constant(0.0 if made.output_voltage is None else made.output_voltage)
    leakage = transistor.leakage_current if "leakage" in made.effects else None
    found["I_L"] = _scaled(
        leakage or 0.0,
        lambda T: generated.leakage_ratio(T, transistor.reference),
        lambda T: np.full_like(T, generated.leakage_slope()),
        "leakage",
    )
    return found


def _scaled(
    value: float, ratio: Callable[[Array], Any], slope: Callable[[Array], Any], cause: str
) -> DeviceQuantity:
    return DeviceQuantity(
        lambda T: np.asarray(value * ratio(T)), lambda T: np.asarray(slope(T)), cause
    )


def _bipolar(transistor: Transistor, made: CircuitChoices) -> dict[str, DeviceQuantity]:
    found = {
        "log_I_S": DeviceQuantity(
            lambda T: log_saturation_current(transistor, T),
            lambda T: log_saturation_slope(transistor, T),
            "junction law",
        )
    }
    gain = transistor.current_gain if "current gain" in made.effects else None
    chi = transistor.current_gain_exponent
    found[INVERSE["beta"]] = _scaled(
        0.0 if gain is None else 1 / gain,
        lambda T: 1 / generated.current_gain_ratio(T, transistor.reference, chi),
        lambda T: -generated.current_gain_slope(T, chi),
        "base current",
    )
    return found


def _mos(transistor: MosTransistor, made: CircuitChoices) -> dict[str, DeviceQuantity]:
    m, reference = transistor.mobility_exponent, transistor.reference
    threshold = (reference, transistor.threshold_voltage, transistor.threshold_slope)
    weight = transistor.slope_factor if made.well == "common" else 1.0
    return {
        "V_TH": DeviceQuantity(
            lambda T: np.asarray(generated.threshold_voltage(T, *threshold)),
            lambda T: np.asarray(generated.threshold_slope(T, *threshold)),
            "threshold voltage",
        ),
        "I_spec": _scaled(
            transistor.specific_current,
            lambda T: generated.specific_current_ratio(T, reference, m),
            lambda T: generated.specific_current_slope(T, m),
            "specific current",
        ),
        "n": _constant(transistor.slope_factor),
        "n_S": _constant(weight),
    }
