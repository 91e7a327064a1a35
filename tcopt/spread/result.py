"""What `spread` answers."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from tcopt.arrays import Array
from tcopt.assess import Verdict
from tcopt.spread.causes import Cause
from tcopt.spread.corners import Corners
from tcopt.spread.engine import Sample
from tcopt.spread.yields import Yield

if TYPE_CHECKING:
    from tcopt.operation import Operation
    from tcopt.study import Insertion, Study

__all__ = ["LEVELS", "Fan", "SpreadResult", "Stage", "TrimEffect"]

LEVELS = (0.0015, 0.025, 0.16, 0.5, 0.84, 0.975, 0.997, 0.9985)
"""Quantiles that are reported [1]; 99.7 % of all parts lie between the first and the last."""


@dataclass(frozen=True)
class TrimEffect:
    """What one insertion does in a stage.

    Attributes
    ----------
    insertion : as in the study
    beyond : share of the parts that the range does not reach [1]
    codes : code (or scale, where it is continuous) and parts that got it, rising
    slope_per_percent : what 1 % more of the scale does to the slope of the design as
        stated [1/K]
    """

    insertion: Insertion
    beyond: float
    codes: tuple[tuple[float, int], ...]
    slope_per_percent: float


@dataclass(frozen=True)
class Fan:
    """Bands of the current against temperature.

    Attributes
    ----------
    temperature : [K], shape (61,)
    quantiles : at `LEVELS` [A], shape (levels, 61)
    parts : of how many parts
    """

    temperature: Array
    quantiles: Array
    parts: int


@dataclass(frozen=True)
class Stage:
    """All parts at one stage: untrimmed, or after one or two insertions.

    Attributes
    ----------
    name : in words
    quantiles : figure -> at `LEVELS`, shape (levels,); units as of `tcopt.spread.figures.FIGURES`
    mean, deviation : figure -> mean, and one standard deviation
    correlation : rank correlation (Spearman's) between the figures, in their order
    passed : yield against the limit; None without one
    causes : figure -> variates and their shares of its variance; empty with too few parts
    fan : bands of the current
    trim : what each insertion did; () where untrimmed
    slope_change : mean and one standard deviation of the change of slope by the trim [1/K]
    """

    name: str
    quantiles: Mapping[str, Array]
    mean: Mapping[str, float]
    deviation: Mapping[str, float]
    correlation: Array
    passed: Yield | None
    causes: Mapping[str, tuple[Cause, ...]]
    fan: Fan
    trim: tuple[TrimEffect, ...]
    slope_change: tuple[float, float]


@dataclass(frozen=True)
class SpreadResult:
    """What `spread` found.

    Attributes
    ----------
    study : what was asked
    operation : the design
    sample : all parts
    stages : untrimmed, then after each number of insertions
    judged : figure that a limit applies to, or the residual's box without one
    judged_quantile : in each stage, the value that the wanted share of parts stays within
    limit : the last stage's against the limit; None without one
    corners : parts on purpose
    unsolved : parts without a current somewhere in the range; they do not pass
    missing : what would vary, but for want of data does not
    warnings : traps, in plain words
    """

    study: Study
    operation: Operation
    sample: Sample
    stages: tuple[Stage, ...]
    judged: str
    judged_quantile: tuple[float, ...]
    limit: Verdict | None
    corners: Corners
    unsolved: int
    missing: tuple[str, ...]
    warnings: tuple[str, ...]

    @property
    def partial(self) -> bool:
        """Whether fewer parts were drawn than asked for."""
        return self.sample.drawn < self.sample.wanted
