"""ptat core, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_out',)
UNKNOWNS = ('log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_spec', 'M', 'N', 'R_core', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n', 'n_S')


def loops(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_out)
    x1 = R_core*x0
    x2 = 1/sqrt(I_spec)
    x3 = 2*V_T*n
    x4 = x3*log_expm1(x2*sqrt(I_L*M*N - I_L + M*x0)/sqrt(V_D*inverse_V_A + 1))
    return (-n_S*x1 - x3*log_expm1(x2*sqrt((V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0))*exp((1/2)*log_J_out)/sqrt(N)) + x4, V_D - V_TH - x4)


def across(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (-R_core*exp(log_J_out) + V_out, V_D)


def step(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = R_core*x0
    x2 = n_S*x1
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(x3)
    x5 = 1/sqrt(I_spec)
    x6 = M*x0
    x7 = sqrt(I_L*M*N - I_L + x6)
    x8 = x5*x7
    x9 = x4*x8
    x10 = V_T*n
    x11 = 2*x10
    x12 = x11*log_expm1(x9)
    x13 = (V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0)
    x14 = sqrt(x13)*x5/sqrt(N)
    x15 = x14*exp((1/2)*log_J_out)
    x16 = x10*(1 + expm1(x9)**(-1.0))
    x17 = -x16*x4*x5*x6/x7
    x18 = inverse_V_A*x16*x8/x3**(3/2)
    f0 = -x11*log_expm1(x15) + x12 - x2
    f1 = V_D - V_TH - x12
    a00 = -x11*(1 + expm1(x15)**(-1.0))*((1/2)*R_core*inverse_V_A*x13*x14*exp((3/2)*log_J_out) + (1/2)*x15) - x17 - x2
    a01 = -x18
    a10 = x17
    a11 = x18 + 1
    y0 = (a00*a11 - a01*a10)**(-1.0)
    return (y0*(a01*f1 - a11*f0), y0*(-a00*f1 + a10*f0))


def partials(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = n_S*x0
    x2 = R_core*x1
    x3 = M*x0
    x4 = I_L*M*N
    x5 = sqrt(-I_L + x3 + x4)
    x6 = sqrt(I_spec)
    x7 = x6**(-1.0)
    x8 = V_D*inverse_V_A
    x9 = x8 + 1
    x10 = sqrt(x9)
    x11 = x7/x10
    x12 = x11*x5
    x13 = V_T*n
    x14 = 2*x13
    x15 = x14*log_expm1(x12)
    x16 = -x15
    x17 = V_out*inverse_V_A
    x18 = R_core*inverse_V_A
    x19 = x0*x18
    x20 = (x17 - x19 + 1)**(-1.0)
    x21 = sqrt(x20)
    x22 = exp((1/2)*log_J_out)
    x23 = x21*x22
    x24 = sqrt(N)
    x25 = x24**(-1.0)
    x26 = x25*x7
    x27 = x23*x26
    x28 = x14*log_expm1(x27)
    x29 = expm1(x12)
    x30 = x29**(-1.0)
    x31 = x30 + 1
    x32 = x11*x13/x5
    x33 = x3*x32
    x34 = -x31*x33
    x35 = expm1(x27)
    x36 = x35**(-1.0)
    x37 = x36 + 1
    x38 = x21*exp((3/2)*log_J_out)
    x39 = x18*x38
    x40 = x20*x26
    x41 = x13*x5
    x42 = inverse_V_A*x31*x41*x7/x9**(3/2)
    x43 = I_L*x32
    x44 = x32*x4
    x45 = x30*x44 + x44
    x46 = -x30*x43 - x43 + x45
    x47 = x12*x13
    x48 = x30*x47 + x47
    x49 = x30*x33 + x33 + x45
    x50 = x13*x27
    x51 = x15 - x28
    x52 = x24*x6
    x53 = (x17*x52 - x19*x52 + x52)**(-1.0)
    x54 = x13*x53
    x55 = x17*x23
    x56 = x35*x52
    x57 = (x17*x56 - x19*x56 + x56)**(-1.0)
    x58 = x13*x57
    x59 = x10*x6
    x60 = x41*x8
    x61 = x29*x59
    x62 = x60/(x61*x8 + x61) + x60/(x59*x8 + x59)
    return (
        (-x16 - x2 - x28, V_D - V_TH - x15),
        ((-x14*x37*((1/2)*x27 + (1/2)*x39*x40) - x2 - x34, -x42), (x34, x42 + 1)),
        ((x46, V_T*n*x21*x22*x25*x36*x7 + V_T*n*x21*x22*x25*x7 - x48, x49, x36*x50 + x45 + x50, -inverse_V_A*x13*x37*x38*x40 - x1, x51, 0, x54*x55 + x55*x58, V_T*V_out*inverse_V_A*n*x21*x22*x53 + V_T*V_out*inverse_V_A*n*x21*x22*x57 - x39*x54 - x39*x58 - x62, x51, -x2), (-x46, x48, -x49, -x45, 0, x16, -V_TH, 0, x62, x16, 0)),
    )


def outputs(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = I_L*N
    x2 = x0 + x1
    x3 = x2**(-1.0)
    x4 = x1*x3
    return (
        (log(x2),),
        ((x0*x3, 0),),
        ((x4, 0, 0, x4, 0, 0, 0, 0, 0, 0, 0),),
    )


def pinned(I_out: Any, I_L: Any, I_spec: Any, M: Any, N: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_core(V_D: Any, R_core: Any, log_J_out: Any, I_L: Any, I_spec: Any, M: Any, N: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = n_S*x0
    x2 = V_D*inverse_V_A + 1
    x3 = 1/sqrt(I_spec)
    x4 = x3*sqrt(I_L*M*N - I_L + M*x0)
    x5 = x4/sqrt(x2)
    x6 = V_T*n
    x7 = 2*x6
    x8 = x7*log_expm1(x5)
    x9 = (-R_core*inverse_V_A*x0 + V_out*inverse_V_A + 1)**(-1.0)
    x10 = x3*sqrt(x9)/sqrt(N)
    x11 = x10*exp((1/2)*log_J_out)
    x12 = inverse_V_A*x6
    x13 = x12*x4*(1 + expm1(x5)**(-1.0))/x2**(3/2)
    f0 = -R_core*x1 - x7*log_expm1(x11) + x8
    f1 = V_D - V_TH - x8
    a00 = -x13
    a01 = -x1 - x10*x12*x9*(1 + expm1(x11)**(-1.0))*exp((3/2)*log_J_out)
    a10 = x13 + 1
    y0 = a10**(-1.0)
    return (-f1*y0, -y0*(-a00*f1 + a10*f0)/a01)


PINS = {"core": (pin_core, ('V_D', 'R_core'), (1,))}
