"""vbe reference, bipolar transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_out',)
UNKNOWNS = ('log_J_out', 'V_D')
QUANTITIES = ('I_L', 'R_base', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = V_T*log_I_S
    x1 = exp(log_J_out)
    x2 = R_base*x1
    x3 = inverse_beta**2*x2
    x4 = x2 + x3
    return (-V_T*log(V_D*inverse_V_A + 1) + V_T*log(-inverse_beta*x1 + x1) - x0 - x4, V_D - V_T*log_J_out + V_T*log(V_out*inverse_V_A - inverse_V_A*x2 - inverse_V_A*x3 + 1) + x0 - x4)


def across(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_base*exp(log_J_out)
    return (V_out - inverse_beta**2*x0 - x0, V_D)


def step(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = V_T*log_I_S
    x1 = V_D*inverse_V_A + 1
    x2 = exp(log_J_out)
    x3 = R_base*x2
    x4 = inverse_beta**2*x3
    x5 = x3 + x4
    x6 = inverse_V_A*x3 + inverse_V_A*x4
    x7 = V_out*inverse_V_A - x6 + 1
    f0 = -V_T*log(x1) + V_T*log(-inverse_beta*x2 + x2) - x0 - x5
    f1 = V_D - V_T*log_J_out + V_T*log(x7) + x0 - x5
    a00 = V_T - x5
    a01 = -V_T*inverse_V_A/x1
    a10 = -V_T*x6/x7 - V_T - x5
    y0 = (a00 - a01*a10)**(-1.0)
    return (y0*(a01*f1 - f0), y0*(-a00*f1 + a10*f0))


def partials(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = R_base*x0
    x2 = inverse_beta**2
    x3 = x1*x2
    x4 = x1 + x3
    x5 = V_T*log_I_S
    x6 = V_D*inverse_V_A
    x7 = x6 + 1
    x8 = inverse_beta*x0
    x9 = x0 - x8
    x10 = V_T*log(x7) - V_T*log(x9) + x5
    x11 = V_T*log_J_out
    x12 = inverse_V_A*x1
    x13 = inverse_V_A*x3
    x14 = x12 + x13
    x15 = V_out*inverse_V_A - x14 + 1
    x16 = log(x15)
    x17 = -V_T
    x18 = V_T/x7
    x19 = x15**(-1.0)
    x20 = x0*x2
    x21 = x0 + x20
    x22 = 2*x3
    x23 = V_T*x19
    x24 = x13*x23
    return (
        (-x10 - x4, V_D + V_T*x16 - x11 - x4 + x5),
        ((-x17 - x4, -inverse_V_A*x18), (-V_T*x14*x19 - V_T - x4, 1)),
        ((0, -x21, -x10, 0, -x18*x6, -V_T*x8/x9 - x22, x17), (0, V_T*x19*(-inverse_V_A*x0 - inverse_V_A*x20) - x21, V_T*x16 - x11 + x5, V_out*inverse_V_A*x23, V_T*V_out*inverse_V_A*x19 - x12*x23 - x24, -x22 - 2*x24, V_T)),
    )


def outputs(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = I_L + x0
    x2 = x1**(-1.0)
    return (
        (log(x1),),
        ((x0*x2, 0),),
        ((I_L*x2, 0, 0, 0, 0, 0, 0),),
    )


def pinned(I_out: Any, I_L: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L + I_out)


def pin_base(V_D: Any, R_base: Any, log_J_out: Any, I_L: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = V_T*log_I_S
    x1 = V_D*inverse_V_A + 1
    x2 = exp(log_J_out)
    x3 = R_base*x2
    x4 = inverse_beta**2
    x5 = x3*x4
    x6 = x3 + x5
    x7 = V_out*inverse_V_A - inverse_V_A*x3 - inverse_V_A*x5 + 1
    x8 = x2*x4
    x9 = x2 + x8
    f0 = -V_T*log(x1) + V_T*log(-inverse_beta*x2 + x2) - x0 - x6
    f1 = V_D - V_T*log_J_out + V_T*log(x7) + x0 - x6
    a00 = -V_T*inverse_V_A/x1
    a01 = -x9
    a11 = V_T*(-inverse_V_A*x2 - inverse_V_A*x8)/x7 - x9
    y0 = (a00*a11 - a01)**(-1.0)
    return (y0*(a01*f1 - a11*f0), y0*(-a00*f1 + f0))


PINS = {"base": (pin_base, ('V_D', 'R_base'), ())}
