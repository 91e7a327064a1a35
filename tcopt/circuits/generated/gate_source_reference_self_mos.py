"""gate source reference, mos transistors, input: self.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, log, sqrt

from tcopt.laws.roots import log_expm1

CURRENTS = ('I_out',)
UNKNOWNS = ('log_J_out',)
QUANTITIES = ('I_L', 'I_spec', 'R_gate', 'V_T', 'V_TH', 'n')


def step(log_J_out: Any, I_L: Any, I_spec: Any, R_gate: Any, V_T: Any, V_TH: Any, n: Any) -> Any:
    """Return the change of each unknown in one Newton step."""
    x0 = R_gate*exp(log_J_out)
    x1 = 1/sqrt(I_spec)
    x2 = exp((1/2)*log_J_out)
    x3 = x1*x2
    f0 = 2*V_T*n*log_expm1(x3) + V_TH - x0
    a00 = V_T*n*x1*x2*(1 + expm1(x3)**(-1.0)) - x0
    return (-f0/a00,)


def partials(log_J_out: Any, I_L: Any, I_spec: Any, R_gate: Any, V_T: Any, V_TH: Any, n: Any) -> Any:
    """Return the loops, their partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = R_gate*x0
    x2 = 1/sqrt(I_spec)
    x3 = exp((1/2)*log_J_out)
    x4 = x2*x3
    x5 = V_T*n
    x6 = 2*x5*log_expm1(x4)
    x7 = expm1(x4)**(-1.0)
    x8 = x4*x5
    return (
        (V_TH - x1 + x6,),
        ((V_T*n*x2*x3*(x7 + 1) - x1,),),
        ((0, -x7*x8 - x8, -x0, x6, V_TH, x6),),
    )


def outputs(log_J_out: Any, I_L: Any, I_spec: Any, R_gate: Any, V_T: Any, V_TH: Any, n: Any) -> Any:
    """Return the logarithm of each current, its partials by unknown, and by quantity."""
    x0 = exp(log_J_out)
    x1 = I_L + x0
    x2 = x1**(-1.0)
    return (
        (log(x1),),
        ((x0*x2,),),
        ((I_L*x2, 0, 0, 0, 0, 0),),
    )
