"""reference over resistor, ideal transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_out',)
UNKNOWNS = ('log_I_out',)
QUANTITIES = ('R_sense', 'V_ref')


def closed_form(R_sense: Any, V_ref: Any) -> Any:
    """Return the currents [A]."""
    I_out = V_ref/R_sense
    return (I_out,)


def partials(log_I_out: Any, R_sense: Any, V_ref: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_I_out)
    x1 = R_sense*x0
    return (
        (V_ref - x1,),
        ((-x1,),),
        ((-x0, V_ref),),
    )


def need_sense(I_out: Any, V_ref: Any) -> Any:
    """Return the needed resistance [ohm]."""
    log_I_out = log(I_out)
    return V_ref/I_out


NEEDS = {"sense": need_sense}
