"""degenerated mirror, mos transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_in', 'I_out')
UNKNOWNS = ('log_J_in', 'log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_given', 'I_spec', 'N', 'R_input', 'R_output', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n', 'n_S')


def loops(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = exp(log_J_in)
    x1 = R_output*exp(log_J_out)
    x2 = 1/sqrt(I_spec)
    x3 = 2*V_T*n
    x4 = R_input*n_S*x0 + x3*log_expm1(x2*exp((1/2)*log_J_in)/sqrt(V_D*inverse_V_A + 1))
    return (I_L - I_given + x0, -n_S*x1 - x3*log_expm1(x2*sqrt((V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0))*exp((1/2)*log_J_out)/sqrt(N)) + x4, R_input*x0 + V_D - V_TH - x4)


def across(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (-R_output*exp(log_J_out) + V_out, V_D)


def step(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_output*exp(log_J_out)
    x2 = n_S*x1
    x3 = 1/sqrt(I_spec)
    x4 = (V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0)
    x5 = x3*sqrt(x4)/sqrt(N)
    x6 = x5*exp((1/2)*log_J_out)
    x7 = V_T*n
    x8 = 2*x7
    x9 = R_input*n_S*x0
    x10 = V_D*inverse_V_A + 1
    x11 = x3*exp((1/2)*log_J_in)
    x12 = x11/sqrt(x10)
    x13 = x8*log_expm1(x12) + x9
    x14 = -R_input*x0
    x15 = x7*(1 + expm1(x12)**(-1.0))
    x16 = x12*x15 + x9
    x17 = inverse_V_A*x11*x15/x10**(3/2)
    f0 = I_L - I_given + x0
    f1 = x13 - x2 - x8*log_expm1(x6)
    f2 = V_D - V_TH - x13 - x14
    a00 = x0
    a10 = x16
    a11 = -x2 - x8*(1 + expm1(x6)**(-1.0))*((1/2)*R_output*inverse_V_A*x4*x5*exp((3/2)*log_J_out) + (1/2)*x6)
    a12 = -x17
    a20 = -x14 - x16
    a22 = x17 + 1
    y0 = a00**(-1.0)
    y1 = y0/(a11*a22)
    return (-f0*y0, y1*(a00*a12*f2 - a00*a22*f1 - f0*(-a10*a22 + a12*a20)), y1*(-a00*a11*f2 + a11*a20*f0))


def partials(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_in)
    x1 = -I_given
    x2 = V_D*inverse_V_A
    x3 = x2 + 1
    x4 = sqrt(x3)
    x5 = sqrt(I_spec)
    x6 = x5**(-1.0)
    x7 = exp((1/2)*log_J_in)
    x8 = x6*x7
    x9 = x8/x4
    x10 = V_T*n
    x11 = 2*x10
    x12 = x11*log_expm1(x9)
    x13 = V_out*inverse_V_A
    x14 = exp(log_J_out)
    x15 = R_output*inverse_V_A
    x16 = x14*x15
    x17 = (x13 - x16 + 1)**(-1.0)
    x18 = sqrt(x17)
    x19 = exp((1/2)*log_J_out)
    x20 = x18*x19
    x21 = sqrt(N)
    x22 = x21**(-1.0)
    x23 = x22*x6
    x24 = x20*x23
    x25 = -x11*log_expm1(x24) + x12
    x26 = R_input*n_S*x0
    x27 = n_S*x14
    x28 = R_output*x27
    x29 = x26 - x28
    x30 = -R_input*x0
    x31 = expm1(x9)
    x32 = x31**(-1.0)
    x33 = x32 + 1
    x34 = x10*x9
    x35 = x26 + x33*x34
    x36 = expm1(x24)
    x37 = x36**(-1.0)
    x38 = x37 + 1
    x39 = x18*exp((3/2)*log_J_out)
    x40 = x15*x39
    x41 = x17*x23
    x42 = inverse_V_A*x10
    x43 = x33*x42*x8/x3**(3/2)
    x44 = x32*x34 + x34
    x45 = x10*x24
    x46 = n_S*x0
    x47 = x21*x5
    x48 = (x13*x47 - x16*x47 + x47)**(-1.0)
    x49 = x10*x48
    x50 = x13*x20
    x51 = x36*x47
    x52 = (x13*x51 - x16*x51 + x51)**(-1.0)
    x53 = x10*x52
    x54 = x4*x5
    x55 = x10*x2*x7
    x56 = x31*x54
    x57 = x55/(x2*x56 + x56) + x55/(x2*x54 + x54)
    x58 = -x12
    return (
        (I_L + x0 + x1, x25 + x29, V_D - V_TH - x12 - x26 - x30),
        ((x0, 0, 0), (x35, -x11*x38*((1/2)*x24 + (1/2)*x40*x41) - x28, -x43), (-x30 - x35, 0, x43 + 1)),
        ((I_L, x1, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0), (0, 0, V_T*n*x18*x19*x22*x37*x6 + V_T*n*x18*x19*x22*x6 - x44, x37*x45 + x45, x46, -x27 - x38*x39*x41*x42, x25, 0, x49*x50 + x50*x53, V_T*V_out*inverse_V_A*n*x18*x19*x48 + V_T*V_out*inverse_V_A*n*x18*x19*x52 - x40*x49 - x40*x53 - x57, x25, x29), (0, 0, x44, 0, x0 - x46, 0, x58, -V_TH, 0, x57, x58, -x26)),
    )


def outputs(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
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
        ((I_L*x5, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0, 0), (x7, 0, 0, x7, 0, 0, 0, 0, 0, 0, 0, 0)),
    )


def pinned(I_out: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_input(log_J_in: Any, V_D: Any, R_input: Any, log_J_out: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_output: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = R_output*exp(log_J_out)
    x2 = 1/sqrt(I_spec)
    x3 = V_T*n
    x4 = 2*x3
    x5 = R_input*n_S*x0
    x6 = V_D*inverse_V_A + 1
    x7 = x2*exp((1/2)*log_J_in)
    x8 = x7/sqrt(x6)
    x9 = x4*log_expm1(x8) + x5
    x10 = -R_input*x0
    x11 = x3*(1 + expm1(x8)**(-1.0))
    x12 = x11*x8 + x5
    x13 = inverse_V_A*x11*x7/x6**(3/2)
    x14 = n_S*x0
    f0 = I_L - I_given + x0
    f1 = -n_S*x1 - x4*log_expm1(x2*sqrt((V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0))*exp((1/2)*log_J_out)/sqrt(N)) + x9
    f2 = V_D - V_TH - x10 - x9
    a00 = x0
    a10 = x12
    a11 = -x13
    a12 = x14
    a20 = -x10 - x12
    a21 = x13 + 1
    a22 = x0 - x14
    y0 = a11*a22
    y1 = a12*a21
    y2 = (a00*y0 - a00*y1)**(-1.0)
    return (-f0*y2*(y0 - y1), y2*(a00*a12*f2 - a00*a22*f1 - f0*(-a10*a22 + a12*a20)), y2*(-a00*a11*f2 + a00*a21*f1 - f0*(a10*a21 - a11*a20)))


def pin_output(log_J_in: Any, V_D: Any, R_output: Any, log_J_out: Any, I_L: Any, I_given: Any, I_spec: Any, N: Any, R_input: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_in)
    x1 = exp(log_J_out)
    x2 = n_S*x1
    x3 = 1/sqrt(I_spec)
    x4 = (-R_output*inverse_V_A*x1 + V_out*inverse_V_A + 1)**(-1.0)
    x5 = x3*sqrt(x4)/sqrt(N)
    x6 = x5*exp((1/2)*log_J_out)
    x7 = V_T*n
    x8 = 2*x7
    x9 = R_input*n_S*x0
    x10 = V_D*inverse_V_A + 1
    x11 = x3*exp((1/2)*log_J_in)
    x12 = x11/sqrt(x10)
    x13 = x8*log_expm1(x12) + x9
    x14 = -R_input*x0
    x15 = x7*(1 + expm1(x12)**(-1.0))
    x16 = x12*x15 + x9
    x17 = inverse_V_A*x11*x15/x10**(3/2)
    f0 = I_L - I_given + x0
    f1 = -R_output*x2 + x13 - x8*log_expm1(x6)
    f2 = V_D - V_TH - x13 - x14
    a00 = x0
    a10 = x16
    a11 = -x17
    a12 = -inverse_V_A*x4*x5*x7*(1 + expm1(x6)**(-1.0))*exp((3/2)*log_J_out) - x2
    a20 = -x14 - x16
    a21 = x17 + 1
    y0 = a00**(-1.0)
    y1 = a00*f2
    y2 = y0/(a12*a21)
    return (-f0*y0, -y2*(-a12*a20*f0 + a12*y1), -y2*(a00*a21*f1 - a11*y1 - f0*(a10*a21 - a11*a20)))


PINS = {"input": (pin_input, ('log_J_in', 'V_D', 'R_input'), (0,)), "output": (pin_output, ('log_J_in', 'V_D', 'R_output'), (0, 2))}
