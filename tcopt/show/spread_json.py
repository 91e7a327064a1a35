"""What `spread` found, as a document."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.show.json import (
    Document,
    choices_document,
    limit_document,
    mix_document,
    study_heading,
)
from tcopt.show.spread_words import FIGURE
from tcopt.spread.figures import FIGURES
from tcopt.spread.result import LEVELS

if TYPE_CHECKING:
    from tcopt.spread.corners import Corner
    from tcopt.spread.result import SpreadResult, Stage, TrimEffect

__all__ = ["spread_document"]

_SLICES = 60
_ALIKE = 1e-9
"""Relative width up to which a figure of all parts is one value and rounding."""


def spread_document(result: SpreadResult) -> Document:
    """Return quantiles, yield, causes, corners and trim; a figure's key carries its unit."""
    spread, sample = result.study.spread, result.sample
    return {
        **study_heading(result.study),
        "resistors": {slot: mix_document(mix) for slot, mix in result.operation.mixes.items()},
        **choices_document(result.operation),
        "samples": {
            "wanted": sample.wanted,
            "drawn": sample.drawn,
            "partial": result.partial,
            "without_current": result.unsolved,
            "sampling": spread.sampling,
            "seed": spread.seed,
        },
        "wanted_yield": spread.wanted_yield,
        "judged": FIGURE[result.judged].key,
        "limit": result.limit and limit_document(result.limit),
        "quantile_levels": list(LEVELS),
        "as_stated": _row(result.corners.typical[0]),
        "stages": [_stage(result, index) for index in range(len(result.stages))],
        "corners": {
            "sigma": result.corners.sigma,
            "single": [
                {
                    "name": up.signs[0][0].name,
                    "kind": up.signs[0][0].kind,
                    "up": _stages(result, up),
                    "down": _stages(result, down),
                }
                for up, down in result.corners.single
            ],
            "worst": [
                {
                    "stage": stage.name,
                    "signs": [{"name": each.name, "sign": sign} for each, sign in worst.signs],
                    **_row(worst.figures[index]),
                }
                for index, (stage, worst) in enumerate(
                    zip(result.stages, result.corners.worst, strict=True)
                )
            ],
            "not_combined": result.corners.left_out,
        },
        "missing": list(result.missing),
        "warnings": list(result.warnings),
    }


def _row(values: Array) -> Document:
    return {
        FIGURE[name].key: FIGURE[name].factor * value
        for name, value in zip(FIGURES, values.tolist(), strict=True)
    }


def _stages(result: SpreadResult, corner: Corner) -> Document:
    return {stage.name: _row(row) for stage, row in zip(result.stages, corner.figures, strict=True)}


def _stage(result: SpreadResult, index: int) -> Document:
    stage = result.stages[index]
    passed = stage.passed
    return {
        "name": stage.name,
        "figures": {
            shown.key: {
                "mean": shown.factor * stage.mean[name],
                "standard_deviation": shown.factor * stage.deviation[name],
                "quantiles": (shown.factor * stage.quantiles[name]).tolist(),
            }
            for name, shown in FIGURE.items()
        },
        "judged_quantile": FIGURE[result.judged].factor * result.judged_quantile[index],
        "yield": passed
        and {
            "passed": passed.passed,
            "drawn": passed.drawn,
            "share": passed.share,
            "low": passed.low,
            "high": passed.high,
        },
        "rank_correlation": {
            FIGURE[name].key: {
                FIGURE[other].key: value for other, value in zip(FIGURES, row, strict=True)
            }
            for name, row in zip(FIGURES, stage.correlation.tolist(), strict=True)
        },
        "causes": {
            FIGURE[name].key: [
                {"name": c.variate.name, "kind": c.variate.kind, "share": c.share} for c in causes
            ]
            for name, causes in stage.causes.items()
        },
        "trim": [_trim(effect) for effect in stage.trim],
        "slope_change_ppm_per_K": {
            "mean": 1e6 * stage.slope_change[0],
            "standard_deviation": 1e6 * stage.slope_change[1],
        },
        "histograms": _histograms(result, index),
        "fan": _fan(stage),
    }


def _trim(effect: TrimEffect) -> Document:
    insertion = effect.insertion
    return {
        "temperature_K": insertion.temperature,
        "scales": insertion.scales,
        "material": insertion.material,
        "range": insertion.reach,
        "step": insertion.increment,
        "beyond_range": effect.beyond,
        "codes" if insertion.codes else "scales_set": [list(code) for code in effect.codes],
        "slope_per_percent_ppm_per_K": 1e6 * effect.slope_per_percent,
    }


def _histograms(result: SpreadResult, index: int) -> Document:
    figures = result.sample.figures[index]
    figures = figures[np.isfinite(figures).all(axis=1)]
    found: Document = {}
    for k, name in enumerate(FIGURES):
        shown = FIGURE[name]
        values = shown.factor * figures[:, k]
        counts, edges = np.histogram(values, _SLICES, _ends(values))
        found[shown.key] = {"edges": edges.tolist(), "counts": counts.tolist()}
    return found


def _ends(values: Array) -> tuple[float, float]:
    """Return where slices begin and end; a perfect trim leaves no room for any in between."""
    if not len(values):
        return 0.0, 1.0
    low, high = float(values.min()), float(values.max())
    least = _ALIKE * max(abs(low), abs(high))
    return (low, high) if high - low > least else (low - least, high + least)


def _fan(stage: Stage) -> Document:
    return {
        "parts": stage.fan.parts,
        "temperature_K": stage.fan.temperature.tolist(),
        "current_A": stage.fan.quantiles.tolist(),
    }
