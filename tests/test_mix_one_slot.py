"""The exact mix in one slot: against a general optimiser, by hand, and all offers against few."""

from __future__ import annotations

from dataclasses import replace
from itertools import combinations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from tcopt.laws.numbers import thermal_voltage
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer, offers, whole_offers
from tcopt.mix.program import CLOSE, FLOOR, Fit, best_fit, match
from tcopt.mix.quick import QuickBound
from tcopt.mix.search import design
from tcopt.mix.single import Best, Group, search_one_slot
from tcopt.study import Material, OpenSlot
from tests.mixes import (
    CASES,
    MENU,
    any_study,
    band_of,
    deviation_of,
    evolved,
    located_deviation,
    study_of,
    with_materials,
)
from tests.small import T_REF, material

JOINS = ("series", "parallel")
every_case = pytest.mark.parametrize("case", CASES)
every_join = pytest.mark.parametrize("join", JOINS)
CORE = {"topology": "ptat core", "area_ratio": (8.0,)}
SENSE = {"topology": "reference over resistor", "reference_voltage": 1.2}


def fit_of(case: str, menu: tuple[Material, ...], join: str) -> Fit:
    found = best_fit(band_of(study_of(case, menu), CASES[case][0]), Offer(menu, join))
    assert found is not None
    return found


def values_of(fit: Fit, slot: str) -> dict[str, float]:
    return {part.material.name: part.value for part in fit.operation.mixes[slot].parts}


@every_join
@every_case
def test_a_general_optimiser_comes_near_and_no_further(case: str, join: str) -> None:
    """Differential evolution over the parts of the best mix and one more, so that it is sharp."""
    slot = CASES[case][0]
    best = best_fit(band_of(study_of(case), slot), Offer(MENU, join))
    assert best is not None
    used = [part.material for part in best.operation.mixes[slot].parts]
    menu = (*used, next(m for m in MENU if m not in used))
    band, offer = band_of(study_of(case, menu), slot), Offer(menu, join)
    fit, bound = match(band, offer)
    assert fit is not None
    _, coefficients = evolved(band, offer, 65, popsize=10, maxiter=150)
    evolution = located_deviation(band, offer, coefficients)
    assert bound <= fit.deviation * (1 + 1e-9) + 1e-15
    assert fit.deviation <= evolution + FLOOR
    assert evolution < 1.1 * fit.deviation + 1e-5, "it did not come near enough to say anything"


@pytest.mark.parametrize(
    ("case", "join"),
    [("mirror, flat", "series"), ("mirror, curve", "parallel"), ("core in a sum", "series")],
)
def test_a_general_optimiser_with_all_eight_materials(case: str, join: str) -> None:
    band, offer = band_of(study_of(case), CASES[case][0]), Offer(MENU, join)
    fit = best_fit(band, offer)
    assert fit is not None
    _, coefficients = evolved(band, offer, 33, popsize=8, maxiter=300)
    evolution = located_deviation(band, offer, coefficients)
    assert fit.deviation <= evolution < 3 * fit.deviation


@every_join
@every_case
def test_evolution_started_at_the_optimum_does_not_leave_it(case: str, join: str) -> None:
    """Around the mix that was found nothing is better, so it is not merely hard to find."""
    band, offer = band_of(study_of(case), CASES[case][0]), Offer(MENU, join)
    fit, bound = match(band, offer)
    assert fit is not None
    values = values_of(fit, band.slot)
    at = np.array([values.get(m.name, 0.0) for m in MENU])
    if join == "parallel":
        at = np.divide(1, at, out=np.zeros_like(at), where=at > 0)
    size = at.sum()
    rng = np.random.default_rng(3)
    steps = 10 ** rng.uniform(-7, -1, 1000)
    near = np.maximum(0, at[:, None] + size * steps * rng.normal(size=(len(at), 1000)))
    best = int(np.argmin(deviation_of(band, offer, near)))
    assert located_deviation(band, offer, near[:, best]) >= bound
    assert bound >= fit.deviation * (1 - 10 * CLOSE) - FLOOR


