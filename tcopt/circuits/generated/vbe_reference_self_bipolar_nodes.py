"""Nodes of vbe reference, bipolar transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top')
QUANTITIES = ('I_L', 'R_base', 'inverse_beta')


def nodes(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, inverse_beta: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = R_base*x0
    x2 = inverse_beta**2
    x3 = x1*x2
    x4 = x1 + x3
    x5 = 2*I_L
    x6 = 2*x0
    return (
        (V_D, x4, x5 + x6),
        ((0, 1), (x4, 0), (x6, 0)),
        ((0, 0, 0), (0, x0*x2 + x0, 2*x3), (x5, 0, 0)),
    )
