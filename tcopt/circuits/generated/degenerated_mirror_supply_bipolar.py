"""degenerated mirror, bipolar transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'N', 'R_feed', 'R_input', 'R_output', 'V_CC', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = R_feed*inverse_beta*x0
    x2 = exp(log_J_in)
    x3 = R_feed*x2
    x4 = inverse_beta*x3 + x3
    x5 = V_T*log_J_in
    x6 = V_D*inverse_V_A + 1
    x7 = V_T*log(x6)
    x8 = R_input*x2
    x9 = inverse_beta*x8 + x8
    x10 = x5 - x7 + x9
    x11 = R_output*x0
    x12 = inverse_V_A*x11
    x13 = inverse_beta*x12 + x12
    x14 = V_out*inverse_V_A - x13 + 1
    x15 = inverse_beta*x11
    x16 = V_T + x9
    x17 = V_T*inverse_V_A/x6
    f0 = -I_L*R_feed + V_CC + V_T*log_I_S - x1 - x10 - x4
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x14) + x10 - x11 - x15
    f2 = V_D + V_T*log_I_S - x5 + x7
    a00 = -x16 - x4
    a01 = -x1
    a02 = x17
    a10 = x16
    a11 = -V_T*x13/x14 - V_T - x11 - x15
    a12 = -x17
    a20 = -V_T
    a22 = x17 + 1
    y0 = a01*a12
    y1 = a02*a11
    y2 = a00*a22
    y3 = a10*a22
    y4 = (-a01*y3 + a11*y2 + a20*y0 - a20*y1)**(-1.0)
    return (y4*(a01*a22*f1 - a11*a22*f0 - f2*(y0 - y1)), y4*(-f0*(a12*a20 - y3) - f1*(-a02*a20 + y2) - f2*(-a00*a12 + a02*a10)), y4*(-a01*a20*f1 + a11*a20*f0 - f2*(a00*a11 - a01*a10)))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = I_L*R_feed
    x3 = R_input*x0
    x4 = inverse_beta*x3
    x5 = x3 + x4
    x6 = inverse_beta*x1
    x7 = exp(log_J_out)
    x8 = inverse_beta*x7
    x9 = R_feed*x8
    x10 = x6 + x9
    x11 = V_T*log_J_in
    x12 = V_D*inverse_V_A
    x13 = x12 + 1
    x14 = V_T*log(x13)
    x15 = x11 - x14
    x16 = R_output*x7
    x17 = inverse_beta*x16
    x18 = inverse_V_A*x16
    x19 = inverse_beta*x18
    x20 = x18 + x19
    x21 = V_out*inverse_V_A - x20 + 1
    x22 = -V_T*log_J_out + V_T*log(N) + V_T*log(x21) + x15
    x23 = V_T*log_I_S - x11 + x14
    x24 = V_T + x5
    x25 = V_T/x13
    x26 = inverse_V_A*x25
    x27 = x21**(-1.0)
    x28 = inverse_beta*x0 + x0
    x29 = x12*x25
    x30 = V_T*x27
    x31 = x19*x30
    return (
        (V_CC + V_T*log_I_S - x1 - x10 - x15 - x2 - x5, -x16 - x17 + x22 + x5, V_D + x23),
        ((-x1 - x24 - x6, -x9, x26), (x24, -V_T*x20*x27 - V_T - x16 - x17, -x26), (-V_T, 0, x26 + 1)),
        ((-x2, 0, -I_L - x28 - x8, -x28, 0, V_CC, x23, 0, x29, -x10 - x4, V_T), (0, V_T, 0, x28, V_T*x27*(-inverse_V_A*x7 - inverse_V_A*x8) - x7 - x8, 0, x22, V_out*inverse_V_A*x30, V_T*V_out*inverse_V_A*x27 - x18*x30 - x29 - x31, -x17 - x31 + x4, 0), (0, 0, 0, 0, 0, 0, x23, 0, x29, 0, V_T)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, x7, 0, 0, 0, 0, 0, 0, 0, 0, 0)),
    )
