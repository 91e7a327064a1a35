"""Nodes of degenerated mirror, ideal transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp

NODES = ('V_in', 'V_foot', 'I_top')
QUANTITIES = ('R_input', 'R_output', 'V_T', 'log_I_S')


def nodes(log_I_in: Any, log_I_out: Any, R_input: Any, R_output: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = exp(log_I_in)
    x1 = R_input*x0
    x2 = V_T*log_I_S
    x3 = exp(log_I_out)
    x4 = R_output*x3
    return (
        (V_T*log_I_in + x1 - x2, x4, x0),
        ((V_T + x1, 0), (0, x4), (x0, 0)),
        ((x0, 0, V_T*log_I_in - x2, -V_T), (0, x3, 0, 0), (0, 0, 0, 0)),
    )
