"""ptat plus vbe, bipolar transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log

CURRENTS = ('I_core', 'I_out')
UNKNOWNS = ('log_J_core', 'log_I_out', 'V_D')
QUANTITIES = ('I_L', 'M', 'N', 'R_base', 'R_core', 'V_T', 'V_out', 'inverse_V_A', 'inverse_beta', 'log_I_S')


def loops(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_beta*x0
    x3 = R_core*x2
    x4 = V_T*log(inverse_beta + 1) + V_T*log(V_D*inverse_V_A + 1) - V_T*log(I_L*M*N - I_L + M*x0 - x2)
    x5 = V_T*log_I_S + x4
    return (-V_T*log_J_core + V_T*log(N) + V_T*log(V_out*inverse_V_A - inverse_V_A*x1 - inverse_V_A*x3 + 1) - x1 - x3 - x4, I_L*N*R_base + R_base*x0 - R_base*exp(log_I_out) - x5, V_D + x5)


def across(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    x0 = R_core*exp(log_J_core)
    return (V_out - inverse_beta*x0 - x0, V_D)


def step(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_beta*x0
    x3 = R_core*x2
    x4 = inverse_V_A*x1 + inverse_V_A*x3
    x5 = V_out*inverse_V_A - x4 + 1
    x6 = V_D*inverse_V_A + 1
    x7 = M*x0 - x2
    x8 = I_L*M*N - I_L + x7
    x9 = V_T*log(x6) - V_T*log(x8) + V_T*log(inverse_beta + 1)
    x10 = x1 + x3
    x11 = R_base*exp(log_I_out)
    x12 = V_T*log_I_S + x9
    x13 = V_T*x7/x8
    x14 = -x13
    x15 = V_T*inverse_V_A/x6
    x16 = -x15
    f0 = -V_T*log_J_core + V_T*log(N) + V_T*log(x5) - x10 - x9
    f1 = I_L*N*R_base + R_base*x0 - x11 - x12
    f2 = V_D + x12
    a00 = -V_T*x4/x5 - V_T - x10 - x14
    a02 = x16
    a10 = R_base*x0 + x13
    a11 = -x11
    a12 = x16
    a20 = x14
    a22 = x15 + 1
    y0 = a11*f2
    y1 = a00*a22
    y2 = a02*a20
    y3 = (a11*y1 - a11*y2)**(-1.0)
    return (y3*(a02*y0 - a11*a22*f0), y3*(-f0*(-a10*a22 + a12*a20) - f1*(y1 - y2) - f2*(-a00*a12 + a02*a10)), y3*(-a00*y0 + a11*a20*f0))


def partials(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_core)
    x1 = inverse_beta*x0
    x2 = R_core*x1
    x3 = R_core*x0
    x4 = x2 + x3
    x5 = inverse_V_A*x3
    x6 = inverse_V_A*x2
    x7 = x5 + x6
    x8 = V_out*inverse_V_A - x7 + 1
    x9 = inverse_beta + 1
    x10 = V_D*inverse_V_A
    x11 = x10 + 1
    x12 = I_L*N
    x13 = M*x12
    x14 = M*x0
    x15 = -x1 + x14
    x16 = -I_L + x13 + x15
    x17 = V_T*log(x11) - V_T*log(x16) + V_T*log(x9)
    x18 = V_T*log_J_core - V_T*log(N) - V_T*log(x8) + x17
    x19 = exp(log_I_out)
    x20 = R_base*x19
    x21 = V_T*log_I_S + x17
    x22 = x8**(-1.0)
    x23 = V_T/x16
    x24 = x15*x23
    x25 = -x24
    x26 = V_T/x11
    x27 = inverse_V_A*x26
    x28 = -x27
    x29 = x13*x23
    x30 = -I_L*x23 + x29
    x31 = x14*x23 + x29
    x32 = V_T*x22
    x33 = x10*x26
    x34 = x32*x6
    x35 = V_T*inverse_beta/x9 + x1*x23
    x36 = R_base*x12
    return (
        (-x18 - x4, I_L*N*R_base + R_base*x0 - x20 - x21, V_D + x21),
        ((-V_T*x22*x7 - V_T - x25 - x4, 0, x28), (R_base*x0 + x24, -x20, x28), (x25, 0, x27 + 1)),
        ((x30, x31, V_T + x29, 0, V_T*x22*(-inverse_V_A*x0 - inverse_V_A*x1) - x0 - x1, -x18, V_out*inverse_V_A*x32, V_T*V_out*inverse_V_A*x22 - x32*x5 - x33 - x34, -x2 - x34 - x35, 0), (x30 + x36, x31, x29 + x36, x0 + x12 - x19, 0, -x21, 0, -x33, -x35, -V_T), (-x30, -x31, -x29, 0, 0, x21, 0, x33, x35, V_T)),
    )


def outputs(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_core)
    x1 = I_L*N
    x2 = x0 + x1
    x3 = x2**(-1.0)
    x4 = x1*x3
    return (
        (log(x2), log_I_out),
        ((x0*x3, 0, 0), (0, 1, 0)),
        ((x4, 0, x4, 0, 0, 0, 0, 0, 0, 0), (0, 0, 0, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, M: Any, N: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return log_I_out from the output current."""
    return log(I_out)


