"""Set parts right: from the current that a tester measures to the code of a trim.

At each insertion the scale is sought at which the *measured* current is what the
design, as stated, gives at the temperature at which the part is *believed* to be;
the part really sits elsewhere and the meter is off by its error. Two insertions are
sought together, the logarithms of both currents against the logarithms of both
scales, by Newton's method; the second scale is then cut to its step, and the first
sought again with it, so that it takes up what the second's step leaves.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.errors import InputError
from tcopt.heating import heated_in_steps, power
from tcopt.solve import currents
from tcopt.spread.variation import Scale, Variation
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.study import Insertion

Flags = np.ndarray[tuple[int, ...], np.dtype[np.bool_]]

__all__ = ["Flags", "Setting", "behind", "output_of", "require_reach", "trimmed", "untouched"]

_ROUNDS = 6
_CLOSE = 1e-11
"""Change of a logarithm after which the next would be rounding."""
_PROBE = 1e-4
"""Change of a logarithm by which a partial is taken."""
_BEYOND = 0.3
"""How far outside its range a scale is sought, in its logarithm; it is out there anyway."""
_ALIKE = 1e-2
"""Smallest effect that counts: of a scale on the current, or of the second beside the first's."""
_MET = 1e-9
"""Largest miss, of a logarithm of the current, with which a scale counts as found."""


@dataclass(frozen=True)
class Setting:
    """What a trim has set for each part.

    Attributes
    ----------
    scale : of each insertion, as set [1], shape (parts, insertions)
    beyond : whether the scale that was sought lies outside the range or was not found,
        of that shape
    """

    scale: Array
    beyond: Flags


def _scales(
    insertions: Sequence[Insertion], scale: Array
) -> tuple[dict[Scale, Array], Array | float]:
    """Return what is scaled inside the circuit, and the ratio of the mirror behind it."""
    from tcopt.study import OUTPUT_MIRROR  # noqa: PLC0415  this layer lies below the gate

    inside: dict[Scale, Array] = {}
    ratio: Array | float = 1.0
    for index, insertion in enumerate(insertions):
        column = scale[:, index : index + 1]
        if insertion.scales == OUTPUT_MIRROR:
            ratio = column
        else:
            inside[insertion.scales, insertion.material] = column
    return inside, ratio


def behind(insertions: Sequence[Insertion], scale: Array) -> Array | float | None:
    """Return by what the output is multiplied if nothing inside the circuit is scaled, else None.

    Parameters
    ----------
    insertions, scale : as for `output_of`
    """
    inside, ratio = _scales(insertions, scale)
    return None if inside else ratio


def output_of(
    variation: Variation,
    z: Array,
    temperature: Array,
    insertions: Sequence[Insertion] = (),
    scale: Array | None = None,
) -> Array:
    """Return the output current of each part [A], shape (parts, temperatures).

    Each part warms itself by its own power, where the study has a thermal resistance.

    Parameters
    ----------
    variation, z : the parts, variates of shape (parts, variates)
    temperature : [K], shape (temperatures,) or (parts, temperatures)
    insertions, scale : what a trim scales and by how much [1], shape (parts, insertions)
    """
    inside: Mapping[Scale, Array] = {}
    ratio: Array | float = 1.0
    if scale is not None:
        inside, ratio = _scales(insertions, scale)
    operation = variation.operation
    circuit = operation.circuit
    shape = (len(z), np.shape(temperature)[-1])
    T = np.asarray(temperature, dtype=float)
    if (resistance := operation.study.range.thermal_resistance) is not None:

        def watts(die: Array) -> Array:
            return power(operation, die, variation.quantities(z, die, inside))

        T = heated_in_steps(np.broadcast_to(T, shape), resistance, watts)
    found = currents(circuit, variation.quantities(z, T, inside))[circuit.currents[-1]]
    return np.asarray(np.broadcast_to(found * ratio, shape))


@dataclass(frozen=True)
class _Bench:
    """The tester's view of the parts."""

    variation: Variation
    z: Array
    insertions: Sequence[Insertion]
    aims: Array
    temperature: Array
    gain: Array

    def misses(self, logs: Array) -> Array:
        """Return ln(measured current/aim) for logarithms of the scales, (parts, insertions)."""
        found = output_of(self.variation, self.z, self.temperature, self.insertions, np.exp(logs))
        with np.errstate(divide="ignore", invalid="ignore"):
            return np.asarray(np.log(found * self.gain / self.aims))

    def sought(self, logs: Array, free: Sequence[int]) -> tuple[Array, Flags]:
        """Return the logarithms of the scales at which the free insertions meet their aims.

        And whether each of the free ones misses its aim even so, shape (parts, free).
        """
        low, high = (
            np.log([1 + side * each.reach for each in self.insertions]) for side in (-1, 1)
        )
        columns = list(free)
        for _ in range(_ROUNDS):
            miss = self.misses(logs)[:, columns]
            slopes = np.empty((*miss.shape, len(columns)))
            for k, column in enumerate(columns):
                probe = logs.copy()
                probe[:, column] += _PROBE
                slopes[:, :, k] = (self.misses(probe)[:, columns] - miss) / _PROBE
            step = np.nan_to_num(_solved(slopes, miss), nan=0.0, posinf=0.0, neginf=0.0)
            before, logs = logs, logs.copy()
            logs[:, columns] -= step
            logs = np.clip(logs, low - _BEYOND, high + _BEYOND)
            if np.abs(logs - before).max() < _CLOSE:
                break
        else:
            miss = self.misses(logs)[:, columns]
        return logs, ~(np.abs(miss) <= _MET)  # of nan, where there is no current, too