class TestByHand:
    """A PTAT core with a flat target needs R ~ T; a held voltage with a flat target, R constant."""

    def test_one_material(self) -> None:
        """``I/I_t = (T/T_0)/(c m)`` is largest at one end and smallest at the other."""
        a, low, high = 1e-3, 233.15, 423.15
        ratio = [T / T_REF / (1 + a * (T - T_REF)) for T in (low, high)]
        expected = (ratio[1] - ratio[0]) / (ratio[1] + ratio[0])
        fit = fit_of("core, flat", (material("m", a * 1e6),), "series")
        assert fit.deviation == pytest.approx(expected, rel=1e-6)
        assert fit.bound == pytest.approx(expected, rel=1e-6)

    def test_a_material_that_is_the_need(self) -> None:
        fit = fit_of("core, flat", (material("exact", 1e6 / T_REF),), "series")
        assert fit.deviation < FLOOR
        R = float(thermal_voltage(T_REF)) * np.log(8) / 1e-5
        assert values_of(fit, "core")["exact"] == pytest.approx(R, rel=1e-6)

    def test_lever_rule(self) -> None:
        """Shares w with ``sum w TC1 = 1/T_0``, when no material has a second order."""
        a, b = 800e-6, 5200e-6
        fit = fit_of("core, flat", (material("low", a * 1e6), material("high", b * 1e6)), "series")
        assert fit.deviation < FLOOR
        values = values_of(fit, "core")
        share = values["high"] / sum(values.values())
        assert share == pytest.approx((1 / T_REF - a) / (b - a), rel=1e-6)

    def test_lever_rule_at_second_order(self) -> None:
        """Three materials reach TC1 = 1/T_0 and TC2 = 0, the centre of gravity of their shares."""
        points = [(-500.0, 2.0), (6000.0, 9.0), (3000.0, -4.0)]
        menu = tuple(material(f"m{k}", *point) for k, point in enumerate(points))
        fit = fit_of("core, flat", menu, "series")
        values = values_of(fit, "core")
        w = np.linalg.solve(np.vstack([np.array(points).T, np.ones(3)]), [1e6 / T_REF, 0, 1])
        assert (w > 0).all()
        assert fit.deviation < FLOOR
        got = np.array([values[f"m{k}"] for k in range(3)])
        np.testing.assert_allclose(got / got.sum(), w, rtol=1e-5)

    def test_opposite_slopes_in_parallel(self) -> None:
        """``G ~ 1/(1 + a d) + 1/(1 - a d)``: from 1 in the middle to ``1/(1 - a^2 D^2)``."""
        a, reach = 2e-3, 60.0
        menu = (material("up", a * 1e6), material("down", -a * 1e6))
        study = any_study(
            SENSE,
            {},
            {"sense": {"materials": menu, "pieces": 2, "join": "parallel"}},
            low=T_REF - reach,
            high=T_REF + reach,
        )
        fit = best_fit(band_of(study, "sense"), Offer(menu, "parallel"))
        assert fit is not None
        assert fit.deviation == pytest.approx((a * reach) ** 2 / (2 - (a * reach) ** 2), rel=1e-5)
        values = values_of(fit, "sense")
        assert values["up"] == pytest.approx(values["down"], rel=1e-3)

    def test_over_the_material_itself(self) -> None:
        """A held voltage over a material gives ``I_0/m``, which is the target."""
        sensor = material("sensor", 3900, -0.6)
        target = {"shape": "over material", "material": sensor}
        study = any_study(SENSE, target, {"sense": {"materials": (*MENU, sensor), "pieces": 1}})
        found = design(study)
        (part,) = found.winner.operation.mixes["sense"].parts
        assert part.material.name == "sensor"
        assert part.value == pytest.approx(1.2 / 1e-5)
        assert found.bound.deviation < FLOOR


menus = st.lists(
    st.tuples(st.floats(-3000, 6500), st.floats(-3, 12), st.sampled_from([273.15, 298.15, T_REF])),
    min_size=1,
    max_size=5,
)
examples = settings(max_examples=8, derandomize=True, deadline=None)


def menu_of(points: list[tuple[float, float, float]]) -> tuple[Material, ...]:
    return tuple(
        material(f"m{k}", tc1, tc2, reference=reference)
        for k, (tc1, tc2, reference) in enumerate(points)
    )


def bands_of(case: str, menu: tuple[Material, ...]) -> tuple[list[Band], OpenSlot]:
    """Return one band for each of two area ratios, where the circuit has one."""
    slot = CASES[case][0]
    study = study_of(case, menu, pieces=3, join="either")
    band = band_of(study, slot)
    opened = study.resistors[slot]
    assert isinstance(opened, OpenSlot)
    choices = band.operation.choices
    more = replace(band.operation, choices=replace(choices, area_ratio=2 * choices.area_ratio))
    return [band, replace(band, operation=more)], opened


