"""peaking source, ideal transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log
from scipy.special import wrightomega

from tcopt.laws.roots import upper_root

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_I_in', 'log_I_out')
QUANTITIES = ('N', 'R_drop', 'R_feed', 'V_CC', 'V_T', 'log_I_S')


def closed_form(N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the currents [A]."""
    log_free = V_CC/V_T + log_I_S
    share = R_feed/V_T
    log_I_in = log_free - wrightomega(log(share) + log_free)
    I_in = exp(log_I_in)
    log_free = -I_in*R_drop/V_T + log_I_in + log(N)
    log_I_out = log_free
    I_out = exp(log_I_out)
    return (I_in, I_out)


def partials(log_I_in: Any, log_I_out: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = V_T*log_I_in
    x1 = exp(log_I_in)
    x2 = R_feed*x1
    x3 = V_T*log_I_out
    x4 = R_drop*x1
    x5 = -x0
    x6 = log(N)
    x7 = -V_T
    x8 = -x1
    return (
        (V_CC + V_T*log_I_S - x0 - x2, V_T*x6 - x3 - x4 - x5),
        ((-V_T - x2, 0), (-x4 - x7, x7)),
        ((0, 0, x8, V_CC, V_T*log_I_S + x5, V_T), (V_T, x8, 0, 0, V_T*x6 + x0 - x3, 0)),
    )


def need_feed(I_out: Any, N: Any, R_drop: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    log_free = log_I_out - log(N)
    share = R_drop/V_T
    log_I_in = log_free + upper_root(-log(share) - log_free)
    I_in = exp(log_I_in)
    return -(-V_CC - V_T*log_I_S + V_T*log_I_in)/I_in


def need_drop(I_out: Any, N: Any, R_feed: Any, V_CC: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    log_free = V_CC/V_T + log_I_S
    share = R_feed/V_T
    log_I_in = log_free - wrightomega(log(share) + log_free)
    I_in = exp(log_I_in)
    return -(-V_T*log_I_in + V_T*log_I_out - V_T*log(N))/I_in


NEEDS = {"feed": need_feed, "drop": need_drop}
