"""The MOS transistor in saturation, in all regions of inversion.

``I_D = I_spec ln^2(1 + exp((V_P - V_S)/(2 V_T)))`` with the pinch-off voltage
``V_P = (V_G - V_TH)/n``, all voltages to the bulk; see Enz, Krummenacher, Vittoz
(1995, *Analog Integrated Circuits and Signal Processing* 8). Turned round:
``V_G = V_TH + n V_S + 2 n V_T ln(exp(sqrt(I_D/I_spec)) - 1)``. In a well of its
own the source is tied to the bulk, and V_S counts once instead of n times.
``I_spec = 2 n mu C_ox V_T^2 W/L`` goes with temperature as T^2 times the
mobility's T^-m, the threshold falls linearly.
"""

from __future__ import annotations

from typing import Any

import sympy as sp

__all__ = [
    "LogExpm1", "gate_voltage", "saturation_voltage", "specific_current_ratio",
    "threshold_voltage", "transconductance_share",
]  # fmt: skip


class LogExpm1(sp.Function):  # type: ignore[misc]
    """``ln(exp(s) - 1)``, a function of its own so that its numerics do not overflow."""

    nargs = 1

    def fdiff(self, argindex: int = 1) -> sp.Expr:  # noqa: ARG002
        """Return the derivative, ``1 + 1/(exp(s) - 1)``."""
        return 1 + 1 / Expm1(self.args[0])

    def _eval_rewrite_as_log(self, s: sp.Expr, **_: Any) -> sp.Expr:
        return sp.log(sp.exp(s) - 1)


class Expm1(sp.Function):  # type: ignore[misc]
    """``exp(s) - 1``, exact for small s."""

    nargs = 1

    def fdiff(self, argindex: int = 1) -> sp.Expr:  # noqa: ARG002
        """Return the derivative, ``exp(s)``."""
        return sp.exp(self.args[0])

    def _eval_rewrite_as_exp(self, s: sp.Expr, **_: Any) -> sp.Expr:
        return sp.exp(s) - 1


def specific_current_ratio(T: sp.Expr, T_0: sp.Expr, m: sp.Expr) -> sp.Expr:
    """Return ``I_spec(T)/I_spec(T_0) = (T/T_0)^(2 - m)``, mobility falling as T^-m."""
    return (T / T_0) ** (2 - m)


def threshold_voltage(T: sp.Expr, T_0: sp.Expr, V_TH0: sp.Expr, a: sp.Expr) -> sp.Expr:
    """Return ``V_TH0 - a (T - T_0)`` [V], a in V/K."""
    return V_TH0 - a * (T - T_0)


def saturation_voltage(inversion_coefficient: sp.Expr, V_T: sp.Expr) -> sp.Expr:
    """Return the drain-source voltage [V] from which on the drain current hardly rises.

    ``V_T (2 sqrt(IC + 1/4) + 3)``: about four thermal voltages in weak inversion, the
    overdrive over n in strong; Enz, Krummenacher, Vittoz (1995).

    Parameters
    ----------
    inversion_coefficient : ``IC = I_D/(W I_spec)`` [1]
    V_T : thermal voltage [V]
    """
    return V_T * (2 * sp.sqrt(inversion_coefficient + sp.Rational(1, 4)) + 3)


def transconductance_share(s: sp.Expr) -> sp.Expr:
    """Return ``g_m n V_T/I_D = (1 - exp(-s))/s``, s the root of the inversion coefficient.

    From the law by differentiation; 1 in weak inversion, 1/s in strong.
    """
    return -Expm1(-s) / s


def gate_voltage(
    drain_current: sp.Expr,
    width: sp.Expr,
    source_voltage: sp.Expr,
    V_T: sp.Expr,
    V_TH: sp.Expr,
    n: sp.Expr,
    n_S: sp.Expr,
    I_spec: sp.Expr,
    early_factor: sp.Expr,
) -> sp.Expr:
    """Return the gate's voltage to ground [V].

    Parameters
    ----------
    drain_current : [A]
    width : in units of the device that I_spec belongs to [1]
    source_voltage : V_S, to ground [V]
    V_T, V_TH : thermal voltage and threshold [V]
    n : slope factor [1]
    n_S : weight of the source voltage: n in the common bulk, 1 in a well of its own [1]
    I_spec : specific current of the unit device [A]
    early_factor : ``1 + V_DS/V_A`` [1]
    """
    inversion = sp.sqrt(drain_current / (width * I_spec * early_factor))
    return V_TH + n_S * source_voltage + 2 * n * V_T * LogExpm1(inversion)
