"""The bipolar transistor in its forward active region.

``I_S(T) = I_S0 (T/T_0)^eta exp((q V_G0/k)(1/T_0 - 1/T))`` per unit of emitter
area and ``V_BE = V_T ln(I_C/(A I_S))``; see Gray, Hurst, Lewis, Meyer, *Analysis
and Design of Analog Integrated Circuits*, 5th ed., chapters 1 and 4.
"""

from __future__ import annotations

from dataclasses import dataclass

import sympy as sp

__all__ = ["Transistor", "log_saturation_growth", "thermal_voltage"]


def thermal_voltage(T: sp.Expr, volt_per_kelvin: sp.Expr) -> sp.Expr:
    """Return ``V_T = k T / q`` [V] for T [K] and k/q [V/K]."""
    return volt_per_kelvin * T


def log_saturation_growth(
    T: sp.Expr, T_0: sp.Expr, eta: sp.Expr, V_G0: sp.Expr, volt_per_kelvin: sp.Expr
) -> sp.Expr:
    """Return ``ln(I_S(T)/I_S(T_0))``; a logarithm, since I_S itself underflows when cold.

    Parameters
    ----------
    T, T_0 : temperature and reference of I_S [K]
    eta : temperature exponent [1]
    V_G0 : bandgap voltage extrapolated to 0 K [V]
    volt_per_kelvin : k/q [V/K]
    """
    return eta * sp.log(T / T_0) + V_G0 / volt_per_kelvin * (1 / T_0 - 1 / T)


@dataclass(frozen=True)
class Transistor:
    """One transistor of a loop: collector current, emitter area, and the law's two quantities."""

    collector_current: sp.Expr
    area: sp.Expr
    V_T: sp.Expr
    I_S: sp.Expr

    @property
    def base_current(self) -> sp.Expr:
        """Base current [A]; none in the ideal transistor."""
        return sp.Integer(0)

    @property
    def emitter_current(self) -> sp.Expr:
        """Emitter current [A]."""
        return self.collector_current + self.base_current

    @property
    def base_emitter_voltage(self) -> sp.Expr:
        """Base-emitter voltage ``V_T ln(I_C/(A I_S))`` [V]."""
        return self.V_T * sp.log(self.collector_current / (self.area * self.I_S))
