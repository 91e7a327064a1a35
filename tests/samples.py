"""Designs all over the range in which currents are promised to be right, and at its corners.

A design is drawn by what flows in it (1 nA to 10 mA at input and output), by ratios (1/64 to
64) and by drops (none to thousands of thermal voltages); resistances, junction and supply
follow from those, roughly, in floats. What the numbers then really give is for the oracle to
say.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from itertools import product
from math import exp, log
from typing import Any

import numpy as np
from scipy.stats import qmc

from tests import oracle

__all__ = ["CASES", "T_0", "Design", "corners", "drawn"]

CASES = (
    ("degenerated mirror", "given"),
    ("degenerated mirror", "supply"),
    ("peaking source", "given"),
    ("peaking source", "supply"),
    ("ptat core", "self"),
    ("ptat plus vbe", "self"),
    ("vbe reference", "self"),
    ("reference over resistor", "self"),
)
"""Every topology with every kind of input."""

T_0 = 300.15
COLD, HOT = 273.15 - 55, 273.15 + 175
SMALLEST, LARGEST = 1e-9, 1e-2
RATIO = 64.0


@dataclass(frozen=True)
class Design:
    """One design at one temperature T, as data of its parts, which have T_0 as reference.

    ``resistors``: the value at T_0 of each symbol, all of one material; ``others``: quantities
    that do not vary with temperature.
    """

    topology: str
    feed: str
    T: float
    material: tuple[float, float]
    I_S0: float
    junction: tuple[float, float]
    resistors: dict[str, float]
    others: dict[str, float]

    def exact(self, names: Sequence[str]) -> dict[str, Any]:
        """Return the quantities of these names, by the oracle's laws."""
        found = {
            "V_T": oracle.thermal_voltage(self.T),
            "log_I_S": oracle.log_saturation_current(self.T, self.I_S0, T_0, *self.junction),
            **self.others,
        }
        for name, R_0 in self.resistors.items():
            found[name] = oracle.resistance(self.T, R_0, T_0, *self.material)
        return {name: found[name] for name in names}


@dataclass(frozen=True)
class _Wish:
    """What a design should roughly do; ``input_drop`` in thermal voltages, the rest in SI."""

    T: float
    I_in: float
    I_out: float
    N: float
    M: float
    input_drop: float
    excess: float
    V_BE: float
    material: tuple[float, float] = (2e-3, 1e-6)
    junction: tuple[float, float] = (3.6, 1.17)


def _parts(topology: str, w: _Wish, V_T: float) -> tuple[float, dict[str, float], dict[str, float]]:
    """Return the current of the first junction, the resistances at T, and the ratios."""
    if topology == "degenerated mirror":
        drop = max(w.input_drop, -log(w.N * w.I_in / w.I_out))
        R_output = max(0.0, log(w.N * w.I_in / w.I_out) + drop) * V_T / w.I_out
        return w.I_in, {"R_input": drop * V_T / w.I_in, "R_output": R_output}, {"N": w.N}
    if topology == "peaking source":
        return w.I_in, {"R_drop": V_T * log(w.N * w.I_in / w.I_out) / w.I_in}, {"N": w.N}
    ratios = {"N": w.N, "M": w.M}
    if topology == "ptat core":
        return w.M * w.I_out, {"R_core": V_T * log(w.N * w.M) / w.I_out}, ratios
    if topology == "ptat plus vbe":
        I_core = min(w.I_in, w.I_out / 2)
        R = {"R_core": V_T * log(w.N * w.M) / I_core, "R_base": w.V_BE / (w.I_out - I_core)}
        return w.M * I_core, R, ratios
    if topology == "vbe reference":
        return w.I_out, {"R_base": w.V_BE / w.I_out}, {}
    return w.I_out, {"R_sense": w.excess / w.I_out}, {"V_ref": w.excess}


def _design(topology: str, feed: str, w: _Wish) -> Design:
    V_T = float(oracle.thermal_voltage(w.T))
    I_1, R, others = _parts(topology, w, V_T)
    growth = float(oracle.log_saturation_current(w.T, 1, T_0, *w.junction))
    I_S0 = exp(log(I_1) - w.V_BE / V_T - growth)
    if feed == "given":
        others["I_given"] = w.I_in
    elif feed == "supply":
        others["V_CC"] = w.V_BE + w.I_in * R.get("R_input", 0.0) + w.excess
        R["R_feed"] = w.excess / w.I_in
    m = float(oracle.resistance(w.T, 1, T_0, *w.material))
    at_reference = {name: value / m for name, value in R.items()}
    return Design(topology, feed, w.T, w.material, I_S0, w.junction, at_reference, others)


def _between(u: float, low: float, high: float) -> float:
    return exp(log(low) + u * log(high / low))


def drawn(topology: str, feed: str, count: int, seed: int) -> Iterator[Design]:
    """Yield designs of a scrambled Sobol sequence that have a solution."""
    for u in qmc.Sobol(12, rng=np.random.default_rng(seed)).random(count).tolist():
        currents = [_between(u[k], SMALLEST, LARGEST) for k in (1, 2)]
        N, M = (_between(u[k], 1 / RATIO, RATIO) for k in (3, 4))
        if topology.startswith("ptat") and N * M < 1:
            N, M = 1 / N, 1 / M
        if topology == "peaking source" and N * currents[0] < currents[1]:
            N, currents = 1 / N, currents[::-1]
        wish = _Wish(
            T=COLD + u[0] * (HOT - COLD),
            I_in=currents[0],
            I_out=currents[1],
            N=N,
            M=M,
            input_drop=0.0 if u[5] < 0.25 else _between(u[5] / 0.75 - 1 / 3, 1e-3, 3e3),
            excess=_between(u[6], 1e-3, 100),
            V_BE=0.15 + 0.95 * u[7],
            material=((u[8] - 0.5) * 8e-3, (u[9] - 0.3) * 2e-5),
            junction=(2 + 3 * u[10], 1.1 + 0.15 * u[11]),
        )
        yield _design(topology, feed, wish)


def corners(topology: str, feed: str) -> Iterator[Design]:
    """Yield designs at both ends of everything at once, where there is a solution."""
    mirror, core = topology == "degenerated mirror", topology.startswith("ptat")
    for T, I_in, I_out, N, M, drop, excess in product(
        (COLD, HOT),
        (SMALLEST, LARGEST),
        (SMALLEST, LARGEST),
        (1 / RATIO, 1.0, RATIO),
        (1 / RATIO, 1.0, RATIO) if core else (1.0,),
        (0.0, 3e3) if mirror else (0.0,),
        (1e-3, 100.0) if feed == "supply" else (1.25,),
    ):
        if (core and N * M <= 1) or (topology == "peaking source" and N * I_in <= I_out):
            continue
        V_BE = 0.9 if T == COLD else 0.2
        yield _design(topology, feed, _Wish(T, I_in, I_out, N, M, drop, excess, V_BE))
