"""vbe reference, ideal transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

from tcopt.laws.roots import upper_root

CURRENTS = ('I_out',)
UNKNOWNS = ('log_I_out',)
QUANTITIES = ('R_base', 'V_T', 'log_I_S')


def closed_form(R_base: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the currents [A]."""
    log_free = log_I_S
    share = R_base/V_T
    log_I_out = log_free + upper_root(-log(share) - log_free)
    I_out = exp(log_I_out)
    return (I_out,)


def partials(log_I_out: Any, R_base: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_I_out)
    x1 = R_base*x0
    x2 = V_T*log_I_S - V_T*log_I_out
    x3 = -V_T
    return (
        (-x1 - x2,),
        ((-x1 - x3,),),
        ((-x0, -x2, x3),),
    )


def need_base(I_out: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    return -(V_T*log_I_S - V_T*log_I_out)/I_out


NEEDS = {"base": need_base}
