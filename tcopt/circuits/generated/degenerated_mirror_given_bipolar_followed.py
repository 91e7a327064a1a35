"""degenerated mirror, bipolar, followed transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_given', 'I_others', 'N', 'R_input', 'R_output', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_in)
    x1 = 1 + inverse_beta**(-1.0)
    x2 = x1**(-1.0)
    x3 = inverse_beta*x0
    x4 = exp(log_J_out)
    x5 = inverse_beta*x4
    x6 = V_T*log_J_in
    x7 = R_input*x0
    x8 = R_output*x4
    x9 = V_T*log(V_D*inverse_V_A + 1)
    x10 = inverse_V_A*x8
    return (I_L - I_given + I_others*x2 + x0 + x2*x3 + x2*x5, -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_beta*x10 - x10 + 1) + inverse_beta*x7 - inverse_beta*x8 + x6 + x7 - x8 - x9, V_D + 2*V_T*log_I_S + V_T*log(inverse_beta) + V_T*log(x1) - V_T*log(I_others + x3 + x5) - x6 + x9)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_output*exp(log_J_out)
    return (V_out - inverse_beta*x0 - x0, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = 1 + inverse_beta**(-1.0)
    x1 = x0**(-1.0)
    x2 = exp(log_J_out)
    x3 = inverse_beta*x2
    x4 = x1*x3
    x5 = exp(log_J_in)
    x6 = inverse_beta*x5
    x7 = x1*x6 + x5
    x8 = V_T*log_J_in
    x9 = R_output*x2
    x10 = inverse_V_A*x9
    x11 = inverse_beta*x10 + x10
    x12 = V_out*inverse_V_A - x11 + 1
    x13 = V_D*inverse_V_A + 1
    x14 = V_T*log(x13)
    x15 = inverse_beta*x9
    x16 = R_input*x5
    x17 = inverse_beta*x16 + x16
    x18 = I_others + x3 + x6
    x19 = V_T*inverse_V_A/x13
    x20 = V_T/x18
    f0 = I_L - I_given + I_others*x1 + x4 + x7
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x12) - x14 - x15 + x17 + x8 - x9
    f2 = V_D + 2*V_T*log_I_S + V_T*log(inverse_beta) + V_T*log(x0) - V_T*log(x18) + x14 - x8
    a00 = x7
    a01 = x4
    a10 = V_T + x17
    a11 = -V_T*x11/x12 - V_T - x15 - x9
    a12 = -x19
    a20 = -V_T - x20*x6
    a21 = -x20*x3
    a22 = x19 + 1
    y0 = a11*a22
    y1 = a12*a21
    y2 = a10*a22
    y3 = (a00*y0 - a00*y1 + a01*a12*a20 - a01*y2)**(-1.0)
    return (y3*(-a01*a12*f2 + a01*a22*f1 - f0*(y0 - y1)), y3*(a00*a12*f2 - a00*a22*f1 - f0*(a12*a20 - y2)), y3*(-f0*(a10*a21 - a11*a20) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = inverse_beta**(-1.0)
    x1 = x0 + 1
    x2 = x1**(-1.0)
    x3 = exp(log_J_out)
    x4 = inverse_beta*x3
    x5 = x2*x4
    x6 = -I_given
    x7 = I_others*x2
    x8 = exp(log_J_in)
    x9 = inverse_beta*x8
    x10 = x2*x9
    x11 = x10 + x8
    x12 = R_output*x3
    x13 = inverse_beta*x12
    x14 = R_input*x8
    x15 = inverse_beta*x14 + x14
    x16 = V_T*log_J_in
    x17 = V_D*inverse_V_A
    x18 = x17 + 1
    x19 = V_T*log(x18)
    x20 = inverse_V_A*x12
    x21 = inverse_beta*x20
    x22 = x20 + x21
    x23 = V_out*inverse_V_A - x22 + 1
    x24 = -V_T*log_J_out + V_T*log(N) + V_T*log(x23) + x16 - x19
    x25 = 2*V_T
    x26 = I_others + x4 + x9
    x27 = V_T*log(inverse_beta) + V_T*log(x1) - V_T*log(x26) + log_I_S*x25 - x16 + x19
    x28 = x23**(-1.0)
    x29 = V_T/x18
    x30 = inverse_V_A*x29
    x31 = V_T/x26
    x32 = x31*x9
    x33 = x31*x4
    x34 = (inverse_beta + x0 + 2)**(-1.0)
    x35 = inverse_beta**2
    x36 = V_T*x28
    x37 = x17*x29
    x38 = x21*x36
    return (
        (I_L + x11 + x5 + x6 + x7, -x12 - x13 + x15 + x24, V_D + x27),
        ((x11, x5, 0), (V_T + x15, -V_T*x22*x28 - V_T - x12 - x13, -x30), (-V_T - x32, -x33, x30 + 1)),
        ((I_L, x6, x7, 0, 0, 0, 0, 0, 0, I_others*inverse_beta/(2*inverse_beta + x35 + 1) + x10 + x34*x4 + x34*x9 + x5, 0), (0, 0, 0, V_T, x8 + x9, V_T*x28*(-inverse_V_A*x3 - inverse_V_A*x4) - x3 - x4, x24, V_out*inverse_V_A*x36, V_T*V_out*inverse_V_A*x28 - x20*x36 - x37 - x38, R_input*inverse_beta*x8 - x13 - x38, 0), (0, 0, -I_others*x31, 0, 0, 0, x27, 0, x37, -V_T*inverse_beta/(inverse_beta + x35) + V_T - x32 - x33, x25)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, 0, x7, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_input(log_J_in: Any, V_D: Any, R_input: Any, log_J_out: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = 1 + inverse_beta**(-1.0)
    x1 = x0**(-1.0)
    x2 = exp(log_J_out)
    x3 = inverse_beta*x2
    x4 = exp(log_J_in)
    x5 = inverse_beta*x4
    x6 = x1*x5 + x4
    x7 = V_T*log_J_in
    x8 = R_output*x2
    x9 = inverse_V_A*x8
    x10 = V_D*inverse_V_A + 1
    x11 = V_T*log(x10)
    x12 = R_input*x4
    x13 = inverse_beta*x12 + x12
    x14 = I_others + x3 + x5
    x15 = V_T*inverse_V_A/x10
    f0 = I_L - I_given + I_others*x1 + x1*x3 + x6
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_beta*x9 - x9 + 1) - inverse_beta*x8 - x11 + x13 + x7 - x8
    f2 = V_D + 2*V_T*log_I_S + V_T*log(inverse_beta) + V_T*log(x0) - V_T*log(x14) + x11 - x7
    a00 = x6
    a10 = V_T + x13
    a11 = -x15
    a12 = x4 + x5
    a20 = -V_T - V_T*x5/x14
    a21 = x15 + 1
    y0 = a00**(-1.0)
    y1 = a00*f2
    y2 = y0/(a12*a21)
    return (-f0*y0, -y2*(-a12*a20*f0 + a12*y1), -y2*(a00*a21*f1 - a11*y1 - f0*(a10*a21 - a11*a20)))


def pin_output(log_J_in: Any, V_D: Any, R_output: Any, log_J_out: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = 1 + inverse_beta**(-1.0)
    x1 = x0**(-1.0)
    x2 = exp(log_J_out)
    x3 = inverse_beta*x2
    x4 = exp(log_J_in)
    x5 = inverse_beta*x4
    x6 = x1*x5 + x4
    x7 = V_T*log_J_in
    x8 = R_output*x2
    x9 = inverse_V_A*x8
    x10 = V_out*inverse_V_A - inverse_beta*x9 - x9 + 1
    x11 = V_D*inverse_V_A + 1
    x12 = V_T*log(x11)
    x13 = R_input*x4
    x14 = inverse_beta*x13 + x13
    x15 = I_others + x3 + x5
    x16 = V_T*inverse_V_A/x11
    f0 = I_L - I_given + I_others*x1 + x1*x3 + x6
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x10) - inverse_beta*x8 - x12 + x14 + x7 - x8
    f2 = V_D + 2*V_T*log_I_S + V_T*log(inverse_beta) + V_T*log(x0) - V_T*log(x15) + x12 - x7
    a00 = x6
    a10 = V_T + x14
    a11 = -x16
    a12 = V_T*(-inverse_V_A*x2 - inverse_V_A*x3)/x10 - x2 - x3
    a20 = -V_T - V_T*x5/x15
    a21 = x16 + 1
    y0 = a00**(-1.0)
    y1 = a00*f2
    y2 = y0/(a12*a21)
    return (-f0*y0, -y2*(-a12*a20*f0 + a12*y1), -y2*(a00*a21*f1 - a11*y1 - f0*(a10*a21 - a11*a20)))


PINS = {"input": (pin_input, ('log_J_in', 'V_D', 'R_input'), (0, 2)), "output": (pin_output, ('log_J_in', 'V_D', 'R_output'), (0, 2))}
