"""degenerated mirror, ideal transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log
from scipy.special import wrightomega

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_I_in', 'log_I_out')
QUANTITIES = ('N', 'R_feed', 'R_input', 'R_output', 'V_CC', 'V_T', 'log_I_S')


def closed_form(N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the currents [A]."""
    log_free = V_CC/V_T + log_I_S
    share = (R_feed + R_input)/V_T
    log_I_in = log_free - wrightomega(log(share) + log_free)
    I_in = exp(log_I_in)
    log_free = I_in*R_input/V_T + log_I_in + log(N)
    share = R_output/V_T
    log_I_out = log_free - wrightomega(log(share) + log_free)
    I_out = exp(log_I_out)
    return (I_in, I_out)


def partials(log_I_in: Any, log_I_out: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = V_T*log_I_in
    x1 = exp(log_I_in)
    x2 = R_feed*x1
    x3 = R_input*x1
    x4 = exp(log_I_out)
    x5 = R_output*x4
    x6 = -V_T*log_I_out + V_T*log(N) + x0
    x7 = V_T + x3
    x8 = -x1
    return (
        (V_CC + V_T*log_I_S - x0 - x2 - x3, x3 - x5 + x6),
        ((-x2 - x7, 0), (x7, -V_T - x5)),
        ((0, x8, x8, 0, V_CC, V_T*log_I_S - x0, V_T), (V_T, 0, x1, -x4, 0, x6, 0)),
    )


def need_feed(I_out: Any, N: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    log_free = I_out*R_output/V_T + log_I_out - log(N)
    share = R_input/V_T
    log_I_in = log_free - wrightomega(log(share) + log_free)
    I_in = exp(log_I_in)
    return -(I_in*R_input - V_CC - V_T*log_I_S + V_T*log_I_in)/I_in


def need_input(I_out: Any, N: Any, R_feed: Any, R_output: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    I_in = -(I_out*R_output - V_CC - V_T*log_I_S + V_T*log_I_out - V_T*log(N))/R_feed
    log_I_in = log(I_in)
    return -(I_in*R_feed - V_CC - V_T*log_I_S + V_T*log_I_in)/I_in


def need_output(I_out: Any, N: Any, R_feed: Any, R_input: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    log_free = V_CC/V_T + log_I_S
    share = (R_feed + R_input)/V_T
    log_I_in = log_free - wrightomega(log(share) + log_free)
    I_in = exp(log_I_in)
    return -(-I_in*R_input - V_T*log_I_in + V_T*log_I_out - V_T*log(N))/I_out


NEEDS = {"feed": need_feed, "input": need_input, "output": need_output}
