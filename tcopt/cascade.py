"""Outputs that share a reference branch, solved together.

Each output is an `Operation` of its own, with the base currents of the others
on its input (the symbol I_others). With ``b_k`` the base current of output k,

    b_k = (I_out,k(sum of the other b) - N_k I_L)/beta

for all outputs at once, by Newton's method on the loops of all of them: those of
the input are shared, and each output adds one of its own. MOS transistors and
ideal bipolar ones draw none: their outputs do not feel each other.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import partial
from typing import TYPE_CHECKING

import numpy as np

from tcopt import newton
from tcopt.arrays import Array
from tcopt.devices import DeviceQuantity, device_quantities
from tcopt.errors import InputError, NoSolutionError
from tcopt.numerics import Numerics, arguments_of
from tcopt.operation import Operation, celsius
from tcopt.real import at_any_voltage
from tcopt.symbols import INVERSE
from tcopt.targets import target_current

if TYPE_CHECKING:
    from tcopt.study import Study

__all__ = ["Cascade", "bases_at_target", "draws_base_current"]

_CAUSE = "base current of the other outputs"
_BETA = INVERSE["beta"]
_STEPS = 60
_REMEMBERED = 8
_Memory = dict[bytes, Array]
"""Results by the bytes of their temperatures."""


def draws_base_current(study: Study) -> bool:
    """Say whether the outputs of this study's circuit load its input."""
    return study.circuit.device.startswith("bipolar") and "current gain" in study.circuit.effects


@dataclass(frozen=True)
class Cascade:
    """Outputs of one reference branch.

    Attributes
    ----------
    alone : name -> the output, all slots filled, as if there were no other
    """

    alone: Mapping[str, Operation]
    _bases: _Memory = field(default_factory=dict, compare=False, repr=False)
    _slopes: _Memory = field(default_factory=dict, compare=False, repr=False)

    @property
    def is_coupled(self) -> bool:
        """Whether the outputs feel each other."""
        return draws_base_current(next(iter(self.alone.values())).study)

    def together(self) -> dict[str, Operation]:
        """Return the outputs, each with the base currents of the others on its input."""
        if not self.is_coupled:
            return dict(self.alone)
        return {
            name: replace(
                operation,
                other_bases=DeviceQuantity(partial(self._load, k), partial(self._slope, k), _CAUSE),
            )
            for k, (name, operation) in enumerate(self.alone.items())
        }

    def base_currents(self, temperature: Array) -> Array:
        """Return the base current of each output [A], shape (outputs, *temperature's).

        Raises
        ------
        NoSolutionError
            Where there is none, with the temperature.
        """
        T = np.asarray(temperature, dtype=float)
        return _remembered(self._bases, T.ravel(), self._solved).reshape(-1, *T.shape)

    def propagated(self, temperature: Array, shares: Mapping[str, Array]) -> dict[str, Array]:
        """Return what becomes of relative changes of the outputs once the others follow.

        Parameters
        ----------
        temperature : [K], shape (n,)
        shares : name -> relative change of an output with the base currents of the
            others held, shape (n,), in any unit
        """
        if not self.is_coupled:
            return dict(shares)
        answer = self._settled(temperature, np.stack(list(shares.values())))[0]
        return dict(zip(shares, answer, strict=True))

    @property
    def _operations(self) -> tuple[Operation, ...]:
        return tuple(self.alone.values())

    @property
    def _areas(self) -> Array:
        return np.array([[o.choices.area_ratio] for o in self._operations])

    def _load(self, k: int, temperature: Array) -> Array:
        """Return the base currents of all outputs but the k-th [A]."""
        each = self.base_currents(temperature)
        return np.asarray(np.delete(each, k, axis=0).sum(axis=0))

    def _solved(self, T: Array) -> Array:
        joint = _Joint.of(self._operations, T)
        values = joint.start()
        with np.errstate(all="ignore"):
            for _ in range(_STEPS):
                change = joint.step(values)
                change[joint.logs] = np.clip(change[joint.logs], -newton.REACH, newton.REACH)
                values = values + change
                there = newton.settled(values, change).all(axis=0)
                if there.all():
                    # what settles it leaves an error of 1e-12; the next step leaves rounding
                    return joint.base_currents(values + joint.step(values))
        where = celsius(float(T[~there][0]))
        raise NoSolutionError(
            f"{self._operations[0].study.circuit.topology}: no solution of all outputs together "
            f"at {where}; accepted: outputs whose base currents the input can supply over the "
            "whole range"
        )

    def _slope(self, k: int, temperature: Array) -> Array:
        """Return ``d ln I_others/dT`` of the k-th output [1/K], all outputs following."""
        T = np.asarray(temperature, dtype=float)
        return np.asarray(_remembered(self._slopes, T, self._all_slopes)[k])

    def _all_slopes(self, T: Array) -> Array:
        return self._settled(T, None)[1]

    def _settled(self, T: Array, held: Array | None) -> tuple[Array, Array]:
        """Return changes of outputs and of loads when all follow, from those with loads held.

        ``t_k = p_k + e_k w_k``, ``w_k = (sum over the others of db_i)/I_others,k`` and
        ``db_i = (I_i t_i - N_i I_L lambda)/beta + kappa b_i``, with lambda and kappa the
        slopes of I_L and of 1/beta, which count for a change of temperature alone: without
        ``held`` that is the change, and p_k the local temperature coefficient.
        """
        bases = self.base_currents(T)
        others = _others(len(bases))
        load = others @ bases
        operations = [
            replace(operation, other_bases=_held_at(load[k]))
            for k, operation in enumerate(self._operations)
        ]
        by_quantity = [operation.sensitivities(T) for operation in operations]
        steepness = np.stack([each["I_others"] for each in by_quantity])
        device = device_quantities(operations[0].study.circuit)
        gain, leak = (device[name].value(T) for name in (_BETA, "I_L"))
        leaking = self._areas * leak * gain
        own = np.zeros_like(bases)
        if held is None:
            slopes = [operation.quantity_slopes(T) for operation in operations]
            held = np.stack([_total(*pair) for pair in zip(by_quantity, slopes, strict=True)])
            own = device[_BETA].slope(T) * bases - device["I_L"].slope(T) * leaking
        into_base = bases + leaking
        pull = (steepness / load).T[:, :, None] * others * into_base.T[:, None, :]
        right = held + steepness * (others @ own) / load
        matrix = np.eye(len(bases)) - pull
        totals = np.asarray(np.linalg.solve(matrix, right.T[..., None])[..., 0].T, dtype=float)
        return totals, others @ (into_base * totals + own) / load


