"""What one should know of a spread before believing its figures, in plain words."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from typing import TYPE_CHECKING

import numpy as np

from tcopt.spread.engine import Sample
from tcopt.spread.result import TrimEffect

if TYPE_CHECKING:
    from tcopt.study import Study

__all__ = ["warnings_for"]

_UNDONE = 5.0
"""Times the design's own figure at which spread, and not the design, rules."""
_FEW_BEYOND = 10
"""Parts beyond a quantile below which it is not to be trusted."""


def warnings_for(
    study: Study, sample: Sample, trim: Sequence[TrimEffect], judged: tuple[float, float]
) -> tuple[str, ...]:
    """Return every trap.

    Parameters
    ----------
    study, sample : what was asked and drawn
    trim : what the insertions of the last stage did
    judged : of the judged figure, the design's as stated, and the quantile of the parts
    """
    return (*_few(study, sample), *_beyond(study, trim), *_undone(study, judged))


def _few(study: Study, sample: Sample) -> Iterator[str]:
    if sample.drawn < sample.wanted:
        yield (
            f"partial: {sample.stopped} after {sample.drawn} of {sample.wanted} parts; every "
            "figure is of those alone"
        )
    unsolved = int((~np.isfinite(sample.figures).all(axis=(0, 2))).sum())
    if unsolved:
        yield (
            f"{unsolved} of {sample.drawn} parts have no current somewhere in the range; they do "
            "not pass, and the quantiles are of the others"
        )
    outermost = (1 - study.spread.wanted_yield) * sample.drawn
    if outermost < _FEW_BEYOND:
        yield (
            f"the {100 * study.spread.wanted_yield:g} % quantile rests on the outermost "
            f"{outermost:.2g} of {sample.drawn} parts; more samples would make it sure"
        )


def _beyond(study: Study, trim: Sequence[TrimEffect]) -> Iterator[str]:
    for effect in trim:
        if effect.beyond > 1 - study.spread.wanted_yield:
            yield (
                f"the trim of {effect.insertion.scales} reaches only "
                f"{100 * (1 - effect.beyond):.3g} % of the parts"
            )


def _undone(study: Study, judged: tuple[float, float]) -> Iterator[str]:
    typical, quantile = judged
    limit = study.target.limit
    if quantile > _UNDONE * typical and (limit is None or quantile > limit.value):
        unit = "ppm/K (box)" if limit is None or limit.kind == "box" else "ppm (deviation)"
        yield (
            f"spread undoes the design: {1e6 * typical:.4g} {unit} as stated, but "
            f"{1e6 * quantile:.4g} {unit} is what {100 * study.spread.wanted_yield:g} % of the "
            "parts stay within"
        )
