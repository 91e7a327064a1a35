"""peaking source, mos transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_spec', 'N', 'R_drop', 'R_feed', 'V_CC', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n')


def loops(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_in)
    x1 = 1/sqrt(I_spec)
    x2 = 2*V_T*n
    x3 = x2*log_expm1(x1*exp((1/2)*log_J_in)/sqrt(V_D*inverse_V_A + 1))
    x4 = x2*log_expm1(x1*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1)))
    return (-I_L*R_feed - R_feed*x0 + V_CC - V_TH - x3, -I_L*R_drop - R_drop*x0 + x3 - x4, V_D - V_TH - x4)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (V_out, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = V_D*inverse_V_A + 1
    x3 = 1/sqrt(I_spec)
    x4 = x3*exp((1/2)*log_J_in)
    x5 = x4/sqrt(x2)
    x6 = V_T*n
    x7 = 2*x6
    x8 = x7*log_expm1(x5)
    x9 = R_drop*x0
    x10 = x3*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1))
    x11 = x7*log_expm1(x10)
    x12 = x6*(1 + expm1(x5)**(-1.0))
    x13 = x12*x5
    x14 = inverse_V_A*x12*x4/x2**(3/2)
    x15 = -x10*x6*(1 + expm1(x10)**(-1.0))
    f0 = -I_L*R_feed + V_CC - V_TH - x1 - x8
    f1 = -I_L*R_drop - x11 + x8 - x9
    f2 = V_D - V_TH - x11
    a00 = -x1 - x13
    a02 = x14
    a10 = x13 - x9
    a11 = x15
    a12 = -x14
    a21 = x15
    y0 = a00*a11
    y1 = a12*a21
    y2 = (-a00*y1 + a02*a10*a21 + y0)**(-1.0)
    return (y2*(a02*a11*f2 - a02*a21*f1 - f0*(a11 - y1)), y2*(-a00*f1 + a10*f0 - f2*(-a00*a12 + a02*a10)), y2*(a00*a21*f1 - a10*a21*f0 - f2*y0))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = I_L*R_feed
    x1 = exp(log_J_in)
    x2 = R_feed*x1
    x3 = V_D*inverse_V_A
    x4 = x3 + 1
    x5 = sqrt(x4)
    x6 = sqrt(I_spec)
    x7 = x6**(-1.0)
    x8 = exp((1/2)*log_J_in)
    x9 = x7*x8
    x10 = x9/x5
    x11 = V_T*n
    x12 = 2*x11
    x13 = x12*log_expm1(x10)
    x14 = I_L*R_drop
    x15 = R_drop*x1
    x16 = -x13
    x17 = sqrt(N)
    x18 = x17**(-1.0)
    x19 = exp((1/2)*log_J_out)
    x20 = V_out*inverse_V_A
    x21 = sqrt(x20 + 1)
    x22 = x21**(-1.0)
    x23 = x18*x19*x22*x7
    x24 = x12*log_expm1(x23)
    x25 = expm1(x10)
    x26 = x25**(-1.0)
    x27 = x26 + 1
    x28 = x10*x11
    x29 = x27*x28
    x30 = inverse_V_A*x11*x27*x9/x4**(3/2)
    x31 = expm1(x23)
    x32 = x31**(-1.0)
    x33 = x11*x23
    x34 = -x33*(x32 + 1)
    x35 = x26*x28 + x28
    x36 = -I_L - x1
    x37 = -V_TH
    x38 = x5*x6
    x39 = x11*x3*x8
    x40 = x25*x38
    x41 = x39/(x3*x40 + x40) + x39/(x3*x38 + x38)
    x42 = x32*x33 + x33
    x43 = -x24
    x44 = x13 + x43
    x45 = x17*x21*x6
    x46 = (x20*x45 + x45)**(-1.0)
    x47 = x11*x19*x20
    x48 = x31*x45
    x49 = (x20*x48 + x48)**(-1.0)
    x50 = x46*x47 + x47*x49
    return (
        (V_CC - V_TH - x0 - x13 - x2, -x14 - x15 - x16 - x24, V_D - V_TH - x24),
        ((-x2 - x29, 0, x30), (-x15 + x29, x34, -x30), (0, x34, 1)),
        ((-x0, x35, 0, 0, x36, V_CC, x16, x37, 0, x41, x16), (-x14, V_T*n*x18*x19*x22*x32*x7 + V_T*n*x18*x19*x22*x7 - x35, x42, x36, 0, 0, x44, 0, x50, V_T*V_out*inverse_V_A*n*x19*x46 + V_T*V_out*inverse_V_A*n*x19*x49 - x41, x44), (0, x42, x42, 0, 0, 0, x43, x37, x50, x50, x43)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, x7, 0, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, I_spec: Any, N: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_feed(log_J_in: Any, V_D: Any, R_feed: Any, log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_drop: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = V_D*inverse_V_A + 1
    x3 = 1/sqrt(I_spec)
    x4 = x3*exp((1/2)*log_J_in)
    x5 = x4/sqrt(x2)
    x6 = V_T*n
    x7 = 2*x6
    x8 = x7*log_expm1(x5)
    x9 = R_drop*x0
    x10 = x7*log_expm1(x3*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1)))
    x11 = x6*(1 + expm1(x5)**(-1.0))
    x12 = x11*x5
    x13 = inverse_V_A*x11*x4/x2**(3/2)
    f0 = -I_L*R_feed + V_CC - V_TH - x1 - x8
    f1 = -I_L*R_drop - x10 + x8 - x9
    f2 = V_D - V_TH - x10
    a00 = -x1 - x12
    a01 = x13
    a02 = -I_L - x0
    a10 = x12 - x9
    a11 = -x13
    y0 = 1/(a02*a10)
    return (y0*(a02*a11*f2 - a02*f1), -f2, y0*(a00*f1 - a10*f0 - f2*(a00*a11 - a01*a10)))


def pin_drop(log_J_in: Any, V_D: Any, R_drop: Any, log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_feed: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = V_D*inverse_V_A + 1
    x3 = 1/sqrt(I_spec)
    x4 = x3*exp((1/2)*log_J_in)
    x5 = x4/sqrt(x2)
    x6 = V_T*n
    x7 = 2*x6
    x8 = x7*log_expm1(x5)
    x9 = R_drop*x0
    x10 = x7*log_expm1(x3*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1)))
    x11 = x6*(1 + expm1(x5)**(-1.0))
    x12 = x11*x5
    x13 = inverse_V_A*x11*x4/x2**(3/2)
    f0 = -I_L*R_feed + V_CC - V_TH - x1 - x8
    f1 = -I_L*R_drop - x10 + x8 - x9
    f2 = V_D - V_TH - x10
    a00 = -x1 - x12
    a01 = x13
    a10 = x12 - x9
    a11 = -x13
    a12 = -I_L - x0
    y0 = 1/(a00*a12)
    return (-y0*(-a01*a12*f2 + a12*f0), -f2, -y0*(a00*f1 - a10*f0 - f2*(a00*a11 - a01*a10)))


PINS = {"feed": (pin_feed, ('log_J_in', 'V_D', 'R_feed'), (1, 2)), "drop": (pin_drop, ('log_J_in', 'V_D', 'R_drop'), (0, 2))}
