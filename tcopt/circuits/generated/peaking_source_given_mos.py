"""peaking source, mos transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_given', 'I_spec', 'N', 'R_drop', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n')


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_drop: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_drop*x0
    x2 = V_D*inverse_V_A + 1
    x3 = 1/sqrt(I_spec)
    x4 = x3*exp((1/2)*log_J_in)
    x5 = x4/sqrt(x2)
    x6 = V_T*n
    x7 = 2*x6
    x8 = x7*log_expm1(x5)
    x9 = x3*exp((1/2)*log_J_out)/(sqrt(N)*sqrt(V_out*inverse_V_A + 1))
    x10 = x6*(1 + expm1(x5)**(-1.0))
    x11 = -x10*x5
    x12 = inverse_V_A*x10*x4/x2**(3/2)
    f0 = I_L - I_given + x0
    f1 = -I_L*R_drop - x1 - x7*log_expm1(x9) + x8
    f2 = V_D - V_TH - x8
    a00 = x0
    a10 = -x1 - x11
    a11 = -x6*x9*(1 + expm1(x9)**(-1.0))
    a12 = -x12
    a20 = x11
    a22 = x12 + 1
    y0 = a00**(-1.0)
    y1 = y0/(a11*a22)
    return (-f0*y0, y1*(a00*a12*f2 - a00*a22*f1 - f0*(-a10*a22 + a12*a20)), y1*(-a00*a11*f2 + a11*a20*f0))


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
    x8 = sqrt(I_spec)
    x9 = x8**(-1.0)
    x10 = exp((1/2)*log_J_in)
    x11 = x10*x9
    x12 = x11/x7
    x13 = V_T*n
    x14 = 2*x13
    x15 = x14*log_expm1(x12)
    x16 = -x15
    x17 = sqrt(N)
    x18 = x17**(-1.0)
    x19 = exp((1/2)*log_J_out)
    x20 = V_out*inverse_V_A
    x21 = sqrt(x20 + 1)
    x22 = x21**(-1.0)
    x23 = x18*x19*x22*x9
    x24 = x14*log_expm1(x23)
    x25 = expm1(x12)
    x26 = x25**(-1.0)
    x27 = x26 + 1
    x28 = x12*x13
    x29 = -x27*x28
    x30 = expm1(x23)
    x31 = x30**(-1.0)
    x32 = x13*x23
    x33 = inverse_V_A*x11*x13*x27/x6**(3/2)
    x34 = x26*x28 + x28
    x35 = x15 - x24
    x36 = x17*x21*x8
    x37 = (x20*x36 + x36)**(-1.0)
    x38 = x13*x19*x20
    x39 = x30*x36
    x40 = (x20*x39 + x39)**(-1.0)
    x41 = x7*x8
    x42 = x10*x13*x5
    x43 = x25*x41
    x44 = x42/(x43*x5 + x43) + x42/(x41*x5 + x41)
    return (
        (x0 + x2, -x16 - x24 - x3 - x4, V_D - V_TH - x15),
        ((x1, 0, 0), (-x29 - x4, -x32*(x31 + 1), -x33), (x29, 0, x33 + 1)),
        ((I_L, x0, 0, 0, 0, 0, 0, 0, 0, 0), (-x3, 0, V_T*n*x18*x19*x22*x31*x9 + V_T*n*x18*x19*x22*x9 - x34, x31*x32 + x32, -x2, x35, 0, x37*x38 + x38*x40, V_T*V_out*inverse_V_A*n*x19*x37 + V_T*V_out*inverse_V_A*n*x19*x40 - x44, x35), (0, 0, x34, 0, 0, x16, -V_TH, 0, x44, x16)),
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
