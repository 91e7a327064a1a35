"""Loops that also rest at zero current: what drives them out of it, and with how little.

With every voltage at zero no current flows, and no law of a circuit that makes
its own current forbids it. Whether the loop leaves that state is read from the
resistance that it would need to stay at a small current: as long as that is
larger than the resistance it has, the loop gains, and the current grows; where
the two are equal is a second solution, below which the current dies away.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from tcopt.arrays import Array
from tcopt.circuits import SELF
from tcopt.laws import generated
from tcopt.operation import Operation
from tcopt.solve import Numerics, needed_resistance, numerics
from tcopt.symbols import INVERSE, resistance_name

__all__ = ["StartUp", "start_up"]

_SMALL = 1e-6
"""Part of the current at which the gain is stated."""
_DECADES, _PER_DECADE = 24, 4
_HALVINGS = 60
_ERROR = 1e-3
"""Error of the output that a start-up which stays on may leave."""


@dataclass(frozen=True)
class StartUp:
    """How a loop that also rests at zero leaves it, at the cold end, the reference, the hot end.

    Attributes
    ----------
    node : where the start-up current flows in, in words
    temperature : [K], shape (3,)
    current : of the loop where it works [A], shape (3,)
    gain : what the loop makes of a millionth of its current, shape (3,): above 1 it grows;
        nan where more than that leaks through the loop anyway
    second_current : of the second solution, below which it dies away [A]; nan where there is
        none above zero, shape (3,)
    least : that has to flow into the node: the second solution's, and the leakage of the
        junction there, where the transistor's data have one [A], shape (3,)
    most : that may stay on for an error of 0.1 % of the output [A]; nan where the mirror
        ratio, by which it is told, is not part of the loop
    """

    node: str
    temperature: Array
    current: Array
    gain: Array
    second_current: Array
    least: Array
    most: float


def start_up(operation: Operation) -> StartUp | None:
    """Return how a design's loop is started; None where it does not rest at zero.

    Parameters
    ----------
    operation : a design with a mix in every slot that its study names
    """
    made = operation.study.circuit
    start = made.circuit.start
    if start is None:
        return None
    span = operation.study.range
    T = np.array([span.low, span.reference, span.high])
    die = operation.die_temperature(T)
    loop = numerics(start.topology or made.topology, SELF, made.device)
    currents = operation.currents(T)
    current = currents["I_core" if start.topology else "I_out"]
    quantities = operation.quantities(die)
    R = quantities[resistance_name(start.slot)]
    need = _Need(loop, start.slot, {k: np.asarray(v)[..., None] for k, v in quantities.items()})
    ratio = np.append(1.0, np.logspace(0, -_DECADES, _DECADES * _PER_DECADE + 1)[1:])
    strength = need(current[:, None] * ratio) / R[:, None]
    small = need(current[:, None] * _SMALL)[:, 0]
    second = np.array(
        [_second(need, k, current[k], R[k], ratio, strength[k]) for k in range(len(T))]
    )
    has_mirror = "mirror_ratio" in made.circuit.choices
    # two junctions compared, or a junction's voltage over the resistor
    through = _emitter_current(current * _SMALL, quantities)
    drive = through * (small - R) / _slope_voltage(quantities)
    gain = np.exp(drive) if has_mirror else small / R
    forced = operation.choices.mirror_ratio if has_mirror else 1.0
    least = np.fmax(np.where(np.isnan(second), 0.0, second) * forced, _leakage(operation, die))
    most = np.nan
    if has_mirror:
        by_mirror = operation.sensitivities(T)["M"]
        most = float((_ERROR * forced * current / by_mirror).min())
    return StartUp(start.node, T, current, gain, second, least, most)


@dataclass(frozen=True)
class _Need:
    """The resistance with which the loop stays at a current, shape (places, currents)."""

    loop: Numerics
    slot: str
    quantities: dict[str, Array]

    def __call__(self, current: Array) -> Array:
        return needed_resistance(self.loop, self.slot, current, self.quantities)

    def at(self, place: int, current: float) -> float:
        one = {
            name: value[place] if value.ndim == 2 and len(value) > 1 else value.ravel()
            for name, value in self.quantities.items()
        }
        return float(needed_resistance(self.loop, self.slot, np.array([current]), one)[0])


def _emitter_current(current: Array, quantities: dict[str, Array]) -> Array:
    """Return what a current into the second transistor's collector sends through its resistor."""
    nothing = np.asarray(0.0)
    junction = current - quantities["N"] * quantities.get("I_L", nothing)
    return np.asarray(junction * (1 + quantities.get(INVERSE["beta"], nothing)))


def _slope_voltage(quantities: dict[str, Array]) -> Array:
    """Return by how many volts of the loop its small current grows e times [V]."""
    if "n" not in quantities:
        return quantities["V_T"]
    return np.asarray(quantities["V_T"] * quantities["n"] / quantities["n_S"])


def _second(
    need: _Need, place: int, current: float, R: float, ratio: Array, strength: Array
) -> float:
    """Return the current [A] of the second solution, nan without one.

    The first interval below the working point over which the need falls below the resistance,
    halved in the logarithm of the current.
    """
    grows = strength[1:] > 1
    falls = np.flatnonzero(grows[:-1] & (strength[2:] < 1))
    if falls.size == 0:
        return float("nan")
    high, low = np.log(current * ratio[falls[0] + 1 : falls[0] + 3])
    for _ in range(_HALVINGS):
        middle = (high + low) / 2
        if need.at(place, float(np.exp(middle))) > R:
            high = middle
        else:
            low = middle
    return float(np.exp((high + low) / 2))


def _leakage(operation: Operation, die: Array) -> Array:
    """Return the leakage of the unit junction at the node [A], in effect or not; 0 without data."""
    transistor = operation.study.circuit.transistor
    if transistor is None or transistor.leakage_current is None:
        return np.zeros_like(die)
    grown = generated.leakage_ratio(die, transistor.reference)
    return np.asarray(transistor.leakage_current * grown)
