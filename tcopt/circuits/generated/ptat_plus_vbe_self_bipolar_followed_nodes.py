"""Nodes of ptat plus vbe, bipolar, followed transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top')
QUANTITIES = ('I_L', 'M', 'N', 'R_core', 'inverse_beta')


def nodes(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, inverse_beta: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_beta*x1
    x3 = x1 + x2
    x4 = exp(log_I_out)
    x5 = M*x0
    x6 = I_L*M*N
    x7 = x5 + x6
    return (
        (V_D, x3, x4 + x7),
        ((0, 0, 1), (x3, 0, 0), (x5, x4, 0)),
        ((0, 0, 0, 0, 0), (0, 0, 0, inverse_beta*x0 + x0, x2), (x6, x7, x6, 0, 0)),
    )
