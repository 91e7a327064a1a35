"""degenerated mirror, bipolar transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_others', 'N', 'R_feed', 'R_input', 'R_output', 'V_CC', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = exp(log_J_out)
    x3 = V_T*log_J_in
    x4 = R_input*x0
    x5 = V_T*log(V_D*inverse_V_A + 1)
    x6 = inverse_beta*x4 + x3 + x4 - x5
    x7 = R_output*x2
    x8 = inverse_V_A*x7
    return (-I_L*R_feed - I_others*R_feed - R_feed*inverse_beta*x2 + V_CC + V_T*log_I_S - inverse_beta*x1 - x1 - x6, -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_beta*x8 - x8 + 1) - inverse_beta*x7 + x6 - x7, V_D + V_T*log_I_S - x3 + x5)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_output*exp(log_J_out)
    return (V_out - inverse_beta*x0 - x0, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
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
    f0 = -I_L*R_feed - I_others*R_feed + V_CC + V_T*log_I_S - x1 - x10 - x4
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


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = I_L*R_feed
    x3 = I_others*R_feed
    x4 = R_input*x0
    x5 = inverse_beta*x4
    x6 = x4 + x5
    x7 = inverse_beta*x1
    x8 = exp(log_J_out)
    x9 = inverse_beta*x8
    x10 = R_feed*x9
    x11 = x10 + x7
    x12 = V_T*log_J_in
    x13 = V_D*inverse_V_A
    x14 = x13 + 1
    x15 = V_T*log(x14)
    x16 = x12 - x15
    x17 = R_output*x8
    x18 = inverse_beta*x17
    x19 = inverse_V_A*x17
    x20 = inverse_beta*x19
    x21 = x19 + x20
    x22 = V_out*inverse_V_A - x21 + 1
    x23 = -V_T*log_J_out + V_T*log(N) + V_T*log(x22) + x16
    x24 = V_T*log_I_S - x12 + x15
    x25 = V_T + x6
    x26 = V_T/x14
    x27 = inverse_V_A*x26
    x28 = x22**(-1.0)
    x29 = inverse_beta*x0 + x0
    x30 = x13*x26
    x31 = V_T*x28
    x32 = x20*x31
    return (
        (V_CC + V_T*log_I_S - x1 - x11 - x16 - x2 - x3 - x6, -x17 - x18 + x23 + x6, V_D + x24),
        ((-x1 - x25 - x7, -x10, x27), (x25, -V_T*x21*x28 - V_T - x17 - x18, -x27), (-V_T, 0, x27 + 1)),
        ((-x2, -x3, 0, -I_L - I_others - x29 - x9, -x29, 0, V_CC, x24, 0, x30, -x11 - x5, V_T), (0, 0, V_T, 0, x29, V_T*x28*(-inverse_V_A*x8 - inverse_V_A*x9) - x8 - x9, 0, x23, V_out*inverse_V_A*x31, V_T*V_out*inverse_V_A*x28 - x19*x31 - x30 - x32, -x18 - x32 + x5, 0), (0, 0, 0, 0, 0, 0, 0, x24, 0, x30, 0, V_T)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, x7, 0, 0, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, I_others: Any, N: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_feed(log_J_in: Any, V_D: Any, R_feed: Any, log_J_out: Any, I_L: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
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
    x13 = V_T + x9
    x14 = V_T*inverse_V_A/x6
    f0 = -I_L*R_feed - I_others*R_feed - R_feed*x1 + V_CC + V_T*log_I_S - x10 - x4
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_beta*x12 - x12 + 1) - inverse_beta*x11 + x10 - x11
    f2 = V_D + V_T*log_I_S - x5 + x7
    a00 = -x13 - x4
    a01 = x14
    a02 = -I_L - I_others - inverse_beta*x2 - x1 - x2
    a10 = x13
    a11 = -x14
    a20 = -V_T
    a21 = x14 + 1
    y0 = a02*f2
    y1 = a10*a21
    y2 = a11*a20
    y3 = (a02*y1 - a02*y2)**(-1.0)
    return (y3*(-a02*a21*f1 + a11*y0), y3*(a02*a20*f1 - a10*y0), y3*(-f0*(y1 - y2) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_input(log_J_in: Any, V_D: Any, R_input: Any, log_J_out: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = exp(log_J_in)
    x2 = R_feed*x1
    x3 = inverse_beta*x2 + x2
    x4 = V_T*log_J_in
    x5 = V_D*inverse_V_A + 1
    x6 = V_T*log(x5)
    x7 = R_input*x1
    x8 = inverse_beta*x7 + x7
    x9 = x4 - x6 + x8
    x10 = R_output*x0
    x11 = inverse_V_A*x10
    x12 = V_T + x8
    x13 = V_T*inverse_V_A/x5
    x14 = inverse_beta*x1 + x1
    f0 = -I_L*R_feed - I_others*R_feed - R_feed*inverse_beta*x0 + V_CC + V_T*log_I_S - x3 - x9
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_beta*x11 - x11 + 1) - inverse_beta*x10 - x10 + x9
    f2 = V_D + V_T*log_I_S - x4 + x6
    a00 = -x12 - x3
    a01 = x13
    a02 = -x14
    a10 = x12
    a11 = -x13
    a12 = x14
    a20 = -V_T
    a21 = x13 + 1
    y0 = a02*a11
    y1 = a00*a12
    y2 = (a01*a12*a20 + a02*a10*a21 - a20*y0 - a21*y1)**(-1.0)
    return (y2*(-a02*a21*f1 + a12*a21*f0 - f2*(a01*a12 - y0)), y2*(a02*a20*f1 - a12*a20*f0 - f2*(a02*a10 - y1)), y2*(-f0*(a10*a21 - a11*a20) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_output(log_J_in: Any, V_D: Any, R_output: Any, log_J_out: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
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
    x13 = V_out*inverse_V_A - inverse_beta*x12 - x12 + 1
    x14 = V_T + x9
    x15 = V_T*inverse_V_A/x6
    f0 = -I_L*R_feed - I_others*R_feed - R_feed*x1 + V_CC + V_T*log_I_S - x10 - x4
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x13) - inverse_beta*x11 + x10 - x11
    f2 = V_D + V_T*log_I_S - x5 + x7
    a00 = -x14 - x4
    a01 = x15
    a10 = x14
    a11 = -x15
    a12 = V_T*(-inverse_V_A*x0 - inverse_V_A*x1)/x13 - x0 - x1
    a20 = -V_T
    a21 = x15 + 1
    y0 = a12*f2
    y1 = a00*a21
    y2 = (a01*a12*a20 - a12*y1)**(-1.0)
    return (y2*(-a01*y0 + a12*a21*f0), y2*(a00*y0 - a12*a20*f0), y2*(-f0*(a10*a21 - a11*a20) - f1*(a01*a20 - y1) - f2*(a00*a11 - a01*a10)))


PINS = {"feed": (pin_feed, ('log_J_in', 'V_D', 'R_feed'), (1, 2)), "input": (pin_input, ('log_J_in', 'V_D', 'R_input'), (2,)), "output": (pin_output, ('log_J_in', 'V_D', 'R_output'), (0, 2))}
