"""vbe reference, bipolar, followed transistors, input: self.

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
    x3 = inverse_beta**(-1.0)
    x4 = x1/(x3 + inverse_beta**(-2.0))
    x5 = R_base*inverse_beta*x4
    return (V_T*log(x1 - x4) - V_T*log(V_D*inverse_V_A + 1) - x0 - x2 - x5, V_D - 2*V_T*log_J_out + V_T*log(x3 + 1) + V_T*log(V_out*inverse_V_A - inverse_V_A*x2 - inverse_V_A*x5 + 1) + 2*x0 - x2 - x5)


def across(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_base*exp(log_J_out)
    return (V_out - inverse_beta*x0/(inverse_beta**(-1.0) + inverse_beta**(-2.0)) - x0, V_D)


def step(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = V_T*log_I_S
    x1 = V_D*inverse_V_A + 1
    x2 = exp(log_J_out)
    x3 = inverse_beta**(-1.0)
    x4 = x2/(x3 + inverse_beta**(-2.0))
    x5 = R_base*x2
    x6 = R_base*inverse_beta*x4
    x7 = x5 + x6
    x8 = 2*V_T
    x9 = inverse_V_A*x5 + inverse_V_A*x6
    x10 = V_out*inverse_V_A - x9 + 1
    f0 = -V_T*log(x1) + V_T*log(x2 - x4) - x0 - x7
    f1 = V_D + V_T*log(x10) + V_T*log(x3 + 1) - log_J_out*x8 + 2*x0 - x5 - x6
    a00 = V_T - x7
    a01 = -V_T*inverse_V_A/x1
    a10 = -V_T*x9/x10 - x7 - x8
    y0 = (a00 - a01*a10)**(-1.0)
    return (y0*(a01*f1 - f0), y0*(-a00*f1 + a10*f0))


def partials(log_J_out: Any, V_D: Any, I_L: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = R_base*x0
    x2 = inverse_beta**2
    x3 = x2**(-1.0)
    x4 = inverse_beta**(-1.0)
    x5 = x0/(x3 + x4)
    x6 = inverse_beta*x5
    x7 = R_base*x6
    x8 = x1 + x7
    x9 = V_T*log_I_S
    x10 = V_D*inverse_V_A
    x11 = x10 + 1
    x12 = V_T*log(x11) - V_T*log(x0 - x5) + x9
    x13 = 2*V_T
    x14 = x4 + 1
    x15 = inverse_V_A*x1
    x16 = inverse_V_A*x7 + x15
    x17 = V_out*inverse_V_A - x16 + 1
    x18 = V_T*log(x14) + V_T*log(x17) - log_J_out*x13 + 2*x9
    x19 = -V_T
    x20 = V_T/x11
    x21 = x17**(-1.0)
    x22 = x0 + x6
    x23 = inverse_beta**3
    x24 = x23**(-1.0)
    x25 = (inverse_beta + 1)**(-1.0)
    x26 = inverse_beta*x0
    x27 = (inverse_beta + x2)**(-1.0)
    x28 = 2*x27
    x29 = (x2 + x23)**(-1.0)
    x30 = x0*x2
    x31 = inverse_beta**(-4.0)
    x32 = 2*x24
    x33 = 2*x3
    x34 = x1/(x3 + x31 + x32) + 2*x1/(x24 + x33 + x4) + x7
    x35 = V_T*x21
    x36 = x15/x14
    x37 = -V_out*inverse_V_A*x3 + x15*x3 - x3 + x36
    x38 = R_base*inverse_V_A*x5 - V_out*inverse_V_A*x4 + x15*x4 - x4
    x39 = V_T*inverse_beta
    x40 = x15*x39/(-x37 - x38)
    x41 = x15*x25
    return (
        (-x12 - x8, V_D - x1 + x18 - x7),
        ((-x19 - x8, -inverse_V_A*x20), (-V_T*x16*x21 - x13 - x8, 1)),
        ((0, -x22, -x12, 0, -x10*x20, -V_T*x0/(x0*x24 + 2*x0*x3 + x0*x4 - x25*x26 - x26*x28 - x26*x29) - x0*x13/(x0*x3 + 2*x0*x4 + x0 - x25*x30 - x28*x30 - x29*x30) - x34, x19), (0, V_T*x21*(-inverse_V_A*x0 - inverse_V_A*x6) - x22, x18, V_out*inverse_V_A*x35, V_T*V_out*inverse_V_A*x21 - x15*x35 - x40, -V_T*x15/(2*V_out*inverse_V_A*x24 + V_out*inverse_V_A*x31 - x15*x27 - x15*x31 - x15*x32 + 2*x24 + x31 - x37 - 2*x41) - x13*x15/(V_out*inverse_V_A*x24 + 2*V_out*inverse_V_A*x3 - x15*x24 - x15*x33 + x24 + 2*x3 - 2*x36 - x38 - x41) - x27*x39 - x34 - x40, x13)),
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
    x1 = exp(log_J_out)
    x2 = R_base*x1
    x3 = V_D*inverse_V_A + 1
    x4 = inverse_beta**(-1.0)
    x5 = x1/(x4 + inverse_beta**(-2.0))
    x6 = inverse_beta*x5
    x7 = R_base*x6
    x8 = V_out*inverse_V_A - inverse_V_A*x2 - inverse_V_A*x7 + 1
    x9 = x1 + x6
    f0 = -V_T*log(x3) + V_T*log(x1 - x5) - x0 - x2 - x7
    f1 = V_D - 2*V_T*log_J_out + V_T*log(x8) + V_T*log(x4 + 1) + 2*x0 - x2 - x7
    a00 = -V_T*inverse_V_A/x3
    a01 = -x9
    a11 = V_T*(-inverse_V_A*x1 - inverse_V_A*x6)/x8 - x9
    y0 = (a00*a11 - a01)**(-1.0)
    return (y0*(a01*f1 - a11*f0), y0*(-a00*f1 + f0))


PINS = {"base": (pin_base, ('V_D', 'R_base'), ())}
