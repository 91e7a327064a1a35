"""ptat plus vbe, ideal transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log
from scipy.special import wrightomega

CURRENTS = ('I_core', 'I_out')
UNKNOWNS = ('log_I_core', 'log_I_out')
QUANTITIES = ('M', 'N', 'R_base', 'R_core', 'V_T', 'log_I_S')


def closed_form(M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the currents [A]."""
    I_core = V_T*(log(M) + log(N))/R_core
    log_I_core = log(I_core)
    I_out = (I_core*R_base - V_T*log_I_S + V_T*log_I_core + V_T*log(M))/R_base
    return (I_core, I_out)


def partials(log_I_core: Any, log_I_out: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_I_core)
    x1 = -R_core*x0
    x2 = V_T*log(M)
    x3 = V_T*log(N) + x2
    x4 = R_base*x0
    x5 = exp(log_I_out)
    x6 = -R_base*x5
    x7 = -V_T*log_I_S + V_T*log_I_core + x2
    return (
        (x1 + x3, x4 + x6 + x7),
        ((x1, 0), (V_T + x4, x6)),
        ((V_T, V_T, 0, -x0, x3, 0), (V_T, 0, x0 - x5, 0, x7, -V_T)),
    )


def need_core(I_out: Any, M: Any, N: Any, R_base: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    log_free = I_out*R_base/V_T + log_I_S - log(M)
    share = R_base/V_T
    log_I_core = log_free - wrightomega(log(share) + log_free)
    I_core = exp(log_I_core)
    return -(-V_T*log(M) - V_T*log(N))/I_core


def need_base(I_out: Any, M: Any, N: Any, R_core: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    I_core = V_T*(log(M) + log(N))/R_core
    log_I_core = log(I_core)
    return (V_T*log_I_S - V_T*log_I_core - V_T*log(M))/(I_core - I_out)


NEEDS = {"core": need_core, "base": need_base}
