"""ptat core, bipolar transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_out',)
UNKNOWNS = ('log_J_out', 'V_D')
QUANTITIES = ('I_L', 'M', 'N', 'R_core', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_out)
    x1 = R_core*x0
    x2 = inverse_beta*x0
    x3 = R_core*x2
    x4 = V_T*log(inverse_beta + 1) + V_T*log(V_D*inverse_V_A + 1) - V_T*log(I_L*M*N - I_L + M*x0 - x2)
    return (-V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_V_A*x1 - inverse_V_A*x3 + 1) - x1 - x3 - x4, V_D + V_T*log_I_S + x4)


def across(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_core*exp(log_J_out)
    return (V_out - inverse_beta*x0 - x0, V_D)


def step(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = R_core*x0
    x2 = inverse_beta*x0
    x3 = R_core*x2
    x4 = inverse_V_A*x1 + inverse_V_A*x3
    x5 = V_out*inverse_V_A - x4 + 1
    x6 = V_D*inverse_V_A + 1
    x7 = M*x0 - x2
    x8 = I_L*M*N - I_L + x7
    x9 = V_T*log(x6) - V_T*log(x8) + V_T*log(inverse_beta + 1)
    x10 = x1 + x3
    x11 = -V_T*x7/x8
    x12 = V_T*inverse_V_A/x6
    f0 = -V_T*log_J_out + V_T*log(N) + V_T*log(x5) - x10 - x9
    f1 = V_D + V_T*log_I_S + x9
    a00 = -V_T*x4/x5 - V_T - x10 - x11
    a01 = -x12
    a10 = x11
    a11 = x12 + 1
    y0 = (a00*a11 - a01*a10)**(-1.0)
    return (y0*(a01*f1 - a11*f0), y0*(-a00*f1 + a10*f0))


def partials(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
    x2 = R_core*x1
    x3 = R_core*x0
    x4 = x2 + x3
    x5 = inverse_V_A*x3
    x6 = inverse_V_A*x2
    x7 = x5 + x6
    x8 = V_out*inverse_V_A - x7 + 1
    x9 = inverse_beta + 1
    x10 = V_D*inverse_V_A
    x11 = x10 + 1
    x12 = I_L*M*N
    x13 = M*x0
    x14 = -x1 + x13
    x15 = -I_L + x12 + x14
    x16 = V_T*log(x11) - V_T*log(x15) + V_T*log(x9)
    x17 = V_T*log_J_out - V_T*log(N) - V_T*log(x8) + x16
    x18 = V_T*log_I_S + x16
    x19 = x8**(-1.0)
    x20 = V_T/x15
    x21 = -x14*x20
    x22 = V_T/x11
    x23 = inverse_V_A*x22
    x24 = x12*x20
    x25 = -I_L*x20 + x24
    x26 = x13*x20 + x24
    x27 = V_T*x19
    x28 = x10*x22
    x29 = x27*x6
    x30 = V_T*inverse_beta/x9 + x1*x20
    return (
        (-x17 - x4, V_D + x18),
        ((-V_T*x19*x7 - V_T - x21 - x4, -x23), (x21, x23 + 1)),
        ((x25, x26, V_T + x24, V_T*x19*(-inverse_V_A*x0 - inverse_V_A*x1) - x0 - x1, -x17, V_out*inverse_V_A*x27, V_T*V_out*inverse_V_A*x19 - x27*x5 - x28 - x29, -x2 - x29 - x30, 0), (-x25, -x26, -x24, 0, x18, 0, x28, x30, V_T)),
    )


def outputs(log_J_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = I_L*N
    x2 = x0 + x1
    x3 = x2**(-1.0)
    x4 = x1*x3
    return (
        (log(x2),),
        ((x0*x3, 0),),
        ((x4, 0, x4, 0, 0, 0, 0, 0, 0),),
    )


def pinned(I_out: Any, I_L: Any, M: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_core(V_D: Any, R_core: Any, log_J_out: Any, I_L: Any, M: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = R_core*x0
    x2 = inverse_beta*x0
    x3 = R_core*x2
    x4 = V_out*inverse_V_A - inverse_V_A*x1 - inverse_V_A*x3 + 1
    x5 = V_D*inverse_V_A + 1
    x6 = V_T*log(x5) + V_T*log(inverse_beta + 1) - V_T*log(I_L*M*N - I_L + M*x0 - x2)
    x7 = V_T*inverse_V_A/x5
    f0 = -V_T*log_J_out + V_T*log(N) + V_T*log(x4) - x1 - x3 - x6
    f1 = V_D + V_T*log_I_S + x6
    a00 = -x7
    a01 = V_T*(-inverse_V_A*x0 - inverse_V_A*x2)/x4 - x0 - x2
    a10 = x7 + 1
    y0 = a10**(-1.0)
    return (-f1*y0, -y0*(-a00*f1 + a10*f0)/a01)


PINS = {"core": (pin_core, ('V_D', 'R_core'), (1,))}