@examples
@given(menus, st.sampled_from(sorted(CASES)))
def test_skipping_loses_nothing(points: list[tuple[float, float, float]], case: str) -> None:
    bands, slot = bands_of(case, menu_of(points))
    best, proven, reached = search_one_slot([Group(band) for band in bands], slot, keep=3)
    everything = Best(keep=3)
    for number, band in enumerate(bands):
        for offer in offers(slot):
            fit = best_fit(band, offer)
            everything.add(fit, number)
            if fit is not None:
                assert proven <= fit.deviation
                assert QuickBound(band).excess(offer, fit.deviation) <= 1
    got = [fit.deviation for fit in best.ranked()[:3]]
    np.testing.assert_allclose(
        got, [fit.deviation for fit in everything.ranked()[: len(got)]], rtol=2 * CLOSE, atol=FLOOR
    )
    assert len(got) == min(3, len(everything.ranked()))
    assert best.examined + best.skipped == len(bands) * len(offers(slot))
    if got:
        assert proven <= reached <= got[0] + FLOOR


@examples
@given(menus, st.sampled_from(sorted(CASES)), st.sampled_from(JOINS))
def test_more_choice_never_hurts_and_three_pieces_are_enough_in_series(
    points: list[tuple[float, float, float]], case: str, join: str
) -> None:
    menu = menu_of(points)
    slot = CASES[case][0]
    band = band_of(study_of(case, menu), slot)
    least = [np.inf]
    for count in range(1, len(menu) + 1):
        mixes = [match(band, Offer(chosen, join)) for chosen in combinations(menu, count)]
        least.append(min([fit.deviation for fit, _ in mixes if fit is not None], default=np.inf))
        assert least[-1] <= least[-2] * (1 + 2 * CLOSE) + FLOOR
    fit, bound = match(band, Offer(menu, join))
    if fit is not None and join == "series":
        # Caratheodory: second-order materials lie in a plane, and so does every mix of them
        assert len(fit.operation.mixes[slot].parts) <= 3
        assert bound <= min(least) <= fit.deviation * (1 + 2 * CLOSE) + FLOOR
        assert least[min(3, len(menu))] <= fit.deviation * (1 + 2 * CLOSE) + FLOOR


def test_skipping_saves_nearly_all_programs() -> None:
    study = study_of("mirror, flat", pieces=3, join="either", circuit={"area_ratio": (1.0, 8.0)})
    found = design(study)
    assert found.examined + found.skipped == 2 * (8 + 2 * 28 + 2 * 56)
    assert found.examined < 60


def test_bound_is_below_every_design_and_reached_by_enough_pieces() -> None:
    for pieces in (1, 2, 3):
        found = design(study_of("mirror, flat", pieces=pieces))
        assert found.bound.proven
        least = found.winner.residual_drift.deviation_ppm / 1e6
        assert found.bound.deviation <= least
    assert least == pytest.approx(found.bound.deviation, rel=0.02)


def test_adding_a_material_to_a_study_lowers_bound_and_winner() -> None:
    study = study_of("mirror, curve", MENU[:3])
    before = None
    for count in (3, 4, 6, 8):
        found = design(with_materials(study, "output", MENU[:count]))
        figures = (found.bound.deviation, found.winner.residual_drift.deviation_ppm)
        if before is not None:
            assert figures[0] <= before[0] * (1 + CLOSE)
            assert figures[1] <= before[1] * (1 + 1e-2)  # both are of rounded values
        before = figures


def test_same_parts_are_listed_once_and_idle_parts_not_at_all() -> None:
    """Where two materials do best, a third takes no part, and is not offered as a third way."""
    study = study_of("mirror, flat", pieces=3)
    found = design(study)
    listed = [
        frozenset(part.material.name for part in each.operation.mixes["output"].parts)
        for each in found.designs
    ]
    assert len(set(listed)) == len(listed)
    for k, names in enumerate(listed):
        assert not any(fewer < names for fewer in listed[:k])


def test_whole_menu_takes_each_join_once() -> None:
    slot = OpenSlot(materials=MENU, pieces=1, join="either")
    assert [offer.join for offer in whole_offers(slot)] == ["series", "parallel"]
    assert len(offers(slot)) == 8
