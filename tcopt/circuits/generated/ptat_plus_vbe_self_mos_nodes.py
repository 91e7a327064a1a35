"""Nodes of ptat plus vbe, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top', 'D_in', 'D_out')
QUANTITIES = ('I_L', 'M', 'N', 'R_core')


def nodes(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = exp(log_I_out)
    x3 = M*x0
    x4 = I_L*M*N
    x5 = x3 + x4
    x6 = -I_L
    x7 = x0/N
    return (
        (V_D, x1, x2 + x5, x5 + x6, x7),
        ((0, 0, 1), (x1, 0, 0), (x3, x2, 0), (x3, 0, 0), (x7, 0, 0)),
        ((0, 0, 0, 0), (0, 0, 0, x0), (x4, x5, x4, 0), (x4 + x6, x5, x4, 0), (0, 0, -x7, 0)),
    )
