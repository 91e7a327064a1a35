"""Refine mixes of several slots together, by linear programs about the full solution.

Within a region in which the linearisation is trusted (Fletcher, *Practical
Methods of Optimization*, 2nd ed., chapter 14), until nothing is gained. What is
found is a local optimum.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from scipy.optimize import linprog

from tcopt.arrays import Array
from tcopt.circuits import SUPPLY
from tcopt.errors import NoSolutionError
from tcopt.mix.offer import Offer
from tcopt.mix.program import Fit, chebyshev_nodes, peaks
from tcopt.operation import Operation
from tcopt.symbols import resistance_name
from tcopt.targets import TargetCurrent

__all__ = ["INPUT_RATIO", "refine"]

INPUT_RATIO = 100.0
"""Input over output current, and its inverse, beyond which no fed input is looked for."""
_NODES = 25
_FINE = 129
_ROUNDS = 30
_GAIN = 1e-4


def refine(
    operation: Operation,
    chosen: Mapping[str, Offer],
    start: Mapping[str, Array],
    target: TargetCurrent,
    input_span: tuple[float, float] | None = None,
) -> Fit | None:
    """Improve the mixes of several slots together until nothing is gained.

    Parameters
    ----------
    operation : the design, the slots in `chosen` to be filled
    chosen : slot -> offer
    start : slot -> coefficients of the offer
    target : what the current should be
    input_span : least and largest input current [A] if it is free to choose
    """
    span = operation.study.range
    knots = [k for k in target.knots if span.low < k < span.high]
    fine = np.union1d(np.linspace(span.low, span.high, _FINE), knots)
    nodes = np.union1d(chebyshev_nodes(span.low, span.high, _NODES), knots)
    point = _Point(operation, dict(chosen), dict(start), target)
    profile = point.profile(fine)
    if profile is None:
        return None
    trust = 0.5
    for _ in range(_ROUNDS):
        deviation = float(np.abs(profile).max())
        active = np.union1d(nodes, peaks(fine, profile))
        moved = point.step(active, trust, deviation, input_span)
        if moved is None:
            break
        candidate, predicted = moved
        new_profile = candidate.profile(fine)
        reached = np.inf if new_profile is None else float(np.abs(new_profile).max())
        gain, hoped = deviation - reached, deviation - predicted
        if new_profile is not None and gain > 0:
            point, profile = candidate, new_profile
        if hoped <= _GAIN * deviation or deviation < 1e-9:
            break
        trust = min(1.0, 2 * trust) if gain > 0.5 * hoped else trust / (1.5 if gain > 0 else 5)
        if trust < 1e-7:
            break
    deviation = float(np.abs(profile).max())
    return Fit(point.filled(), deviation, deviation)


def _rows_of_band(
    matrix: Array, off: Array, deviation: float, unit: float
) -> tuple[list[Array], list[Array]]:
    """Return ``|I/I_t - 1| <= e`` as rows, with ln(1 +- e) linearised about the deviation now."""
    top = (off - np.log1p(deviation) + deviation / (1 + deviation)) / unit
    bottom = (-off + np.log1p(-deviation) + deviation / (1 - deviation)) / unit
    e_top = np.full((len(off), 1), -1 / (1 + deviation))
    e_bottom = np.full((len(off), 1), -1 / (1 - deviation))
    return [np.hstack([matrix, e_top]), np.hstack([-matrix, e_bottom])], [-top, -bottom]


@dataclass(frozen=True)
class _Point:
    """Where the refinement stands."""

    operation: Operation
    chosen: dict[str, Offer]
    values: dict[str, Array]
    target: TargetCurrent

    def filled(self) -> Operation:
        mixes = {name: offer.mix(self.values[name]) for name, offer in self.chosen.items()}
        return replace(self.operation, mixes={**self.operation.mixes, **mixes})

    def profile(self, T: Array) -> Array | None:
        """Return ``I/I_target - 1`` from the full solution, or None where there is no current."""
        if not all((values > 0).any() for values in self.values.values()):
            return None
        try:
            return self.filled().output(T) / self.target.current(T) - 1
        except NoSolutionError:
            return None

    def step(
        self, T: Array, trust: float, deviation: float, input_span: tuple[float, float] | None
    ) -> tuple[_Point, float] | None:
        """Solve the program linearised here; return the new point and the deviation it predicts."""
        filled = self.filled()
        try:
            off = np.log(filled.output(T) / self.target.current(T))
            by_quantity = filled.sensitivities(T)
            die = filled.die_temperature(T)
        except NoSolutionError:
            return None
        blocks, limits = [], []
        for name, offer in self.chosen.items():
            columns = offer.columns(die)
            total = columns @ self.values[name]
            # relative change of R per unit of each coefficient's share of the whole
            relative = columns * total.mean() / total[:, None]
            limits.append(relative[:: max(1, len(T) // 6)])
            sign = 1 if offer.join == "series" else -1
            blocks.append(sign * by_quantity[resistance_name(name)][:, None] * relative)
        scales = [
            float((offer.columns(die) @ self.values[name]).mean())
            for name, offer in self.chosen.items()
        ]
        sizes = [block.shape[1] for block in blocks]
        lower = [-self.values[n][i] / s for n, s in zip(self.chosen, scales, strict=True)
                 for i in range(len(self.values[n]))]  # fmt: skip
        bounds: list[tuple[float, float | None]] = [(low, None) for low in lower]
        log_input = 0.0
        if input_span is not None and filled.choices.input_current is not None:
            log_input = float(np.log(filled.choices.input_current))
            blocks.append(by_quantity["I_given"][:, None])
            low, high = np.log(input_span) - log_input
            bounds.append((max(low, -trust), min(high, trust)))
        unit = max(deviation, 1e-9)
        matrix = np.hstack(blocks) / unit
        rows, sides = _rows_of_band(matrix, off, deviation, unit)
        at = 0
        for size, limit in zip(sizes, limits, strict=True):
            block = np.zeros((len(limit), matrix.shape[1] + 1))
            block[:, at : at + size] = limit
            at += size
            rows += [block, -block]
            sides += [np.full(len(limit), trust), np.full(len(limit), trust * 0.9)]
        if filled.study.circuit.feed == SUPPLY:
            rows_of, sides_of = self._input_rows(filled, T, scales)
            rows.append(rows_of)
            sides.append(sides_of)
        answer = linprog(
            np.append(np.zeros(matrix.shape[1]), 1.0),
            A_ub=np.vstack(rows),
            b_ub=np.concatenate(sides),
            bounds=[*bounds, (0, None)],
            method="highs",
        )
        if answer.status != 0:
            return None
        values, at = {}, 0
        for (name, old), scale, size in zip(self.values.items(), scales, sizes, strict=True):
            new = old + scale * answer.x[at : at + size]
            values[name] = np.where(new > 1e-9 * scale, new, 0.0)
            at += size
        operation = self.operation
        if input_span is not None:
            current = float(np.exp(log_input + answer.x[at]))
            operation = replace(
                operation, choices=replace(operation.choices, input_current=current)
            )
        return replace(self, operation=operation, values=values), float(answer.x[-1]) * unit

    def _input_rows(
        self, filled: Operation, T: Array, scales: Sequence[float]
    ) -> tuple[Array, Array]:
        """Return rows that keep a fed input within a sensible multiple of the target."""
        middle = T[len(T) // 2 : len(T) // 2 + 1]
        by_quantity = filled.sensitivities(middle, of="I_in")
        ratio = float(np.log(filled.currents(middle)["I_in"] / self.target.current(middle))[0])
        blocks = []
        for (name, offer), scale in zip(self.chosen.items(), scales, strict=True):
            columns = offer.columns(filled.die_temperature(middle))
            sign = 1 if offer.join == "series" else -1
            total = columns @ self.values[name]
            blocks.append(sign * by_quantity[resistance_name(name)] * columns * scale / total)
        row = np.hstack([*blocks, np.zeros((1, 1))])
        reach = np.log(INPUT_RATIO)
        return np.vstack([row, -row]), np.array([reach - ratio, reach + ratio])
