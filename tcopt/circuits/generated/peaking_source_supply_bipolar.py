"""peaking source, bipolar transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'N', 'R_drop', 'R_feed', 'V_CC', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = V_T*log_J_in
    x1 = exp(log_J_in)
    x2 = R_feed*x1
    x3 = inverse_beta*exp(log_J_out)
    x4 = V_T*log(V_D*inverse_V_A + 1)
    x5 = V_T*log_J_out
    x6 = log(N)
    x7 = log(V_out*inverse_V_A + 1)
    return (-I_L*R_feed - R_feed*x3 + V_CC + V_T*log_I_S - inverse_beta*x2 - x0 - x2 + x4, -I_L*R_drop - R_drop*x1 - R_drop*x3 + V_T*x6 + V_T*x7 + x0 - x4 - x5, V_D + V_T*log_I_S + V_T*x6 + V_T*x7 - x5)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (V_out, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = V_T*log_J_in
    x1 = V_D*inverse_V_A + 1
    x2 = V_T*log(x1)
    x3 = inverse_beta*exp(log_J_out)
    x4 = R_feed*x3
    x5 = exp(log_J_in)
    x6 = R_feed*x5
    x7 = inverse_beta*x6 + x6
    x8 = V_T*log_J_out
    x9 = R_drop*x5
    x10 = log(N)
    x11 = R_drop*x3
    x12 = log(V_out*inverse_V_A + 1)
    x13 = V_T*inverse_V_A/x1
    x14 = -V_T
    f0 = -I_L*R_feed + V_CC + V_T*log_I_S - x0 + x2 - x4 - x7
    f1 = -I_L*R_drop + V_T*x10 + V_T*x12 + x0 - x11 - x2 - x8 - x9
    f2 = V_D + V_T*log_I_S + V_T*x10 + V_T*x12 - x8
    a00 = -V_T - x7
    a01 = -x4
    a02 = x13
    a10 = -x14 - x9
    a11 = -V_T - x11
    a12 = -x13
    a21 = x14
    y0 = a12*a21
    y1 = a00*a11 - a01*a10
    y2 = (-a00*y0 + a02*a10*a21 + y1)**(-1.0)
    return (y2*(-f0*(a11 - y0) - f1*(-a01 + a02*a21) - f2*(a01*a12 - a02*a11)), y2*(-a00*f1 + a10*f0 - f2*(-a00*a12 + a02*a10)), y2*(a00*a21*f1 - a10*a21*f0 - f2*y1))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = I_L*R_feed
    x3 = inverse_beta*x1
    x4 = inverse_beta*exp(log_J_out)
    x5 = R_feed*x4
    x6 = x3 + x5
    x7 = V_T*log_J_in
    x8 = V_D*inverse_V_A
    x9 = x8 + 1
    x10 = V_T*log(x9)
    x11 = -x10 + x7
    x12 = R_drop*x0
    x13 = R_drop*x4
    x14 = V_T*log_J_out
    x15 = I_L*R_drop
    x16 = log(N)
    x17 = V_out*inverse_V_A
    x18 = x17 + 1
    x19 = log(x18)
    x20 = x10 - x7
    x21 = V_T*log_I_S
    x22 = V_T*x16 + V_T*x19 - x14
    x23 = x21 + x22
    x24 = V_T/x9
    x25 = inverse_V_A*x24
    x26 = -V_T
    x27 = I_L + x0 + x4
    x28 = x24*x8
    x29 = x18**(-1.0)
    x30 = V_T*x17*x29
    return (
        (V_CC + V_T*log_I_S - x1 - x11 - x2 - x6, V_T*x16 + V_T*x19 - x12 - x13 - x14 - x15 - x20, V_D + x23),
        ((-V_T - x1 - x3, -x5, x25), (-x12 - x26, -V_T - x13, -x25), (0, x26, 1)),
        ((-x2, 0, 0, -inverse_beta*x0 - x27, V_CC, x20 + x21, 0, x28, -x6, V_T), (-x15, V_T, -x27, 0, 0, x11 + x22, x30, V_T*V_out*inverse_V_A*x29 - x28, -x13, 0), (0, V_T, 0, 0, 0, x23, x30, x30, 0, V_T)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, x7, 0, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, N: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_feed(log_J_in: Any, V_D: Any, R_feed: Any, log_J_out: Any, I_L: Any, N: Any, R_drop: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = V_T*log_J_in
    x1 = V_D*inverse_V_A + 1
    x2 = V_T*log(x1)
    x3 = inverse_beta*exp(log_J_out)
    x4 = exp(log_J_in)
    x5 = R_feed*x4
    x6 = inverse_beta*x5 + x5
    x7 = V_T*log_J_out
    x8 = R_drop*x4
    x9 = log(N)
    x10 = log(V_out*inverse_V_A + 1)
    x11 = V_T*inverse_V_A/x1
    f0 = -I_L*R_feed - R_feed*x3 + V_CC + V_T*log_I_S - x0 + x2 - x6
    f1 = -I_L*R_drop - R_drop*x3 + V_T*x10 + V_T*x9 + x0 - x2 - x7 - x8
    f2 = V_D + V_T*log_I_S + V_T*x10 + V_T*x9 - x7
    a00 = -V_T - x6
    a01 = x11
    a02 = -I_L - inverse_beta*x4 - x3 - x4
    a10 = V_T - x8
    a11 = -x11
    y0 = 1/(a02*a10)
    return (y0*(a02*a11*f2 - a02*f1), -f2, y0*(a00*f1 - a10*f0 - f2*(a00*a11 - a01*a10)))


def pin_drop(log_J_in: Any, V_D: Any, R_drop: Any, log_J_out: Any, I_L: Any, N: Any, R_feed: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = V_T*log_J_in
    x1 = V_D*inverse_V_A + 1
    x2 = V_T*log(x1)
    x3 = inverse_beta*exp(log_J_out)
    x4 = exp(log_J_in)
    x5 = R_feed*x4
    x6 = inverse_beta*x5 + x5
    x7 = V_T*log_J_out
    x8 = R_drop*x4
    x9 = log(N)
    x10 = log(V_out*inverse_V_A + 1)
    x11 = V_T*inverse_V_A/x1
    f0 = -I_L*R_feed - R_feed*x3 + V_CC + V_T*log_I_S - x0 + x2 - x6
    f1 = -I_L*R_drop - R_drop*x3 + V_T*x10 + V_T*x9 + x0 - x2 - x7 - x8
    f2 = V_D + V_T*log_I_S + V_T*x10 + V_T*x9 - x7
    a00 = -V_T - x6
    a01 = x11
    a10 = V_T - x8
    a11 = -x11
    a12 = -I_L - x3 - x4
    y0 = 1/(a00*a12)
    return (-y0*(-a01*a12*f2 + a12*f0), -f2, -y0*(a00*f1 - a10*f0 - f2*(a00*a11 - a01*a10)))


PINS = {"feed": (pin_feed, ('log_J_in', 'V_D', 'R_feed'), (1, 2)), "drop": (pin_drop, ('log_J_in', 'V_D', 'R_drop'), (0, 2))}
