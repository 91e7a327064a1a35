"""gate voltage bias, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_out',)
UNKNOWNS = ('log_J_out',)
QUANTITIES = ('I_L', 'I_spec', 'N', 'R_source', 'V_T', 'V_TH', 'V_out', 'V_ref', 'inverse_V_A', 'n', 'n_S')


def loops(log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_source: Any, V_T: Any, V_TH: Any, V_out: Any, V_ref: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return what is left of each loop."""
    x0 = R_source*exp(log_J_out)
    return (-2*V_T*n*log_expm1(sqrt((V_out*inverse_V_A - inverse_V_A*x0 + 1)**(-1.0))*exp((1/2)*log_J_out)/(sqrt(I_spec)*sqrt(N))) - V_TH + V_ref - n_S*x0,)


def across(log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_source: Any, V_T: Any, V_TH: Any, V_out: Any, V_ref: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the collector-emitter voltages that have an Early effect [V]."""
    return (-R_source*exp(log_J_out) + V_out,)


def step(log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_source: Any, V_T: Any, V_TH: Any, V_out: Any, V_ref: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = R_source*exp(log_J_out)
    x1 = n_S*x0
    x2 = (V_out*inverse_V_A - inverse_V_A*x0 + 1)**(-1.0)
    x3 = sqrt(x2)/(sqrt(I_spec)*sqrt(N))
    x4 = x3*exp((1/2)*log_J_out)
    x5 = 2*V_T*n
    f0 = -V_TH + V_ref - x1 - x5*log_expm1(x4)
    a00 = -x1 - x5*(1 + expm1(x4)**(-1.0))*((1/2)*R_source*inverse_V_A*x2*x3*exp((3/2)*log_J_out) + (1/2)*x4)
    return (-f0/a00,)


def partials(log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_source: Any, V_T: Any, V_TH: Any, V_out: Any, V_ref: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = n_S*x0
    x2 = R_source*x1
    x3 = V_out*inverse_V_A
    x4 = R_source*inverse_V_A
    x5 = x0*x4
    x6 = (x3 - x5 + 1)**(-1.0)
    x7 = sqrt(x6)
    x8 = exp((1/2)*log_J_out)
    x9 = x7*x8
    x10 = sqrt(I_spec)
    x11 = sqrt(N)
    x12 = 1/(x10*x11)
    x13 = x12*x9
    x14 = V_T*n
    x15 = 2*x14
    x16 = x15*log_expm1(x13)
    x17 = expm1(x13)
    x18 = x17**(-1.0)
    x19 = x18 + 1
    x20 = x7*exp((3/2)*log_J_out)
    x21 = x20*x4
    x22 = x12*x6
    x23 = x13*x14
    x24 = x18*x23 + x23
    x25 = -x16
    x26 = x10*x11
    x27 = (x26*x3 - x26*x5 + x26)**(-1.0)
    x28 = x14*x27
    x29 = x3*x9
    x30 = x17*x26
    x31 = (x3*x30 - x30*x5 + x30)**(-1.0)
    x32 = x14*x31
    return (
        (-V_TH + V_ref - x16 - x2,),
        ((-x15*x19*((1/2)*x13 + (1/2)*x21*x22) - x2,),),
        ((0, x24, x24, -inverse_V_A*x14*x19*x20*x22 - x1, x25, -V_TH, x28*x29 + x29*x32, V_ref, V_T*V_out*inverse_V_A*n*x27*x7*x8 + V_T*V_out*inverse_V_A*n*x31*x7*x8 - x21*x28 - x21*x32, x25, -x2),),
    )


def outputs(log_J_out: Any, I_L: Any, I_spec: Any, N: Any, R_source: Any, V_T: Any, V_TH: Any, V_out: Any, V_ref: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = I_L*N
    x2 = x0 + x1
    x3 = x2**(-1.0)
    x4 = x1*x3
    return (
        (log(x2),),
        ((x0*x3,),),
        ((x4, 0, x4, 0, 0, 0, 0, 0, 0, 0, 0),),
    )


def pinned(I_out: Any, I_L: Any, I_spec: Any, N: Any, V_T: Any, V_TH: Any, V_out: Any, V_ref: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return log_J_out from the output current."""
    return log(-I_L*N + I_out)


def pin_source(R_source: Any, log_J_out: Any, I_L: Any, I_spec: Any, N: Any, V_T: Any, V_TH: Any, V_out: Any, V_ref: Any, inverse_V_A: Any, n: Any, n_S: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = exp(log_J_out)
    x1 = n_S*x0
    x2 = (-R_source*inverse_V_A*x0 + V_out*inverse_V_A + 1)**(-1.0)
    x3 = sqrt(x2)/(sqrt(I_spec)*sqrt(N))
    x4 = x3*exp((1/2)*log_J_out)
    x5 = V_T*n
    f0 = -R_source*x1 - V_TH + V_ref - 2*x5*log_expm1(x4)
    a00 = -inverse_V_A*x2*x3*x5*(1 + expm1(x4)**(-1.0))*exp((3/2)*log_J_out) - x1
    return (-f0/a00,)


PINS = {"source": (pin_source, ('R_source',), ())}
