"""Outputs that share a reference branch, solved together.

Each output is an `Operation` of its own, with the base currents of the others
on its input (the symbol I_others). With ``b_k`` the base current of output k,

    b_k = (I_out,k(sum of the other b) - N_k I_L)/beta

for all outputs at once, by Newton's method in the logarithms of the ``b_k``.
MOS transistors and ideal bipolar ones draw none: their outputs do not feel
each other.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field, replace
from functools import partial
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.devices import DeviceQuantity, device_quantities
from tcopt.errors import InputError, NoSolutionError
from tcopt.operation import Operation, celsius
from tcopt.solve import currents, sensitivities
from tcopt.symbols import INVERSE
from tcopt.targets import target_current

if TYPE_CHECKING:
    from tcopt.study import Study

__all__ = ["Cascade", "bases_at_target", "draws_base_current"]

_CAUSE = "base current of the other outputs"
_BETA = INVERSE["beta"]
_STEPS = 60
_REACH = 1.0
"""Largest change of a logarithm in one step."""
_CLOSE = 1e-7
"""A step after which, convergence being quadratic, the next would be below rounding."""
_REMEMBERED = 8


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
    _bases: dict[bytes, Array] = field(default_factory=dict, compare=False, repr=False)

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
        key = T.tobytes()
        if key not in self._bases:
            for old in list(self._bases)[: -_REMEMBERED + 1]:
                del self._bases[old]
            self._bases[key] = self._solved(T.ravel())
        return np.asarray(self._bases[key].reshape(-1, *T.shape))

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
        answer = self._settled(temperature, np.stack(list(shares.values())), 0.0)[0]
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
        first = self._operations[0]
        fixed = [operation.quantities(T) for operation in self._operations]
        alone = [operation.currents(T) for operation in self._operations]
        gain = fixed[0][_BETA]
        leakage = self._areas * fixed[0]["I_L"]
        bases = (np.stack([each["I_out"] for each in alone]) - leakage) * gain
        # seen alone each output takes too much; so scaled, all of them leave the input some
        bases = bases / (1 + bases.sum(axis=0) / alone[0]["I_in"])
        log, step = np.log(bases), np.zeros_like(bases)
        others = 1 - np.eye(len(fixed))
        for _ in range(_STEPS):
            trial = log + step
            load = others @ np.exp(trial)
            wanted, steepness = _answers(self._operations, fixed, load, leakage)
            with np.errstate(invalid="ignore", divide="ignore"):
                off = np.log(wanted * gain) - trial
            sound = np.isfinite(off).all(axis=0) & np.isfinite(steepness).all(axis=0)
            log = np.where(sound, trial, log)
            weights = others * np.exp(trial).T[:, None, :] / load.T[:, :, None]
            change = _solve(steepness, weights, off, sound)
            # where the input has nothing left the step was too long
            step = np.where(sound, np.clip(change, -_REACH, _REACH), step / 2)
            open_points = ~sound | (np.abs(step).max(axis=0) > _CLOSE)
            if not open_points.any():
                return np.asarray(np.exp(log + step))
        where = celsius(float(T[open_points][0]))
        raise NoSolutionError(
            f"{first.study.circuit.topology}: no solution of all outputs together at {where}; "
            "accepted: outputs whose base currents the input can supply over the whole range"
        )

    def _slope(self, k: int, temperature: Array) -> Array:
        """Return ``d ln I_others/dT`` of the k-th output [1/K], all outputs following."""
        T = np.asarray(temperature, dtype=float)
        causes = [operation.causes(T).values() for operation in self._held(T)]
        held = np.stack([np.sum(list(shares), axis=0) for shares in causes])
        return np.asarray(self._settled(T, held, 1.0)[1][k])

    def _held(self, T: Array) -> list[Operation]:
        """Return the outputs with the base currents of the others as they are, but fixed."""
        return [
            replace(operation, other_bases=_held_at(self._load(k, T)))
            for k, operation in enumerate(self._operations)
        ]

    def _settled(self, T: Array, held: Array, by_temperature: float) -> tuple[Array, Array]:
        """Return changes of outputs and of loads when all follow, from those with loads held.

        ``t_k = p_k + e_k w_k``, ``w_k = (sum over the others of db_i)/I_others,k`` and
        ``db_i = (I_i t_i - N_i I_L lambda)/beta + kappa b_i``, with lambda and kappa the
        slopes of I_L and of 1/beta, which count for a change of temperature alone.
        """
        operations = self._held(T)
        bases = self.base_currents(T)
        device = device_quantities(operations[0].study.circuit)
        gain, leak = (device[name].value(T) for name in (_BETA, "I_L"))
        kappa, lam = (by_temperature * device[name].slope(T) for name in (_BETA, "I_L"))
        outputs = np.stack([operation.output(T) for operation in operations])
        steepness = np.stack([o.sensitivities(T)["I_others"] for o in operations])
        others = 1 - np.eye(len(operations))
        load = others @ bases
        own = kappa * bases - lam * self._areas * leak * gain
        weights = others * (gain * outputs).T[:, None, :] / load.T[:, :, None]
        sound = np.ones(len(T), dtype=bool)
        totals = _solve(steepness, weights, held + steepness * (others @ own) / load, sound)
        return totals, others @ (gain * outputs * totals + own) / load


def _held_at(load: Array) -> DeviceQuantity:
    return DeviceQuantity(lambda T: load, np.zeros_like, "")  # noqa: ARG005


def _answers(
    operations: Sequence[Operation],
    fixed: Sequence[Mapping[str, Array]],
    load: Array,
    leakage: Array,
) -> tuple[Array, Array]:
    """Return the outputs' currents without leakage [A], and ``d ln`` of them by ``ln I_others``."""
    found, slopes = [], []
    for k, (operation, quantities) in enumerate(zip(operations, fixed, strict=True)):
        loaded = {**quantities, "I_others": load[k]}
        output = currents(operation.circuit, loaded)["I_out"]
        with np.errstate(invalid="ignore", divide="ignore"):
            steepness = sensitivities(operation.circuit, loaded)["I_others"]
            found.append(output - leakage[k])
            slopes.append(steepness * output / found[-1])
    return np.stack(found), np.stack(slopes)


def _solve(steepness: Array, weights: Array, right: Array, sound: Array) -> Array:
    """Solve ``x_k - e_k sum_i w_ki x_i = r_k`` at each sound point.

    ``steepness`` and ``right`` of shape (outputs, n), ``weights`` (n, outputs, outputs).
    """
    matrix = np.eye(len(right)) - steepness.T[:, :, None] * weights
    matrix = np.where(sound[:, None, None], matrix, np.eye(len(right)))
    side = np.where(sound, right, 0.0).T
    return np.asarray(np.linalg.solve(matrix, side[..., None])[..., 0].T)


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
