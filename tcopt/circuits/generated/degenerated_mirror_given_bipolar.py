"""degenerated mirror, bipolar transistors, input: given.

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
    x1 = inverse_beta*x0
    x2 = exp(log_J_out)
    x3 = inverse_beta*x2
    x4 = V_T*log_J_in
    x5 = R_output*x2
    x6 = R_output*x3
    x7 = V_T*log(V_D*inverse_V_A + 1)
    return (I_L - I_given + I_others + x0 + x1 + x3, R_input*x0 + R_input*x1 - V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_V_A*x5 - inverse_V_A*x6 + 1) + x4 - x5 - x6 - x7, V_D + V_T*log_I_S - x4 + x7)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_output*exp(log_J_out)
    return (V_out - inverse_beta*x0 - x0, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
    x2 = exp(log_J_in)
    x3 = inverse_beta*x2
    x4 = x2 + x3
    x5 = V_T*log_J_in
    x6 = R_output*x0
    x7 = R_output*x1
    x8 = inverse_V_A*x6 + inverse_V_A*x7
    x9 = V_out*inverse_V_A - x8 + 1
    x10 = V_D*inverse_V_A + 1
    x11 = V_T*log(x10)
    x12 = R_input*x2 + R_input*x3
    x13 = V_T*inverse_V_A/x10
    f0 = I_L - I_given + I_others + x1 + x4
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x9) - x11 + x12 + x5 - x6 - x7
    f2 = V_D + V_T*log_I_S + x11 - x5
    a00 = x4
    a01 = x1
    a10 = V_T + x12
    a11 = -V_T*x8/x9 - V_T - x6 - x7
    a12 = -x13
    a20 = -V_T
    a22 = x13 + 1
    y0 = a00*a11
    y1 = a10*a22
    y2 = (a01*a12*a20 - a01*y1 + a22*y0)**(-1.0)
    return (y2*(-a01*a12*f2 + a01*a22*f1 - a11*a22*f0), y2*(a00*a12*f2 - a00*a22*f1 - f0*(a12*a20 - y1)), y2*(-a01*a20*f1 + a11*a20*f0 - f2*(-a01*a10 + y0)))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
    x2 = -I_given
    x3 = exp(log_J_in)
    x4 = inverse_beta*x3
    x5 = x3 + x4
    x6 = R_output*x0
    x7 = R_output*x1
    x8 = R_input*x3 + R_input*x4
    x9 = V_T*log_J_in
    x10 = V_D*inverse_V_A
    x11 = x10 + 1
    x12 = V_T*log(x11)
    x13 = inverse_V_A*x6
    x14 = inverse_V_A*x7
    x15 = x13 + x14
    x16 = V_out*inverse_V_A - x15 + 1
    x17 = -V_T*log_J_out + V_T*log(N) + V_T*log(x16) - x12 + x9
    x18 = V_T*log_I_S + x12 - x9
    x19 = x16**(-1.0)
    x20 = V_T/x11
    x21 = inverse_V_A*x20
    x22 = V_T*x19
    x23 = x10*x20
    x24 = x14*x22
    return (
        (I_L + I_others + x1 + x2 + x5, x17 - x6 - x7 + x8, V_D + x18),
        ((x5, x1, 0), (V_T + x8, -V_T*x15*x19 - V_T - x6 - x7, -x21), (-V_T, 0, x21 + 1)),
        ((I_L, x2, I_others, 0, 0, 0, 0, 0, 0, x1 + x4, 0), (0, 0, 0, V_T, x5, V_T*x19*(-inverse_V_A*x0 - inverse_V_A*x1) - x0 - x1, x17, V_out*inverse_V_A*x22, V_T*V_out*inverse_V_A*x19 - x13*x22 - x23 - x24, R_input*inverse_beta*x3 - x24 - x7, 0), (0, 0, 0, 0, 0, 0, x18, 0, x23, 0, V_T)),
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
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
    x2 = exp(log_J_in)
    x3 = inverse_beta*x2
    x4 = x2 + x3
    x5 = V_T*log_J_in
    x6 = R_output*x0
    x7 = R_output*x1
    x8 = V_D*inverse_V_A + 1
    x9 = V_T*log(x8)
    x10 = R_input*x2 + R_input*x3
    x11 = V_T*inverse_V_A/x8
    f0 = I_L - I_given + I_others + x1 + x4
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_V_A*x6 - inverse_V_A*x7 + 1) + x10 + x5 - x6 - x7 - x9
    f2 = V_D + V_T*log_I_S - x5 + x9
    a00 = x4
    a10 = V_T + x10
    a11 = -x11
    a12 = x4
    a20 = -V_T
    a21 = x11 + 1
    y0 = a00**(-1.0)
    y1 = a00*f2
    y2 = y0/(a12*a21)
    return (-f0*y0, -y2*(-a12*a20*f0 + a12*y1), -y2*(a00*a21*f1 - a11*y1 - f0*(a10*a21 - a11*a20)))


def pin_output(log_J_in: Any, V_D: Any, R_output: Any, log_J_out: Any, I_L: Any, I_given: Any, I_others: Any, N: Any, R_input: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = inverse_beta*x0
    x2 = exp(log_J_in)
    x3 = inverse_beta*x2
    x4 = x2 + x3
    x5 = V_T*log_J_in
    x6 = R_output*x0
    x7 = R_output*x1
    x8 = V_out*inverse_V_A - inverse_V_A*x6 - inverse_V_A*x7 + 1
    x9 = V_D*inverse_V_A + 1
    x10 = V_T*log(x9)
    x11 = R_input*x2 + R_input*x3
    x12 = V_T*inverse_V_A/x9
    f0 = I_L - I_given + I_others + x1 + x4
    f1 = -V_T*log_J_out + V_T*log(N) + V_T*log(x8) - x10 + x11 + x5 - x6 - x7
    f2 = V_D + V_T*log_I_S + x10 - x5
    a00 = x4
    a10 = V_T + x11
    a11 = -x12
    a12 = V_T*(-inverse_V_A*x0 - inverse_V_A*x1)/x8 - x0 - x1
    a20 = -V_T
    a21 = x12 + 1
    y0 = a00**(-1.0)
    y1 = a00*f2
    y2 = y0/(a12*a21)
    return (-f0*y0, -y2*(-a12*a20*f0 + a12*y1), -y2*(a00*a21*f1 - a11*y1 - f0*(a10*a21 - a11*a20)))


PINS = {"input": (pin_input, ('log_J_in', 'V_D', 'R_input'), (0, 2)), "output": (pin_output, ('log_J_in', 'V_D', 'R_output'), (0, 2))}
