"""degenerated mirror, bipolar, followed transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_given', 'N', 'R_input', 'R_output', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
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
    x18 = x3 + x6
    x19 = V_T*inverse_V_A/x13
    x20 = V_T/x18
    f0 = I_L - I_given + x4 + x7
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


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = inverse_beta**(-1.0)
    x1 = x0 + 1
    x2 = x1**(-1.0)
    x3 = exp(log_J_out)
    x4 = inverse_beta*x3
    x5 = x2*x4
    x6 = -I_given
    x7 = exp(log_J_in)
    x8 = inverse_beta*x7
    x9 = x2*x8
    x10 = x7 + x9
    x11 = R_output*x3
    x12 = inverse_beta*x11
    x13 = R_input*x7
    x14 = inverse_beta*x13 + x13
    x15 = V_T*log_J_in
    x16 = V_D*inverse_V_A
    x17 = x16 + 1
    x18 = V_T*log(x17)
    x19 = inverse_V_A*x11
    x20 = inverse_beta*x19
    x21 = x19 + x20
    x22 = V_out*inverse_V_A - x21 + 1
    x23 = -V_T*log_J_out + V_T*log(N) + V_T*log(x22) + x15 - x18
    x24 = 2*V_T
    x25 = x4 + x8
    x26 = V_T*log(inverse_beta) + V_T*log(x1) - V_T*log(x25) + log_I_S*x24 - x15 + x18
    x27 = x22**(-1.0)
    x28 = V_T/x17
    x29 = inverse_V_A*x28
    x30 = V_T/x25
    x31 = x30*x8
    x32 = x30*x4
    x33 = (inverse_beta + x0 + 2)**(-1.0)
    x34 = V_T*x27
    x35 = x16*x28
    x36 = x20*x34
    return (
        (I_L + x10 + x5 + x6, -x11 - x12 + x14 + x23, V_D + x26),
        ((x10, x5, 0), (V_T + x14, -V_T*x21*x27 - V_T - x11 - x12, -x29), (-V_T - x31, -x32, x29 + 1)),
        ((I_L, x6, 0, 0, 0, 0, 0, 0, x33*x4 + x33*x8 + x5 + x9, 0), (0, 0, V_T, x7 + x8, V_T*x27*(-inverse_V_A*x3 - inverse_V_A*x4) - x3 - x4, x23, V_out*inverse_V_A*x34, V_T*V_out*inverse_V_A*x27 - x19*x34 - x35 - x36, R_input*inverse_beta*x7 - x12 - x36, 0), (0, 0, 0, 0, 0, x26, 0, x35, -V_T*inverse_beta/(inverse_beta**2 + inverse_beta) + V_T - x31 - x32, x24)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, x7, 0, 0, 0, 0, 0, 0, 0)),
    )
