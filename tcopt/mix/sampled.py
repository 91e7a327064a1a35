"""What silicon makes of a design of a search: a few figures from parts drawn at random."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.assess import Assessment, Verdict
from tcopt.operation import Operation
from tcopt.spread.figures import FIGURES
from tcopt.spread.plan import Plan
from tcopt.spread.sample import block_count, points
from tcopt.spread.trim import Flags

if TYPE_CHECKING:
    from tcopt.design import Bound

__all__ = ["Compared", "SiliconFigures", "SiliconResult", "silicon_figures"]

_MOST_PARTS = 8192


@dataclass(frozen=True, slots=True)
class SiliconFigures:
    """A design over the parts of a factory, trimmed if the study has a trim.

    Attributes
    ----------
    parts : how many were drawn
    box_ppm_per_K : the residual's box drift that the study's yield, a share of the parts, keeps to
    median_box_ppm_per_K : half of the parts stay within it
    untrimmed_box_ppm_per_K : the same before the trim; None without a trim
    deviation_ppm : the same share's of ``max |I/I_target - 1|``
    spread : one standard deviation of the current at the reference, untrimmed, over its mean [1]
    beyond_trim : share of the parts that the trim cannot reach [1]; None without a trim
    limit : the study's limit against the quantile of its figure, or None
    """

    parts: int
    box_ppm_per_K: float
    median_box_ppm_per_K: float
    untrimmed_box_ppm_per_K: float | None
    deviation_ppm: float
    spread: float
    beyond_trim: float | None
    limit: Verdict | None


@dataclass(frozen=True)
class Compared:
    """A design shown for comparison, with what silicon makes of it."""

    found: Assessment
    silicon: SiliconFigures


@dataclass(frozen=True)
class SiliconResult:
    """What a search for silicon adds to its answer.

    Attributes
    ----------
    sigma : how many standard deviations out the scenarios of the program lay
    trimmed : whether the study has a trim. Without one nothing mends the absolute value, and
        the search compared the shape of the drift alone: the spread of the value stands apart
    figures : of each design of the result
    bound : deviation of the worst scenario that no mix of the menu falls below
    paper : the best design without spread
    single : the best single material, in each slot
    causes : what varied, in words
    quantile : share of the parts that stays within the figures, the study's yield [1]
    """

    sigma: float
    trimmed: bool
    figures: tuple[SiliconFigures, ...]
    bound: Bound
    paper: Compared
    single: Compared | None
    causes: tuple[str, ...]
    quantile: float


def silicon_figures(found: Assessment) -> SiliconFigures:
    """Draw parts of a design, trim them, and return the figures.

    As many as the study's table [spread] says, 8192 at the most.
    """
    operation: Operation = found.operation
    study = operation.study
    spread = study.spread.model_copy(update={"samples": min(study.spread.samples, _MOST_PARTS)})
    plan = Plan(study.model_copy(update={"spread": spread}), operation.choices, operation.mixes)
    variates = len(plan.variation.variates)
    blocks: list[Array] = []
    beyond: list[Flags] = []
    for number in range(block_count(spread.samples)):
        unit = points(spread.sampling, spread.seed, variates, spread.samples, number)
        made = plan.made(plan.variates_of(unit))
        blocks.append(made.figures)
        if made.settings:
            beyond.append(np.asarray(made.settings[-1].beyond.any(axis=1)))
    figures = np.concatenate(blocks, axis=1)
    # a part without a current misses every limit
    figures = np.where(np.isfinite(figures), figures, np.inf)
    last = dict(zip(FIGURES, figures[-1].T, strict=True))
    current = figures[0, :, FIGURES.index("current")]
    current = current[np.isfinite(current)]
    box = last["residual_box"] * 1e6
    share = spread.wanted_yield
    made_figures = SiliconFigures(
        parts=figures.shape[1],
        box_ppm_per_K=_quantile(box, share),
        median_box_ppm_per_K=_quantile(box, 0.5),
        untrimmed_box_ppm_per_K=_quantile(1e6 * figures[0, :, FIGURES.index("residual_box")], share)
        if beyond
        else None,
        deviation_ppm=_quantile(last["deviation"] * 1e6, share),
        spread=float(current.std() / current.mean()),
        beyond_trim=float(np.concatenate(beyond).mean()) if beyond else None,
        limit=None,
    )
    if found.limit is None:
        return made_figures
    value = float(getattr(made_figures, found.limit.figure))
    verdict = replace(found.limit, value=value, met=value <= found.limit.bound)
    return replace(made_figures, limit=verdict)


def _quantile(values: Array, share: float) -> float:
    """Return a quantile; a value that was drawn, since between infinities there is no line."""
    return float(np.quantile(values, share, method="higher"))
