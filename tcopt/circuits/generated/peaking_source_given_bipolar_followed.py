"""peaking source, bipolar, followed transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_given', 'N', 'R_drop', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = 1 + inverse_beta**(-1.0)
    x1 = x0**(-1.0)
    x2 = inverse_beta*exp(log_J_out)
    x3 = x1*x2
    x4 = exp(log_J_in)
    x5 = inverse_beta*x4
    x6 = x1*x5 + x4
    x7 = R_drop*x4
    x8 = R_drop*x3
    x9 = V_D*inverse_V_A + 1
    x10 = -V_T*log_J_in + V_T*log(x9)
    x11 = x2 + x5
    x12 = V_T*inverse_V_A/x9
    x13 = V_T/x11
    f0 = I_L - I_given + x3 + x6
    f1 = -I_L*R_drop - V_T*log_J_out + V_T*log(N) + V_T*log(V_out*inverse_V_A + 1) - x10 - x7 - x8
    f2 = V_D + 2*V_T*log_I_S + V_T*log(inverse_beta) + V_T*log(x0) - V_T*log(x11) + x10
    a00 = x6
    a01 = x3
    a10 = V_T - x7
    a11 = -V_T - x8
    a12 = -x12
    a20 = -V_T - x13*x5
    a21 = -x13*x2
    a22 = x12 + 1
    y0 = a11*a22
    y1 = a12*a21
    y2 = a10*a22
    y3 = (a00*y0 - a00*y1 + a01*a12*a20 - a01*y2)**(-1.0)
    return (y3*(-a01*a12*f2 + a01*a22*f1 - f0*(y0 - y1)), y3*(a00*a12*f2 - a00*a22*f1 - f0*(a12*a20 - y2)), y3*(-f0*(a10*a21 - a11*a20) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = -I_given
    x1 = exp(log_J_in)
    x2 = inverse_beta**(-1.0)
    x3 = x2 + 1
    x4 = x3**(-1.0)
    x5 = inverse_beta*x1
    x6 = x4*x5
    x7 = x1 + x6
    x8 = inverse_beta*exp(log_J_out)
    x9 = x4*x8
    x10 = I_L + x9
    x11 = R_drop*x1
    x12 = R_drop*x9
    x13 = V_T*log_J_out
    x14 = I_L*R_drop
    x15 = log(N)
    x16 = V_out*inverse_V_A
    x17 = x16 + 1
    x18 = log(x17)
    x19 = V_D*inverse_V_A
    x20 = x19 + 1
    x21 = V_T*log(x20)
    x22 = V_T*log_J_in
    x23 = x21 - x22
    x24 = x5 + x8
    x25 = 2*V_T
    x26 = V_T*log(inverse_beta) - V_T*log(x24) + V_T*log(x3) + log_I_S*x25 + x23
    x27 = -V_T
    x28 = V_T/x20
    x29 = inverse_V_A*x28
    x30 = V_T/x24
    x31 = x30*x5
    x32 = x30*x8
    x33 = (inverse_beta + x2 + 2)**(-1.0)
    x34 = x33*x8
    x35 = x17**(-1.0)
    x36 = x19*x28
    return (
        (x0 + x10 + x7, V_T*x15 + V_T*x18 - x11 - x12 - x13 - x14 - x23, V_D + x26),
        ((x7, x9, 0), (-x11 - x27, -V_T - x12, -x29), (-V_T - x31, -x32, x29 + 1)),
        ((I_L, x0, 0, 0, 0, 0, 0, x33*x5 + x34 + x6 + x9, 0), (-x14, 0, V_T, -x1 - x10, V_T*x15 + V_T*x18 - x13 - x21 + x22, V_T*x16*x35, V_T*V_out*inverse_V_A*x35 - x36, -R_drop*x34 - x12, 0), (0, 0, 0, 0, x26, 0, x36, -V_T*inverse_beta/(inverse_beta**2 + inverse_beta) - x27 - x31 - x32, x25)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, N: Any, R_drop: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, x7, 0, 0, 0, 0, 0, 0)),
    )
