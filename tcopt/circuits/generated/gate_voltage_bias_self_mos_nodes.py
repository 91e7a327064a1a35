"""Nodes of gate voltage bias, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_foot', 'D_out')
QUANTITIES = ('N', 'R_source')


def nodes(log_J_out: Any, N: Any, R_source: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = R_source*x0
    x2 = x0/N
    return (
        (x1, x2),
        ((x1,), (x2,)),
        ((0, x0), (-x2, 0)),
    )
