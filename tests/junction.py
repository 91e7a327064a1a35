"""The junction law in the four numbers that tests draw: one place that knows its call."""

from __future__ import annotations

from typing import Any

from tcopt.laws import generated as laws
from tcopt.laws.numbers import VOLT_PER_KELVIN

__all__ = ["log_saturation_growth", "log_saturation_slope"]


def log_saturation_growth(T: Any, T_0: float, eta: float, V_G0: float) -> Any:
    """Return ln(I_S(T)/I_S(T_0))."""
    return laws.log_saturation_growth(T, T_0, eta, V_G0, 0.0, 0.0, VOLT_PER_KELVIN)


def log_saturation_slope(T: Any, T_0: float, eta: float, V_G0: float) -> Any:
    """Return d(ln I_S)/dT [1/K]."""
    return laws.log_saturation_slope(T, T_0, eta, V_G0, 0.0, 0.0, VOLT_PER_KELVIN)
