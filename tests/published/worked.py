"""What the worked examples share: circuits by their numbers, and slopes by the chain rule."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from scipy.optimize import brentq

from tcopt.laws import generated as laws
from tcopt.laws.numbers import VOLT_PER_KELVIN
from tcopt.solve import IDEAL, currents, needed_resistance, numerics, sensitivities
from tests import junction

__all__ = ["Sum", "flat_at", "needed", "output", "slope", "widlar"]


def output(topology: str, feed: str, device: str = IDEAL, **quantities: Any) -> Any:
    """Return the output current [A]."""
    return currents(numerics(topology, feed, device), quantities)["I_out"]


def needed(
    topology: str, feed: str, slot: str, current: float, device: str = IDEAL, **quantities: Any
) -> float:
    """Return the resistance [ohm] that a slot needs for this output [A]."""
    return float(needed_resistance(numerics(topology, feed, device), slot, current, quantities))


def slope(
    topology: str,
    feed: str,
    quantities: Mapping[str, Any],
    log_slopes: Mapping[str, Any],
    device: str = IDEAL,
) -> Any:
    """Return (dI_out/dT)/I_out [1/K], given d ln q/dT of the quantities that move."""
    circuit = numerics(topology, feed, device)
    by_quantity = sensitivities(circuit, quantities)
    return sum(by_quantity[name] * value for name, value in log_slopes.items())


def widlar(I_in: float, V_T: float) -> dict[str, float]:
    """Return all but the output resistor of a mirror of equal transistors, bare at the input."""
    return {"I_given": I_in, "N": 1.0, "R_input": 0.0, "V_T": V_T}


@dataclass(frozen=True)
class Sum:
    """V_BE plus a PTAT voltage, as the drop of the summed current across the base resistor.

    The junction carries the PTAT current of the core (N = 8, 1 kohm) and drops V_BE at T_0.
    """

    R_base: float
    T_0: float
    eta: float
    V_G0: float
    V_BE: float
    R_core: float = 1e3
    N: float = 8.0

    def quantities(self, T: Any) -> dict[str, Any]:
        """Return the circuit's quantities at temperatures [K]."""
        V_T0 = laws.thermal_voltage(self.T_0, VOLT_PER_KELVIN)
        at_reference = np.log(V_T0 * np.log(self.N) / self.R_core) - self.V_BE / V_T0
        grown = junction.log_saturation_growth(T, self.T_0, self.eta, self.V_G0)
        return {
            "N": self.N,
            "M": 1.0,
            "R_core": self.R_core,
            "R_base": self.R_base,
            "V_T": laws.thermal_voltage(T, VOLT_PER_KELVIN),
            "log_I_S": at_reference + grown,
        }

    def voltage(self, T: Any) -> Any:
        """Return the summed voltage [V]."""
        return output("ptat plus vbe", "self", **self.quantities(T)) * self.R_base

    def slope(self, T: Any) -> Any:
        """Return its relative slope [1/K]; the resistors have none."""
        law = junction.log_saturation_slope(T, self.T_0, self.eta, self.V_G0)
        moving = {"V_T": 1 / T, "log_I_S": law}
        return slope("ptat plus vbe", "self", self.quantities(T), moving)


def flat_at(T: float, eta: float, V_G0: float, V_BE: float = 0.65) -> Sum:
    """Return the sum whose slope is nothing at T [K], where the junction drops V_BE."""
    found = brentq(lambda R: float(Sum(R, T, eta, V_G0, V_BE).slope(T)), 1e2, 1e6, xtol=1e-9)
    return Sum(float(found), T, eta, V_G0, V_BE)