def _remembered(known: _Memory, T: Array, solve: Callable[[Array], Array]) -> Array:
    """Return what is known for these temperatures, or find it; the oldest is forgotten."""
    key = T.tobytes()
    if key not in known:
        for old in list(known)[: 1 - _REMEMBERED]:
            del known[old]
        known[key] = solve(T)
    return known[key]


def _total(by_quantity: Mapping[str, Array], slopes: Mapping[str, Array]) -> Array:
    """Return the local temperature coefficient [1/K] from sensitivities and slopes."""
    return np.asarray(sum(by_quantity[q] * slopes[q] for q in slopes if q in by_quantity))


def _held_at(load: Array) -> DeviceQuantity:
    return DeviceQuantity(lambda T: load, np.zeros_like, "")  # noqa: ARG005


@dataclass(frozen=True)
class _Joint:
    """The loops of all outputs at once: those that they share, and one of each of its own.

    The unknowns are those of one output but its own current, then the current of each.

    Attributes
    ----------
    circuit : of every output
    quantities : of each output at the temperatures, shape (n,) or numbers
    alone : the unknowns of each output as if there were no other, shape (outputs, unknowns, n)
    own : where the output's current stands among an output's unknowns, and its loop
    """

    circuit: Numerics
    quantities: tuple[dict[str, Array], ...]
    alone: Array
    own: int

    @classmethod
    def of(cls, operations: Sequence[Operation], T: Array) -> _Joint:
        """Return the loops of these outputs at temperatures [K], shape (n,).

        Raises
        ------
        NoSolutionError
            If an output has no current even alone.
        """
        circuit = operations[0].circuit
        quantities = tuple(
            arguments_of(circuit.quantities, operation.quantities(T)) for operation in operations
        )
        alone = []
        for operation, own in zip(operations, quantities, strict=True):
            found = at_any_voltage(circuit, own)
            if not np.isfinite(np.stack(found)).all():
                operation.currents(T)
            alone.append(np.stack([np.broadcast_to(value, T.shape) for value in found]))
        return cls(circuit, quantities, np.stack(alone), len(circuit.currents) - 1)

    @property
    def shared(self) -> list[int]:
        """Where the unknowns that the outputs share stand among those of one, and their loops."""
        return [k for k in range(len(self.circuit.unknowns)) if k != self.own]

    @property
    def logs(self) -> list[bool]:
        """Which unknowns are logarithms."""
        named = [self.circuit.unknowns[k].startswith("log_") for k in self.shared]
        return named + [True] * len(self.alone)

    def base_currents(self, values: Array) -> Array:
        """Return the base current of each output [A], shape (outputs, n)."""
        return np.asarray(np.exp(values[len(self.shared) :]) * self.quantities[0][_BETA])

    def start(self) -> Array:
        """Return a first guess: that of plain outputs, whose currents keep their ratio."""
        gain = self.quantities[0][_BETA]
        ratios = np.exp(self.alone[:, self.own] - self.alone[:, 0]) * gain
        shared = self.alone[0, self.shared].copy()
        if not self.circuit.followed:
            shared[0] += np.log((1 + gain + ratios[0]) / (1 + gain + ratios.sum(axis=0)))
        fallen = shared[0] - self.alone[:, 0]
        return np.concatenate([shared, self.alone[:, self.own] + fallen])

    def step(self, values: Array) -> Array:
        """Return the change of each unknown in one step of Newton's method."""
        shared, own = self.shared, self.own
        count, width = len(self.alone), len(shared)
        bases = self.base_currents(values)
        load = _others(count) @ bases
        points = values.shape[1]
        matrix = np.zeros((points, width + count, width + count))
        right = np.zeros((points, width + count))
        position = self.circuit.quantities.index("I_others")
        for k, quantities in enumerate(self.quantities):
            unknowns = list(values[:width])
            unknowns.insert(own, values[width + k])
            loops, by_unknown, by_quantity = self.circuit.partials(
                *unknowns, **{**quantities, "I_others": load[k]}
            )
            rows = {width + k: own}
            if k == 0:
                rows |= dict(enumerate(shared))
            for row, loop in rows.items():
                right[:, row] = -np.asarray(loops[loop])
                for column, unknown in enumerate(shared):
                    matrix[:, row, column] = by_unknown[loop][unknown]
                for other in range(count):
                    by_load = by_quantity[loop][position] / load[k] * bases[other]
                    matrix[:, row, width + other] = by_load
                matrix[:, row, width + k] = by_unknown[loop][own]
        lost = ~(np.isfinite(matrix).all(axis=(1, 2)) & np.isfinite(right).all(axis=1))
        matrix[lost] = np.eye(width + count)
        right[lost] = np.nan
        return np.asarray(np.linalg.solve(matrix, right[..., None])[..., 0].T)


