"""Nodes of degenerated mirror, bipolar, followed transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top')
QUANTITIES = ('I_L', 'I_others', 'R_input', 'R_output', 'inverse_beta')


def nodes(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, R_input: Any, R_output: Any, inverse_beta: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = R_input*x0
    x2 = inverse_beta*x1
    x3 = x1 + x2
    x4 = exp(log_J_out)
    x5 = R_output*x4
    x6 = inverse_beta*x5
    x7 = x5 + x6
    x8 = inverse_beta**(-1.0)
    x9 = (x8 + 1)**(-1.0)
    x10 = I_others*x9
    x11 = inverse_beta*x4
    x12 = x11*x9
    x13 = inverse_beta*x0
    x14 = x13*x9
    x15 = x0 + x14
    x16 = (inverse_beta + x8 + 2)**(-1.0)
    return (
        (V_D + x3, x7, I_L + x10 + x12 + x15),
        ((x3, 0, 1), (0, x7, 0), (x15, x12, 0)),
        ((0, 0, x0 + x13, 0, x2), (0, 0, 0, x11 + x4, x6), (I_L, x10, 0, 0, I_others*inverse_beta/(inverse_beta**2 + 2*inverse_beta + 1) + x11*x16 + x12 + x13*x16 + x14)),
    )
