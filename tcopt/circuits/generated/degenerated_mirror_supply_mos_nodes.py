"""Nodes of degenerated mirror, mos transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top', 'D_in', 'D_out')
QUANTITIES = ('I_L', 'N', 'R_input', 'R_output')


def nodes(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_input: Any, R_output: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = R_input*x0
    x2 = exp(log_J_out)
    x3 = R_output*x2
    x4 = x2/N
    return (
        (V_D + x1, x3, I_L + x0, x0, x4),
        ((x1, 0, 1), (0, x3, 0), (x0, 0, 0), (x0, 0, 0), (0, x4, 0)),
        ((0, 0, x0, 0), (0, 0, 0, x2), (I_L, 0, 0, 0), (0, 0, 0, 0), (0, -x4, 0, 0)),
    )
