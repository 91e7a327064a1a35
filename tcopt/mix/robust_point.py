"""Where a refinement for silicon stands: mixes, scenarios, trim settings, and the program there."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from scipy.optimize import linprog

from tcopt.arrays import Array
from tcopt.mix.causes import share_of
from tcopt.mix.knobs import Knob
from tcopt.mix.offer import Offer
from tcopt.mix.room import Room
from tcopt.mix.worst import Worst, is_known, worst_points
from tcopt.operation import Operation
from tcopt.solve import currents, sensitivities
from tcopt.symbols import resistance_name

__all__ = ["TYPICAL_WEIGHT", "Point"]

_IDLE = 0.5
_LEAST_SHARE = 1e-3
"""Share of a mix below which a part is left out: too small to be made."""
TYPICAL_WEIGHT = 0.01
"""What the deviation of the typical part counts beside that of the worst: it settles ties."""


@dataclass(frozen=True)
class Point:
    """Where the refinement stands: coefficients, scenarios, and the logarithm of each knob."""

    operation: Operation
    chosen: dict[str, Offer]
    values: dict[str, Array]
    room: Room
    points: Array
    settings: Array

    def filled(self) -> Operation:
        """Return the typical design."""
        mixes = {name: offer.mix(self.values[name]) for name, offer in self.chosen.items()}
        return replace(self.operation, mixes={**self.operation.mixes, **mixes})

    def die(self, T: Array) -> Array:
        """Return the typical design's own temperatures [K], taken for those of every part."""
        return self.filled().die_temperature(T)

    def columns(self, slot: str, T: Array) -> Array:
        """Return what one unit of each part adds, its own trim included: (scenarios, n, parts)."""
        offer, T = self.chosen[slot], self.die(T)
        each = np.stack(
            [self.room.causes.ratio(m, self.points, T) for m in offer.materials], axis=-1
        )
        for index, knob in enumerate(self.room.knobs.each):
            if knob.slot == slot and knob.material is not None:
                for k, material in enumerate(offer.materials):
                    if material.name == knob.material:
                        each[:, :, k] *= np.exp(self.settings[:, index, None])
        return each if offer.join == "series" else 1 / each

    def quantities(self, T: Array, columns: Mapping[str, Array]) -> dict[str, Array]:
        """Return the circuit's quantities in each scenario, trimmed inside."""
        scales = {
            (knob.slot, knob.material): np.exp(self.settings[:, index, None])
            for index, knob in enumerate(self.room.knobs.each)
            if knob.slot is not None and knob.slot not in self.chosen
        }
        found = self.room.causes.quantities(self.filled(), self.points, self.die(T), scales)
        for slot, offer in self.chosen.items():
            total = columns[slot] @ self.values[slot]
            found[resistance_name(slot)] = total if offer.join == "series" else 1 / total
        for index, knob in enumerate(self.room.knobs.each):
            if knob.slot in self.chosen and knob.material is None:
                name = resistance_name(str(knob.slot))
                found[name] = found[name] * np.exp(self.settings[:, index, None])
        return found

    def output_settings(self) -> Array:
        """Return the logarithm of the output's scale in each scenario."""
        total = np.zeros(len(self.points))
        for index, knob in enumerate(self.room.knobs.each):
            if knob.slot is None:
                total += self.settings[:, index]
        return total

    def off(self, T: Array) -> Array | None:
        """Return ``ln(I/I_target)`` in each scenario, None where there is no current."""
        if not all((values > 0).any() for values in self.values.values()):
            return None
        columns = {slot: self.columns(slot, T) for slot in self.chosen}
        output = currents(self.operation.circuit, self.quantities(T, columns))["I_out"]
        if not (np.isfinite(output) & (output > 0)).all():
            return None
        ratio = np.log(output / self.room.target.current(T))
        return np.asarray(ratio + self.output_settings()[:, None])

    def output_centred(self, T: Array) -> Point:
        """Return the point with an output knob set anew, each scenario in its middle."""
        indices = [i for i, knob in enumerate(self.room.knobs.each) if knob.slot is None]
        off = self.off(T)
        if not indices or off is None:
            return self
        middle = np.log((np.exp(off).max(axis=1) + np.exp(off).min(axis=1)) / 2)
        knob = self.room.knobs.each[indices[0]]
        settings = self.settings.copy()
        settings[1:, indices[0]] = _clipped(settings[1:, indices[0]] - middle[1:], knob)
        return replace(self, settings=settings)

    def without_idle(self, each: Array) -> Point:
        """Return the point without scenarios far from the worst; they come again if need be."""
        kept = each >= _IDLE * each.max()
        kept[0] = True
        return replace(self, points=self.points[kept], settings=self.settings[kept])

    def with_points(self, new: Array, T: Array) -> Point:
        """Return the point with more scenarios, the first knob set roughly right in them."""
        points = np.vstack([self.points, new])
        settings = np.vstack([self.settings, np.zeros((len(new), self.settings.shape[1]))])
        point = replace(self, points=points, settings=settings)
        if not self.room.knobs.each:
            return point
        for _ in range(3):
            local = point.linear(T)
            if local is None:
                return point
            off, _, knobs = local
            middle = (off.max(axis=1) + off.min(axis=1)) / 2 / knobs[0].mean(axis=1)
            settings = point.settings.copy()
            fresh = slice(len(self.points), None)
            knob = self.room.knobs.each[0]
            settings[fresh, 0] = _clipped(settings[fresh, 0] - middle[fresh], knob)
            point = replace(point, settings=settings)
        return point

    def linear(self, T: Array) -> tuple[Array, dict[str, Array], list[Array]] | None:
        """Return ln(I/I_target), its slopes by the coefficients' shares, and by each knob.

        Shapes (scenarios, n), slot -> (scenarios, n, parts), and (scenarios, n).
        """
        columns = {slot: self.columns(slot, T) for slot in self.chosen}
        quantities = self.quantities(T, columns)
        circuit = self.operation.circuit
        output = currents(circuit, quantities)["I_out"]
        if not (np.isfinite(output) & (output > 0)).all():
            return None
        off = np.log(output / self.room.target.current(T)) + self.output_settings()[:, None]
        by_quantity = sensitivities(circuit, quantities)
        slopes: dict[str, Array] = {}
        for slot, offer in self.chosen.items():
            total = columns[slot] @ self.values[slot]
            sign = 1 if offer.join == "series" else -1
            share = columns[slot] / total[..., None]
            slopes[slot] = sign * by_quantity[resistance_name(slot)][..., None] * share
        knobs = [self._by_knob(knob, T, off, by_quantity, slopes) for knob in self.room.knobs.each]
        return off, slopes, knobs

    def _by_knob(
        self,
        knob: Knob,
        T: Array,
        off: Array,
        by_quantity: Mapping[str, Array],
        slopes: Mapping[str, Array],
    ) -> Array:
        if knob.slot is None:
            return np.ones_like(off)
        if knob.material is None:
            return np.asarray(np.broadcast_to(by_quantity[resistance_name(knob.slot)], off.shape))
        if knob.slot not in self.chosen:
            share = share_of(self.operation.mixes[knob.slot], knob.material, self.die(T))
            return np.asarray(
                np.broadcast_to(by_quantity[resistance_name(knob.slot)] * share, off.shape)
            )
        names = [m.name for m in self.chosen[knob.slot].materials]
        if knob.material not in names:
            return np.zeros_like(off)
        k = names.index(knob.material)
        sign = 1 if self.chosen[knob.slot].join == "series" else -1
        return np.asarray(sign * slopes[knob.slot][:, :, k] * self.values[knob.slot][k])

    def worst(self, T: Array) -> list[Worst]:
        """Return the worst points of spread, to first order, that are not among the scenarios."""
        typical = replace(self, points=self.points[:1], settings=self.settings[:1])
        local = typical.linear(T)
        if local is None:
            return [Worst(np.inf, np.empty((0, self.points.shape[1])))]
        off, _, rows = local
        by_cause = self.room.causes.output_log_slopes(self.filled(), T)
        useful = [
            (row[0], knob.reach)
            for row, knob in zip(rows, self.room.knobs.each, strict=True)
            if np.abs(row).max() > 0
        ]
        reach = useful[0][1] if useful else (-np.inf, np.inf)
        rows_of = [row for row, _ in useful]
        found = worst_points(off[0], by_cause, rows_of, self.room.sigma, reach)
        return [
            each for each in found if len(each.points) and not is_known(self.points, each.points)
        ]

    def step(
        self, T: Array, trust: float, deviation: float, input_span: tuple[float, float] | None
    ) -> tuple[Point, float] | None:
        """Solve the program linearised here; return the new point and the objective it predicts."""
        local = self.linear(T)
        if local is None:
            return None
        off, slopes, knobs = local
        deviation = min(deviation, 0.9)
        unit = max(deviation, 1e-9)
        scales = {
            slot: float((self.columns(slot, T)[0] @ self.values[slot]).mean())
            for slot in self.chosen
        }
        blocks = [slopes[slot] * scales[slot] for slot in self.chosen]
        log_input = self._log_input(input_span)
        if log_input is not None:
            by_input = self.filled().sensitivities(T)["I_given"]
            blocks.append(np.broadcast_to(by_input, off.shape)[..., None])
        design = np.concatenate(blocks, axis=-1)
        width = design.shape[-1] + len(self.points) * len(knobs) + 2
        matrix, sides = self._band_rows(off, design, knobs, deviation, unit)
        limits = self._trust_rows(T, scales, width)
        order = np.zeros((1, width))
        order[0, -2:] = 1, -1  # the worst is at least the typical
        matrix += [order, *limits, *(-limit for limit in limits)]
        sides += [np.zeros(1), *(np.full(len(each), trust) for each in limits)]
        sides += [np.full(len(each), 0.9 * trust) for each in limits]
        if self.room.is_limited:
            row, side = self._area_row(scales)
            matrix.append(np.append(row, np.zeros(width - len(row)))[None, :])
            sides.append(np.array([side]))
        cost = np.zeros(width)
        cost[-2:] = TYPICAL_WEIGHT, 1
        answer = linprog(
            cost,
            A_ub=np.vstack(matrix),
            b_ub=np.concatenate(sides),
            bounds=self._bounds(scales, log_input, input_span, trust),
            method="highs",
        )
        if answer.status != 0:
            return None
        return self._moved(answer.x, scales, log_input), float(answer.fun) * unit

    def _log_input(self, input_span: tuple[float, float] | None) -> float | None:
        """Return the logarithm of an input current that is free, None where it is not."""
        current = self.operation.choices.input_current
        return None if input_span is None or current is None else float(np.log(current))

    def _band_rows(
        self, off: Array, design: Array, knobs: list[Array], deviation: float, unit: float
    ) -> tuple[list[Array], list[Array]]:
        """Return ``|I/I_target - 1| <= e`` in each scenario, with ln(1 +- e) linearised."""
        K, n, n_design = design.shape
        rows = np.zeros((K, n, n_design + K * len(knobs) + 2))
        rows[:, :, :n_design] = design
        every = np.arange(K)
        for index, row in enumerate(knobs):
            rows[every, :, n_design + every * len(knobs) + index] = row
        rows /= unit
        matrix, sides = [], []
        for sign in (1, -1):
            block = sign * rows
            slope = 1 / (1 + sign * deviation)
            block[0, :, -2] = -slope
            block[1:, :, -1] = -slope
            edge = sign * np.log1p(sign * deviation) - deviation * slope
            matrix.append(block.reshape(K * n, -1))
            sides.append(((edge - sign * off) / unit).ravel())
        return matrix, sides

    def _trust_rows(self, T: Array, scales: Mapping[str, float], width: int) -> list[Array]:
        """Return, for each slot, the relative change of the whole at a few temperatures."""
        found, at = [], 0
        for slot, values in self.values.items():
            columns = self.columns(slot, T[:: max(1, len(T) // 6)])[0]
            rows = np.zeros((len(columns), width))
            rows[:, at : at + len(values)] = columns / (columns @ values)[:, None] * scales[slot]
            found.append(rows)
            at += len(values)
        return found

    def _bounds(
        self,
        scales: Mapping[str, float],
        log_input: float | None,
        input_span: tuple[float, float] | None,
        trust: float,
    ) -> list[tuple[float | None, float | None]]:
        bounds: list[tuple[float | None, float | None]] = [
            (-value / scales[slot], None)
            for slot, values in self.values.items()
            for value in values.tolist()
        ]
        if log_input is not None and input_span is not None:
            low, high = np.log(input_span) - log_input
            bounds.append((max(low, -trust), min(high, trust)))
        for k, settings in enumerate(self.settings.tolist()):
            for here, knob in zip(settings, self.room.knobs.each, strict=True):
                ends = (_log(knob.low), _log(knob.high)) if k else (0.0, 0.0)
                low_end, high_end = (None if end is None else end - here for end in ends)
                bounds.append((low_end, high_end))
        return [*bounds, (0, None), (0, None)]

    def _area_row(self, scales: Mapping[str, float]) -> tuple[Array, float]:
        """Return the limit on the area over the changes of the coefficients, in parts of it."""
        rows, side = [], 1.0
        for slot, offer in self.chosen.items():
            now = self.values[slot]
            about = np.maximum(now, 1e-3 * now.max())
            row, constant = self.room.area_row(offer, about)
            rows.append(row * scales[slot])
            side += constant - 1.0 - float(row @ now)
        return np.concatenate(rows), side

    def _moved(self, x: Array, scales: Mapping[str, float], log_input: float | None) -> Point:
        values, at = {}, 0
        middle = np.array([self.operation.study.range.reference])
        for slot, old in self.values.items():
            unit = self.chosen[slot].columns(middle)[0]
            new = old + scales[slot] * x[at : at + len(old)]
            values[slot] = np.where(new * unit > _LEAST_SHARE * scales[slot], new, 0.0)
            at += len(old)
        operation = self.operation
        if log_input is not None:
            current = float(np.exp(log_input + x[at]))
            choices = replace(operation.choices, input_current=current)
            operation = replace(operation, choices=choices)
            at += 1
        settings = self.settings + x[at : at + self.settings.size].reshape(self.settings.shape)
        return replace(self, operation=operation, values=values, settings=settings)


def _log(scale: float) -> float | None:
    if scale in {0, np.inf}:
        return None
    return float(np.log(scale))


def _clipped(settings: Array, knob: Knob) -> Array:
    with np.errstate(divide="ignore"):
        return np.clip(settings, np.log(knob.low), np.log(knob.high))
