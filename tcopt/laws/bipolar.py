"""The bipolar transistor in its forward active region.

``I_S(T) = I_S0 (T/T_0)^eta exp((q/k)(V_G(T_0)/T_0 - V_G(T)/T))`` per unit of
emitter area and ``V_BE = V_T ln(I_C/(A I_S (1 + V_CE/V_A)))``; see Gray, Hurst,
Lewis, Meyer, *Analysis and Design of Analog Integrated Circuits*, 5th ed.,
chapters 1 and 4. The bandgap voltage is constant, extrapolated to 0 K, or
follows Varshni (1967, *Physica* 34): ``V_G(T) = V_G(0) - a T^2/(T + b)``.
"""

from __future__ import annotations

import sympy as sp

__all__ = [
    "bandgap_voltage",
    "base_emitter_voltage",
    "current_gain_ratio",
    "leakage_ratio",
    "log_saturation_growth",
    "thermal_voltage",
]

_DOUBLING = sp.Integer(10)
"""Kelvin in which a junction's leakage doubles; a rule of the trade."""


def thermal_voltage(T: sp.Expr, volt_per_kelvin: sp.Expr) -> sp.Expr:
    """Return ``V_T = k T / q`` [V] for T [K] and k/q [V/K]."""
    return volt_per_kelvin * T


def bandgap_voltage(T: sp.Expr, V_G0: sp.Expr, varshni: sp.Expr, varshni_T: sp.Expr) -> sp.Expr:
    """Return the bandgap voltage [V] at T [K].

    Parameters
    ----------
    V_G0 : at, or extrapolated to, 0 K [V]
    varshni, varshni_T : Varshni's coefficients [V/K], [K]; none at all: a constant
    """
    return V_G0 - varshni * T**2 / (T + varshni_T)


def log_saturation_growth(
    T: sp.Expr,
    T_0: sp.Expr,
    eta: sp.Expr,
    V_G0: sp.Expr,
    varshni: sp.Expr,
    varshni_T: sp.Expr,
    volt_per_kelvin: sp.Expr,
) -> sp.Expr:
    """Return ``ln(I_S(T)/I_S(T_0))``; a logarithm, since I_S itself underflows when cold.

    Parameters
    ----------
    T, T_0 : temperature and reference of I_S [K]
    eta : temperature exponent [1]
    V_G0, varshni, varshni_T : as for `bandgap_voltage`
    volt_per_kelvin : k/q [V/K]
    """
    linear = V_G0 * (1 / T_0 - 1 / T)
    curved = varshni * (T / (T + varshni_T) - T_0 / (T_0 + varshni_T))
    return eta * sp.log(T / T_0) + (linear + curved) / volt_per_kelvin


def current_gain_ratio(T: sp.Expr, T_0: sp.Expr, chi: sp.Expr) -> sp.Expr:
    """Return ``beta(T)/beta(T_0) = (T/T_0)^chi``."""
    return (T / T_0) ** chi


def leakage_ratio(T: sp.Expr, T_0: sp.Expr) -> sp.Expr:
    """Return ``I_L(T)/I_L(T_0) = 2^((T - T_0)/10 K)``."""
    return sp.Integer(2) ** ((T - T_0) / _DOUBLING)


def base_emitter_voltage(
    junction_current: sp.Expr,
    area: sp.Expr,
    V_T: sp.Expr,
    I_S: sp.Expr,
    early_factor: sp.Expr,
) -> sp.Expr:
    """Return ``V_T ln(I/(A I_S (1 + V_CE/V_A)))`` [V]; the early factor is the last bracket."""
    return V_T * sp.log(junction_current / (area * I_S * early_factor))
