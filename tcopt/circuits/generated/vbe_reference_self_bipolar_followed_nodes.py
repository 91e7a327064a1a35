"""Nodes of vbe reference, bipolar, followed transistors, input: self.

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
    x2 = inverse_beta**(-2.0)
    x3 = inverse_beta**(-1.0)
    x4 = inverse_beta/(x2 + x3)
    x5 = x1*x4
    x6 = x1 + x5
    x7 = 2*I_L
    x8 = 2*x0
    x9 = inverse_beta**(-3.0)
    return (
        (V_D, x6, x7 + x8),
        ((0, 1), (x6, 0), (x8, 0)),
        ((0, 0, 0), (0, x0*x4 + x0, 2*x1/(2*x2 + x3 + x9) + x1/(x2 + 2*x9 + inverse_beta**(-4.0)) + x5), (x7, 0, 0)),
    )
