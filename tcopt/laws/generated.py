"""The laws of the parts.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import expm1, log, sqrt

from tcopt.laws.roots import log_expm1


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


def log_saturation_growth(T: Any, T_0: Any, eta: Any, V_G0: Any, varshni: Any, varshni_T: Any, k_q: Any) -> Any:
    """Return ln(I_S(T)/I_S(T_0))."""
    return eta*log(T/T_0) + (V_G0*(T_0**(-1.0) - 1/T) + varshni*(T/(T + varshni_T) - T_0/(T_0 + varshni_T)))/k_q


def log_saturation_slope(T: Any, T_0: Any, eta: Any, V_G0: Any, varshni: Any, varshni_T: Any, k_q: Any) -> Any:
    """Return d(ln I_S)/dT [1/K]."""
    return (varshni*(-T/(T + varshni_T)**2 + (T + varshni_T)**(-1.0)) + V_G0/T**2)/k_q + eta/T


def current_gain_ratio(T: Any, T_0: Any, chi: Any) -> Any:
    """Return beta(T)/beta(T_0)."""
    return (T/T_0)**chi


def leakage_ratio(T: Any, T_0: Any) -> Any:
    """Return I_L(T)/I_L(T_0)."""
    return 2**((1/10)*T - 1/10*T_0)


def specific_current_ratio(T: Any, T_0: Any, m: Any) -> Any:
    """Return I_spec(T)/I_spec(T_0)."""
    return (T/T_0)**(2 - m)


def threshold_voltage(T: Any, T_0: Any, V_TH0: Any, a: Any) -> Any:
    """Return V_TH [V]."""
    return V_TH0 - a*(T - T_0)


def current_gain_slope(T: Any, chi: Any) -> Any:
    """Return d(ln beta)/dT [1/K]."""
    return chi/T


def leakage_slope() -> Any:
    """Return d(ln I_L)/dT [1/K]."""
    return (1/10)*log(2)


def specific_current_slope(T: Any, m: Any) -> Any:
    """Return d(ln I_spec)/dT [1/K]."""
    return (2 - m)/T


def threshold_slope(T: Any, T_0: Any, V_TH0: Any, a: Any) -> Any:
    """Return d(ln V_TH)/dT [1/K]."""
    return -a/(V_TH0 - a*(T - T_0))


def base_emitter_voltage(current: Any, area: Any, V_T: Any, log_I_S: Any) -> Any:
    """Return V_BE [V] without Early effect."""
    return V_T*(-log_I_S - log(area) + log(current))


def gate_source_voltage(current: Any, area: Any, V_T: Any, V_TH: Any, n: Any, I_spec: Any) -> Any:
    """Return V_GS [V] without Early effect, source and bulk together."""
    return 2*V_T*n*log_expm1(sqrt(current)/(sqrt(I_spec)*sqrt(area))) + V_TH


def saturation_voltage(inversion_coefficient: Any, V_T: Any) -> Any:
    """Return V_DSsat [V]."""
    return V_T*(2*sqrt(inversion_coefficient + 1/4) + 3)


def transconductance_share(s: Any) -> Any:
    """Return g_m n V_T/I_D for s, the root of the inversion coefficient."""
    return -expm1(-s)/s
