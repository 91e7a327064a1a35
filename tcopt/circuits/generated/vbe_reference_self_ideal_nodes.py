"""Nodes of vbe reference, ideal transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top')
QUANTITIES = ('R_base', 'V_T', 'log_I_S')


def nodes(log_I_out: Any, R_base: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_I_out)
    x1 = R_base*x0
    x2 = V_T*log_I_S
    x3 = 2*x0
    return (
        (V_T*log_I_out + x1 - x2, x1, x3),
        ((V_T + x1,), (x1,), (x3,)),
        ((x0, V_T*log_I_out - x2, -V_T), (x0, 0, 0), (0, 0, 0)),
    )
