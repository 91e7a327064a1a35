"""Nodes of peaking source, bipolar transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

NODES = ('V_in', 'V_foot', 'I_top')
QUANTITIES = ('I_L', 'V_T', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def nodes(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, V_T: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = V_D*inverse_V_A
    x1 = x0 + 1
    x2 = -V_T*log_I_S + V_T*log_J_in - V_T*log(x1)
    x3 = inverse_beta*exp(log_J_out)
    x4 = exp(log_J_in)
    x5 = inverse_beta*x4
    x6 = x4 + x5
    x7 = V_T/x1
    return (
        (x2, 0, I_L + x3 + x6),
        ((V_T, 0, -inverse_V_A*x7), (0, 0, 0), (x6, x3, 0)),
        ((0, x2, -x0*x7, 0, -V_T), (0, 0, 0, 0, 0), (I_L, 0, 0, x3 + x5, 0)),
    )
