"""peaking source, bipolar, followed transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'N', 'R_drop', 'R_feed', 'V_CC', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = 1 + inverse_beta**(-1.0)
    x1 = x0**(-1.0)
    x2 = inverse_beta*exp(log_J_out)
    x3 = x1*x2
    x4 = R_feed*x3
    x5 = V_T*log_J_in
    x6 = exp(log_J_in)
    x7 = inverse_beta*x6
    x8 = x2 + x7
    x9 = V_T*log(x8)
    x10 = log(inverse_beta)
    x11 = log(x0)
    x12 = V_D*inverse_V_A + 1
    x13 = V_T*log(x12)
    x14 = R_feed*x6
    x15 = inverse_beta*x1*x14 + x14
    x16 = R_drop*x6
    x17 = R_drop*x3
    x18 = x13 - x5
    x19 = V_T/x8
    x20 = V_T + x19*x7
    x21 = x19*x2
    x22 = V_T*inverse_V_A/x12
    f0 = -I_L*R_feed + V_CC + 2*V_T*log_I_S + V_T*x10 + V_T*x11 + x13 - x15 - x4 - x5 - x9
    f1 = -I_L*R_drop - V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A + 1) - x16 - x17 - x18
    f2 = V_D + 2*V_T*log_I_S + V_T*x10 + V_T*x11 + x18 - x9
    a00 = -x15 - x20
    a01 = -x21 - x4
    a02 = x22
    a10 = V_T - x16
    a11 = -V_T - x17
    a12 = -x22
    a20 = -x20
    a21 = -x21
    a22 = x22 + 1
    y0 = a11*a22
    y1 = a01*a12
    y2 = a12*a21
    y3 = a01*a22
    y4 = a02*a11
    y5 = (a00*y0 - a00*y2 + a02*a10*a21 - a10*y3 + a20*y1 - a20*y4)**(-1.0)
    return (y5*(-f0*(y0 - y2) - f1*(a02*a21 - y3) - f2*(y1 - y4)), y5*(-f0*(-a10*a22 + a12*a20) - f1*(a00*a22 - a02*a20) - f2*(-a00*a12 + a02*a10)), y5*(-f0*(a10*a21 - a11*a20) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = inverse_beta**(-1.0)
    x1 = x0 + 1
    x2 = x1**(-1.0)
    x3 = inverse_beta*exp(log_J_out)
    x4 = x2*x3
    x5 = R_feed*x4
    x6 = I_L*R_feed
    x7 = exp(log_J_in)
    x8 = inverse_beta*x7
    x9 = x3 + x8
    x10 = V_T*log(x9)
    x11 = log(inverse_beta)
    x12 = log(x1)
    x13 = R_feed*x7
    x14 = inverse_beta*x13
    x15 = x14*x2
    x16 = x13 + x15
    x17 = V_T*log_J_in
    x18 = V_D*inverse_V_A
    x19 = x18 + 1
    x20 = V_T*log(x19)
    x21 = x17 - x20
    x22 = R_drop*x7
    x23 = R_drop*x4
    x24 = V_T*log_J_out
    x25 = I_L*R_drop
    x26 = log(N)
    x27 = V_out*inverse_V_A
    x28 = x27 + 1
    x29 = log(x28)
    x30 = -x17 + x20
    x31 = 2*V_T
    x32 = V_T*x11 + V_T*x12 + log_I_S*x31 - x10 + x30
    x33 = V_T/x9
    x34 = x33*x8
    x35 = V_T + x34
    x36 = x3*x33
    x37 = x36 + x5
    x38 = V_T/x19
    x39 = inverse_V_A*x38
    x40 = -V_T
    x41 = I_L + x4 + x7
    x42 = x18*x38
    x43 = (inverse_beta + x0 + 2)**(-1.0)
    x44 = x3*x43
    x45 = V_T*inverse_beta/(inverse_beta**2 + inverse_beta) + x34 + x40
    x46 = x28**(-1.0)
    return (
        (V_CC + 2*V_T*log_I_S + V_T*x11 + V_T*x12 - x10 - x16 - x21 - x5 - x6, V_T*x26 + V_T*x29 - x22 - x23 - x24 - x25 - x30, V_D + x32),
        ((-x16 - x35, -x37, x39), (-x22 - x40, -V_T - x23, -x39), (-x35, -x36, x39 + 1)),
        ((-x6, 0, 0, -x2*x8 - x41, V_CC, x32, 0, x42, -R_feed*x44 - x14*x43 - x15 - x37 - x45, x31), (-x25, V_T, -x41, 0, 0, V_T*x26 + V_T*x29 + x21 - x24, V_T*x27*x46, V_T*V_out*inverse_V_A*x46 - x42, -R_drop*x44 - x23, 0), (0, 0, 0, 0, 0, x32, 0, x42, -x36 - x45, x31)),
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
