"""What `spread` found, as CSV tables."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.show.csv import csv_table
from tcopt.show.spread_words import FIGURE, corner_words
from tcopt.spread.figures import FIGURES
from tcopt.spread.plan import FAN_PARTS
from tcopt.spread.result import LEVELS

if TYPE_CHECKING:
    from tcopt.spread.result import SpreadResult

__all__ = ["causes_csv", "corners_csv", "fan_csv", "parts_csv", "quantiles_csv"]


def _heading(name: str) -> str:
    shown = FIGURE[name]
    return f"{shown.words} [{shown.unit}]"


def quantiles_csv(result: SpreadResult) -> str:
    """Return mean, standard deviation and quantiles of each figure at each stage."""
    heading = ["stage", "figure", "unit", "as stated", "mean", "standard deviation"]
    heading += [f"quantile {100 * level:g} %" for level in LEVELS]
    rows = []
    for index, stage in enumerate(result.stages):
        for k, name in enumerate(FIGURES):
            shown = FIGURE[name]
            values = [result.corners.typical[index, k], stage.mean[name], stage.deviation[name]]
            values += stage.quantiles[name].tolist()
            numbers = [shown.factor * float(value) for value in values]
            rows.append([stage.name, shown.words, shown.unit, *numbers])
    return csv_table(heading, rows)


def causes_csv(result: SpreadResult) -> str:
    """Return each variate's share of each figure's variance, at each stage."""
    heading = ["stage", "cause", "kind", *(f"{FIGURE[name].words} [1]" for name in FIGURES)]
    rows = []
    for stage in result.stages:
        share = {
            (cause.variate.name, name): cause.share
            for name, causes in stage.causes.items()
            for cause in causes
        }
        for cause in stage.causes.get(result.judged, ()):
            variate = cause.variate
            shares = [share[variate.name, name] for name in FIGURES]
            rows.append([stage.name, variate.name, variate.kind, *shares])
    return csv_table(heading, rows)


def corners_csv(result: SpreadResult) -> str:
    """Return the figures at each corner and stage, the worst last."""
    heading = ["stage", "corner", *map(_heading, FIGURES)]
    rows: list[list[object]] = []
    sigma = f"{result.corners.sigma:g} sigma: "
    for index, stage in enumerate(result.stages):
        singles = [corner for pair in result.corners.single for corner in pair]
        for corner in (*singles, result.corners.worst[index]):
            words = sigma + corner_words(corner.signs)
            rows.append([stage.name, words, *_row(corner.figures[index].tolist())])
    return csv_table(heading, rows)


def fan_csv(result: SpreadResult) -> str:
    """Return the bands of the current against temperature at each stage."""
    heading = ["stage", "temperature [K]", *(f"current at {100 * q:g} % [A]" for q in LEVELS)]
    rows = []
    for stage in result.stages:
        columns = (stage.fan.temperature.tolist(), *stage.fan.quantiles.tolist())
        rows += [[stage.name, *values] for values in zip(*columns, strict=True)]
    return csv_table(heading, rows)


def parts_csv(result: SpreadResult) -> str:
    """Return the figures, and the scales that were set, of the first parts at each stage."""
    most = len(result.stages) - 1
    heading = ["part", "stage", *map(_heading, FIGURES)]
    heading += [f"scale {number + 1} [1]" for number in range(most)]
    rows: list[list[object]] = []
    for part in range(min(result.sample.drawn, FAN_PARTS)):
        for index, stage in enumerate(result.stages):
            scales: list[object] = [None] * most
            if index:
                found = result.sample.settings[index - 1].scale[part].tolist()
                scales[: len(found)] = found
            rows.append(
                [part, stage.name, *_row(result.sample.figures[index, part].tolist()), *scales]
            )
    return csv_table(heading, rows)


def _row(values: list[float]) -> list[float]:
    return [FIGURE[name].factor * value for name, value in zip(FIGURES, values, strict=True)]
