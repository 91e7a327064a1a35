"""peaking source, ideal transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_I_in', 'log_I_out')
QUANTITIES = ('I_given', 'N', 'R_drop', 'V_T')


def closed_form(I_given: Any, N: Any, R_drop: Any, V_T: Any) -> Any:
    """Return the currents [A]."""
    I_in = I_given
    log_I_in = log(I_in)
    log_free = -I_in*R_drop/V_T + log_I_in + log(N)
    log_I_out = log_free
    I_out = exp(log_I_out)
    return (I_in, I_out)


def partials(log_I_in: Any, log_I_out: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_I_in)
    x1 = -x0
    x2 = V_T*log_I_out
    x3 = R_drop*x0
    x4 = log(N)
    x5 = -V_T
    return (
        (-I_given - x1, V_T*log_I_in + V_T*x4 - x2 - x3),
        ((x0, 0), (-x3 - x5, x5)),
        ((-I_given, 0, 0, 0), (0, V_T, x1, V_T*log_I_in + V_T*x4 - x2)),
    )


def need_drop(I_out: Any, I_given: Any, N: Any, V_T: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    I_in = I_given
    log_I_in = log(I_in)
    return -(-V_T*log_I_in + V_T*log_I_out - V_T*log(N))/I_in


NEEDS = {"drop": need_drop}
