"""Nodes of ptat plus vbe, ideal transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

NODES = ('V_in', 'V_foot', 'I_top')
QUANTITIES = ('M', 'R_core', 'V_T', 'log_I_S')


def nodes(log_I_core: Any, log_I_out: Any, M: Any, R_core: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = -V_T*log_I_S + V_T*log_I_core + V_T*log(M)
    x1 = exp(log_I_core)
    x2 = R_core*x1
    x3 = exp(log_I_out)
    x4 = M*x1
    return (
        (x0, x2, x3 + x4),
        ((V_T, 0), (x2, 0), (x4, x3)),
        ((V_T, 0, x0, -V_T), (0, x1, 0, 0), (x4, 0, 0, 0)),
    )
