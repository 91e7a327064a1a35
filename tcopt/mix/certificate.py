"""Why no mix does better: the multipliers of a linear program as a proof.

Any mix ``C c`` (c >= 0) inside the band at e satisfies ``y_high (H(e) - C c) >= 0``
and ``y_low (C c - L(e)) >= 0`` for all multipliers y >= 0. If, besides,
``(y_high - y_low) C >= 0``, their sum says ``y_high H(e) - y_low L(e) >= 0``. So an
e at which that is negative is out of reach of every mix, whatever the
linearisation was that the multipliers came from (weak duality; Chvatal 1983,
*Linear Programming*, chapter 5).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from tcopt.arrays import Array
from tcopt.mix.band import Band

__all__ = ["Certificate"]

_MARGINS = (1e-7, 1e-6, 3e-6, 1e-5, 3e-5, 1e-4, 1e-3, 1e-2, 0.1, 0.5)
_INPUTS = 9


@dataclass(frozen=True)
class Certificate:
    """Multipliers of the edges of a band.

    Attributes
    ----------
    nodes : temperatures [K], shape (n,)
    columns : what one unit of each part adds there, shape (n, parts)
    high, low : multipliers of the upper and of the lower edge, not negative, shape (n,)
    """

    nodes: Array
    columns: Array
    high: Array
    low: Array

    def bound(self, band: Band, join: str, guess: float) -> float:
        """Return an e below which no mix keeps the output [1], as close to a guess as it holds.

        Over a free input it holds for every input of the band's span: between
        nine of them the sum of the edges may exceed its larger neighbour by no
        more than twice what a parabola through three would.
        """
        if not ((self.high > 0) | (self.low > 0)).any():
            return 0.0  # a match: nothing stands in the way of e = 0
        for margin in _MARGINS:
            e = guess * (1 - margin)
            if self._largest(band, join, e) < 0:
                return e
        return 0.0

    def _largest(self, band: Band, join: str, e: float) -> float:
        """Return the largest that the sum of the edges can be at e, over the input's span."""
        if band.input_span is None:
            return float(self._sums(band, join, e, 0.0)[0])
        sums = self._sums(band, join, e, np.linspace(*band.shifts, _INPUTS)[:, None])
        if not np.isfinite(sums).all():
            return np.inf
        return float(sums.max() + np.abs(np.diff(sums, 2)).max() / 4)

    def _sums(self, band: Band, join: str, e: float, shifts: Array | float) -> Array:
        used = (self.high > 0) | (self.low > 0)
        high_by, low_by = self.high[used], self.low[used]
        columns = self.columns[used]
        low, high = band.pair(self.nodes[used], join, e, shifts)
        low, high = np.atleast_2d(low, high)
        with np.errstate(invalid="ignore"):
            weighed = np.where(high_by > 0, high_by * high, 0)
            weighed -= np.where(low_by > 0, low_by * low, 0)
            # What rounding in the solver leaves of (y_high - y_low) C < 0 may be filled with as
            # much of that part as the upper edge has room for.
            short = np.maximum(0, -(high_by - low_by) @ columns)
            room = (high[:, :, None] / columns).min(axis=1)
            sums = weighed.sum(axis=-1) + np.where(short > 0, short * room, 0).sum(axis=-1)
        return np.where(np.isnan(sums), np.inf, sums)
