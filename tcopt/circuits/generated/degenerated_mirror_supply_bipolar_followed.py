"""degenerated mirror, bipolar, followed transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'N', 'R_feed', 'R_input', 'R_output', 'V_CC', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = 1 + inverse_beta**(-1.0)
    x1 = x0**(-1.0)
    x2 = exp(log_J_out)
    x3 = inverse_beta*x2
    x4 = R_feed*x1*x3
    x5 = exp(log_J_in)
    x6 = inverse_beta*x5
    x7 = x3 + x6
    x8 = V_T*log(x7)
    x9 = log(inverse_beta)
    x10 = log(x0)
    x11 = R_feed*x5
    x12 = R_input*x5
    x13 = inverse_beta*x12 + x12
    x14 = inverse_beta*x1*x11 + x11 + x13
    x15 = V_T*log_J_in
    x16 = V_D*inverse_V_A + 1
    x17 = V_T*log(x16)
    x18 = x15 - x17
    x19 = R_output*x2
    x20 = R_output*x3
    x21 = inverse_V_A*x19 + inverse_V_A*x20
    x22 = V_out*inverse_V_A - x21 + 1
    x23 = V_T/x7
    x24 = V_T + x23*x6
    x25 = x23*x3
    x26 = V_T*inverse_V_A/x16
    f0 = -I_L*R_feed + V_CC + 2*V_T*log_I_S + V_T*x10 + V_T*x9 - x14 - x18 - x4 - x8
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x22) + x13 + x18 - x19 - x20
    f2 = V_D + 2*V_T*log_I_S + V_T*x10 + V_T*x9 - x15 + x17 - x8
    a00 = -x14 - x24
    a01 = -x25 - x4
    a02 = x26
    a10 = V_T + x13
    a11 = -V_T*x21/x22 - V_T - x19 - x20
    a12 = -x26
    a20 = -x24
    a21 = -x25
    a22 = x26 + 1
    y0 = a11*a22
    y1 = a01*a12
    y2 = a12*a21
    y3 = a01*a22
    y4 = a02*a11
    y5 = (a00*y0 - a00*y2 + a02*a10*a21 - a10*y3 + a20*y1 - a20*y4)**(-1.0)
    return (y5*(-f0*(y0 - y2) - f1*(a02*a21 - y3) - f2*(y1 - y4)), y5*(-f0*(-a10*a22 + a12*a20) - f1*(a00*a22 - a02*a20) - f2*(-a00*a12 + a02*a10)), y5*(-f0*(a10*a21 - a11*a20) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = inverse_beta**(-1.0)
    x1 = x0 + 1
    x2 = x1**(-1.0)
    x3 = exp(log_J_out)
    x4 = inverse_beta*x3
    x5 = x2*x4
    x6 = R_feed*x5
    x7 = I_L*R_feed
    x8 = exp(log_J_in)
    x9 = inverse_beta*x8
    x10 = x4 + x9
    x11 = V_T*log(x10)
    x12 = log(inverse_beta)
    x13 = log(x1)
    x14 = V_T*log_J_in
    x15 = V_D*inverse_V_A
    x16 = x15 + 1
    x17 = V_T*log(x16)
    x18 = x14 - x17
    x19 = R_feed*x8
    x20 = inverse_beta*x19
    x21 = x2*x20
    x22 = R_input*x8
    x23 = inverse_beta*x22
    x24 = x22 + x23
    x25 = x19 + x21 + x24
    x26 = R_output*x3
    x27 = R_output*x4
    x28 = inverse_V_A*x26
    x29 = inverse_V_A*x27
    x30 = x28 + x29
    x31 = V_out*inverse_V_A - x30 + 1
    x32 = -V_T*log_J_out + V_T*log(N) + V_T*log(x31) + x18
    x33 = 2*V_T
    x34 = V_T*x12 + V_T*x13 + log_I_S*x33 - x11 - x14 + x17
    x35 = V_T/x10
    x36 = x35*x9
    x37 = V_T + x36
    x38 = x35*x4
    x39 = x38 + x6
    x40 = V_T/x16
    x41 = inverse_V_A*x40
    x42 = x31**(-1.0)
    x43 = x8 + x9
    x44 = x15*x40
    x45 = (inverse_beta + x0 + 2)**(-1.0)
    x46 = V_T*inverse_beta/(inverse_beta**2 + inverse_beta) - V_T + x36
    x47 = V_T*x42
    x48 = x29*x47
    return (
        (V_CC + 2*V_T*log_I_S + V_T*x12 + V_T*x13 - x11 - x18 - x25 - x6 - x7, x24 - x26 - x27 + x32, V_D + x34),
        ((-x25 - x37, -x39, x41), (V_T + x24, -V_T*x30*x42 - V_T - x26 - x27, -x41), (-x37, -x38, x41 + 1)),
        ((-x7, 0, -I_L - x2*x9 - x5 - x8, -x43, 0, V_CC, x34, 0, x44, -R_feed*x4*x45 - x20*x45 - x21 - x23 - x39 - x46, x33), (0, V_T, 0, x43, V_T*x42*(-inverse_V_A*x3 - inverse_V_A*x4) - x3 - x4, 0, x32, V_out*inverse_V_A*x47, V_T*V_out*inverse_V_A*x42 - x28*x47 - x44 - x48, x23 - x27 - x48, 0), (0, 0, 0, 0, 0, 0, x34, 0, x44, -x38 - x46, x33)),
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
