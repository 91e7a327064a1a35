"""Real transistors: beside ideal ones, beside nested root finding, and a fuzz of all circuits.

``python -m tests.bench devices``; the fuzz takes some minutes.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from tcopt.laws.numbers import VOLT_PER_KELVIN
from tcopt.solve import currents, numerics
from tests.bench.bench_solve import given_mirror
from tests.bench.figure import Figure
from tests.bench.ratio import one_core, time_beside
from tests.device_samples import DEVICE_CASES
from tests.fuzz import fuzz

__all__ = ["figures", "nested_root_finder", "real_mirror"]

POINTS = 1_000_000
FEW_POINTS = 20_000
"""For the nested root finder, which takes its time."""
CIRCUITS = 100_000
TOLERANCE = 1e-9
"""Of the root finder in the logarithm of a current: the relative error that is promised here."""


def real_mirror(count: int) -> dict[str, Any]:
    """Return mirrors from a given current with gain, Early effect and leakage, all different."""
    q = given_mirror(count)
    rng = np.random.default_rng(3)
    kelvin = q["V_T"] / VOLT_PER_KELVIN
    V_BE = rng.uniform(0.5, 0.9, count)
    q["log_I_S"] = np.log(q["I_given"]) - V_BE / q["V_T"]
    q["inverse_beta"] = 1 / (rng.uniform(30, 300, count) * (kelvin / 300) ** 1.5)
    q["inverse_V_A"] = 1 / rng.uniform(20, 200, count)
    q["V_out"] = rng.uniform(1.5, 5, count)
    q["I_L"] = 1e-13 * 2 ** ((kelvin - 300) / 10)
    q["I_others"] = np.zeros(count)
    return q


def nested_root_finder(q: dict[str, Any]) -> tuple[Any, Any]:
    """Solve the same loops by scipy's vectorised bracketing root finder, one within the other.

    As fair as it can be made: in the logarithm of the output current, where the loop is nearly
    straight, with the input current written out; within it, the voltage of the diode-connected
    transistor, in a bracket that it cannot leave; no tighter than what is promised.
    """
    from scipy.optimize.elementwise import find_root

    names = (
        "I_given", "I_L", "N", "R_input", "R_output", "V_T", "V_out", "inverse_V_A",
        "inverse_beta", "log_I_S",
    )  # fmt: skip
    tolerances = {"xatol": TOLERANCE, "xrtol": 0.0}

    def diode(V: Any, junction: Any, V_T: Any, a: Any) -> Any:
        return V + V_T * np.log1p(a * V) - junction

    def input_current(x: Any, I_given: Any, I_L: Any, b: Any) -> Any:
        return (I_given - I_L - b * np.exp(x)) / (1 + b)

    def loop(
        x: Any, I_given: Any, I_L: Any, N: Any, R_input: Any, R_output: Any, V_T: Any, V_out: Any,
        a: Any, b: Any, log_I_S: Any,
    ) -> Any:  # fmt: skip
        J_in = input_current(x, I_given, I_L, b)
        junction = V_T * (np.log(J_in) - log_I_S)
        V_D = find_root(diode, (0.0, 2.0), args=(junction, V_T, a), tolerances=tolerances).x
        lifted = np.exp(x) * (1 + b) * R_output
        over = V_T * (x - np.log(N) - log_I_S - np.log1p(a * (V_out - lifted)))
        return V_D + J_in * (1 + b) * R_input - over - lifted

    # no more than all of the base voltage drives through the output resistor, or the input gives
    reach = q["V_T"] * (np.log(q["N"] * q["I_given"])) + q["I_given"] * q["R_input"]
    most = np.log(
        np.minimum(
            (reach - q["V_T"] * np.log(1e-12)) / q["R_output"],
            0.99 * (q["I_given"] - q["I_L"]) / q["inverse_beta"],
        )
    )
    found = find_root(
        loop, (most - np.log(1e4), most), args=tuple(q[n] for n in names), tolerances=tolerances
    )
    if not found.success.all():
        raise AssertionError("the root finder did not get through")
    J_in = input_current(found.x, q["I_given"], q["I_L"], q["inverse_beta"])
    return J_in + q["I_L"], np.exp(found.x) + q["N"] * q["I_L"]


def figures() -> list[Figure]:
    """Measure both ratios on one core, and send all kinds of circuits through the solver."""
    ideal, real = (numerics("degenerated mirror", "given", kind) for kind in ("ideal", "bipolar"))
    mirror, few = real_mirror(POINTS), real_mirror(FEW_POINTS)
    with one_core():
        beside_ideal = time_beside(
            lambda: currents(real, mirror), lambda: currents(ideal, mirror), rounds=5
        )
        beside_roots = time_beside(
            lambda: nested_root_finder(few), lambda: currents(real, few), rounds=3
        )
    converged, reasons = fuzz(CIRCUITS // len(DEVICE_CASES) + 1, seed=1, most_proved=1000)
    return [
        Figure(
            "mirror with gain, Early effect and leakage, 1e6 points: time over that of the ideal",
            beside_ideal.ratio,
            8,
            "at most",
        ),
        Figure(
            "the same, 2e4 points: time of scipy's find_root on the loops, nested, over ours",
            beside_roots.ratio,
            10,
            "at least",
        ),
        Figure("random circuits of 100,000 that are solved", converged, 90_000, "at least"),
        Figure(
            "the others, of which it is not said why there is no solution",
            sum(not text for text in reasons),
            0,
            "at most",
        ),
    ]
