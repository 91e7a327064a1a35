"""peaking source, bipolar transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_given', 'N', 'R_drop', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_in)
    x1 = inverse_beta*exp(log_J_out)
    x2 = V_T*log_J_out
    x3 = log(N)
    x4 = log(V_out*inverse_V_A + 1)
    return (I_L - I_given + inverse_beta*x0 + x0 + x1, -I_L*R_drop - R_drop*x0 - R_drop*x1 + V_T*log_J_in + V_T*x3 + V_T*x4 - V_T*log(V_D*inverse_V_A + 1) - x2, V_D + V_T*log_I_S + V_T*x3 + V_T*x4 - x2)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (V_out, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = inverse_beta*exp(log_J_out)
    x1 = exp(log_J_in)
    x2 = inverse_beta*x1 + x1
    x3 = V_T*log_J_out
    x4 = R_drop*x1
    x5 = log(N)
    x6 = R_drop*x0
    x7 = V_D*inverse_V_A + 1
    x8 = log(V_out*inverse_V_A + 1)
    x9 = -V_T
    f0 = I_L - I_given + x0 + x2
    f1 = -I_L*R_drop + V_T*log_J_in + V_T*x5 + V_T*x8 - V_T*log(x7) - x3 - x4 - x6
    f2 = V_D + V_T*log_I_S + V_T*x5 + V_T*x8 - x3
    a00 = x2
    a01 = x0
    a10 = -x4 - x9
    a11 = -V_T - x6
    a12 = -V_T*inverse_V_A/x7
    a21 = x9
    y0 = a01*a10
    y1 = a12*a21
    y2 = (a00*a11 - a00*y1 - y0)**(-1.0)
    y3 = a12*f2
    y4 = a10*f0
    return (y2*(a01*f1 - a01*y3 - f0*(a11 - y1)), y2*(-a00*f1 + a00*y3 + y4), y2*(a00*a21*f1 - a21*y4 - f2*(a00*a11 - y0)))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = -I_given
    x1 = exp(log_J_in)
    x2 = inverse_beta*x1
    x3 = x1 + x2
    x4 = inverse_beta*exp(log_J_out)
    x5 = I_L + x4
    x6 = I_L*R_drop
    x7 = V_T*log_J_out
    x8 = R_drop*x1
    x9 = log(N)
    x10 = R_drop*x4
    x11 = V_D*inverse_V_A
    x12 = x11 + 1
    x13 = V_T*log(x12)
    x14 = V_out*inverse_V_A
    x15 = x14 + 1
    x16 = log(x15)
    x17 = V_T*x16 + V_T*x9 - x7
    x18 = V_T*log_I_S + x17
    x19 = -V_T
    x20 = V_T/x12
    x21 = x15**(-1.0)
    x22 = V_T*x14*x21
    return (
        (x0 + x3 + x5, V_T*log_J_in + V_T*x16 + V_T*x9 - x10 - x13 - x6 - x7 - x8, V_D + x18),
        ((x3, x4, 0), (-x19 - x8, -V_T - x10, -inverse_V_A*x20), (0, x19, 1)),
        ((I_L, x0, 0, 0, 0, 0, 0, x2 + x4, 0), (-x6, 0, V_T, -x1 - x5, V_T*log_J_in - x13 + x17, x22, V_T*V_out*inverse_V_A*x21 - x11*x20, -x10, 0), (0, 0, V_T, 0, x18, x22, x22, 0, V_T)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = I_L + x0
    x2 = exp(log_J_out)
    x3 = I_L*N
    x4 = x2 + x3
    x5 = x1**(-1.0)
    x6 = x4**(-1.0)
    x7 = x3*x6
    return (
        (log(x1), log(x4)),
        ((x0*x5, 0, 0), (0, x2*x6, 0)),
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, x7, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, I_given: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_drop(log_J_in: Any, V_D: Any, R_drop: Any, log_J_out: Any, I_L: Any, I_given: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = inverse_beta*x0 + x0
    x2 = inverse_beta*exp(log_J_out)
    x3 = I_L + x2
    x4 = V_T*log_J_out
    x5 = R_drop*x0
    x6 = log(N)
    x7 = V_D*inverse_V_A + 1
    x8 = log(V_out*inverse_V_A + 1)
    f0 = -I_given + x1 + x3
    f1 = -I_L*R_drop - R_drop*x2 + V_T*log_J_in + V_T*x6 + V_T*x8 - V_T*log(x7) - x4 - x5
    f2 = V_D + V_T*log_I_S + V_T*x6 + V_T*x8 - x4
    a00 = x1
    a10 = V_T - x5
    a11 = -V_T*inverse_V_A/x7
    a12 = -x0 - x3
    y0 = a00**(-1.0)
    return (-f0*y0, -f2, -y0*(-a00*a11*f2 + a00*f1 - a10*f0)/a12)


PINS = {"drop": (pin_drop, ('log_J_in', 'V_D', 'R_drop'), (0, 2))}
