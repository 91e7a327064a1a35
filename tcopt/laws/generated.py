"""The laws of the parts.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import log


def resistance_ratio(T: Any, T_0: Any, TC1: Any, TC2: Any) -> Any:
    """Return R(T)/R(T_0)."""
    return TC1*(T - T_0) + TC2*(T - T_0)**2 + 1


def resistance_ratio_slope(T: Any, T_0: Any, TC1: Any, TC2: Any) -> Any:
    """Return d(R/R_0)/dT [1/K]."""
    return TC1 + TC2*(2*T - 2*T_0)


def moved_tc1(T: Any, T_0: Any, TC1: Any, TC2: Any) -> Any:
    """Return TC1 with T as the reference [1/K]."""
    return (TC1 + TC2*(2*T - 2*T_0))/(TC1*(T - T_0) + TC2*(T - T_0)**2 + 1)


def moved_tc2(T: Any, T_0: Any, TC1: Any, TC2: Any) -> Any:
    """Return TC2 with T as the reference [1/K^2]."""
    return TC2/(TC1*(T - T_0) + TC2*(T - T_0)**2 + 1)


def thermal_voltage(T: Any, k_q: Any) -> Any:
    """Return V_T [V]."""
    return T*k_q


def log_saturation_growth(T: Any, T_0: Any, eta: Any, V_G0: Any, k_q: Any) -> Any:
    """Return ln(I_S(T)/I_S(T_0))."""
    return V_G0*(T_0**(-1.0) - 1/T)/k_q + eta*log(T/T_0)


def log_saturation_slope(T: Any, T_0: Any, eta: Any, V_G0: Any, k_q: Any) -> Any:
    """Return d(ln I_S)/dT [1/K]."""
    return eta/T + V_G0/(T**2*k_q)
