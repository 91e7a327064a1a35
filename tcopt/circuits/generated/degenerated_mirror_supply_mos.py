"""degenerated mirror, mos transistors, input: supply.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_spec', 'N', 'R_feed', 'R_input', 'R_output', 'V_CC', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n', 'n_S')


def loops(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_in)
    x1 = 1/sqrt(I_spec)
    x2 = 2*V_T*n
    x3 = R_input*n_S*x0 + x2*log_expm1(x1*exp((1/2)*log_J_in)/sqrt(V_D*inverse_V_A + 1))
    x4 = V_TH + x3
    x5 = R_output*exp(log_J_out)
    return (-I_L*R_feed - R_feed*x0 + V_CC - x4, -n_S*x5 - x2*log_expm1(x1*sqrt((V_out*inverse_V_A - inverse_V_A*x5 + 1)**(-1.0))*exp((1/2)*log_J_out)/sqrt(N)) + x3, R_input*x0 + V_D - x4)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (-R_output*exp(log_J_out) + V_out, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = R_input*n_S*x0
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(I_spec)
    x5 = x4*exp((1/2)*log_J_in)
    x6 = x5/sqrt(x3)
    x7 = V_T*n
    x8 = 2*x7
    x9 = x2 + x8*log_expm1(x6)
    x10 = V_TH + x9
    x11 = R_output*exp(log_J_out)
    x12 = n_S*x11
    x13 = (V_out*inverse_V_A - inverse_V_A*x11 + 1)**(-1.0)
    x14 = sqrt(x13)*x4/sqrt(N)
    x15 = x14*exp((1/2)*log_J_out)
    x16 = -R_input*x0
    x17 = x7*(1 + expm1(x6)**(-1.0))
    x18 = x17*x6 + x2
    x19 = inverse_V_A*x17*x5/x3**(3/2)
    f0 = -I_L*R_feed + V_CC - x1 - x10
    f1 = -x12 - x8*log_expm1(x15) + x9
    f2 = V_D - x10 - x16
    a00 = -x1 - x18
    a02 = x19
    a10 = x18
    a11 = -x12 - x8*(1 + expm1(x15)**(-1.0))*((1/2)*R_output*inverse_V_A*x13*x14*exp((3/2)*log_J_out) + (1/2)*x15)
    a12 = -x19
    a20 = -x16 - x18
    a22 = x19 + 1
    y0 = a11*f2
    y1 = a00*a22
    y2 = a02*a20
    y3 = (a11*y1 - a11*y2)**(-1.0)
    return (y3*(a02*y0 - a11*a22*f0), y3*(-f0*(-a10*a22 + a12*a20) - f1*(y1 - y2) - f2*(-a00*a12 + a02*a10)), y3*(-a00*y0 + a11*a20*f0))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = I_L*R_feed
    x3 = R_input*n_S*x0
    x4 = V_D*inverse_V_A
    x5 = x4 + 1
    x6 = sqrt(x5)
    x7 = sqrt(I_spec)
    x8 = x7**(-1.0)
    x9 = exp((1/2)*log_J_in)
    x10 = x8*x9
    x11 = x10/x6
    x12 = V_T*n
    x13 = 2*x12
    x14 = x13*log_expm1(x11)
    x15 = V_TH + x14 + x3
    x16 = V_out*inverse_V_A
    x17 = exp(log_J_out)
    x18 = R_output*inverse_V_A
    x19 = x17*x18
    x20 = (x16 - x19 + 1)**(-1.0)
    x21 = sqrt(x20)
    x22 = exp((1/2)*log_J_out)
    x23 = x21*x22
    x24 = sqrt(N)
    x25 = x24**(-1.0)
    x26 = x25*x8
    x27 = x23*x26
    x28 = -x13*log_expm1(x27) + x14
    x29 = n_S*x17
    x30 = R_output*x29
    x31 = x3 - x30
    x32 = -R_input*x0
    x33 = expm1(x11)
    x34 = x33**(-1.0)
    x35 = x34 + 1
    x36 = x11*x12
    x37 = x3 + x35*x36
    x38 = inverse_V_A*x12
    x39 = x10*x35*x38/x5**(3/2)
    x40 = expm1(x27)
    x41 = x40**(-1.0)
    x42 = x41 + 1
    x43 = x21*exp((3/2)*log_J_out)
    x44 = x18*x43
    x45 = x20*x26
    x46 = x34*x36 + x36
    x47 = n_S*x0
    x48 = -x14
    x49 = -V_TH
    x50 = x6*x7
    x51 = x12*x4*x9
    x52 = x33*x50
    x53 = x51/(x4*x52 + x52) + x51/(x4*x50 + x50)
    x54 = -x3
    x55 = x12*x27
    x56 = x24*x7
    x57 = (x16*x56 - x19*x56 + x56)**(-1.0)
    x58 = x12*x57
    x59 = x16*x23
    x60 = x40*x56
    x61 = (x16*x60 - x19*x60 + x60)**(-1.0)
    x62 = x12*x61
    return (
        (V_CC - x1 - x15 - x2, x28 + x31, V_D - x15 - x32),
        ((-x1 - x37, 0, x39), (x37, -x13*x42*((1/2)*x27 + (1/2)*x44*x45) - x30, -x39), (-x32 - x37, 0, x39 + 1)),
        ((-x2, x46, 0, -I_L - x0, -x47, 0, V_CC, x48, x49, 0, x53, x48, x54), (0, V_T*n*x21*x22*x25*x41*x8 + V_T*n*x21*x22*x25*x8 - x46, x41*x55 + x55, 0, x47, -x29 - x38*x42*x43*x45, 0, x28, 0, x58*x59 + x59*x62, V_T*V_out*inverse_V_A*n*x21*x22*x57 + V_T*V_out*inverse_V_A*n*x21*x22*x61 - x44*x58 - x44*x62 - x53, x28, x31), (0, x46, 0, 0, x0 - x47, 0, 0, x48, x49, 0, x53, x48, x54)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, R_feed: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, x7, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, I_spec: Any, N: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_feed(log_J_in: Any, V_D: Any, R_feed: Any, log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_input: Any, R_output: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = R_input*n_S*x0
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(I_spec)
    x5 = x4*exp((1/2)*log_J_in)
    x6 = x5/sqrt(x3)
    x7 = V_T*n
    x8 = 2*x7
    x9 = x2 + x8*log_expm1(x6)
    x10 = V_TH + x9
    x11 = R_output*exp(log_J_out)
    x12 = -R_input*x0
    x13 = x7*(1 + expm1(x6)**(-1.0))
    x14 = x13*x6 + x2
    x15 = inverse_V_A*x13*x5/x3**(3/2)
    f0 = -I_L*R_feed + V_CC - x1 - x10
    f1 = -n_S*x11 - x8*log_expm1(x4*sqrt((V_out*inverse_V_A - inverse_V_A*x11 + 1)**(-1.0))*exp((1/2)*log_J_out)/sqrt(N)) + x9
    f2 = V_D - x10 - x12
    a00 = -x1 - x14
    a01 = x15
    a02 = -I_L - x0
    a10 = x14
    a11 = -x15
    a20 = -x12 - x14
    a21 = x15 + 1
    y0 = a02*f2
    y1 = a10*a21
    y2 = a11*a20
    y3 = (a02*y1 - a02*y2)**(-1.0)
    return (y3*(-a02*a21*f1 + a11*y0), y3*(a02*a20*f1 - a10*y0), y3*(-f0*(y1 - y2) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_input(log_J_in: Any, V_D: Any, R_input: Any, log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_feed: Any, R_output: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = R_input*n_S*x0
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(I_spec)
    x5 = x4*exp((1/2)*log_J_in)
    x6 = x5/sqrt(x3)
    x7 = V_T*n
    x8 = 2*x7
    x9 = x2 + x8*log_expm1(x6)
    x10 = V_TH + x9
    x11 = R_output*exp(log_J_out)
    x12 = -R_input*x0
    x13 = x7*(1 + expm1(x6)**(-1.0))
    x14 = x13*x6 + x2
    x15 = inverse_V_A*x13*x5/x3**(3/2)
    x16 = n_S*x0
    f0 = -I_L*R_feed + V_CC - x1 - x10
    f1 = -n_S*x11 - x8*log_expm1(x4*sqrt((V_out*inverse_V_A - inverse_V_A*x11 + 1)**(-1.0))*exp((1/2)*log_J_out)/sqrt(N)) + x9
    f2 = V_D - x10 - x12
    a00 = -x1 - x14
    a01 = x15
    a02 = -x16
    a10 = x14
    a11 = -x15
    a12 = x16
    a20 = -x12 - x14
    a21 = x15 + 1
    a22 = x0 - x16
    y0 = a11*a22
    y1 = a01*a12
    y2 = a12*a21
    y3 = a01*a22
    y4 = a02*a11
    y5 = (a00*y0 - a00*y2 + a02*a10*a21 - a10*y3 + a20*y1 - a20*y4)**(-1.0)
    return (y5*(-f0*(y0 - y2) - f1*(a02*a21 - y3) - f2*(y1 - y4)), y5*(-f0*(-a10*a22 + a12*a20) - f1*(a00*a22 - a02*a20) - f2*(-a00*a12 + a02*a10)), y5*(-f0*(a10*a21 - a11*a20) - f1*(-a00*a21 + a01*a20) - f2*(a00*a11 - a01*a10)))


def pin_output(log_J_in: Any, V_D: Any, R_output: Any, log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_feed: Any, R_input: Any, V_CC: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_feed*x0
    x2 = R_input*n_S*x0
    x3 = V_D*inverse_V_A + 1
    x4 = 1/sqrt(I_spec)
    x5 = x4*exp((1/2)*log_J_in)
    x6 = x5/sqrt(x3)
    x7 = V_T*n
    x8 = 2*x7
    x9 = x2 + x8*log_expm1(x6)
    x10 = V_TH + x9
    x11 = exp(log_J_out)
    x12 = n_S*x11
    x13 = (-R_output*inverse_V_A*x11 + V_out*inverse_V_A + 1)**(-1.0)
    x14 = sqrt(x13)*x4/sqrt(N)
    x15 = x14*exp((1/2)*log_J_out)
    x16 = -R_input*x0
    x17 = x7*(1 + expm1(x6)**(-1.0))
    x18 = x17*x6 + x2
    x19 = inverse_V_A*x17*x5/x3**(3/2)
    f0 = -I_L*R_feed + V_CC - x1 - x10
    f1 = -R_output*x12 - x8*log_expm1(x15) + x9
    f2 = V_D - x10 - x16
    a00 = -x1 - x18
    a01 = x19
    a10 = x18
    a11 = -x19
    a12 = -inverse_V_A*x13*x14*x7*(1 + expm1(x15)**(-1.0))*exp((3/2)*log_J_out) - x12
    a20 = -x16 - x18
    a21 = x19 + 1
    y0 = a12*f2
    y1 = a00*a21
    y2 = (a01*a12*a20 - a12*y1)**(-1.0)
    return (y2*(-a01*y0 + a12*a21*f0), y2*(a00*y0 - a12*a20*f0), y2*(-f0*(a10*a21 - a11*a20) - f1*(a01*a20 - y1) - f2*(a00*a11 - a01*a10)))


PINS = {"feed": (pin_feed, ('log_J_in', 'V_D', 'R_feed'), (1, 2)), "input": (pin_input, ('log_J_in', 'V_D', 'R_input'), ()), "output": (pin_output, ('log_J_in', 'V_D', 'R_output'), (0, 2))}
