"""vbe reference, bipolar, followed transistors, input: self.

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
    x1 = x0/(inverse_beta**(-1.0) + inverse_beta**(-2.0))
    x2 = R_base*inverse_beta*x1 + R_base*x0
    f0 = -V_T*log_I_S + V_T*log(x0 - x1) - x2
    a00 = V_T - x2
    return (-f0/a00,)


def partials(log_J_out: Any, I_L: Any, R_base: Any, V_T: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = inverse_beta**2
    x2 = x1**(-1.0)
    x3 = inverse_beta**(-1.0)
    x4 = x0/(x2 + x3)
    x5 = V_T*log_I_S - V_T*log(x0 - x4)
    x6 = R_base*x0
    x7 = inverse_beta*x4
    x8 = R_base*x7
    x9 = x6 + x8
    x10 = -V_T
    x11 = inverse_beta**3
    x12 = x11**(-1.0)
    x13 = (inverse_beta + 1)**(-1.0)
    x14 = inverse_beta*x0
    x15 = 2/(inverse_beta + x1)
    x16 = (x1 + x11)**(-1.0)
    x17 = V_T*x0
    x18 = x0*x1
    return (
        (-x5 - x9,),
        ((-x10 - x9,),),
        ((0, -x0 - x7, -x5, -2*x17/(x0*x2 + 2*x0*x3 + x0 - x13*x18 - x15*x18 - x16*x18) - x17/(x0*x12 + 2*x0*x2 + x0*x3 - x13*x14 - x14*x15 - x14*x16) - x6/(2*x12 + x2 + inverse_beta**(-4.0)) - 2*x6/(x12 + 2*x2 + x3) - x8, x10),),
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
