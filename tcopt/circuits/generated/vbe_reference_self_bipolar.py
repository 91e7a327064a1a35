"""vbe reference, bipolar transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_out',)
UNKNOWNS = ('log_J_out',)
QUANTITIES = ('I_L', 'R_base', 'V_T', 'inverse_beta', 'log_I_S')


def step(log_J_out: Any, I_L: Any, R_base: Any, V_T: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = R_base*x0
    x2 = inverse_beta**2*x1 + x1
    f0 = -V_T*log_I_S + V_T*log(-inverse_beta*x0 + x0) - x2
    a00 = V_T - x2
    return (-f0/a00,)


def partials(log_J_out: Any, I_L: Any, R_base: Any, V_T: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
    x2 = x0 - x1
    x3 = V_T*log_I_S - V_T*log(x2)
    x4 = R_base*x0
    x5 = inverse_beta**2
    x6 = x4*x5
    x7 = x4 + x6
    x8 = -V_T
    return (
        (-x3 - x7,),
        ((-x7 - x8,),),
        ((0, -x0*x5 - x0, -x3, -V_T*x1/x2 - 2*x6, x8),),
    )


def outputs(log_J_out: Any, I_L: Any, R_base: Any, V_T: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = I_L + x0
    x2 = x1**(-1.0)
    return (
        (log(x1),),
        ((x0*x2,),),
        ((I_L*x2, 0, 0, 0, 0),),
    )
