"""Nodes of gate source reference, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top', 'D_in', 'D_out')
QUANTITIES = ('I_L', 'R_gate')


def nodes(log_J_out: Any, V_D: Any, I_L: Any, R_gate: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = R_gate*x0
    x2 = 2*I_L
    x3 = 2*x0
    return (
        (V_D, x1, x2 + x3, x0, x0),
        ((0, 1), (x1, 0), (x3, 0), (x0, 0), (x0, 0)),
        ((0, 0), (0, x0), (x2, 0), (0, 0), (0, 0)),
    )
