"""Resistance against temperature, to second order.

``R(T) = R_0 (1 + TC1 (T - T_0) + TC2 (T - T_0)^2)``, T_0 the reference of the
material's own data. The law is an empirical fit; outside the range in which it
was fitted it says nothing.
"""

from __future__ import annotations

import sympy as sp

__all__ = ["ratio"]


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
