"""degenerated mirror, bipolar, followed transistors, input: supply.

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
    x3 = inverse_beta*x2
    x4 = V_T*log(I_others + inverse_beta*x0 + x3)
    x5 = log(inverse_beta)
    x6 = 1 + inverse_beta**(-1.0)
    x7 = log(x6)
    x8 = x6**(-1.0)
    x9 = R_feed*x8
    x10 = V_T*log_J_in
    x11 = R_input*x0
    x12 = V_T*log(V_D*inverse_V_A + 1)
    x13 = inverse_beta*x11 + x10 + x11 - x12
    x14 = R_output*x2
    x15 = R_output*x3
    return (-I_L*R_feed - I_others*x9 + V_CC + 2*V_T*log_I_S + V_T*x5 + V_T*x7 - inverse_beta*x1*x8 - x1 - x13 - x3*x9 - x4, -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_V_A*x14 - inverse_V_A*x15 + 1) + x13 - x14 - x15, V_D + 2*V_T*log_I_S + V_T*x5 + V_T*x7 - x10 + x12 - x4)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_output*exp(log_J_out)
    return (V_out - inverse_beta*x0 - x0, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
    x2 = 1 + inverse_beta**(-1.0)
    x3 = x2**(-1.0)
    x4 = R_feed*x3
    x5 = x1*x4
    x6 = exp(log_J_in)
    x7 = inverse_beta*x6
    x8 = I_others + x1 + x7
    x9 = V_T*log(x8)
    x10 = log(inverse_beta)
    x11 = log(x2)
    x12 = R_feed*x6
    x13 = R_input*x6
    x14 = inverse_beta*x13 + x13
    x15 = inverse_beta*x12*x3 + x12 + x14
    x16 = V_T*log_J_in
    x17 = V_D*inverse_V_A + 1
    x18 = V_T*log(x17)
    x19 = x16 - x18
    x20 = R_output*x0
    x21 = R_output*x1
    x22 = inverse_V_A*x20 + inverse_V_A*x21
    x23 = V_out*inverse_V_A - x22 + 1
    x24 = V_T/x8
    x25 = V_T + x24*x7
    x26 = x1*x24
    x27 = V_T*inverse_V_A/x17
    f0 = -I_L*R_feed - I_others*x4 + V_CC + 2*V_T*log_I_S + V_T*x10 + V_T*x11 - x15 - x19 - x5 - x9
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x23) + x14 + x19 - x20 - x21
    f2 = V_D + 2*V_T*log_I_S + V_T*x10 + V_T*x11 - x16 + x18 - x9
    a00 = -x15 - x25
    a01 = -x26 - x5
    a02 = x27
    a10 = V_T + x14
    a11 = -V_T*x22/x23 - V_T - x20 - x21
    a12 = -x27
    a20 = -x25
    a21 = -x26
    a22 = x27 + 1
    y0 = a11*a22
    y1 = a01*a12
    y2 = a12*a21
    y3 = a01*a22
    y4 = a02*a11
    y5 = (a00*y0 - a00*y2 + a02*a10*a21 - a10*y3 + a20*y1 - a20*y4)**(-1.0)
    return (y5*(-f0*(y0 - y2) - f1*(a02*a21 - y3) - f2*(y1 - y4)), y5*(-f0*(-a10*a22 + a12*a20) - f1*(a00*a22 - a02*a20) - f2*(-a00*a12 + a02*a10)), y5*(-f0*(a10*a21 - a11*a20) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = inverse_beta**(-1.0)
    x1 = x0 + 1
    x2 = x1**(-1.0)
    x3 = exp(log_J_out)
    x4 = inverse_beta*x3
    x5 = x2*x4
    x6 = R_feed*x5
    x7 = I_others*x2
    x8 = R_feed*x7
    x9 = I_L*R_feed
    x10 = exp(log_J_in)
    x11 = inverse_beta*x10
    x12 = I_others + x11 + x4
    x13 = V_T*log(x12)
    x14 = log(inverse_beta)
    x15 = log(x1)
    x16 = V_T*log_J_in
    x17 = V_D*inverse_V_A
    x18 = x17 + 1
    x19 = V_T*log(x18)
    x20 = x16 - x19
    x21 = R_feed*x10
    x22 = inverse_beta*x21
    x23 = x2*x22
    x24 = R_input*x10
    x25 = inverse_beta*x24
    x26 = x24 + x25
    x27 = x21 + x23 + x26
    x28 = R_output*x3
    x29 = R_output*x4
    x30 = inverse_V_A*x28
    x31 = inverse_V_A*x29
    x32 = x30 + x31
    x33 = V_out*inverse_V_A - x32 + 1
    x34 = -V_T*log_J_out + V_T*log(N) + V_T*log(x33) + x20
    x35 = 2*V_T
    x36 = V_T*x14 + V_T*x15 + log_I_S*x35 - x13 - x16 + x19
    x37 = V_T/x12
    x38 = x11*x37
    x39 = V_T + x38
    x40 = x37*x4
    x41 = x40 + x6
    x42 = V_T/x18
    x43 = inverse_V_A*x42
    x44 = x33**(-1.0)
    x45 = I_others*x37
    x46 = x10 + x11
    x47 = x17*x42
    x48 = inverse_beta**2
    x49 = (inverse_beta + x0 + 2)**(-1.0)
    x50 = V_T*inverse_beta/(inverse_beta + x48) - V_T + x38
    x51 = V_T*x44
    x52 = x31*x51
    return (
        (V_CC + 2*V_T*log_I_S + V_T*x14 + V_T*x15 - x13 - x20 - x27 - x6 - x8 - x9, x26 - x28 - x29 + x34, V_D + x36),
        ((-x27 - x39, -x41, x43), (V_T + x26, -V_T*x32*x44 - V_T - x28 - x29, -x43), (-x39, -x40, x43 + 1)),
        ((-x9, -x45 - x8, 0, -I_L - x10 - x11*x2 - x5 - x7, -x46, 0, V_CC, x36, 0, x47, -I_others*R_feed*inverse_beta/(2*inverse_beta + x48 + 1) - R_feed*x4*x49 - x22*x49 - x23 - x25 - x41 - x50, x35), (0, 0, V_T, 0, x46, V_T*x44*(-inverse_V_A*x3 - inverse_V_A*x4) - x3 - x4, 0, x34, V_out*inverse_V_A*x51, V_T*V_out*inverse_V_A*x44 - x30*x51 - x47 - x52, x25 - x29 - x52, 0), (0, -x45, 0, 0, 0, 0, 0, x36, 0, x47, -x40 - x50, x35)),
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
    x0 = exp(log_J_in)
    x1 = inverse_beta*x0
    x2 = exp(log_J_out)
    x3 = inverse_beta*x2
    x4 = I_others + x1 + x3
    x5 = V_T*log(x4)
    x6 = log(inverse_beta)
    x7 = 1 + inverse_beta**(-1.0)
    x8 = log(x7)
    x9 = x7**(-1.0)
    x10 = I_others*x9
    x11 = x3*x9
    x12 = R_feed*x0
    x13 = R_input*x0
    x14 = inverse_beta*x13 + x13
    x15 = inverse_beta*x12*x9 + x12 + x14
    x16 = V_T*log_J_in
    x17 = V_D*inverse_V_A + 1
    x18 = V_T*log(x17)
    x19 = x16 - x18
    x20 = R_output*x2
    x21 = R_output*x3
    x22 = V_T*x1/x4 + V_T
    x23 = V_T*inverse_V_A/x17
    f0 = -I_L*R_feed - R_feed*x10 - R_feed*x11 + V_CC + 2*V_T*log_I_S + V_T*x6 + V_T*x8 - x15 - x19 - x5
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_V_A*x20 - inverse_V_A*x21 + 1) + x14 + x19 - x20 - x21
    f2 = V_D + 2*V_T*log_I_S + V_T*x6 + V_T*x8 - x16 + x18 - x5
    a00 = -x15 - x22
    a01 = x23
    a02 = -I_L - x0 - x1*x9 - x10 - x11
    a10 = V_T + x14
    a11 = -x23
    a20 = -x22
    a21 = x23 + 1
    y0 = a02*f2
    y1 = a10*a21
    y2 = a11*a20
    y3 = (a02*y1 - a02*y2)**(-1.0)
    return (y3*(-a02*a21*f1 + a11*y0), y3*(a02*a20*f1 - a10*y0), y3*(-f0*(y1 - y2) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_input(log_J_in: Any, V_D: Any, R_input: Any, log_J_out: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_output: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = inverse_beta*x0
    x2 = exp(log_J_out)
    x3 = inverse_beta*x2
    x4 = I_others + x1 + x3
    x5 = V_T*log(x4)
    x6 = log(inverse_beta)
    x7 = 1 + inverse_beta**(-1.0)
    x8 = log(x7)
    x9 = x7**(-1.0)
    x10 = R_feed*x9
    x11 = R_feed*x0
    x12 = R_input*x0
    x13 = inverse_beta*x12 + x12
    x14 = inverse_beta*x11*x9 + x11 + x13
    x15 = V_T*log_J_in
    x16 = V_D*inverse_V_A + 1
    x17 = V_T*log(x16)
    x18 = x15 - x17
    x19 = R_output*x2
    x20 = R_output*x3
    x21 = V_T*x1/x4 + V_T
    x22 = V_T*inverse_V_A/x16
    x23 = x0 + x1
    f0 = -I_L*R_feed - I_others*x10 + V_CC + 2*V_T*log_I_S + V_T*x6 + V_T*x8 - x10*x3 - x14 - x18 - x5
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_V_A*x19 - inverse_V_A*x20 + 1) + x13 + x18 - x19 - x20
    f2 = V_D + 2*V_T*log_I_S + V_T*x6 + V_T*x8 - x15 + x17 - x5
    a00 = -x14 - x21
    a01 = x22
    a02 = -x23
    a10 = V_T + x13
    a11 = -x22
    a12 = x23
    a20 = -x21
    a21 = x22 + 1
    y0 = a02*a11
    y1 = a00*a12
    y2 = (a01*a12*a20 + a02*a10*a21 - a20*y0 - a21*y1)**(-1.0)
    return (y2*(-a02*a21*f1 + a12*a21*f0 - f2*(a01*a12 - y0)), y2*(a02*a20*f1 - a12*a20*f0 - f2*(a02*a10 - y1)), y2*(-f0*(a10*a21 - a11*a20) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_output(log_J_in: Any, V_D: Any, R_output: Any, log_J_out: Any, I_L: Any, I_others: Any, N: Any, R_feed: Any, R_input: Any, V_CC: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = inverse_beta*x0
    x2 = exp(log_J_out)
    x3 = inverse_beta*x2
    x4 = I_others + x1 + x3
    x5 = V_T*log(x4)
    x6 = log(inverse_beta)
    x7 = 1 + inverse_beta**(-1.0)
    x8 = log(x7)
    x9 = x7**(-1.0)
    x10 = R_feed*x9
    x11 = R_feed*x0
    x12 = R_input*x0
    x13 = inverse_beta*x12 + x12
    x14 = inverse_beta*x11*x9 + x11 + x13
    x15 = V_T*log_J_in
    x16 = V_D*inverse_V_A + 1
    x17 = V_T*log(x16)
    x18 = x15 - x17
    x19 = R_output*x2
    x20 = R_output*x3
    x21 = V_out*inverse_V_A - inverse_V_A*x19 - inverse_V_A*x20 + 1
    x22 = V_T*x1/x4 + V_T
    x23 = V_T*inverse_V_A/x16
    f0 = -I_L*R_feed - I_others*x10 + V_CC + 2*V_T*log_I_S + V_T*x6 + V_T*x8 - x10*x3 - x14 - x18 - x5
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x21) + x13 + x18 - x19 - x20
    f2 = V_D + 2*V_T*log_I_S + V_T*x6 + V_T*x8 - x15 + x17 - x5
    a00 = -x14 - x22
    a01 = x23
    a10 = V_T + x13
    a11 = -x23
    a12 = V_T*(-inverse_V_A*x2 - inverse_V_A*x3)/x21 - x2 - x3
    a20 = -x22
    a21 = x23 + 1
    y0 = a12*f2
    y1 = a00*a21
    y2 = (a01*a12*a20 - a12*y1)**(-1.0)
    return (y2*(-a01*y0 + a12*a21*f0), y2*(a00*y0 - a12*a20*f0), y2*(-f0*(a10*a21 - a11*a20) - f1*(a01*a20 - y1) - f2*(a00*a11 - a01*a10)))


PINS = {"feed": (pin_feed, ('log_J_in', 'V_D', 'R_feed'), (1, 2)), "input": (pin_input, ('log_J_in', 'V_D', 'R_input'), (2,)), "output": (pin_output, ('log_J_in', 'V_D', 'R_output'), (0, 2))}
