"""peaking source, mos transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_given', 'I_spec', 'N', 'R_drop', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n')


def loops(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_drop: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_in)
    x1 = 1/sqrt(I_spec)
    x2 = 2*V_T*n*log_expm1(x1*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1)))
    return (I_L - I_given + x0, -I_L*R_drop - R_drop*x0 + 2*V_T*n*log_expm1(x1*exp((1/2)*log_J_in)/sqrt(V_D*inverse_V_A + 1)) - x2, V_D - V_TH - x2)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_drop: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (V_out, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_drop: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_drop*x0
    x2 = V_D*inverse_V_A + 1
    x3 = 1/sqrt(x2)
    x4 = 1/sqrt(I_spec)
    x5 = exp((1/2)*log_J_in)
    x6 = x4*x5
    x7 = x3*x6
    x8 = x4*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1))
    x9 = V_T*n
    x10 = 2*x9*log_expm1(x8)
    x11 = 1 + expm1(x7)**(-1.0)
    x12 = -x8*x9*(1 + expm1(x8)**(-1.0))
    f0 = I_L - I_given + x0
    f1 = -I_L*R_drop + 2*V_T*n*log_expm1(x7) - x1 - x10
    f2 = V_D - V_TH - x10
    a00 = x0
    a10 = V_T*n*x11*x3*x4*x5 - x1
    a11 = x12
    a12 = -inverse_V_A*x11*x6*x9/x2**(3/2)
    a21 = x12
    y0 = a12*a21
    y1 = a00*a11
    y2 = (-a00*y0 + y1)**(-1.0)
    y3 = a10*f0
    return (-f0*y2*(a11 - y0), y2*(a00*a12*f2 - a00*f1 + y3), y2*(a00*a21*f1 - a21*y3 - f2*y1))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_drop: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = -I_given
    x1 = exp(log_J_in)
    x2 = I_L + x1
    x3 = I_L*R_drop
    x4 = R_drop*x1
    x5 = V_D*inverse_V_A
    x6 = x5 + 1
    x7 = sqrt(x6)
    x8 = x7**(-1.0)
    x9 = sqrt(I_spec)
    x10 = x9**(-1.0)
    x11 = exp((1/2)*log_J_in)
    x12 = x10*x11
    x13 = x12*x8
    x14 = log_expm1(x13)
    x15 = sqrt(N)
    x16 = x15**(-1.0)
    x17 = exp((1/2)*log_J_out)
    x18 = V_out*inverse_V_A
    x19 = sqrt(x18 + 1)
    x20 = x19**(-1.0)
    x21 = x10*x16*x17*x20
    x22 = V_T*n
    x23 = 2*x22
    x24 = x23*log_expm1(x21)
    x25 = expm1(x13)
    x26 = x25**(-1.0)
    x27 = x26 + 1
    x28 = expm1(x21)
    x29 = x28**(-1.0)
    x30 = x21*x22
    x31 = -x30*(x29 + 1)
    x32 = x13*x22
    x33 = x29*x30 + x30
    x34 = -x24
    x35 = x14*x23 + x34
    x36 = x15*x19*x9
    x37 = (x18*x36 + x36)**(-1.0)
    x38 = x17*x18*x22
    x39 = x28*x36
    x40 = (x18*x39 + x39)**(-1.0)
    x41 = x37*x38 + x38*x40
    x42 = x7*x9
    x43 = x11*x22*x5
    x44 = x25*x42
    return (
        (x0 + x2, 2*V_T*n*x14 - x24 - x3 - x4, V_D - V_TH - x24),
        ((x1, 0, 0), (V_T*n*x10*x11*x27*x8 - x4, x31, -inverse_V_A*x12*x22*x27/x6**(3/2)), (0, x31, 1)),
        ((I_L, x0, 0, 0, 0, 0, 0, 0, 0, 0), (-x3, 0, V_T*n*x10*x16*x17*x20*x29 + V_T*n*x10*x16*x17*x20 - x26*x32 - x32, x33, -x2, x35, 0, x41, V_T*V_out*inverse_V_A*n*x17*x37 + V_T*V_out*inverse_V_A*n*x17*x40 - x43/(x44*x5 + x44) - x43/(x42*x5 + x42), x35), (0, 0, x33, x33, 0, x34, -V_TH, x41, x41, x34)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_drop: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, 0, x7, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_drop(log_J_in: Any, V_D: Any, R_drop: Any, log_J_out: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = I_L + x0
    x2 = R_drop*x0
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(x3)
    x5 = 1/sqrt(I_spec)
    x6 = exp((1/2)*log_J_in)
    x7 = x5*x6
    x8 = x4*x7
    x9 = V_T*n
    x10 = 2*x9*log_expm1(x5*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1)))
    x11 = 1 + expm1(x8)**(-1.0)
    f0 = -I_given + x1
    f1 = -I_L*R_drop + 2*V_T*n*log_expm1(x8) - x10 - x2
    f2 = V_D - V_TH - x10
    a00 = x0
    a10 = V_T*n*x11*x4*x5*x6 - x2
    a11 = -inverse_V_A*x11*x7*x9/x3**(3/2)
    a12 = -x1
    y0 = a00**(-1.0)
    return (-f0*y0, -f2, -y0*(-a00*a11*f2 + a00*f1 - a10*f0)/a12)


PINS = {"drop": (pin_drop, ('log_J_in', 'V_D', 'R_drop'), (0, 2))}