def _solved(slopes: Array, miss: Array) -> Array:
    """Return ``slopes^-1 miss`` of each part, of one or two unknowns."""
    with np.errstate(divide="ignore", invalid="ignore"):
        if miss.shape[1] == 1:
            return np.asarray(miss / slopes[:, :, 0])
        (a, b), (c, d) = np.moveaxis(slopes, 0, -1)
        e, f = miss.T
        right = np.stack([d * e - b * f, a * f - c * e], axis=1)
        return np.asarray(right / (a * d - b * c)[:, None])


def _cut(insertion: Insertion, scale: Array) -> tuple[Array, Flags]:
    """Return the scale that can be set, and whether the one that was sought lies beyond."""
    if insertion.increment is None or insertion.codes is None:
        low, high = 1 - insertion.reach, 1 + insertion.reach
        return np.clip(scale, low, high), (scale < low) | (scale > high)
    lowest, highest = insertion.codes
    code = np.rint((scale - 1) / insertion.increment)
    beyond = (code < lowest) | (code > highest)
    return 1 + np.clip(code, lowest, highest) * insertion.increment, beyond


def untouched(parts: int, insertions: int) -> Setting:
    """Return the setting that leaves every part as it is."""
    return Setting(np.ones((parts, insertions)), np.zeros((parts, insertions), dtype=bool))


def trimmed(
    variation: Variation, z: Array, insertions: Sequence[Insertion], aims: Array
) -> Setting:
    """Return what one or two insertions set for each part.

    Parameters
    ----------
    variation, z : the parts, variates of shape (parts, variates)
    insertions : one or two
    aims : what the design gives at the temperature of each [A], shape (insertions,)
    """
    numbers = [str(index) for index in range(len(insertions))]
    off = [variation.deviation(("believed", number), z) for number in numbers]
    gain = [1 + variation.deviation(("measured", number), z) for number in numbers]
    temperature = np.hstack(
        [each.temperature + delta for each, delta in zip(insertions, off, strict=True)]
    )
    bench = _Bench(variation, z, insertions, aims, temperature, np.hstack(gain))
    logs = np.zeros((len(z), len(insertions)))
    every = range(len(insertions))
    logs, missed = bench.sought(logs, every)
    made = untouched(len(z), len(insertions))
    for index in reversed(every):
        if index != every[-1]:
            logs, missed = bench.sought(logs, range(index + 1))
        scale, beyond = _cut(insertions[index], np.exp(logs[:, index]))
        made.scale[:, index], made.beyond[:, index] = scale, beyond | missed[:, index]
        logs[:, index] = np.log(scale)
    return made


def require_reach(variation: Variation, insertions: Sequence[Insertion], aims: Array) -> None:
    """Refuse a trim that cannot do its work on the design as stated.

    Raises
    ------
    InputError
        If a scale moves nothing, if the second does what the first does already,
        or if the first cannot reach even one standard deviation of the parts.
    """
    path = variation.operation.study.path
    count = len(variation.variates)
    typical = np.zeros((1, count))
    at = np.array([each.temperature for each in insertions])
    bench = _Bench(variation, typical, insertions, aims, at, np.ones(1))
    effect = np.empty((len(insertions), len(insertions)))
    for column in range(len(insertions)):
        probe = np.zeros((1, len(insertions)))
        probe[0, column] = _PROBE
        effect[:, column] = bench.misses(probe)[0] / _PROBE
    for index, (name, insertion) in enumerate(zip(("first", "second"), insertions, strict=False)):
        if not abs(effect[index, index]) > _ALIKE:
            raise InputError(
                f"{path}: trim.{name}.scales: found {insertion.scales!r}, of which 1 % moves the "
                f"current at {format_quantity(insertion.temperature, 'K')} by "
                f"{abs(effect[index, index]):.2g} %; accepted: what moves it"
            )
    if len(insertions) == 2:
        sine = abs(np.linalg.det(effect)) / np.prod(np.linalg.norm(effect, axis=0))
        if not sine > _ALIKE:
            raise InputError(
                f"{path}: trim.second.scales: found {insertions[1].scales!r}, which at both "
                "temperatures does what the first does; accepted: what moves the slope"
            )
    _require_range(variation, insertions[0], abs(float(effect[0, 0])))


def _require_range(variation: Variation, insertion: Insertion, effect: float) -> None:
    eye = np.eye(len(variation.variates))
    found = output_of(variation, np.vstack([eye, -eye]), np.array([insertion.temperature]))
    up, down = np.split(np.log(found[:, 0]), 2)
    sigma = float(np.sqrt(np.sum(((up - down) / 2) ** 2)))
    reaches = effect * insertion.reach
    if reaches < sigma:
        raise InputError(
            f"{variation.operation.study.path}: trim.first.range: found "
            f"{100 * insertion.reach:.4g} %, which moves the current by {100 * reaches:.3g} %, "
            f"less than one standard deviation of the parts, {100 * sigma:.3g} % at "
            f"{format_quantity(insertion.temperature, 'K')}; accepted: a range that can reach them"
        )
