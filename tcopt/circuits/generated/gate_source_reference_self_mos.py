"""gate source reference, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_out',)
UNKNOWNS = ('log_J_out', 'V_D')
QUANTITIES = ('I_L', 'I_spec', 'R_gate', 'V_T', 'V_TH', 'V_out', 'inverse_V_A', 'n', 'n_S')


def loops(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, R_gate: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = R_gate*exp(log_J_out)
    x1 = exp((1/2)*log_J_out)/sqrt(I_spec)
    x2 = 2*V_T*n
    return (V_TH - x0 + x2*log_expm1(x1/sqrt(V_D*inverse_V_A + 1)), V_D - V_TH - n_S*x0 - x2*log_expm1(x1*sqrt((V_out*inverse_V_A - inverse_V_A*x0 + 1)**(-1.0))))


def across(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, R_gate: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (-R_gate*exp(log_J_out) + V_out, V_D)


def step(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, R_gate: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = R_gate*exp(log_J_out)
    x1 = V_D*inverse_V_A + 1
    x2 = 1/sqrt(x1)
    x3 = 1/sqrt(I_spec)
    x4 = exp((1/2)*log_J_out)
    x5 = x3*x4
    x6 = x2*x5
    x7 = V_T*n
    x8 = 2*x7
    x9 = n_S*x0
    x10 = (V_out*inverse_V_A - inverse_V_A*x0 + 1)**(-1.0)
    x11 = sqrt(x10)
    x12 = x11*x5
    x13 = 1 + expm1(x6)**(-1.0)
    f0 = V_TH - x0 + x8*log_expm1(x6)
    f1 = V_D - V_TH - x8*log_expm1(x12) - x9
    a00 = V_T*n*x13*x2*x3*x4 - x0
    a01 = -inverse_V_A*x13*x5*x7/x1**(3/2)
    a10 = -x8*(1 + expm1(x12)**(-1.0))*((1/2)*R_gate*inverse_V_A*x10*x11*x3*exp((3/2)*log_J_out) + (1/2)*x12) - x9
    y0 = (a00 - a01*a10)**(-1.0)
    return (y0*(a01*f1 - f0), y0*(-a00*f1 + a10*f0))


def partials(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, R_gate: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = R_gate*x0
    x2 = V_D*inverse_V_A
    x3 = x2 + 1
    x4 = sqrt(x3)
    x5 = x4**(-1.0)
    x6 = sqrt(I_spec)
    x7 = x6**(-1.0)
    x8 = exp((1/2)*log_J_out)
    x9 = x7*x8
    x10 = x5*x9
    x11 = V_T*n
    x12 = 2*x11
    x13 = x12*log_expm1(x10)
    x14 = n_S*x1
    x15 = V_out*inverse_V_A
    x16 = inverse_V_A*x1
    x17 = (x15 - x16 + 1)**(-1.0)
    x18 = sqrt(x17)
    x19 = x18*x9
    x20 = x12*log_expm1(x19)
    x21 = expm1(x10)
    x22 = x21**(-1.0)
    x23 = x22 + 1
    x24 = inverse_V_A*x11
    x25 = expm1(x19)
    x26 = x25**(-1.0)
    x27 = x26 + 1
    x28 = exp((3/2)*log_J_out)
    x29 = R_gate*x18*x28
    x30 = x17*x7
    x31 = x10*x11
    x32 = x4*x6
    x33 = x11*x8
    x34 = x2*x33
    x35 = x21*x32
    x36 = x11*x19
    x37 = -x20
    x38 = (x15*x6 - x16*x6 + x6)**(-1.0)
    x39 = x15*x18*x33
    x40 = x25*x6
    x41 = (x15*x40 - x16*x40 + x40)**(-1.0)
    x42 = x24*x29
    return (
        (V_TH - x1 + x13, V_D - V_TH - x14 - x20),
        ((V_T*n*x23*x5*x7*x8 - x1, -x23*x24*x9/x3**(3/2)), (-x12*x27*((1/2)*inverse_V_A*x29*x30 + (1/2)*x19) - x14, 1)),
        ((0, -x22*x31 - x31, -x0, x13, V_TH, 0, -x34/(x2*x35 + x35) - x34/(x2*x32 + x32), x13, 0), (0, x26*x36 + x36, -n_S*x0 - x18*x24*x27*x28*x30, x37, -V_TH, x38*x39 + x39*x41, V_T*V_out*inverse_V_A*n*x18*x38*x8 + V_T*V_out*inverse_V_A*n*x18*x41*x8 - x38*x42 - x41*x42, x37, -x14)),
    )


def outputs(log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, R_gate: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = I_L + x0
    x2 = x1**(-1.0)
    return (
        (log(x1),),
        ((x0*x2, 0),),
        ((I_L*x2, 0, 0, 0, 0, 0, 0, 0, 0),),
    )


def pinned(I_out: Any, I_L: Any, I_spec: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L + I_out)


def pin_gate(V_D: Any, R_gate: Any, log_J_out: Any, I_L: Any, I_spec: Any, V_T: Any, V_TH: Any, V_out: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = R_gate*x0
    x2 = V_D*inverse_V_A + 1
    x3 = 1/sqrt(I_spec)
    x4 = x3*exp((1/2)*log_J_out)
    x5 = x4/sqrt(x2)
    x6 = V_T*n
    x7 = 2*x6
    x8 = (V_out*inverse_V_A - inverse_V_A*x1 + 1)**(-1.0)
    x9 = sqrt(x8)
    x10 = x4*x9
    x11 = inverse_V_A*x6
    f0 = V_TH - x1 + x7*log_expm1(x5)
    f1 = V_D - V_TH - n_S*x1 - x7*log_expm1(x10)
    a00 = -x11*x4*(1 + expm1(x5)**(-1.0))/x2**(3/2)
    a01 = -x0
    a11 = -n_S*x0 - x11*x3*x8*x9*(1 + expm1(x10)**(-1.0))*exp((3/2)*log_J_out)
    y0 = (a00*a11 - a01)**(-1.0)
    return (y0*(a01*f1 - a11*f0), y0*(-a00*f1 + f0))


PINS = {"gate": (pin_gate, ('V_D', 'R_gate'), ())}
