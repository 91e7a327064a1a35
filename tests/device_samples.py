"""Random circuits with real transistors: all topologies, all effects, log-uniform and wide.

A circuit is drawn by what should flow in it with ideal transistors (1 nA to 10 mA), by ratios
(1/64 to 64), by drops, by inversion (1e-4 to 1e4) and by temperature (-55 to 175 degC), each
effect being there or not; resistors and supply follow, roughly, in floats. The effects then do
what they do, up to leaving no solution at all: leakage above the current, base currents above
what the mirror gives, a resistor above what a junction can drive.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np

from tcopt.circuits import CIRCUITS
from tcopt.circuits.terms import kinds_of

__all__ = ["DEVICE_CASES", "TEMPERATURES", "drawn", "row"]

DEVICE_CASES = tuple(
    (circuit.topology, feed, device.value)
    for circuit in CIRCUITS.values()
    for feed in circuit.feeds
    for device in kinds_of(circuit)
    if device.value != "ideal"
)
"""Every topology with every kind of input and of real transistor."""

_K_PER_Q = 1.380649e-23 / 1.602176634e-19
_SMALL = 1e-3
_LIFTING = ("R_output", "R_core", "R_source", "R_base", "R_gate")
"""Resistors between the output transistor and ground, or larger than those."""
TEMPERATURES = (218.15, 448.15)
"""-55 and 175 degC [K]."""
_CURRENTS = (1e-9, 1e-2)
_INVERSION = (1e-4, 1e4)


class _Draw:
    """Independent draws, all of one length; effects are there or not, or always."""

    def __init__(self, count: int, seed: int, always: bool) -> None:
        self.rng = np.random.default_rng(seed)
        self.count = count
        self.always = always

    def even(self, low: float, high: float) -> Any:
        return self.rng.uniform(low, high, self.count)

    def log(self, low: float, high: float) -> Any:
        return np.exp(self.even(np.log(low), np.log(high)))

    def or_not(self, value: Any, share: float = 0.75, otherwise: float = 0.0) -> Any:
        return np.where(self.rng.random(self.count) < share, value, otherwise)

    def effect(self, value: Any) -> Any:
        return value if self.always else self.or_not(value)


def _junction(draw: _Draw, T: Any) -> dict[str, Any]:
    """ln I_S, base current per collector current."""
    T_0, eta, V_G0 = 300.0, draw.even(2, 5), draw.even(1.1, 1.25)
    grown = eta * np.log(T / T_0) + V_G0 / _K_PER_Q * (1 / T_0 - 1 / T)
    gain = draw.log(10, 3000) * (T / T_0) ** draw.even(0, 2)
    return {"log_I_S": np.log(draw.log(1e-19, 1e-15)) + grown, "inverse_beta": 1 / gain}


def _channel(draw: _Draw, T: Any, I_in: Any) -> dict[str, Any]:
    """Threshold, slope factor, and the specific current for some inversion of the input."""
    n = draw.even(1.05, 1.9)
    return {
        "V_TH": draw.even(0.25, 1.1) - draw.log(3e-4, 3e-3) * (T - 300.0),
        "n": n,
        "n_S": draw.or_not(n, 0.5, 1.0),
        "I_spec": I_in / draw.log(*_INVERSION),
    }


def _control(q: Mapping[str, Any], mos: bool, current: Any, area: Any = 1.0) -> Any:
    """Base-emitter or gate-source voltage without effects."""
    if not mos:
        return q["V_T"] * (np.log(current / area) - q["log_I_S"])
    root = np.sqrt(current / (area * q["I_spec"]))
    return q["V_TH"] + 2 * q["n"] * q["V_T"] * (root + np.log(-np.expm1(-root)))


def _ratios(draw: _Draw, topology: str) -> tuple[Any, Any]:
    N, M = draw.log(1 / 64, 64), draw.log(1 / 64, 64)
    if "mirror_ratio" not in CIRCUITS[topology].choices:
        return N, M
    # in nearly all of them the core has a voltage
    turned = (N * M < 1) & (draw.rng.random(draw.count) < 0.97)
    return np.where(turned, 1 / N, N), np.where(turned, 1 / M, M)


def _resistors(draw: _Draw, topology: str, mos: bool, q: Mapping[str, Any]) -> dict[str, Any]:
    """Return the resistors, and the voltage of a reference, that give roughly the currents."""
    I_in, I_out, N, M, V_T = q["I_in"], q["I_out"], q["N"], q["M"], q["V_T"]
    weight = q["n_S"] if mos else 1.0
    first = _control(q, mos, I_in)
    if topology == "degenerated mirror":
        short = draw.rng.random(draw.count) < 0.1
        drop = np.where(short, 0.0, draw.or_not(draw.log(1e-3 * V_T, 3.0)))
        left = first + weight * drop - _control(q, mos, I_out, N)
        lacking = np.where(short, 0, np.maximum(-left, 0) / weight)
        drop, left = drop + lacking, left + weight * lacking
        output = np.where(short, 0.0, np.maximum(left, 0) / weight / I_out)
        return {"R_input": drop / I_in, "R_output": output}
    if topology == "peaking source":
        left = first - _control(q, mos, I_out, N)
        return {"R_drop": np.maximum(left, _SMALL * V_T) / I_in}
    if topology == "gate voltage bias":
        drop = draw.or_not(draw.log(1e-3 * V_T, 3.0))
        reference = _control(q, mos, I_out, N) + weight * drop
        return {"R_source": drop / I_out, "V_ref": np.maximum(reference, 0.1)}
    if topology in {"vbe reference", "gate source reference"}:
        slot = "R_base" if topology == "vbe reference" else "R_gate"
        over = _control(q, mos, I_out) * draw.log(0.5, 1.5)
        return {slot: np.maximum(over, 2 * V_T) / I_out}
    core = np.minimum(I_in, I_out / 2) if topology == "ptat plus vbe" else I_out
    one, other = _control(q, mos, M * core), _control(q, mos, core, N)
    found = {"R_core": np.maximum(one - other, _SMALL * V_T) / weight / core}
    if topology == "ptat plus vbe":
        found["R_base"] = np.maximum(one, V_T) / (I_out - core)
    return found


def drawn(
    topology: str, device: str, count: int, seed: int, *, all_effects: bool = False
) -> dict[str, Any]:
    """Return quantities of ``count`` circuits, as `tcopt.solve.numerics` takes them, and more.

    For every kind of input at once. The first two are at the ends of the range of temperature.
    """
    draw, mos = _Draw(count, seed, all_effects), device == "mos"
    T = draw.even(*TEMPERATURES)
    T[:2] = TEMPERATURES
    N, M = _ratios(draw, topology)
    I_in, I_out = draw.log(*_CURRENTS), draw.log(*_CURRENTS)
    devices = _channel(draw, T, I_in) if mos else _junction(draw, T)
    if mos:
        I_out = np.clip(devices["I_spec"] * draw.log(*_INVERSION), *_CURRENTS)
    if topology == "peaking source":
        I_in, I_out = np.maximum(I_in, I_out), np.minimum(I_in, I_out)
    q: dict[str, Any] = {"V_T": _K_PER_Q * T, "N": N, "M": M, "I_in": I_in, "I_out": I_out}
    q |= devices
    q |= _resistors(draw, topology, mos, q)
    if device == "bipolar":
        q["inverse_beta"] = draw.effect(q["inverse_beta"])
    q["inverse_V_A"] = draw.effect(1 / draw.log(2, 300))
    lift = I_out * sum(q.get(name, 0.0) for name in _LIFTING)
    q["V_out"] = draw.or_not(lift, 0.97) + draw.log(0.05, 30)
    q["I_L"] = draw.effect(draw.log(1e-18, 1e-12) * 2 ** ((T - 300) / 10))
    q["I_others"] = draw.or_not(draw.log(1e-4, 0.3) * I_in * q.get("inverse_beta", 0.0), 0.5)
    q["I_given"] = I_in
    excess = draw.log(1e-2, 30)
    drop = I_in * q.get("R_input", 0.0) * q.get("n_S", 1.0)
    follower = 0.8 if device == "bipolar_followed" else 0.0
    q["V_CC"] = np.maximum(_control(q, mos, I_in) + drop + follower + excess, 0.5)
    q["R_feed"] = excess / I_in
    return q


def row(q: Mapping[str, Any], names: tuple[str, ...], k: int) -> dict[str, float]:
    """Return one of the circuits as floats, the quantities of these names alone."""
    return {name: float(q[name][k]) for name in names}
