"""Solving the loops: beside the special function it rests on, and beside a general root finder."""

from __future__ import annotations

from typing import Any

import numpy as np

from tcopt.laws.numbers import thermal_voltage
from tcopt.solve import currents, numerics
from tests.bench.figure import Figure
from tests.bench.ratio import one_core, time_beside

__all__ = ["figures", "given_mirror", "supplied_by_root_finder", "supplied_mirror", "wright_omega"]

POINTS = 1_000_000
TOLERANCE = 1e-9
"""Of the root finder in the logarithm of a current: the relative error that is promised here."""


def given_mirror(count: int) -> dict[str, Any]:
    """Return quantities of mirrors that all differ in temperature, input, ratio and resistors."""
    rng = np.random.default_rng(1)
    V_T = thermal_voltage(rng.uniform(218.15, 448.15, count))
    I_in = 10 ** rng.uniform(-6, -2, count)
    N = 2.0 ** rng.integers(-6, 7, count)
    drop = rng.uniform(0, 10, count)
    fall = drop + np.maximum(np.log(N), 0) + rng.uniform(0.1, 6, count)
    I_out = N * I_in * np.exp(drop - fall)
    R = {"R_input": drop * V_T / I_in, "R_output": fall * V_T / I_out}
    return {"I_given": I_in, "N": N, **R, "V_T": V_T}


def wright_omega(mirror: dict[str, Any]) -> Any:
    """Return the arguments at which Wright's omega gives the drops of the same mirrors."""
    q = mirror
    free = np.log(q["N"] * q["I_given"]) + q["I_given"] * q["R_input"] / q["V_T"]
    return free + np.log(q["R_output"] / q["V_T"])


def supplied_mirror(count: int) -> dict[str, Any]:
    """Return the same from a supply of 2 to 12 V, with a junction of 0.5 to 0.9 V."""
    q = given_mirror(count)
    I_in = q.pop("I_given")
    rng = np.random.default_rng(2)
    V_BE = rng.uniform(0.5, 0.9, count)
    q["V_CC"] = V_BE + I_in * q["R_input"] + rng.uniform(1, 11, count)
    q["R_feed"] = (q["V_CC"] - V_BE) / I_in - q["R_input"]
    q["log_I_S"] = np.log(I_in) - V_BE / q["V_T"]
    return q


def supplied_by_root_finder(q: dict[str, Any]) -> tuple[Any, Any]:
    """Solve both loops by scipy's vectorised bracketing root finder, one after the other.

    As fair as it can be made: in the logarithm of the current, where the loops are nearly
    straight; each loop for its own current alone, since the output does not act back on the
    input; brackets that follow from the circuit (no more flows than all of the supply, or all
    of the base voltage, drives through the resistor, and a thousandth of it at the least); a
    tolerance no tighter than what is promised; logarithms of quantities taken once.
    """
    from scipy.optimize.elementwise import find_root

    def input_loop(x: Any, V_CC: Any, V_T: Any, log_I_S: Any, R: Any) -> Any:
        return V_CC - V_T * (x - log_I_S) - R * np.exp(x)

    def output_loop(x: Any, base: Any, V_T: Any, log_area: Any, R: Any) -> Any:
        return base - V_T * (x - log_area) - R * np.exp(x)

    tolerances = {"xatol": TOLERANCE, "xrtol": 0.0}
    V_T, log_I_S, R_in = q["V_T"], q["log_I_S"], q["R_feed"] + q["R_input"]
    most = np.log(q["V_CC"] / R_in)
    found = find_root(
        input_loop,
        (most - np.log(1e3), most),
        args=(q["V_CC"], V_T, log_I_S, R_in),
        tolerances=tolerances,
    )
    x_in = found.x
    # the base voltage above that of a junction without current in it: V_BE1 + I_in R_input
    base = V_T * (x_in - log_I_S) + np.exp(x_in) * q["R_input"]
    most = np.log(base / q["R_output"])
    found_out = find_root(
        output_loop,
        (most - np.log(1e3), most),
        args=(base, V_T, np.log(q["N"]) + log_I_S, q["R_output"]),
        tolerances=tolerances,
    )
    if not (found.success.all() and found_out.success.all()):
        raise AssertionError("the root finder did not get through")
    return np.exp(x_in), np.exp(found_out.x)


def figures() -> list[Figure]:
    """Measure both ratios, on one core."""
    from scipy.special import wrightomega

    mirror = given_mirror(POINTS)
    omega_at = wright_omega(mirror)
    given = numerics("degenerated mirror", "given")
    fed_mirror = supplied_mirror(POINTS)
    fed = numerics("degenerated mirror", "supply")
    with one_core():
        beside_omega = time_beside(lambda: currents(given, mirror), lambda: wrightomega(omega_at))
        beside_roots = time_beside(
            lambda: supplied_by_root_finder(fed_mirror), lambda: currents(fed, fed_mirror), 3
        )
    return [
        Figure(
            "mirror from a given current, 1e6 points: time over that of scipy's wrightomega",
            beside_omega.ratio,
            2.5,
            "at most",
        ),
        Figure(
            "mirror from a supply, 1e6 points: time of scipy's find_root on both loops, over ours",
            beside_roots.ratio,
            10,
            "at least",
        ),
    ]
