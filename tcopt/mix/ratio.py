"""Drift against the ratio of a two-part mix: where the optimum lies, and how much it forgives."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from tcopt.arrays import Array
from tcopt.assess import Assessment, assess
from tcopt.errors import NoSolutionError
from tcopt.operation import Mix

__all__ = ["RatioSweep", "ratio_sweep"]

_COARSE = 41
_FINE = 41
_REACH = 0.08
"""Half-width in share of the finer grid around the chosen ratio."""


@dataclass(frozen=True)
class RatioSweep:
    """One two-part slot with the ratio of its parts moved at constant total.

    The total is the sum of the parts' values in series, of their inverses in
    parallel; the share is the first part's in it.

    Attributes
    ----------
    slot, join : which resistor, and how its parts are joined
    names : of the two materials, the one whose share is counted first
    figure : name of the figure of the residual drift: the limit's, or the box figure
    share : [1], shape (n,), rising
    drift : the figure at each share, nan where the circuit has no solution, shape (n,)
    chosen, chosen_drift : share and figure of the design
    best, best_drift : share and figure of the optimum
    bound : the figure up to which the tolerance reaches
    bound_is_limit : True if that is the study's limit; else it is twice the optimum's
    low, high : the shares about the optimum between which the figure stays within the bound
    """

    slot: str
    join: str
    names: tuple[str, str]
    figure: str
    share: Array
    drift: Array
    chosen: float
    chosen_drift: float
    best: float
    best_drift: float
    bound: float
    bound_is_limit: bool
    low: float
    high: float


def ratio_sweep(found: Assessment, slot: str) -> RatioSweep:
    """Sweep the ratio of a two-part slot, the circuit solved anew at each.

    Parameters
    ----------
    found : the design
    slot : one whose mix has two parts of different materials

    Raises
    ------
    ValueError
        If the slot's mix has not two parts.
    """
    from scipy.optimize import brentq, minimize_scalar  # noqa: PLC0415  slow to import

    operation = found.operation
    mix = operation.mixes[slot]
    if len(mix.parts) != 2:
        raise ValueError(f"{slot}: found {len(mix.parts)} parts; accepted: two")
    figure = found.limit.figure if found.limit else "box_ppm_per_K"
    weights = [part.value if mix.join == "series" else 1 / part.value for part in mix.parts]
    total = sum(weights)

    def drift(share: float) -> float:
        moved = _with_share(mix, share, total)
        try:
            left = assess(replace(operation, mixes={**operation.mixes, slot: moved}))
        except NoSolutionError:
            return np.nan
        return float(getattr(left.residual_drift, figure))

    chosen = weights[0] / total
    near = chosen + np.linspace(-_REACH, _REACH, _FINE)
    inside = near[(near > 0) & (near < 1)]
    shares = np.unique(np.concatenate([np.linspace(0, 1, _COARSE), inside, [chosen]]))
    values = np.array([drift(float(share)) for share in shares])
    k = int(np.nanargmin(values))
    around = (float(shares[max(0, k - 1)]), float(shares[min(len(shares) - 1, k + 1)]))
    exact = minimize_scalar(
        lambda share: np.nan_to_num(drift(share), nan=np.inf),
        bounds=around,
        method="bounded",
        options={"xatol": 1e-7},
    )
    best, least = float(shares[k]), float(values[k])
    if exact.fun < least:
        best, least = float(exact.x), float(exact.fun)
    is_limit = found.limit is not None and least <= found.limit.bound
    bound = found.limit.bound if found.limit is not None and is_limit else 2 * least

    def edge(outwards: Array, figures: Array) -> float:
        inner = best
        for share, value in zip(outwards, figures, strict=True):
            if np.isnan(value):
                return inner
            if value > bound:
                return float(brentq(lambda s: drift(s) - bound, inner, share, xtol=1e-7))
            inner = float(share)
        return inner

    above, below = shares > best, shares < best
    return RatioSweep(
        slot=slot,
        join=mix.join,
        names=(mix.parts[0].material.name, mix.parts[1].material.name),
        figure=figure,
        share=shares,
        drift=values,
        chosen=chosen,
        chosen_drift=float(values[np.searchsorted(shares, chosen)]),
        best=best,
        best_drift=least,
        bound=bound,
        bound_is_limit=is_limit,
        low=edge(shares[below][::-1], values[below][::-1]),
        high=edge(shares[above], values[above]),
    )


def _with_share(mix: Mix, share: float, total: float) -> Mix:
    """Return the mix with another ratio at the same total; a part without share is left out."""
    invert: Callable[[float], float] = (lambda w: w) if mix.join == "series" else (lambda w: 1 / w)
    parts = tuple(
        part.model_copy(update={"value": invert(weight * total)})
        for part, weight in zip(mix.parts, (share, 1 - share), strict=True)
        if weight > 0
    )
    return Mix(parts, mix.join)
