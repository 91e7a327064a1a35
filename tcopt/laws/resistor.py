"""Resistance against temperature, to second order.

``R(T) = R_0 (1 + TC1 (T - T_0) + TC2 (T - T_0)^2)``, T_0 the reference of the
material's own data. The law is an empirical fit; outside the range in which it
was fitted it says nothing.
"""

from __future__ import annotations

import sympy as sp

__all__ = ["about", "ratio"]


def ratio(T: sp.Expr, T_0: sp.Expr, TC1: sp.Expr, TC2: sp.Expr) -> sp.Expr:
    """Return ``R(T)/R(T_0)``.

    Parameters
    ----------
    T, T_0 : temperature and reference of the data [K]
    TC1 : first-order coefficient [1/K]
    TC2 : second-order coefficient [1/K^2]
    """
    d = T - T_0
    return 1 + TC1 * d + TC2 * d**2


def about(T: sp.Expr, T_0: sp.Expr, TC1: sp.Expr, TC2: sp.Expr) -> tuple[sp.Expr, sp.Expr]:
    """Return TC1 [1/K] and TC2 [1/K^2] of the same resistance with T as the reference.

    The law is a parabola, so its expansion about another temperature is exact:
    ``TC1' = (TC1 + 2 TC2 d)/(1 + TC1 d + TC2 d^2)``, ``TC2' = TC2/(1 + TC1 d + TC2 d^2)``,
    ``d = T - T_0``.

    Parameters
    ----------
    T, T_0 : new reference, and the reference of the data [K]
    TC1 : first-order coefficient about T_0 [1/K]
    TC2 : second-order coefficient about T_0 [1/K^2]
    """
    here = ratio(T, T_0, TC1, TC2)
    return sp.diff(here, T) / here, sp.diff(here, T, 2) / 2 / here
