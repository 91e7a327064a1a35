"""The circuits once more, from Kirchhoff's voltage law, in 50-digit arithmetic.

Nothing of ``tcopt`` is used here: each circuit is written down from its drawing, each
current found by bracketing a sign change in the logarithm of the current and closing in on
it, and each answer proved by a change of sign within 1e-35 of it. Inputs are the exact
values of the floats handed in, so a difference to ``tcopt`` is the error of ``tcopt``.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

import mpmath

__all__ = [
    "log_saturation_current",
    "log_sensitivities",
    "mp",
    "resistance",
    "solve",
    "thermal_voltage",
    "upper_root",
]

mp: Any = mpmath.MPContext()
mp.dps = 50

BOLTZMANN = mp.mpf("1.380649e-23")  # exact, SI 2019 (CODATA 2018)
ELEMENTARY_CHARGE = mp.mpf("1.602176634e-19")  # exact, SI 2019 (CODATA 2018)

_SMALLEST, _LARGEST = -900, 900
"""Logarithms of currents between which a solution is looked for."""
_PROOF = mp.mpf("1e-35")

Quantities = Mapping[str, Any]


def thermal_voltage(T: Any) -> Any:
    """k T / q [V]."""
    return BOLTZMANN * mp.mpf(T) / ELEMENTARY_CHARGE


def log_saturation_current(T: Any, I_S0: Any, T_0: Any, eta: Any, V_G0: Any) -> Any:
    """ln of I_S0 (T/T_0)^eta exp((q V_G0/k)(1/T_0 - 1/T))."""
    T, T_0 = mp.mpf(T), mp.mpf(T_0)
    grown = mp.mpf(I_S0) * (T / T_0) ** mp.mpf(eta)
    return mp.log(
        grown * mp.exp(mp.mpf(V_G0) * (1 / thermal_voltage(T_0) - 1 / thermal_voltage(T)))
    )


def resistance(T: Any, R_0: Any, T_0: Any, TC1: Any, TC2: Any) -> Any:
    """R_0 (1 + TC1 (T - T_0) + TC2 (T - T_0)^2) [ohm]."""
    d = mp.mpf(T) - mp.mpf(T_0)
    return mp.mpf(R_0) * (1 + mp.mpf(TC1) * d + mp.mpf(TC2) * d * d)


def crossing(f: Callable[[Any], Any], low: Any, high: Any) -> Any:
    """Where f changes sign between low and high: bisection, then the secant, then the proof."""
    falls = f(mp.mpf(low)) > 0
    if falls == (f(mp.mpf(high)) > 0):
        raise ValueError("no change of sign")
    left, right = float(low), float(high)
    with mp.workdps(18):  # closing in needs no digits; the proof below is in all of them
        while right - left > 1e-3:
            middle = (left + right) / 2
            if (f(mp.mpf(middle)) > 0) == falls:
                left = middle
            else:
                right = middle
    start = (mp.mpf(left), mp.mpf(right))
    root = mp.findroot(f, start, solver="secant", tol=mp.mpf("1e-80"), verify=False)
    if (f(root - _PROOF) > 0) == (f(root + _PROOF) > 0):
        raise ValueError(f"not proved: {root}")
    return root


def _junction(i: Any, q: Quantities, area: Any = 1) -> Any:
    """Base-emitter voltage that drives i through an emitter of this area."""
    return q["V_T"] * (mp.log(i / area) - q["log_I_S"])


def _current(loop: Callable[[Any], Any], low: Any = _SMALLEST, high: Any = _LARGEST) -> Any:
    """Return the current at which the voltages around a loop add up to nothing."""
    return mp.exp(crossing(lambda x: loop(mp.exp(x)), low, high))


def _input(q: Quantities, feed: str, drop: Callable[[Any], Any]) -> Any:
    """Current into an input branch that drops so much to ground."""
    if feed == "given":
        return q["I_given"]
    return _current(lambda i: q["V_CC"] - i * q["R_feed"] - drop(i))


def _degenerated_mirror(q: Quantities, feed: str) -> dict[str, Any]:
    def base(i: Any) -> Any:
        return _junction(i, q) + i * q["R_input"]

    I_in = _input(q, feed, base)
    I_out = _current(lambda i: base(I_in) - _junction(i, q, q["N"]) - i * q["R_output"])
    return {"I_in": I_in, "I_out": I_out}


def _peaking_source(q: Quantities, feed: str) -> dict[str, Any]:
    I_in = _input(q, feed, lambda i: _junction(i, q))
    collector = _junction(I_in, q) - I_in * q["R_drop"]
    return {"I_in": I_in, "I_out": _current(lambda i: collector - _junction(i, q, q["N"]))}


def _core(q: Quantities) -> Any:
    """The core's own current; the mirror forces M times of it into the smaller transistor."""
    return _current(lambda i: _junction(q["M"] * i, q) - _junction(i, q, q["N"]) - i * q["R_core"])


