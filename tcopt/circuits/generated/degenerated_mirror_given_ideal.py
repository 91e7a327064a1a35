"""degenerated mirror, ideal transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log
from scipy.special import wrightomega

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_I_in', 'log_I_out')
QUANTITIES = ('I_given', 'N', 'R_input', 'R_output', 'V_T')


def closed_form(I_given: Any, N: Any, R_input: Any, R_output: Any, V_T: Any) -> Any:
    """Return the currents [A]."""
    I_in = I_given
    log_I_in = log(I_in)
    log_free = I_in*R_input/V_T + log_I_in + log(N)
    share = R_output/V_T
    log_I_out = log_free - wrightomega(log(share) + log_free)
    I_out = exp(log_I_out)
    return (I_in, I_out)


def partials(log_I_in: Any, log_I_out: Any, I_given: Any, N: Any, R_input: Any, R_output: Any, V_T: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_I_in)
    x1 = R_input*x0
    x2 = exp(log_I_out)
    x3 = R_output*x2
    x4 = V_T*log_I_in - V_T*log_I_out + V_T*log(N)
    return (
        (-I_given + x0, x1 - x3 + x4),
        ((x0, 0), (V_T + x1, -V_T - x3)),
        ((-I_given, 0, 0, 0, 0), (0, V_T, x0, -x2, x4)),
    )


def need_input(I_out: Any, I_given: Any, N: Any, R_output: Any, V_T: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    I_in = I_given
    log_I_in = log(I_in)
    return (I_out*R_output - V_T*log_I_in + V_T*log_I_out - V_T*log(N))/I_in


def need_output(I_out: Any, I_given: Any, N: Any, R_input: Any, V_T: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    I_in = I_given
    log_I_in = log(I_in)
    return -(-I_in*R_input - V_T*log_I_in + V_T*log_I_out - V_T*log(N))/I_out


NEEDS = {"input": need_input, "output": need_output}
