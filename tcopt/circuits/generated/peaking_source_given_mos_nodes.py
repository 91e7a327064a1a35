"""Nodes of peaking source, mos transistors, input: given.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, expm1, sqrt

from tcopt.laws.roots import log_expm1

NODES = ('V_in', 'V_foot', 'I_top', 'D_in', 'D_out')
QUANTITIES = ('I_L', 'I_spec', 'N', 'V_T', 'V_TH', 'inverse_V_A', 'n')


def nodes(log_J_in: Any, log_J_out: Any, V_D: Any, I_L: Any, I_spec: Any, N: Any, V_T: Any, V_TH: Any, inverse_V_A: Any, n: Any) -> Any:
    """Return what is observed, its partials by unknown, and by quantity."""
    x0 = V_D*inverse_V_A
    x1 = x0 + 1
    x2 = sqrt(x1)
    x3 = sqrt(I_spec)
    x4 = exp((1/2)*log_J_in)
    x5 = x4/x3
    x6 = x5/x2
    x7 = V_T*n
    x8 = 2*x7*log_expm1(x6)
    x9 = exp(log_J_in)
    x10 = exp(log_J_out)/N
    x11 = expm1(x6)
    x12 = x11**(-1.0)
    x13 = x12 + 1
    x14 = x6*x7
    x15 = x2*x3
    x16 = x0*x4*x7
    x17 = x11*x15
    return (
        (V_TH + x8, 0, I_L + x9, x9, x10),
        ((x13*x14, 0, -inverse_V_A*x13*x5*x7/x1**(3/2)), (0, 0, 0), (x9, 0, 0), (x9, 0, 0), (0, x10, 0)),
        ((0, -x12*x14 - x14, 0, x8, V_TH, -x16/(x0*x17 + x17) - x16/(x0*x15 + x15), x8), (0, 0, 0, 0, 0, 0, 0), (I_L, 0, 0, 0, 0, 0, 0), (0, 0, 0, 0, 0, 0, 0), (0, 0, -x10, 0, 0, 0, 0)),
    )
