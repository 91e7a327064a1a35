"""What every block of parts needs to know, made once from a design; and the work on one block."""

from __future__ import annotations

import pickle
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property, lru_cache
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.operation import Choices, Mix, Operation
from tcopt.spread.build import variation_of
from tcopt.spread.figures import FIGURES, GRID, Frame, figures_of
from tcopt.spread.sample import BLOCK, normals, points
from tcopt.spread.trim import Setting, behind, output_of, trimmed
from tcopt.spread.variation import Variation
from tcopt.targets import target_current

if TYPE_CHECKING:
    from tcopt.study import Insertion, Spread, Study

__all__ = ["BINS", "FAN_PARTS", "Block", "Made", "Plan", "Sums", "run_block"]

BINS = 64
"""Slices of equal probability into which each variate is cut to tell the causes apart."""
FAN_PARTS = 4 * BLOCK
"""Parts of which the whole curve is kept, for the bands of the fan."""


@dataclass(frozen=True)
class Made:
    """Parts, untrimmed and after each stage of the trim.

    Attributes
    ----------
    figures : shape (stages, parts, figures)
    current : over the grid [A], shape (stages, parts, 61)
    settings : of each stage after the first
    """

    figures: Array
    current: Array
    settings: tuple[Setting, ...]


@dataclass(frozen=True)
class Sums:
    """What tells causes apart, added up over parts: by variate and slice of it.

    Attributes
    ----------
    count : parts, shape (variates, slices)
    total : of the figures, shape (stages, figures, variates, slices)
    """

    count: Array
    total: Array


@dataclass(frozen=True)
class Block:
    """One block, reduced.

    Attributes
    ----------
    number : from 0
    figures, settings : as in `Made`
    sums : see there
    current : [A], shape (stages, parts, 61), of the first blocks alone
    """

    number: int
    figures: Array
    settings: tuple[Setting, ...]
    sums: Sums
    current: np.ndarray[tuple[int, ...], np.dtype[np.float32]] | None


@dataclass(frozen=True)
class Plan:
    """A finished design, and how its parts are drawn.

    Pickled it is study, choices, mixes and the order of the variates; the rest is made
    again at the other end.

    Attributes
    ----------
    study, choices, mixes : the design
    order : which variate has which coordinate of the points; None to find it out
    """

    study: Study
    choices: Choices
    mixes: Mapping[str, Mix]
    order: tuple[int, ...] | None = None

    def __reduce__(self) -> tuple[object, ...]:
        return Plan, (self.study, self.choices, dict(self.mixes), self.ranked)

    @property
    def spread(self) -> Spread:
        """The study's table of that name."""
        return self.study.spread

    @cached_property
    def operation(self) -> Operation:
        """The design at its temperatures."""
        return Operation(self.study, self.choices, self.mixes)

    @cached_property
    def variation(self) -> Variation:
        """What varies."""
        return variation_of(self.operation)

    @cached_property
    def frame(self) -> Frame:
        """Temperatures and target."""
        over = self.study.range
        target = target_current(self.study.target, over.reference)
        at = np.array([over.reference])
        return Frame(
            over.low,
            over.high,
            over.reference,
            target.current(np.linspace(over.low, over.high, GRID)),
            float(target.current(at)[0]),
            float(target.log_slope(at)[0]),
        )

    @property
    def insertions(self) -> tuple[Insertion, ...]:
        """Those of the study's trim."""
        return self.study.trim.insertions if self.study.trim else ()

    @cached_property
    def aims(self) -> Array:
        """What the design as stated gives at the temperature of each insertion [A]."""
        at = np.array([insertion.temperature for insertion in self.insertions])
        return self.operation.output(at) if len(at) else at

    @property
    def stages(self) -> int:
        """Untrimmed, and after one insertion, two."""
        return 1 + len(self.insertions)

    @cached_property
    def ranked(self) -> tuple[int, ...]:
        """Variates in order of what they do, by which the points' coordinates are given out.

        The first coordinates of a Sobol sequence are spread most evenly, also two by two, so
        they go to the largest shares in the variance of the current and of its slope, to
        first order, at any stage.
        """
        if self.order is not None:
            return self.order
        count = len(self.variation.variates)
        eye = np.eye(count)
        figures = self.made(np.vstack([eye, -eye])).figures
        linear = figures[:, :, [FIGURES.index("current"), FIGURES.index("slope")]]
        effect = np.nan_to_num((linear[:, :count] - linear[:, count:]) ** 2)
        whole = effect.sum(axis=1, keepdims=True)
        share = np.where(whole > 0, effect / np.where(whole > 0, whole, 1), 0).max(axis=(0, 2))
        return tuple(np.argsort(-share, kind="stable").tolist())

    def variates_of(self, unit: Array) -> Array:
        """Return the standard normal variates of points, both of shape (parts, variates)."""
        z = np.empty_like(unit)
        z[:, list(self.ranked)] = normals(unit)
        return z

    def made(self, z: Array) -> Made:
        """Return the parts of given variates, shape (parts, variates)."""
        T = self.frame.temperature
        current = [output_of(self.variation, z, T)]
        settings = []
        for count in range(1, self.stages):
            insertions = self.insertions[:count]
            setting = trimmed(self.variation, z, insertions, self.aims[:count])
            settings.append(setting)
            ratio = behind(insertions, setting.scale)
            if ratio is None:
                current.append(output_of(self.variation, z, T, insertions, setting.scale))
            else:
                current.append(current[0] * ratio)
        figures = np.stack([figures_of(self.frame, each) for each in current])
        return Made(figures, np.stack([each[:, :GRID] for each in current]), tuple(settings))

    def block(self, number: int) -> Block:
        """Return one block of the sample, reduced."""
        spread = self.spread
        unit = points(
            spread.sampling, spread.seed, len(self.variation.variates), spread.samples, number
        )
        made = self.made(self.variates_of(unit))
        keep = number < FAN_PARTS // BLOCK
        return Block(
            number,
            made.figures,
            made.settings,
            _sums(unit[:, np.argsort(self.ranked)], made.figures),
            made.current.astype(np.float32) if keep else None,
        )


def _sums(unit: Array, figures: Array) -> Sums:
    solved = np.isfinite(figures).all(axis=(0, 2))
    slices = np.minimum((unit[solved] * BINS).astype(np.intp), BINS - 1)
    values = figures[:, solved]
    variates = unit.shape[1]
    count = np.empty((variates, BINS))
    total = np.empty((len(figures), len(FIGURES), variates, BINS))
    for variate in range(variates):
        where = slices[:, variate]
        count[variate] = np.bincount(where, minlength=BINS)
        for stage, figure in np.ndindex(len(figures), len(FIGURES)):
            weights = values[stage, :, figure]
            total[stage, figure, variate] = np.bincount(where, weights, minlength=BINS)
    return Sums(count, total)


@lru_cache(maxsize=2)
def _unpacked(packed: bytes) -> Plan:
    plan: Plan = pickle.loads(packed)
    return plan


def run_block(packed: bytes, number: int) -> Block:
    """Return one block of a pickled plan: what a worker does."""
    return _unpacked(packed).block(number)
