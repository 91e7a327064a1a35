"""peaking source, mos transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_spec', 'N', 'R_drop', 'R_feed', 'V_CC', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n')


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
    x9 = V_TH + x8
    x10 = R_drop*x0
    x11 = x3*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1))
    x12 = x6*(1 + expm1(x5)**(-1.0))
    x13 = x12*x5
    x14 = inverse_V_A*x12*x4/x2**(3/2)
    x15 = -x13
    f0 = -I_L*R_feed + V_CC - x1 - x9
    f1 = -I_L*R_drop - x10 - x7*log_expm1(x11) + x8
    f2 = V_D - x9
    a00 = -x1 - x13
    a02 = x14
    a10 = -x10 - x15
    a11 = -x11*x6*(1 + expm1(x11)**(-1.0))
    a12 = -x14
    a20 = x15
    a22 = x14 + 1
    y0 = a11*f2
    y1 = a00*a22
    y2 = a02*a20
    y3 = (a11*y1 - a11*y2)**(-1.0)
    return (y3*(a02*y0 - a11*a22*f0), y3*(-f0*(-a10*a22 + a12*a20) - f1*(y1 - y2) - f2*(-a00*a12 + a02*a10)), y3*(-a00*y0 + a11*a20*f0))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_drop: Any, R_feed: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = I_L*R_feed
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
    x14 = V_TH + x13
    x15 = I_L*R_drop
    x16 = R_drop*x0
    x17 = -x13
    x18 = sqrt(N)
    x19 = x18**(-1.0)
    x20 = exp((1/2)*log_J_out)
    x21 = V_out*inverse_V_A
    x22 = sqrt(x21 + 1)
    x23 = x22**(-1.0)
    x24 = x19*x20*x23*x7
    x25 = x12*log_expm1(x24)
    x26 = expm1(x10)
    x27 = x26**(-1.0)
    x28 = x27 + 1
    x29 = x10*x11
    x30 = x28*x29
    x31 = inverse_V_A*x11*x28*x9/x4**(3/2)
    x32 = -x30
    x33 = expm1(x24)
    x34 = x33**(-1.0)
    x35 = x11*x24
    x36 = x27*x29 + x29
    x37 = -I_L - x0
    x38 = -V_TH
    x39 = x5*x6
    x40 = x11*x3*x8
    x41 = x26*x39
    x42 = x40/(x3*x41 + x41) + x40/(x3*x39 + x39)
    x43 = x13 - x25
    x44 = x18*x22*x6
    x45 = (x21*x44 + x44)**(-1.0)
    x46 = x11*x20*x21
    x47 = x33*x44
    x48 = (x21*x47 + x47)**(-1.0)
    return (
        (V_CC - x1 - x14 - x2, -x15 - x16 - x17 - x25, V_D - x14),
        ((-x1 - x30, 0, x31), (-x16 - x32, -x35*(x34 + 1), -x31), (x32, 0, x31 + 1)),
        ((-x2, x36, 0, 0, x37, V_CC, x17, x38, 0, x42, x17), (-x15, V_T*n*x19*x20*x23*x34*x7 + V_T*n*x19*x20*x23*x7 - x36, x34*x35 + x35, x37, 0, 0, x43, 0, x45*x46 + x46*x48, V_T*V_out*inverse_V_A*n*x20*x45 + V_T*V_out*inverse_V_A*n*x20*x48 - x42, x43), (0, x36, 0, 0, 0, 0, x17, x38, 0, x42, x17)),
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