def _ptat_core(q: Quantities, feed: str) -> dict[str, Any]:  # noqa: ARG001
    return {"I_out": _core(q)}


def _vbe_reference(q: Quantities, feed: str) -> dict[str, Any]:  # noqa: ARG001
    """The junction that conducts: above the current V_T/R, where junction less drop is largest.

    Below it the same loop has a second root of a few I_S, at which the junction is off.
    """
    largest = mp.log(q["V_T"] / q["R_base"])
    I_out = _current(lambda i: _junction(i, q) - i * q["R_base"], low=largest)
    return {"I_out": I_out}


def _ptat_plus_vbe(q: Quantities, feed: str) -> dict[str, Any]:  # noqa: ARG001
    I_core = _core(q)
    return {"I_core": I_core, "I_out": I_core + _junction(q["M"] * I_core, q) / q["R_base"]}


def _reference_over_resistor(q: Quantities, feed: str) -> dict[str, Any]:  # noqa: ARG001
    return {"I_out": _current(lambda i: q["V_ref"] - i * q["R_sense"])}


_CIRCUITS: dict[str, Callable[[Quantities, str], dict[str, Any]]] = {
    "degenerated mirror": _degenerated_mirror,
    "peaking source": _peaking_source,
    "ptat core": _ptat_core,
    "vbe reference": _vbe_reference,
    "ptat plus vbe": _ptat_plus_vbe,
    "reference over resistor": _reference_over_resistor,
}


def solve(topology: str, feed: str, quantities: Quantities) -> dict[str, Any]:
    """Return all currents [A], the output last, from the exact values of the quantities.

    ``log_I_S`` may be left out where two equal junctions face each other; then one of
    1e-17 A is used, which must not matter.
    """
    exact = {name: mp.mpf(value) for name, value in quantities.items()}
    exact.setdefault("log_I_S", mp.log(mp.mpf("1e-17")))
    return _CIRCUITS[topology](exact, feed)


def log_sensitivities(
    topology: str, feed: str, quantities: Quantities
) -> dict[str, dict[str, Any]]:
    """Return d ln I / d ln q of each current by each quantity (log_I_S: per unit).

    By central differences; a step of 1e-12 in 50 digits leaves more than 20 of them right.
    """
    h = mp.mpf("1e-12")
    found: dict[str, dict[str, Any]] = {}
    for name in quantities:
        value, additive = mp.mpf(quantities[name]), name == "log_I_S"
        ends = (value - h, value + h) if additive else (value * (1 - h), value * (1 + h))
        low, high = (solve(topology, feed, {**quantities, name: end}) for end in ends)
        span = 2 * h if additive else mp.log((1 + h) / (1 - h))
        for current in low:
            found.setdefault(current, {})[name] = mp.log(high[current] / low[current]) / span
    return found


def upper_root(u: Any) -> Any:
    """The root above 1 of y - ln y = u, by Lambert's W on its lower branch, as mpmath has it."""
    return -mp.lambertw(-mp.exp(-mp.mpf(u)), -1).real