def _others(count: int) -> Array:
    return np.ones((count, count)) - np.eye(count)


def bases_at_target(operations: Mapping[str, Operation], but: str) -> DeviceQuantity | None:
    """Return the base currents of all outputs but one when each is at its target.

    Their resistors may still be open: at the target the base current is known from the
    target, the area ratio and the transistor alone. None where outputs draw no base current.

    Parameters
    ----------
    operations : every output
    but : the one whose input is loaded
    """
    if not draws_base_current(operations[but].study):
        return None
    others = {name: operation for name, operation in operations.items() if name != but}
    made = operations[but].study.circuit
    device = device_quantities(made)
    gain, leak = device[_BETA], device["I_L"]
    targets = {
        name: target_current(operation.study.target, operation.study.range.reference)
        for name, operation in others.items()
    }
    areas = {name: operation.choices.area_ratio for name, operation in others.items()}

    def junctions(T: Array) -> Array:
        found = np.zeros_like(T)
        for name, target in targets.items():
            junction = target.current(T) - areas[name] * leak.value(T)
            if (junction <= 0).any():
                where = celsius(float(T[junction <= 0].flat[0]))
                raise InputError(
                    f"outputs.{name}: found a target below the leakage of the transistor, area "
                    f"ratio {areas[name]:g}, at {where}; accepted: a larger target or less area"
                )
            found = found + junction
        return found

    def slope(T: Array) -> Array:
        rising = sum(
            targets[name].current(T) * targets[name].log_slope(T)
            - areas[name] * leak.value(T) * leak.slope(T)
            for name in targets
        )
        return np.asarray(rising / junctions(T) + gain.slope(T))

    return DeviceQuantity(lambda T: np.asarray(junctions(T) * gain.value(T)), slope, _CAUSE)