def pin_core(log_J_core: Any, V_D: Any, R_core: Any, log_I_out: Any, I_L: Any, M: Any, N: Any, R_base: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_beta*x0
    x3 = R_core*x2
    x4 = inverse_V_A*x1 + inverse_V_A*x3
    x5 = V_out*inverse_V_A - x4 + 1
    x6 = V_D*inverse_V_A + 1
    x7 = M*x0 - x2
    x8 = I_L*M*N - I_L + x7
    x9 = V_T*log(x6) - V_T*log(x8) + V_T*log(inverse_beta + 1)
    x10 = x1 + x3
    x11 = V_T*log_I_S + x9
    x12 = x5**(-1.0)
    x13 = V_T*x7/x8
    x14 = -x13
    x15 = V_T*inverse_V_A/x6
    x16 = -x15
    f0 = -V_T*log_J_core + V_T*log(N) + V_T*log(x5) - x10 - x9
    f1 = I_L*N*R_base + R_base*x0 - R_base*exp(log_I_out) - x11
    f2 = V_D + x11
    a00 = -V_T*x12*x4 - V_T - x10 - x14
    a01 = x16
    a02 = V_T*x12*(-inverse_V_A*x0 - inverse_V_A*x2) - x0 - x2
    a10 = R_base*x0 + x13
    a11 = x16
    a20 = x14
    a21 = x15 + 1
    y0 = a02*f2
    y1 = a10*a21
    y2 = a11*a20
    y3 = (a02*y1 - a02*y2)**(-1.0)
    return (y3*(-a02*a21*f1 + a11*y0), y3*(a02*a20*f1 - a10*y0), y3*(-f0*(y1 - y2) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_base(log_J_core: Any, V_D: Any, R_base: Any, log_I_out: Any, I_L: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_out: Any, inverse_V_A: Any, inverse_beta: Any, log_I_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = inverse_beta*x0
    x3 = R_core*x2
    x4 = inverse_V_A*x1 + inverse_V_A*x3
    x5 = V_out*inverse_V_A - x4 + 1
    x6 = V_D*inverse_V_A + 1
    x7 = I_L*N
    x8 = M*x0 - x2
    x9 = -I_L + M*x7 + x8
    x10 = V_T*log(x6) - V_T*log(x9) + V_T*log(inverse_beta + 1)
    x11 = x1 + x3
    x12 = exp(log_I_out)
    x13 = V_T*log_I_S + x10
    x14 = V_T*x8/x9
    x15 = -x14
    x16 = V_T*inverse_V_A/x6
    x17 = -x16
    f0 = -V_T*log_J_core + V_T*log(N) + V_T*log(x5) - x10 - x11
    f1 = I_L*N*R_base + R_base*x0 - R_base*x12 - x13
    f2 = V_D + x13
    a00 = -V_T*x4/x5 - V_T - x11 - x15
    a01 = x17
    a10 = R_base*x0 + x14
    a11 = x17
    a12 = x0 - x12 + x7
    a20 = x15
    a21 = x16 + 1
    y0 = a12*f2
    y1 = a00*a21
    y2 = (a01*a12*a20 - a12*y1)**(-1.0)
    return (y2*(-a01*y0 + a12*a21*f0), y2*(a00*y0 - a12*a20*f0), y2*(-f0*(a10*a21 - a11*a20) - f1*(a01*a20 - y1) - f2*(a00*a11 - a01*a10)))


PINS = {"core": (pin_core, ('log_J_core', 'V_D', 'R_core'), (1, 2)), "base": (pin_base, ('log_J_core', 'V_D', 'R_base'), (0, 2))}
