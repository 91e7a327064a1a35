"""Points: the same for the same seed, block by block, and as even as they are said to be."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.stats import kstest, qmc

from tcopt.spread.sample import BLOCK, block_count, normals, points


def _all(sampling: str, seed: int, variates: int, samples: int) -> np.ndarray:
    return np.vstack(
        [points(sampling, seed, variates, samples, block) for block in range(block_count(samples))]
    )


@pytest.mark.parametrize("samples", [1, BLOCK - 1, BLOCK, BLOCK + 1, 3 * BLOCK])
@pytest.mark.parametrize("sampling", ["sobol", "plain"])
def test_as_many_as_asked_inside_the_cube(sampling: str, samples: int) -> None:
    found = _all(sampling, 7, 5, samples)
    assert found.shape == (samples, 5)
    assert found.min() > 0
    assert np.isfinite(normals(found)).all()


@pytest.mark.parametrize("sampling", ["sobol", "plain"])
def test_blocks_in_any_order_are_the_same(sampling: str) -> None:
    forward = [points(sampling, 3, 4, 3 * BLOCK, block) for block in (0, 1, 2)]
    backward = [points(sampling, 3, 4, 3 * BLOCK, block) for block in (2, 1, 0)]
    for first, second in zip(forward, reversed(backward), strict=True):
        np.testing.assert_array_equal(first, second)
    other = points(sampling, 4, 4, 3 * BLOCK, 0)
    assert not np.array_equal(forward[0], other)


def test_sobol_is_the_sequence_of_scipy() -> None:
    """Cut into blocks it is still one sequence: that of scipy, half a last bit off zero."""
    whole = qmc.Sobol(4, bits=30, rng=np.random.default_rng(3)).random_base2(14)
    np.testing.assert_array_equal(_all("sobol", 3, 4, 2**14), whole + 2.0**-31)


def test_sobol_fills_every_slice_evenly() -> None:
    """2^14 points put the same number into each of 1024 slices of each variate: it is a net."""
    found = _all("sobol", 5, 6, 2**14)
    for column in found.T:
        counts = np.bincount((column * 1024).astype(int), minlength=1024)
        assert (counts == 16).all()


def test_plain_numbers_are_uniform() -> None:
    found = _all("plain", 5, 3, 2**15)
    assert kstest(found.ravel(), "uniform").pvalue > 0.01
    assert np.abs(np.corrcoef(found, rowvar=False) - np.eye(3)).max() < 0.02


def test_normals_are_standard() -> None:
    z = normals(_all("sobol", 5, 3, 2**14))
    assert np.abs(z.mean(axis=0)).max() < 1e-3
    assert z.std(axis=0) == pytest.approx(1, abs=2e-3)
    # values of the normal distribution, to four places in any table
    assert normals(np.array([0.5, 0.975, 0.99865, 1.0])) == pytest.approx(
        [0, 1.96, 3.0, 8.2], abs=1e-2
    )
