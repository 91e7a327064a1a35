"""`spread`: draw a finished design's parts and say what is to be expected of them."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.assess import Verdict, require_supply
from tcopt.check import finished_operation
from tcopt.errors import InputError, NoSolutionError
from tcopt.operation import Operation
from tcopt.spread.causes import Cause, causes_of
from tcopt.spread.corners import corners_of
from tcopt.spread.crews import Crew, alone
from tcopt.spread.engine import Sample, draw
from tcopt.spread.figures import FIGURES
from tcopt.spread.plan import Plan
from tcopt.spread.result import LEVELS, Fan, SpreadResult, Stage, TrimEffect
from tcopt.spread.sample import SOBOL
from tcopt.spread.traps import warnings_for
from tcopt.spread.trim import Flags, output_of, require_reach
from tcopt.spread.variation import TEST
from tcopt.spread.yields import yield_of

if TYPE_CHECKING:
    from tcopt.study import Insertion, Study

__all__ = ["STAGES", "asked", "spread", "spread_of"]

STAGES = ("untrimmed", "one insertion", "two insertions")
_FIGURE_OF_LIMIT = {"box": "residual_box", "deviation": "deviation"}
_KEY = {"residual_box": "box_ppm_per_K", "deviation": "deviation_ppm"}
_LAST_SLICES = 41


def asked(study: Study, *, samples: int | None = None, seed: int | None = None) -> Study:
    """Return a study with other samples or another seed, where they are given.

    Raises
    ------
    InputError
        If they are none that a study may have.
    """
    from pydantic import ValidationError  # noqa: PLC0415

    from tcopt.study import Spread  # noqa: PLC0415  this layer lies below the gate
    from tcopt.study.gate import refused_input  # noqa: PLC0415

    wanted = {"samples": samples, "seed": seed}
    changes = {name: value for name, value in wanted.items() if value is not None}
    given = {name: getattr(study.spread, name) for name in study.spread.model_fields_set}
    try:
        made = Spread.model_validate({**given, **changes})
    except ValidationError as error:
        raise refused_input("command line", error) from None
    return study.model_copy(update={"spread": made})


def spread(
    study: Study, crew: Crew | None = None, progress: Callable[[int, int], None] | None = None
) -> SpreadResult:
    """Return what silicon makes of a finished design.

    The target stays as it is stated: with shape 'over material' the load that it is meant
    for does not move with the part.

    Parameters
    ----------
    study : a finished design, with spread in its process or in its own table
    crew : who works; this process by default
    progress : called with parts done and parts in all

    Raises
    ------
    InputError
        If the study is not finished, nothing in it varies, or its trim cannot work.
    NoSolutionError
        If the design as stated has no current somewhere in the range.
    """
    return spread_of(finished_operation(study), crew, progress)


def spread_of(
    operation: Operation,
    crew: Crew | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> SpreadResult:
    """Return what silicon makes of a design with a mix in every slot; see `spread`."""
    study = operation.study
    plan = Plan(study, operation.choices, operation.mixes)
    variates = plan.variation.variates
    if not any(variate.kind != TEST for variate in variates):
        raise InputError(
            f"{study.path}: found nothing that varies; accepted: a process with a spread for "
            "materials or transistors in use, or a table [spread] with one for supply, "
            "input_current, reference_voltage or mirror_ratio"
        )
    require_supply(study, operation.choices.area_ratio)
    operation.output(plan.frame.temperature)  # refuses a design without a current somewhere
    if plan.insertions:
        require_reach(plan.variation, plan.insertions, plan.aims)
    sample = draw(plan, crew or alone(), progress)
    solved: Flags = np.asarray(np.isfinite(sample.figures).all(axis=(0, 2)))
    if not solved.any():
        raise NoSolutionError(
            f"{study.path}: found no part with a current over the whole range; accepted: spreads "
            "that leave some"
        )
    kind = study.target.limit.kind if study.target.limit else "box"
    judged = _FIGURE_OF_LIMIT[kind]
    quantile = tuple(
        _within(stage[:, FIGURES.index(judged)], study.spread.wanted_yield)
        for stage in sample.figures
    )
    causes = causes_of(
        sample.sums, sample.figures, variates, independent=study.spread.sampling != SOBOL
    )
    stages = tuple(
        _stage(plan, sample, solved, index, causes[index] if causes else {}, judged)
        for index in range(plan.stages)
    )
    unsolved = int((~solved).sum())
    corners = corners_of(plan, judged)
    typical = float(corners.typical[-1, FIGURES.index(judged)])
    return SpreadResult(
        study=study,
        operation=operation,
        sample=sample,
        stages=stages,
        judged=judged,
        judged_quantile=quantile,
        limit=_verdict(study, judged, quantile[-1]),
        corners=corners,
        unsolved=unsolved,
        missing=plan.variation.missing,
        warnings=warnings_for(study, sample, stages[-1].trim, (typical, quantile[-1])),
    )


def _within(values: Array, share: float) -> float:
    """Return the smallest value that at least this share of the parts does not exceed."""
    known = np.where(np.isfinite(values), values, np.inf)
    return float(np.quantile(known, share, method="inverted_cdf"))


def _verdict(study: Study, judged: str, value: float) -> Verdict | None:
    limit = study.target.limit
    if limit is None:
        return None
    return Verdict(value <= limit.value, _KEY[judged], 1e6 * value, 1e6 * limit.value)


def _stage(
    plan: Plan,
    sample: Sample,
    solved: Flags,
    index: int,
    causes: dict[str, tuple[Cause, ...]],
    judged: str,
) -> Stage:
    figures = sample.figures[index][solved]
    slope = FIGURES.index("slope")
    change = figures[:, slope] - sample.figures[0][solved][:, slope]
    quantiles = np.quantile(figures, LEVELS, axis=0)
    limit = plan.study.target.limit
    passed = None
    if limit is not None:
        good = figures[:, FIGURES.index(judged)] <= limit.value
        passed = yield_of(int(good.sum()), sample.drawn)
    curves = sample.current[index]
    curves = curves[np.isfinite(curves).all(axis=1)]
    return Stage(
        name=STAGES[index],
        quantiles={name: quantiles[:, k] for k, name in enumerate(FIGURES)},
        mean=dict(zip(FIGURES, figures.mean(axis=0).tolist(), strict=True)),
        deviation=dict(zip(FIGURES, figures.std(axis=0).tolist(), strict=True)),
        correlation=_rank_correlation(figures),
        passed=passed,
        causes=causes,
        fan=_fan(plan, curves),
        trim=tuple(_effects(plan, sample, index)),
        slope_change=(float(change.mean()), float(change.std())),
    )


def _fan(plan: Plan, curves: Array) -> Fan:
    grid = plan.frame.grid
    if not len(curves):
        return Fan(grid, np.full((len(LEVELS), len(grid)), np.nan), 0)
    return Fan(grid, np.quantile(curves, LEVELS, axis=0), len(curves))


def _rank_correlation(figures: Array) -> Array:
    """Return Spearman's correlation of the columns; ties, which floats hardly have, in order."""
    ranks = np.empty_like(figures)
    order = np.arange(len(figures), dtype=float)
    for column in range(figures.shape[1]):
        ranks[np.argsort(figures[:, column], kind="stable"), column] = order
    if len(figures) < 2:
        return np.eye(figures.shape[1])
    return np.asarray(np.corrcoef(ranks, rowvar=False))


