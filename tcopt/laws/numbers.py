"""The laws with numbers in them: what a material and a transistor are at a temperature."""

from __future__ import annotations

from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike
from scipy.constants import e as ELEMENTARY_CHARGE
from scipy.constants import k as BOLTZMANN

from tcopt.arrays import Array
from tcopt.laws import generated

__all__ = [
    "VOLT_PER_KELVIN",
    "JunctionData",
    "ResistorData",
    "log_saturation_current",
    "log_saturation_slope",
    "moved_coefficients",
    "resistance_ratio",
    "resistance_ratio_slope",
    "thermal_voltage",
]

VOLT_PER_KELVIN = BOLTZMANN / ELEMENTARY_CHARGE


class ResistorData(Protocol):
    """What the resistor law needs to know of a material."""

    @property
    def tc1(self) -> float: ...  # noqa: D102
    @property
    def tc2(self) -> float: ...  # noqa: D102
    @property
    def reference(self) -> float: ...  # noqa: D102


class JunctionData(Protocol):
    """What the junction law needs to know of a transistor."""

    @property
    def saturation_current(self) -> float: ...  # noqa: D102
    @property
    def reference(self) -> float: ...  # noqa: D102
    @property
    def temperature_exponent(self) -> float: ...  # noqa: D102
    @property
    def bandgap_voltage(self) -> float: ...  # noqa: D102
    @property
    def varshni_coefficient(self) -> float | None: ...  # noqa: D102
    @property
    def varshni_temperature(self) -> float | None: ...  # noqa: D102


def thermal_voltage(temperature: ArrayLike) -> Array:
    """Return ``k T / q`` [V] at temperatures [K].

    >>> round(float(thermal_voltage(300.0)) * 1e3, 3)  # CODATA, mV
    25.852
    """
    return np.asarray(generated.thermal_voltage(np.asarray(temperature, float), VOLT_PER_KELVIN))


def resistance_ratio(material: ResistorData, temperature: ArrayLike) -> Array:
    """Return ``R(T)/R_0`` [1] at temperatures [K]; R_0 at the material's own reference."""
    T = np.asarray(temperature, dtype=float)
    return np.asarray(generated.resistance_ratio(T, material.reference, material.tc1, material.tc2))


def resistance_ratio_slope(material: ResistorData, temperature: ArrayLike) -> Array:
    """Return ``d(R/R_0)/dT`` [1/K] at temperatures [K]."""
    T = np.asarray(temperature, dtype=float)
    return np.asarray(
        generated.resistance_ratio_slope(T, material.reference, material.tc1, material.tc2)
    )


def moved_coefficients(material: ResistorData, reference: float) -> tuple[float, float]:
    """Return TC1 [1/K] and TC2 [1/K^2] of a material about another reference [K].

    ``TC1' = (TC1 + 2 TC2 d)/m``, ``TC2' = TC2/m``, with d the move and m what the
    resistance becomes by it.
    """
    data = (reference, material.reference, material.tc1, material.tc2)
    return float(generated.moved_tc1(*data)), float(generated.moved_tc2(*data))


def log_saturation_current(transistor: JunctionData, temperature: ArrayLike) -> Array:
    """Return ``ln(I_S/A)`` of one unit of emitter area at temperatures [K]."""
    growth = generated.log_saturation_growth(
        np.asarray(temperature, dtype=float), *_junction(transistor)
    )
    return np.asarray(np.log(transistor.saturation_current) + growth)


def log_saturation_slope(transistor: JunctionData, temperature: ArrayLike) -> Array:
    """Return ``d(ln I_S)/dT`` [1/K] at temperatures [K]."""
    return np.asarray(
        generated.log_saturation_slope(np.asarray(temperature, dtype=float), *_junction(transistor))
    )


def _junction(
    transistor: JunctionData,
) -> tuple[float, float, float, float, float, float]:
    return (
        transistor.reference,
        transistor.temperature_exponent,
        transistor.bandgap_voltage,
        transistor.varshni_coefficient or 0.0,
        transistor.varshni_temperature or 0.0,
        VOLT_PER_KELVIN,
    )
