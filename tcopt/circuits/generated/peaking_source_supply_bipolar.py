"""peaking source, bipolar transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'N', 'R_drop', 'R_feed', 'V_CC', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


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
    x8 = R_drop*x5
    x9 = R_drop*x3
    x10 = -x0 + x2
    x11 = V_T*inverse_V_A/x1
    x12 = -V_T
    f0 = -I_L*R_feed + V_CC + V_T*log_I_S - x0 + x2 - x4 - x7
    f1 = -I_L*R_drop - V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A + 1) - x10 - x8 - x9
    f2 = V_D + V_T*log_I_S + x10
    a00 = -V_T - x7
    a01 = -x4
    a02 = x11
    a10 = -x12 - x8
    a11 = -V_T - x9
    a12 = -x11
    a20 = x12
    a22 = x11 + 1
    y0 = a01*a12
    y1 = a02*a11
    y2 = a00*a22
    y3 = a10*a22
    y4 = (-a01*y3 + a11*y2 + a20*y0 - a20*y1)**(-1.0)
    return (y4*(a01*a22*f1 - a11*a22*f0 - f2*(y0 - y1)), y4*(-f0*(a12*a20 - y3) - f1*(-a02*a20 + y2) - f2*(-a00*a12 + a02*a10)), y4*(-a01*a20*f1 + a11*a20*f0 - f2*(a00*a11 - a01*a10)))


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
    x21 = V_T*log_I_S + x20
    x22 = V_T/x9
    x23 = inverse_V_A*x22
    x24 = -V_T
    x25 = I_L + x0 + x4
    x26 = x22*x8
    x27 = x18**(-1.0)
    return (
        (V_CC + V_T*log_I_S - x1 - x11 - x2 - x6, V_T*x16 + V_T*x19 - x12 - x13 - x14 - x15 - x20, V_D + x21),
        ((-V_T - x1 - x3, -x5, x23), (-x12 - x24, -V_T - x13, -x23), (x24, 0, x23 + 1)),
        ((-x2, 0, 0, -inverse_beta*x0 - x25, V_CC, x21, 0, x26, -x6, V_T), (-x15, V_T, -x25, 0, 0, V_T*x16 + V_T*x19 + x11 - x14, V_T*x17*x27, V_T*V_out*inverse_V_A*x27 - x26, -x13, 0), (0, 0, 0, 0, 0, x21, 0, x26, 0, V_T)),
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