def _effects(plan: Plan, sample: Sample, index: int) -> Iterator[TrimEffect]:
    if index == 0:
        return
    setting = sample.settings[index - 1]
    insertions = plan.insertions[:index]
    for k, insertion in enumerate(insertions):
        yield TrimEffect(
            insertion,
            float(setting.beyond[:, k].mean()),
            _codes(insertion, setting.scale[:, k]),
            _slope_per_percent(plan, insertions, k),
        )


def _codes(insertion: Insertion, scale: Array) -> tuple[tuple[float, int], ...]:
    if insertion.increment is not None:
        code = np.rint((scale - 1) / insertion.increment)
        values, counts = np.unique(code, return_counts=True)
    else:
        edges = np.linspace(1 - insertion.reach, 1 + insertion.reach, _LAST_SLICES + 1)
        counts = np.histogram(scale, edges)[0]
        values = (edges[1:] + edges[:-1]) / 2
    return tuple(zip(values.tolist(), counts.tolist(), strict=True))


def _slope_per_percent(plan: Plan, insertions: tuple[Insertion, ...], k: int) -> float:
    frame = plan.frame
    scale = np.ones((2, len(insertions)))
    scale[:, k] = 0.99, 1.01
    z = np.zeros((2, len(plan.variation.variates)))
    about = frame.temperature[-2:]
    current = output_of(plan.variation, z, about, insertions, scale)
    below, above = np.log(current[:, 1] / current[:, 0]) / (about[1] - about[0])
    return float((above - below) / 2)
