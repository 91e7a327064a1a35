"""Parts drawn: points in the unit cube, block by block, the same whoever draws which block."""

from __future__ import annotations

import warnings
from threading import local
from typing import Any

import numpy as np
from scipy.special import ndtri

# Slow to import, but here, so that a process that is copied from this one need not.
from scipy.stats import qmc

from tcopt.arrays import Array

__all__ = ["BLOCK", "SOBOL", "block_count", "normals", "points"]

BLOCK = 4096
"""Parts in a block. Fixed, since the last bit of a result may hang on how arrays are cut."""
SOBOL = "sobol"

_LAST_BITS = 30
"""Bits of a point of the sequence; half of the last keeps it off 0 and 1."""


def block_count(samples: int) -> int:
    """Return into how many blocks so many parts are cut; the last may be shorter."""
    return -(-samples // BLOCK)


def points(sampling: str, seed: int, variates: int, samples: int, block: int) -> Array:
    """Return one block of points inside the unit cube, shape (parts of the block, variates).

    Parameters
    ----------
    sampling : 'sobol', scrambled (Matousek 1998: linear matrices and a digital shift); or
        'plain', independent random numbers
    seed : the same seed gives the same points
    variates : dimensions
    samples : of the whole, which the last block fills up
    block : its number, from 0
    """
    start = block * BLOCK
    count = min(BLOCK, samples - start)
    if sampling != SOBOL:
        stream = np.random.default_rng([seed, block])
        return np.asarray(1 - stream.random((count, variates)))  # (0, 1], see normals
    drawn = _sequence(seed, variates).points(start, count)
    return np.asarray(drawn + 2.0 ** -(_LAST_BITS + 1))


def normals(unit: Array) -> Array:
    """Return standard normal variates for points of the unit cube, by the inverse distribution."""
    return np.asarray(ndtri(np.minimum(unit, 1 - 2.0**-53)))


_standing = local()
"""The sequence of each thread: a cluster may work in threads, and none shall move another's."""


def _sequence(seed: int, variates: int) -> _Sequence:
    """Return the sequence of a seed, standing where this thread left it."""
    found: _Sequence | None = getattr(_standing, "sequence", None)
    if found is None or found.of != (seed, variates):
        found = _standing.sequence = _Sequence(seed, variates)
    return found


class _Sequence:
    """A scrambled Sobol sequence that remembers where it stands; going on is cheap, back is not."""

    def __init__(self, seed: int, variates: int) -> None:
        self.of = (seed, variates)
        self._engine: Any = qmc.Sobol(variates, bits=_LAST_BITS, rng=np.random.default_rng(seed))

    def points(self, start: int, count: int) -> Array:
        """Return ``count`` points from ``start`` on."""
        if self._engine.num_generated > start:
            self._engine.reset()
        if ahead := start - self._engine.num_generated:
            self._engine.fast_forward(ahead)
        with warnings.catch_warnings():
            # A first block that is no power of two is the user's choice; study keys tell of it.
            warnings.filterwarnings("ignore", "The balance properties", UserWarning)
            return np.asarray(self._engine.random(count))
