"""ptat plus vbe, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_core', 'I_out')
UNKNOWNS = ('log_J_core', 'log_I_out', 'V_D')
QUANTITIES = ('I_L', 'I_spec', 'M', 'N', 'R_base', 'R_core', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n', 'n_S')


def loops(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = 1/sqrt(I_spec)
    x3 = I_L*N
    x4 = 2*V_T*n
    x5 = x4*log_expm1(x2*sqrt(-I_L + M*x0 + M*x3)/sqrt(V_D*inverse_V_A + 1))
    x6 = V_TH + x5
    return (-n_S*x1 - x4*log_expm1(x2*sqrt((V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0))*exp((1/2)*log_J_core)/sqrt(N)) + x5, R_base*x0 + R_base*x3 - R_base*exp(log_I_out) + x6, V_D - x6)


def across(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (-R_core*exp(log_J_core) + V_out, V_D)


def step(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = n_S*x1
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(x3)
    x5 = 1/sqrt(I_spec)
    x6 = M*x0
    x7 = I_L*N
    x8 = sqrt(-I_L + M*x7 + x6)
    x9 = x5*x8
    x10 = x4*x9
    x11 = V_T*n
    x12 = 2*x11
    x13 = x12*log_expm1(x10)
    x14 = (V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0)
    x15 = sqrt(x14)*x5/sqrt(N)
    x16 = x15*exp((1/2)*log_J_core)
    x17 = R_base*x0
    x18 = -R_base*exp(log_I_out)
    x19 = V_TH + x13
    x20 = x11*(1 + expm1(x10)**(-1.0))
    x21 = x20*x4*x5*x6/x8
    x22 = -x21
    x23 = inverse_V_A*x20*x9/x3**(3/2)
    x24 = -x23
    f0 = -x12*log_expm1(x16) + x13 - x2
    f1 = R_base*x7 + x17 + x18 + x19
    f2 = V_D - x19
    a00 = -x12*(1 + expm1(x16)**(-1.0))*((1/2)*R_core*inverse_V_A*x14*x15*exp((3/2)*log_J_core) + (1/2)*x16) - x2 - x22
    a02 = x24
    a10 = x17 + x21
    a11 = x18
    a12 = x24
    a20 = x22
    a22 = x23 + 1
    y0 = a11*f2
    y1 = a00*a22
    y2 = a02*a20
    y3 = (a11*y1 - a11*y2)**(-1.0)
    return (y3*(a02*y0 - a11*a22*f0), y3*(-f0*(-a10*a22 + a12*a20) - f1*(y1 - y2) - f2*(-a00*a12 + a02*a10)), y3*(-a00*y0 + a11*a20*f0))


def partials(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_core)
    x1 = n_S*x0
    x2 = R_core*x1
    x3 = M*x0
    x4 = I_L*N
    x5 = M*x4
    x6 = sqrt(-I_L + x3 + x5)
    x7 = sqrt(I_spec)
    x8 = x7**(-1.0)
    x9 = V_D*inverse_V_A
    x10 = x9 + 1
    x11 = sqrt(x10)
    x12 = x8/x11
    x13 = x12*x6
    x14 = V_T*n
    x15 = 2*x14
    x16 = x15*log_expm1(x13)
    x17 = -x16
    x18 = V_out*inverse_V_A
    x19 = R_core*inverse_V_A
    x20 = x0*x19
    x21 = (x18 - x20 + 1)**(-1.0)
    x22 = sqrt(x21)
    x23 = exp((1/2)*log_J_core)
    x24 = x22*x23
    x25 = sqrt(N)
    x26 = x25**(-1.0)
    x27 = x26*x8
    x28 = x24*x27
    x29 = x15*log_expm1(x28)
    x30 = R_base*x0
    x31 = R_base*x4
    x32 = exp(log_I_out)
    x33 = -R_base*x32
    x34 = V_TH + x16
    x35 = expm1(x13)
    x36 = x35**(-1.0)
    x37 = x36 + 1
    x38 = x12*x14/x6
    x39 = x3*x38
    x40 = x37*x39
    x41 = -x40
    x42 = expm1(x28)
    x43 = x42**(-1.0)
    x44 = x43 + 1
    x45 = x22*exp((3/2)*log_J_core)
    x46 = x19*x45
    x47 = x21*x27
    x48 = x14*x6
    x49 = inverse_V_A*x37*x48*x8/x10**(3/2)
    x50 = -x49
    x51 = x38*x5
    x52 = x36*x51 + x51
    x53 = I_L*x38
    x54 = -x36*x53 - x53
    x55 = x52 + x54
    x56 = x13*x14
    x57 = x36*x56 + x56
    x58 = x36*x39 + x39 + x52
    x59 = x14*x28
    x60 = x16 - x29
    x61 = x25*x7
    x62 = (x18*x61 - x20*x61 + x61)**(-1.0)
    x63 = x14*x62
    x64 = x18*x24
    x65 = x42*x61
    x66 = (x18*x65 - x20*x65 + x65)**(-1.0)
    x67 = x14*x66
    x68 = x11*x7
    x69 = x48*x9
    x70 = x35*x68
    x71 = x69/(x70*x9 + x70) + x69/(x68*x9 + x68)
    x72 = x31 + x52
    return (
        (-x17 - x2 - x29, x30 + x31 + x33 + x34, V_D - x34),
        ((-x15*x44*((1/2)*x28 + (1/2)*x46*x47) - x2 - x41, 0, x50), (x30 + x40, x33, x50), (x41, 0, x49 + 1)),
        ((x55, V_T*n*x22*x23*x26*x43*x8 + V_T*n*x22*x23*x26*x8 - x57, x58, x43*x59 + x52 + x59, 0, -inverse_V_A*x14*x44*x45*x47 - x1, x60, 0, x63*x64 + x64*x67, V_T*V_out*inverse_V_A*n*x22*x23*x62 + V_T*V_out*inverse_V_A*n*x22*x23*x66 - x46*x63 - x46*x67 - x71, x60, -x2), (x54 + x72, -x57, x58, x72, x0 - x32 + x4, 0, x16, V_TH, 0, -x71, x16, 0), (-x55, x57, -x58, -x52, 0, 0, x17, -V_TH, 0, x71, x17, 0)),
    )


def outputs(log_J_core: Any, log_I_out: Any, V_D: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_base: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_core)
    x1 = I_L*N
    x2 = x0 + x1
    x3 = x2**(-1.0)
    x4 = x1*x3
    return (
        (log(x2), log_I_out),
        ((x0*x3, 0, 0), (0, 1, 0)),
        ((x4, 0, 0, x4, 0, 0, 0, 0, 0, 0, 0, 0), (0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, I_spec: Any, M: Any, N: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return log_I_out from the output current."""
    return log(I_out)


