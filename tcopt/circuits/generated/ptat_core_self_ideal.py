"""ptat core, ideal transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_out',)
UNKNOWNS = ('log_I_out',)
QUANTITIES = ('M', 'N', 'R_core', 'V_T')


def closed_form(M: Any, N: Any, R_core: Any, V_T: Any) -> Any:
    """Return the currents [A]."""
    I_out = V_T*(log(M) + log(N))/R_core
    return (I_out,)


def partials(log_I_out: Any, M: Any, N: Any, R_core: Any, V_T: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_I_out)
    x1 = -R_core*x0
    x2 = V_T*log(M) + V_T*log(N)
    return (
        (x1 + x2,),
        ((x1,),),
        ((V_T, V_T, -x0, x2),),
    )


def need_core(I_out: Any, M: Any, N: Any, V_T: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    return -(-V_T*log(M) - V_T*log(N))/I_out


NEEDS = {"core": need_core}
