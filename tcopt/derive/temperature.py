"""How the quantities of a loop go with temperature: by a law, by data, or not at all."""

from __future__ import annotations

import sympy as sp

from tcopt.derive.names import INVERSE_T, coefficient, drop, positive
from tcopt.laws import bipolar, resistor

__all__ = [
    "CONSTANT",
    "SOURCES",
    "coefficient_law",
    "ruled_by_law",
    "saturation_growth",
    "saturation_slope",
]

_T, _T_0 = positive("T"), positive("T_0")
CONSTANT = ("N", "M", "n", "n_S", "V_CC", "V_out", "V_A")
"""What the surroundings hold, or what has no law of temperature."""
SOURCES = ("I_given", "V_ref")


def saturation_growth(volt_per_kelvin: sp.Symbol) -> sp.Expr:
    """Return ``ln(I_S(T)/I_S(T_0))`` for a bandgap voltage that is constant."""
    return bipolar.log_saturation_growth(
        T=_T,
        T_0=_T_0,
        eta=positive("eta"),
        V_G0=positive("V_G0"),
        varshni=sp.Integer(0),
        varshni_T=sp.Integer(0),
        volt_per_kelvin=volt_per_kelvin,
    )


def saturation_slope(order: int) -> sp.Expr:
    """Return a derivative of ``ln I_S`` by T, in x_G0 = V_G0/V_T and 1/T."""
    per_kelvin = sp.Symbol("k_q", positive=True)
    growth = saturation_growth(per_kelvin)
    slope = sp.diff(growth, _T, order).subs(positive("V_G0"), drop("G0") * per_kelvin * _T)
    return sp.factor(sp.expand(slope).subs(_T, 1 / INVERSE_T))


def ruled_by_law() -> dict[str, sp.Expr]:
    """Return the local coefficients [1/K] of the quantities that a law of the parts rules."""
    return {"I_S": saturation_slope(1)}


def coefficient_law(quantity: str) -> sp.Expr:
    """Return the local coefficient of a quantity from its TC1 and TC2.

    ``TC = (TC1 + 2 TC2 (T - T_0))/(1 + TC1 (T - T_0) + TC2 (T - T_0)^2)``.
    """
    d = sp.Dummy("d")
    ratio = resistor.ratio(_T_0 + d, _T_0, coefficient(quantity, 1), coefficient(quantity, 2))
    ratio = sp.collect(sp.expand(ratio), d)
    return (sp.diff(ratio, d) / ratio).xreplace({d: _T - _T_0})
