"""Nodes of ptat core, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top', 'D_in', 'D_out')
QUANTITIES = ('I_L', 'M', 'N', 'R_core')


def nodes(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = R_core*x0
    x2 = M*x0
    x3 = x0 + x2
    x4 = I_L*N
    x5 = M*x4
    x6 = x4 + x5
    x7 = -I_L
    x8 = x2 + x5
    x9 = x0/N
    return (
        (V_D, x1, x3 + x6, x7 + x8, x9),
        ((0, 1), (x1, 0), (x3, 0), (x2, 0), (x9, 0)),
        ((0, 0, 0, 0), (0, 0, 0, x0), (x6, x8, x6, 0), (x5 + x7, x8, x5, 0), (0, 0, -x9, 0)),
    )
