"""Trim: it meets its aim where it can, errs as its tester errs, and says where it cannot."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from tcopt.errors import InputError
from tcopt.spread.figures import FIGURES
from tcopt.spread.plan import Made, Plan
from tcopt.spread.run import spread
from tcopt.spread.sample import normals, points
from tcopt.spread.trim import output_of, require_reach, trimmed
from tests.spread_designs import (
    T_0,
    insertion,
    material,
    plan_of,
    ptat_core,
    ptat_plus_vbe,
    sensed,
    transistor,
)

HOT = 373.15
CURRENT, SLOPE = FIGURES.index("current"), FIGURES.index("slope")


def _made(plan: Plan, count: int = 2048) -> Made:
    return plan.made(normals(points("sobol", 4, len(plan.variation.variates), count, 0)))


def _film(**data: Any) -> Any:
    return material(**{"tc1": -2e-4, "spread": 0.06, "tc1_spread": 1e-4, **data})


@pytest.mark.parametrize("scales", ["output mirror", "core", "base"])
def test_an_exact_trim_meets_its_aim(scales: str) -> None:
    reach = 0.3 if scales == "output mirror" else 0.8
    trim = (insertion(scales=scales, reach=reach),)
    plan = plan_of(ptat_plus_vbe(_film(), trim=trim))
    made = _made(plan)
    aim = float(plan.operation.output(np.array([T_0]))[0])
    inside = ~made.settings[0].beyond[:, 0]
    assert inside.mean() > 0.98
    np.testing.assert_allclose(made.figures[1, inside, CURRENT], aim, rtol=1e-10)
    assert made.figures[0, :, CURRENT].std() > 0.05 * aim


def test_one_material_of_a_mix_is_scaled_alone() -> None:
    a, b = material("a", tc1=1e-3, spread=0.02), material("b", tc1=-1e-3, spread=0.02)
    trim = (insertion(scales="sense", material="b", reach=0.5),)
    plan = plan_of(sensed((a, 5e3), (b, 5e3), trim=trim))
    z = np.array([[1.0, 0.0]])
    setting = trimmed(plan.variation, z, plan.insertions, plan.aims)
    # 5100 + 5000 u = 10000
    assert setting.scale == pytest.approx(np.array([[0.98]]), rel=1e-12)


def test_an_output_mirror_leaves_the_slope_alone() -> None:
    plan = plan_of(ptat_plus_vbe(_film(), trim=(insertion(bits=6),)))
    made = _made(plan)
    np.testing.assert_allclose(made.figures[1, :, SLOPE], made.figures[0, :, SLOPE], atol=1e-12)


def test_steps_leave_at_most_half_a_step() -> None:
    """Codes are whole numbers of steps; what is left of the current is within half of one."""
    plan = plan_of(sensed((_film(tc1_spread=None), 1e4), trim=(insertion(bits=5),)))
    made = _made(plan)
    step = 0.6 / 32
    code = (made.settings[0].scale[:, 0] - 1) / step
    np.testing.assert_allclose(code, np.rint(code), atol=1e-9)
    assert code.min() >= -16
    assert code.max() <= 15
    untrimmed = made.figures[0, :, CURRENT]
    left = made.figures[1, :, CURRENT] - 1e-4
    assert np.abs(left / untrimmed).max() <= step / 2 * (1 + 1e-9)
    # spread over the step as evenly as makes no difference: step/sqrt(12) of a rounding error
    assert (left / untrimmed).std() == pytest.approx(step / np.sqrt(12), rel=0.05)


def test_out_of_range_is_counted_and_clipped() -> None:
    """Reach 6 % for a sheet spread of 6 %: the scale wanted is 1 + 0.06 z, by hand."""
    plan = plan_of(sensed((_film(tc1_spread=None), 1e4), trim=(insertion(reach=0.06),)))
    z = normals(points("sobol", 4, 1, 4096, 0))
    setting = trimmed(plan.variation, z, plan.insertions, plan.aims)
    wanted = 1 + 0.06 * z[:, 0]
    np.testing.assert_array_equal(setting.beyond[:, 0], np.abs(wanted - 1) > 0.06)
    np.testing.assert_allclose(setting.scale[:, 0], np.clip(wanted, 0.94, 1.06), rtol=1e-9)


def test_a_part_without_a_current_at_its_tester_is_beyond() -> None:
    """No scale gives it one, by hand: (1 + 98.15 (-5e-3 - 3 * 2e-3)) < 0 whatever stands before."""
    film = _film(tc1=-5e-3, spread=None, tc1_spread=2e-3)
    trim = (insertion(temperature=398.15),)
    plan = plan_of(sensed((film, 1e4), trim=trim))
    z = np.array([[0.0], [-3.0]])
    setting = trimmed(plan.variation, z, plan.insertions, plan.aims)
    np.testing.assert_array_equal(setting.beyond, [[False], [True]])


@pytest.mark.parametrize("rounds", [1, 6])
def test_a_part_whose_search_ran_out_is_beyond(rounds: int, monkeypatch: Any) -> None:
    """One round of Newton in logarithms is exact for a plain product, and not for a sum."""
    monkeypatch.setattr("tcopt.spread.trim._ROUNDS", rounds)
    trim = (insertion(scales="core", reach=0.9),)
    plan = plan_of(ptat_plus_vbe(_film(), trim=trim))
    z = normals(points("sobol", 4, len(plan.variation.variates), 64, 0))
    setting = trimmed(plan.variation, z, plan.insertions, plan.aims)
    found = output_of(plan.variation, z, np.array([T_0]), plan.insertions, setting.scale)
    off = np.abs(found[:, 0] / plan.aims[0] - 1) > 1e-8
    assert off.any() == (rounds == 1)
    assert not (off & ~setting.beyond[:, 0]).any()
    assert setting.beyond.any() == (rounds == 1)


def test_the_tester_s_errors_are_the_parts() -> None:
    """A reading 1 % high makes a part 1 % low; 2 K too hot on a PTAT current 2/T_0 low: by hand."""
    errors = {"measurement_error": 0.01, "temperature_error": 2.0}
    plan = plan_of(ptat_core(_film(tc1=0, tc1_spread=None), trim=(insertion(**errors),)))
    names = [variate.name for variate in plan.variation.variates]
    z = np.zeros((3, len(names)))
    z[1, names.index("trim at 27 degC: measurement")] = 1.0
    z[2, names.index("trim at 27 degC: temperature")] = 1.0
    current = plan.made(z).figures[1, :, CURRENT]
    assert current[1] / current[0] == pytest.approx(1 / 1.01, rel=1e-12)
    assert current[2] / current[0] == pytest.approx(T_0 / (T_0 + 2), rel=1e-9)


def test_two_insertions_set_both_temperatures_right() -> None:
    trim = (insertion(), insertion(temperature=HOT, scales="base", reach=0.6))
    plan = plan_of(ptat_plus_vbe(_film(), trim=trim))
    z = normals(points("sobol", 4, len(plan.variation.variates), 1024, 0))
    setting = trimmed(plan.variation, z, plan.insertions, plan.aims)
    assert not setting.beyond.any()
    at = np.array([T_0, HOT])
    found = output_of(plan.variation, z, at, plan.insertions, setting.scale)
    np.testing.assert_allclose(found, np.broadcast_to(plan.aims, found.shape), rtol=1e-10)
    made = plan.made(z)
    slopes = made.figures[:, :, SLOPE].std(axis=1)
    assert slopes[2] < 0.05 * slopes[1]


def test_the_first_takes_up_what_the_step_of_the_second_leaves() -> None:
    trim = (insertion(), insertion(temperature=HOT, scales="base", reach=0.6, bits=4))
    plan = plan_of(ptat_plus_vbe(_film(), trim=trim))
    made = _made(plan, 512)
    np.testing.assert_allclose(made.figures[2, :, CURRENT], plan.aims[0], rtol=1e-10)
    assert len(np.unique(made.settings[1].scale[:, 1])) <= 16


def test_a_spread_of_saturation_current_costs_no_second_insertion() -> None:
    """V_BE spreads in proportion to T: scaling the PTAT part takes all of it (by hand)."""
    device = transistor(base_emitter_spread=5e-3)
    plan = plan_of(ptat_plus_vbe(material(), device=device, trim=(insertion(scales="core"),)))
    made = _made(plan, 512)
    slopes = made.figures[:, :, SLOPE].std(axis=1)
    assert slopes[1] < 0.05 * slopes[0]


REFUSED = [
    ((insertion(reach=0.05),), "trim.first.range: found 5 %, which moves the current by 5 %, less"),
    (
        (insertion(), insertion(temperature=HOT, scales="sense")),
        "trim.second.scales: found 'sense', which at both temperatures does what the first does",
    ),
]


@pytest.mark.parametrize(("trim", "message"), REFUSED)
def test_a_trim_that_cannot_work_is_refused(trim: tuple[Any, ...], message: str) -> None:
    plan = plan_of(sensed((_film(tc1_spread=None), 1e4), trim=trim))
    with pytest.raises(InputError, match=message):
        require_reach(plan.variation, plan.insertions, plan.aims)
    with pytest.raises(InputError, match=message):
        spread(plan.study)


def test_a_scale_that_moves_nothing_is_refused() -> None:
    tiny, film = material("tiny"), _film(tc1_spread=None)
    study = sensed((film, 1e4), (tiny, 10.0), trim=(insertion(scales="sense", material="tiny"),))
    message = "found 'sense', of which 1 % moves the current at 27 degC by 0.001 %; accepted: what"
    with pytest.raises(InputError, match=message):
        spread(study)