def pin_core(log_J_core: Any, V_D: Any, R_core: Any, log_I_out: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_base: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = n_S*x0
    x2 = R_core*x1
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(x3)
    x5 = 1/sqrt(I_spec)
    x6 = M*x0
    x7 = I_L*N
    x8 = sqrt(-I_L + M*x7 + x6)
    x9 = x5*x8
    x10 = x4*x9
    x11 = V_T*n
    x12 = 2*x11
    x13 = x12*log_expm1(x10)
    x14 = R_core*inverse_V_A
    x15 = (V_out*inverse_V_A - x0*x14 + 1)**(-1.0)
    x16 = sqrt(x15)*x5/sqrt(N)
    x17 = x16*exp((1/2)*log_J_core)
    x18 = R_base*x0
    x19 = V_TH + x13
    x20 = x11*(1 + expm1(x10)**(-1.0))
    x21 = x20*x4*x5*x6/x8
    x22 = -x21
    x23 = 1 + expm1(x17)**(-1.0)
    x24 = x15*x16*exp((3/2)*log_J_core)
    x25 = inverse_V_A*x20*x9/x3**(3/2)
    x26 = -x25
    f0 = -x12*log_expm1(x17) + x13 - x2
    f1 = R_base*x7 - R_base*exp(log_I_out) + x18 + x19
    f2 = V_D - x19
    a00 = -x12*x23*((1/2)*x14*x24 + (1/2)*x17) - x2 - x22
    a01 = x26
    a02 = -inverse_V_A*x11*x23*x24 - x1
    a10 = x18 + x21
    a11 = x26
    a20 = x22
    a21 = x25 + 1
    y0 = a02*f2
    y1 = a10*a21
    y2 = a11*a20
    y3 = (a02*y1 - a02*y2)**(-1.0)
    return (y3*(-a02*a21*f1 + a11*y0), y3*(a02*a20*f1 - a10*y0), y3*(-f0*(y1 - y2) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_base(log_J_core: Any, V_D: Any, R_base: Any, log_I_out: Any, I_L: Any, I_spec: Any, M: Any, N: Any, R_core: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_core)
    x1 = R_core*x0
    x2 = n_S*x1
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(x3)
    x5 = 1/sqrt(I_spec)
    x6 = M*x0
    x7 = I_L*N
    x8 = sqrt(-I_L + M*x7 + x6)
    x9 = x5*x8
    x10 = x4*x9
    x11 = V_T*n
    x12 = 2*x11
    x13 = x12*log_expm1(x10)
    x14 = (V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0)
    x15 = sqrt(x14)*x5/sqrt(N)
    x16 = x15*exp((1/2)*log_J_core)
    x17 = R_base*x0
    x18 = exp(log_I_out)
    x19 = V_TH + x13
    x20 = x11*(1 + expm1(x10)**(-1.0))
    x21 = x20*x4*x5*x6/x8
    x22 = -x21
    x23 = inverse_V_A*x20*x9/x3**(3/2)
    x24 = -x23
    f0 = -x12*log_expm1(x16) + x13 - x2
    f1 = -R_base*x18 + R_base*x7 + x17 + x19
    f2 = V_D - x19
    a00 = -x12*(1 + expm1(x16)**(-1.0))*((1/2)*R_core*inverse_V_A*x14*x15*exp((3/2)*log_J_core) + (1/2)*x16) - x2 - x22
    a01 = x24
    a10 = x17 + x21
    a11 = x24
    a12 = x0 - x18 + x7
    a20 = x22
    a21 = x23 + 1
    y0 = a12*f2
    y1 = a00*a21
    y2 = (a01*a12*a20 - a12*y1)**(-1.0)
    return (y2*(-a01*y0 + a12*a21*f0), y2*(a00*y0 - a12*a20*f0), y2*(-f0*(a10*a21 - a11*a20) - f1*(a01*a20 - y1) - f2*(a00*a11 - a01*a10)))


PINS = {"core": (pin_core, ('log_J_core', 'V_D', 'R_core'), (1, 2)), "base": (pin_base, ('log_J_core', 'V_D', 'R_base'), (0, 2))}
