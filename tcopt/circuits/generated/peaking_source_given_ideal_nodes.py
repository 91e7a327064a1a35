"""Nodes of peaking source, ideal transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top')
QUANTITIES = ('V_T', 'log_I_S')


def nodes(log_I_in: Any, log_I_out: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = -V_T*log_I_S + V_T*log_I_in
    x1 = exp(log_I_in)
    return (
        (x0, 0, x1),
        ((V_T, 0), (0, 0), (x1, 0)),
        ((x0, -V_T), (0, 0), (0, 0)),
    )
