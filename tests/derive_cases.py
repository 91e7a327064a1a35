"""Designs by which formulas are held against the oracle, and the oracle at their temperatures."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

from tcopt.derive import Derivation, derive
from tests import oracle
from tests.oracle import mp

__all__ = ["CASES", "output_series", "quantities_at"]

JUNCTION = {"I_S": 2e-17, "eta": 3.6, "V_G0": 1.17}
INPUT = {"I_given": 1e-4, "TC1_I_given": 3e-4, "TC2_I_given": -4e-7}
MIRROR = {
    "T_0": 300.15,
    "N": 4.0,
    "R_input": 300.0,
    "TC1_input": 9e-4,
    "TC2_input": 8e-7,
    "R_output": 6e3,
    "TC1_output": 1.6e-3,
    "TC2_output": 3e-7,
}
FEED = {"V_CC": 5.0, "R_feed": 43e3, "TC1_feed": -2e-4, "TC2_feed": 7e-7}
PEAKING = {"T_0": 300.15, "N": 1.0, "R_drop": 600.0, "TC1_drop": 1.2e-3, "TC2_drop": 5e-7}
CORE = {"T_0": 300.15, "N": 8.0, "M": 2.0, "R_core": 5e3, "TC1_core": -3e-4, "TC2_core": 9e-7}
BASE = {"T_0": 300.15, "R_base": 5e4, "TC1_base": 4e-4, "TC2_base": -6e-7}
SENSE = {"T_0": 300.15, "R_sense": 1e4, "TC1_sense": 2e-4, "TC2_sense": 1e-6}
REFERENCE = {"V_ref": 1.2, "TC1_V_ref": 5e-5, "TC2_V_ref": -2e-7}

CASES: dict[tuple[str, str], dict[str, float]] = {
    ("degenerated mirror", "given"): MIRROR | INPUT,
    ("degenerated mirror", "supply"): MIRROR | FEED | JUNCTION,
    ("peaking source", "given"): PEAKING | INPUT,
    ("peaking source", "supply"): PEAKING | FEED | JUNCTION,
    ("ptat core", "self"): CORE,
    ("vbe reference", "self"): BASE | JUNCTION,
    ("ptat plus vbe", "self"): CORE | BASE | JUNCTION,
    ("reference over resistor", "self"): SENSE | REFERENCE,
}
"""Invented designs with a coefficient everywhere, by topology and input."""


def derived(case: tuple[str, str]) -> Derivation:
    """Return the derivation of a case, made once."""
    if case not in _MADE:
        _MADE[case] = derive(*case)
    return _MADE[case]


_MADE: dict[tuple[str, str], Derivation] = {}


def quantities_at(T: Any, values: Mapping[str, Any]) -> dict[str, Any]:
    """Return the quantities of the loops at a temperature [K]."""
    T_0 = values["T_0"]
    found = {"V_T": oracle.thermal_voltage(T)}
    if "I_S" in values:
        junction = [values["I_S"], T_0, values["eta"], values["V_G0"]]
        found["log_I_S"] = oracle.log_saturation_current(T, *junction)
    for name, value in values.items():
        coefficient = name.removeprefix("R_")
        if f"TC1_{coefficient}" in values:
            both = [values[f"TC{order}_{coefficient}"] for order in (1, 2)]
            found[name] = oracle.resistance(T, value, T_0, *both)
        elif name in {"N", "M", "V_CC"}:
            found[name] = value
    return found


def output_series(case: tuple[str, str], values: Mapping[str, Any]) -> tuple[Any, Any, Any]:
    """Return I_out [A], TC1 [1/K] and TC2 [1/K^2] at T_0, by differences in 50 digits."""
    h, T_0 = mp.mpf("1e-9"), mp.mpf(values["T_0"])
    below, here, above = (
        oracle.solve(*case, quantities_at(T_0 + k * h, values))["I_out"] for k in (-1, 0, 1)
    )
    first = (above - below) / (2 * h * here)
    second = (above - 2 * here + below) / (2 * h * h * here)
    return here, first, second
