"""Which variate makes a figure vary, and how much of its variance.

The share of a variate alone is the variance of the figure's mean within slices of
the variate, over its whole variance: the correlation ratio (first-order index of
Sobol), from the very parts that were drawn; see Plischke, Borgonovo, Smith, "Global
sensitivity measures from given data", Eur. J. Oper. Res. 226 (2013). It needs no
law to be linear: a box figure grows to either side of a matched slope. The straight
part is taken whole, the rest slice by slice. What scatter within slices would feign
with independent parts is taken off, as in the adjusted coefficient of determination;
a Sobol sequence fills each slice evenly in the other variates, so there it is not.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.special import ndtri

from tcopt.arrays import Array
from tcopt.spread.figures import FIGURES
from tcopt.spread.plan import BINS, Sums
from tcopt.spread.variation import Variate

__all__ = ["FEWEST", "Cause", "causes_of"]

FEWEST = 256
"""Parts below which no causes are told apart."""
_PARTS_PER_SLICE = 64
_FEWEST_SLICES = 16


@dataclass(frozen=True, slots=True)
class Cause:
    """A variate and its share of a figure's variance, by itself [1]."""

    variate: Variate
    share: float


def causes_of(
    sums: Sums, figures: Array, variates: Sequence[Variate], *, independent: bool
) -> tuple[dict[str, tuple[Cause, ...]], ...]:
    """Return the causes of each figure, largest first, for each stage; () with too few parts.

    The shares of a figure add up to less than one by what variates do only together.

    Parameters
    ----------
    sums : by variate and slice, of the solved parts
    figures : of all parts, shape (stages, parts, figures)
    variates : in the order of the sums
    independent : whether the parts are, or are spread more evenly than that
    """
    solved = figures[:, np.isfinite(figures).all(axis=(0, 2))]
    parts = solved.shape[1]
    if parts < FEWEST:
        return ()
    slices = _FEWEST_SLICES
    while slices < BINS and parts >= 2 * slices * _PARTS_PER_SLICE:
        slices *= 2
    merge = BINS // slices
    count = sums.count.reshape(len(variates), slices, merge).sum(axis=-1)
    total = sums.total.reshape(*sums.total.shape[:3], slices, merge).sum(axis=-1)
    mean = total.sum(axis=-1, keepdims=True) / parts
    with np.errstate(divide="ignore", invalid="ignore"):
        above = np.where(count > 0, total / count - mean, 0.0)
    middle = _middles(slices)
    slope = (count * above * middle).sum(axis=-1) / (count * middle**2).sum(axis=-1)
    bent = (count * (above - slope[..., None] * middle) ** 2).sum(axis=-1) / parts
    between = slope**2 + bent
    whole = solved.var(axis=1)[:, :, None]
    with np.errstate(divide="ignore", invalid="ignore"):
        ratio = np.where(whole > 0, between / whole, 0.0)
    if independent:
        ratio = 1 - (1 - ratio) * (parts - 1) / (parts - slices)
    share = np.clip(ratio, 0, 1)
    return tuple(
        {
            name: tuple(Cause(variates[k], float(row[k])) for k in np.argsort(-row, kind="stable"))
            for name, row in zip(FIGURES, stage, strict=True)
        }
        for stage in share
    )


def _middles(slices: int) -> Array:
    """Return the mean of a standard normal variate within slices of equal probability."""
    edges = ndtri(np.linspace(0, 1, slices + 1))
    density = np.exp(-(edges**2) / 2) / np.sqrt(2 * np.pi)
    return np.asarray(slices * (density[:-1] - density[1:]))
