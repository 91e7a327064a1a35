"""Shares of variance and corners, where both are known by hand."""

from __future__ import annotations

import numpy as np
import pytest

from tcopt.spread.causes import FEWEST, causes_of
from tcopt.spread.corners import corners_of
from tcopt.spread.figures import FIGURES
from tcopt.spread.plan import BINS, Sums
from tcopt.spread.run import spread
from tcopt.spread.sample import normals, points
from tcopt.spread.variation import LOT, Variate
from tests.spread_designs import insertion, material, plan_of, sensed

VARIATES = tuple(Variate(name, LOT) for name in ("a", "b", "c"))


def _shares(sampling: str, samples: int, function: object) -> dict[str, float]:
    """Return each variate's share in the variance of a function of three of them."""
    unit = np.vstack(
        [points(sampling, 1, 3, samples, block) for block in range(-(-samples // 4096))]
    )
    values = function(normals(unit))  # type: ignore[operator]
    figures = np.repeat(values[None, :, None], len(FIGURES), axis=2)
    slices = (unit * BINS).astype(int).clip(0, BINS - 1)
    count = np.stack([np.bincount(column, minlength=BINS) for column in slices.T]).astype(float)
    total = np.stack([np.bincount(column, values, minlength=BINS) for column in slices.T])
    sums = Sums(count, np.broadcast_to(total, (1, len(FIGURES), *total.shape)))
    found = causes_of(sums, figures, VARIATES, independent=sampling == "plain")
    return {cause.variate.name: cause.share for cause in found[0]["box"]}


SAMPLES = pytest.mark.parametrize(
    ("sampling", "samples", "close"),
    [("sobol", 16384, 2e-3), ("plain", 16384, 2e-2), ("sobol", 1024, 2e-2), ("plain", 1024, 8e-2)],
)


@SAMPLES
def test_a_sum_is_split_by_its_squares(sampling: str, samples: int, close: float) -> None:
    """3 a + 4 b: 9/25 and 16/25, nothing of c (by hand)."""
    found = _shares(sampling, samples, lambda z: 3 * z[:, 0] + 4 * z[:, 1] + 100)
    assert found == pytest.approx({"b": 0.64, "a": 0.36, "c": 0}, abs=close)
    assert list(found) == ["b", "a", "c"]


@SAMPLES
def test_a_folded_cause_is_seen(sampling: str, samples: int, close: float) -> None:
    """|a| + b: variances 1 - 2/pi and 1 (by hand); no straight line would see a."""
    found = _shares(sampling, samples, lambda z: np.abs(z[:, 0]) + z[:, 1])
    whole = 2 - 2 / np.pi
    by_hand = {"a": (1 - 2 / np.pi) / whole, "b": 1 / whole, "c": 0}
    # the fold lies between two slices, within which the mean hides a little
    assert found == pytest.approx(by_hand, abs=close + 5e-3)


@SAMPLES
def test_what_works_only_together_is_nobody_s(sampling: str, samples: int, close: float) -> None:
    """a b + c: half is of c, the other half of neither a nor b alone (by hand)."""
    found = _shares(sampling, samples, lambda z: z[:, 0] * z[:, 1] + z[:, 2])
    assert found == pytest.approx({"a": 0, "b": 0, "c": 0.5}, abs=2 * close)


def test_too_few_parts_tell_no_causes() -> None:
    film = material(tc1=1e-4, spread=0.05)
    result = spread(sensed((film, 1e4), samples=FEWEST - 1))
    assert result.stages[0].causes == {}
    assert spread(sensed((film, 1e4), samples=FEWEST)).stages[0].causes


def test_causes_of_a_mix() -> None:
    """Two films of 5 % and 10 %, 3 : 1 in value: 0.15 and 0.1 of the current, 9/13 and 4/13."""
    a, b = material("a", tc1=1e-3, spread=0.05), material("b", spread=0.1)
    result = spread(sensed((a, 7.5e3), (b, 2.5e3), samples=16384))
    found = {c.variate.name: c.share for c in result.stages[0].causes["current"]}
    assert found["sheet resistance of a"] == pytest.approx(9 / 13, abs=5e-3)
    assert found["sheet resistance of b"] == pytest.approx(4 / 13, abs=5e-3)


def test_corners_by_hand() -> None:
    """1 V over two films: one at a time, and the worst of all signs."""
    a, b = material("a", tc1=1e-3, spread=0.05), material("b", tc1=-2e-3, spread=0.1)
    study = sensed((a, 5e3), (b, 5e3), sigma=2.0)
    found = corners_of(plan_of(study), "deviation")
    assert found.sigma == 2.0
    current = {
        (variate.name, sign): corner.figures[0, 0]
        for pair in found.single
        for corner in pair
        for variate, sign in corner.signs
    }
    assert current == pytest.approx(
        {
            ("sheet resistance of a", 1): 1 / 10.5e3,
            ("sheet resistance of a", -1): 1 / 9.5e3,
            ("sheet resistance of b", 1): 1 / 11e3,
            ("sheet resistance of b", -1): 1 / 9e3,
        }
    )
    assert found.single[0][0].signs[0][0].name == "sheet resistance of b"
    assert found.typical[0, 0] == pytest.approx(1e-4)
    (worst,) = found.worst
    # hot, where b has lost most: 1/(4500 (1 + 0.098) + 4000 (1 - 0.196)) over 1e-4
    assert {(v.name, s) for v, s in worst.signs} == {
        ("sheet resistance of a", -1), ("sheet resistance of b", -1),
    }  # fmt: skip
    by_hand = 1e4 / (4500 * 1.098 + 4000 * 0.804) - 1
    assert worst.figures[0, FIGURES.index("deviation")] == pytest.approx(by_hand, rel=1e-9)


def test_corners_are_trimmed_like_parts() -> None:
    film = material(spread=0.05)
    plan = plan_of(sensed((film, 1e4), trim=(insertion(),)))
    found = corners_of(plan, "deviation")
    assert found.single[0][0].figures[1, 0] == pytest.approx(1e-4, rel=1e-9)
    assert len(found.worst) == 2


def test_a_corner_without_a_current_is_the_worst() -> None:
    film = material(tc1=-5e-3, tc1_spread=2e-3)
    (worst,) = corners_of(plan_of(sensed((film, 1e4))), "deviation").worst
    assert worst.signs[0][1] == -1
    assert np.isnan(worst.figures).all()
