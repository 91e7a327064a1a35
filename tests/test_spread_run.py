"""What `spread` answers: figures, yield, verdict, warnings, refusals."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from tcopt.errors import InputError, NoSolutionError
from tcopt.spread.figures import FIGURES
from tcopt.spread.result import LEVELS
from tcopt.spread.run import asked, spread
from tcopt.study import FixedSlot, Limit, OpenSlot
from tests.spread_designs import insertion, material, ptat_plus_vbe, sensed


def _limit(kind: Any, value: float) -> Limit:
    return Limit(kind=kind, value=value)


def test_quantiles_of_a_normal_sheet() -> None:
    """I = 1/(R (1 + 5 % z)): each quantile is that of z, upside down (normal tables)."""
    result = spread(sensed((material(spread=0.05), 1e4), samples=65536))
    found = result.stages[0].quantiles["current"]
    z = {0.5: 0, 0.16: -0.99446, 0.025: -1.95996, 0.997: 2.74778}
    for level, value in z.items():
        expected = 1e-4 / (1 - 0.05 * value)
        assert found[LEVELS.index(level)] == pytest.approx(expected, rel=1e-4)


def test_yield_and_verdict_by_hand() -> None:
    """5 % of sheet within 10 %: I = 1/(1 + s), so s from -1/11 to 1/9: z from -1.818 to 2.222."""
    study = sensed((material(spread=0.05), 1e4), limit=_limit("deviation", 0.1), samples=16384)
    result = spread(study)
    stage = result.stages[0]
    assert stage.passed is not None
    # 0.98686 - 0.03453, normal tables
    assert stage.passed.share == pytest.approx(0.95233, abs=3e-4)
    assert stage.passed.low < 0.95233 < stage.passed.high
    assert stage.passed.high - stage.passed.low == pytest.approx(
        2 * 1.96 * np.sqrt(0.95233 * 0.04767 / 16384), rel=0.02
    )
    assert result.judged == "deviation"
    assert result.limit is not None
    assert not result.limit.met
    assert result.limit.figure == "deviation_ppm"
    lenient = study.model_copy(
        update={"spread": study.spread.model_copy(update={"wanted_yield": 0.95})}
    )
    verdict = spread(lenient).limit
    assert verdict is not None
    assert verdict.met
    assert verdict.value == pytest.approx(
        1e6
        * result.sample.figures[0, :, 3][
            np.argsort(result.sample.figures[0, :, 3])[int(np.ceil(0.95 * 16384)) - 1]
        ]
    )


@pytest.mark.parametrize("bound", [0.05, 0.08, 0.1, 0.13, 0.2])
def test_the_limit_is_met_if_the_wanted_share_passes(bound: float) -> None:
    result = spread(sensed((material(spread=0.05), 1e4), limit=_limit("deviation", bound)))
    passed = result.stages[0].passed
    assert passed is not None
    assert result.limit is not None
    assert result.limit.met == (passed.share >= 0.997)


def test_the_verdict_is_of_the_trimmed_parts() -> None:
    film = material(spread=0.05)
    data: dict[str, Any] = {"limit": _limit("deviation", 0.02)}
    before = spread(sensed((film, 1e4), **data))
    after = spread(sensed((film, 1e4), trim=(insertion(bits=5),), **data))
    assert before.limit is not None
    assert after.limit is not None
    assert (before.limit.met, after.limit.met) == (False, True)
    assert [stage.name for stage in after.stages] == ["untrimmed", "one insertion"]
    assert after.stages[0].passed == before.stages[0].passed


def test_one_insertion_stands_beside_two() -> None:
    film = material(tc1=2e-4, spread=0.05, tc1_spread=1e-4)
    first = insertion(bits=7)
    second = insertion(temperature=373.15, scales="base", reach=0.6, bits=7)
    one = spread(ptat_plus_vbe(film, trim=(first,)))
    two = spread(ptat_plus_vbe(film, trim=(first, second)))
    for name in FIGURES:
        np.testing.assert_array_equal(one.stages[1].quantiles[name], two.stages[1].quantiles[name])
    box = [stage.quantiles["residual_box"][LEVELS.index(0.997)] for stage in two.stages]
    assert box[1] == pytest.approx(box[0], rel=1e-9)
    assert box[2] < 0.3 * box[1]
    effects = two.stages[2].trim
    assert [effect.insertion.scales for effect in effects] == ["output mirror", "base"]
    assert sum(count for _, count in effects[1].codes) == two.sample.drawn
    assert effects[0].slope_per_percent == pytest.approx(0, abs=1e-12)
    assert effects[1].slope_per_percent > 1e-6
    assert two.stages[2].slope_change[1] > 50e-6


def test_correlation_is_that_of_ranks() -> None:
    """More sheet, less current, and never else: -1 between current and deviation from far above.

    The target lies far below what any part gives, so a part deviates more the more it gives.
    """
    result = spread(sensed((material(spread=0.05), 1e4), current=5e-5))
    at = FIGURES.index("current"), FIGURES.index("deviation")
    assert result.stages[0].correlation[at] == pytest.approx(1.0)
    assert np.diag(result.stages[0].correlation) == pytest.approx(1.0)


def test_the_same_seed_gives_the_same_result() -> None:
    study = ptat_plus_vbe(material(spread=0.05, tc1_spread=1e-4))
    first, again = spread(study), spread(study)
    np.testing.assert_array_equal(first.sample.figures, again.sample.figures)
    other = spread(asked(study, seed=2))
    assert not np.array_equal(first.sample.figures, other.sample.figures)
    plain = study.model_copy(
        update={"spread": study.spread.model_copy(update={"sampling": "plain"})}
    )
    for name in FIGURES:
        assert spread(plain).stages[0].quantiles[name][3] == pytest.approx(
            first.stages[0].quantiles[name][3], rel=0.05
        )


def test_asked_changes_what_is_given_and_nothing_else() -> None:
    study = sensed((material(spread=0.05), 1e4), sigma=2.0)
    changed = asked(study, samples=100, seed=9)
    assert changed.spread.model_dump() == {
        **study.spread.model_dump(), "samples": 100, "seed": 9,
    }  # fmt: skip
    assert asked(study) == study


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        ({"samples": 0}, "command line: samples: found 0; accepted: a whole number from 1 to"),
        ({"samples": 10**9}, "samples: found 1000000000; accepted: a whole number from 1 to"),
        ({"seed": -1}, "command line: seed: found -1; accepted: a whole number from 0 to"),
    ],
)
def test_what_is_asked_is_checked(changes: dict[str, int], message: str) -> None:
    with pytest.raises(InputError, match=message):
        asked(sensed((material(spread=0.05), 1e4)), **changes)


def test_nothing_that_varies_is_refused() -> None:
    trim = (insertion(measurement_error=0.01),)
    with pytest.raises(InputError, match="found nothing that varies; accepted: a process with a"):
        spread(sensed((material(), 1e4), trim=trim))


def test_an_open_slot_is_refused() -> None:
    study = sensed((material(spread=0.05), 1e4))
    slot = OpenSlot(materials=(material(spread=0.05),))
    with pytest.raises(InputError, match="found slots or choices that are still open"):
        spread(study.model_copy(update={"resistors": {"sense": slot}}))


def test_parts_without_a_current_do_not_pass() -> None:
    """TC1 of -5000 +- 1300 ppm/K over 98 K: nothing is left beyond 4 sigma (by hand)."""
    film = material(tc1=-5e-3, tc1_spread=1.3e-3)
    study = sensed((film, 1e4), limit=_limit("deviation", 0.99), sampling="plain", samples=60000)
    result = spread(study)
    # 1 + 98 (-5e-3 - 1.3e-3 z) < 0: z < -4.0031, one of 31950 parts
    assert 1 <= result.unsolved <= 8
    assert result.stages[0].passed is not None
    assert result.stages[0].passed.drawn == 60000
    assert f"{result.unsolved} of 60000 parts have no current somewhere" in result.warnings[0]


def test_no_part_at_all_is_an_error() -> None:
    study = sensed((material(spread=0.05), 1e4))
    slot = FixedSlot(parts=study.resistors["sense"].parts)
    far = study.model_copy(update={"resistors": {"sense": slot}})
    supply = far.circuit.model_copy(update={"reference_voltage": -1.0})
    with pytest.raises(NoSolutionError, match="no solution at -40 degC"):
        spread(far.model_copy(update={"circuit": supply}))


WARNINGS = [
    ({"samples": 1000}, {}, "the 99.7 % quantile rests on the outermost 3 of 1000 parts; more"),
    ({"trim": (insertion(reach=0.06),)}, {}, "the trim of output mirror reaches only 77 %"),
    (
        {"limit": _limit("deviation", 0.02)},
        {},
        "spread undoes the design: 0 ppm (deviation) as stated, but 1",
    ),
]


@pytest.mark.parametrize(("data", "film", "message"), WARNINGS)
def test_traps_are_said(data: dict[str, Any], film: dict[str, Any], message: str) -> None:
    result = spread(sensed((material(spread=0.05, **film), 1e4), **data))
    assert any(message in text for text in result.warnings), result.warnings


def test_no_trap_is_no_warning() -> None:
    study = sensed(
        (material(spread=0.05), 1e4), limit=_limit("deviation", 0.5), trim=(insertion(),)
    )
    assert spread(study).warnings == ()
