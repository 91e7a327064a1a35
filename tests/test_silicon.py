"""Designs for silicon: the scenario program by hand, beside an optimiser, and by sampling."""

from __future__ import annotations

from dataclasses import replace
from typing import Any

import numpy as np
import pytest
from scipy.optimize import differential_evolution

from tcopt.errors import InputError
from tcopt.mix.band import Band
from tcopt.mix.causes import causes_of
from tcopt.mix.knobs import Knob, Knobs
from tcopt.mix.offer import Offer
from tcopt.mix.program import best_fit
from tcopt.mix.question import question_of
from tcopt.mix.robust import robust_fit
from tcopt.mix.room import Room
from tcopt.mix.sampled import SiliconFigures, silicon_figures
from tcopt.mix.screen import screened
from tcopt.mix.search import design
from tcopt.mix.silicon import best_silicon_fit, silicon_outcome
from tcopt.mix.worst import worst_points
from tcopt.operation import Mix
from tcopt.solve import currents
from tcopt.spread.figures import FIGURES
from tcopt.spread.run import spread_of
from tcopt.study import CommonPart, Insertion, Material, OpenSlot, Part, Study, Trim
from tcopt.symbols import resistance_name
from tests.silicon_studies import MENU, T_0, mirror_study, study_of, sum_study

SPAN = 190.0
OUTPUT = Knobs((Knob(None, None, 0.0, np.inf),), from_trim=False)


def film(name: str, tc1: float = 0.0, **data: Any) -> Material:
    return Material(name=name, reference=T_0, tc1=tc1 * 1e-6, **data)


def sensed(*materials: Material, pieces: int = 2, **given: Any) -> Study:
    """Return a flat 1.2 V over an open resistor: the drift is the resistor's own."""
    circuit = {"topology": "reference over resistor", "reference_voltage": 1.2, "transistor": False}
    menu = {material.name: material for material in materials}
    return study_of(circuit, {"sense": OpenSlot(pieces=pieces)}, menu, current=1e-5, **given)


def room_and_band(study: Study, knobs: Knobs, sigma: float = 3.0) -> tuple[Room, Band]:
    question = question_of(study)
    operation = question.groups[0][0]
    ((name, slot),) = question.open_slots.items()
    causes = causes_of(operation, [(name, slot.materials)])
    return Room(question.target, causes, knobs, sigma), Band(operation, name, question.target)


def test_the_worst_point_of_two_causes_is_along_the_difference_of_their_slopes() -> None:
    # y(T) = y_0 + G z at three temperatures; between the outer two dG/2 = (0.3, -0.4)
    off = np.array([0.1, 0.0, -0.1])
    by_cause = np.array([[0.3, 0.0, -0.3], [-0.4, 0.0, 0.4]])
    (worst,) = worst_points(off, by_cause, [np.ones(3)], 2.0)
    assert worst.deviation == pytest.approx(0.1 + 2 * 0.5)
    assert worst.points[0] == pytest.approx([2 * 0.6, -2 * 0.8])
    assert worst.points[1] == pytest.approx(-worst.points[0])


def test_without_a_knob_the_largest_deviation_itself_counts() -> None:
    (worst,) = worst_points(np.array([0.1, -0.3]), np.array([[0.0, 0.2]]), [], 1.0)
    assert worst.deviation == pytest.approx(0.5)
    assert worst.points[0] == pytest.approx([-1.0])


def test_what_the_knob_cannot_reach_is_a_deviation_of_its_own() -> None:
    off, by_cause = np.array([0.02, -0.02]), np.array([[0.05, 0.05], [0.001, -0.001]])
    beyond, shape = worst_points(off, by_cause, [np.ones(2)], 3.0, (-0.1, 0.1))
    assert beyond.deviation == pytest.approx(3 * 0.05 - 0.1)
    assert np.abs(beyond.points[0]) == pytest.approx([3.0, 0.0])
    assert shape.deviation == pytest.approx(0.02 + 3 * 0.001)


def test_what_no_knob_reaches_and_no_cause_moves_has_no_worst_points() -> None:
    beyond, _ = worst_points(np.array([0.3, 0.3]), np.zeros((1, 2)), [np.ones(2)], 3.0, (-0.1, 0.1))
    assert beyond.deviation == pytest.approx(0.2)
    assert beyond.points.shape == (0, 1)


def test_two_materials_spread_by_the_rule_for_mixes() -> None:
    # sigma(TC) = w (1 - w) |dTC| sqrt(sa^2 + sb^2): 53 ppm/K at w = 1/2, dTC = 3000 ppm/K, 5 %
    # each, while the value spreads by 3.5 % (calculated from that formula)
    a, b = film("a", 1500, spread=0.05), film("b", -1500, spread=0.05)
    study = sensed(a, b, purpose="silicon", samples=8192)
    half = 0.5 * 1.2 / 1e-5
    operation = question_of(study).groups[0][0]
    mix = Mix((Part(material=a, value=half), Part(material=b, value=half)))
    from tcopt.assess import assess

    figures = silicon_figures(assess(replace(operation, mixes={"sense": mix})))
    # a normal slope stays within 2.968 standard deviations for 99.7 % of the parts
    assert figures.box_ppm_per_K == pytest.approx(2.968 * 53, rel=0.04)
    assert figures.median_box_ppm_per_K == pytest.approx(0.6745 * 53, rel=0.04)
    assert figures.spread == pytest.approx(0.035, rel=0.03)
    room, band = room_and_band(study, OUTPUT)
    fit = best_silicon_fit(band, Offer((a, b), "series"), room)
    assert fit is not None
    # to first order; the scenarios at 3 sigma are far enough out for the second to show
    assert fit.deviation == pytest.approx(3 * 53e-6 * SPAN / 2, rel=0.03)


def test_of_two_mixes_flat_on_paper_silicon_takes_that_with_less_at_stake() -> None:
    # +1500 with -1500 and +60 with -1500 ppm/K both have a flat mix; by the rule for mixes the
    # first spreads by 53 ppm/K, the second, of w = 60/1560, by w (1 - w) 1560 sqrt(0.05^2 + 0.08^2)
    a, b = film("a", 1500, spread=0.05), film("b", -1500, spread=0.05)
    c = film("c", 60, spread=0.08)
    result = design(sensed(a, b, c, purpose="silicon"))
    silicon = result.silicon
    assert silicon is not None
    assert silicon.single is not None
    assert silicon.single.silicon.box_ppm_per_K == pytest.approx(60, rel=0.01)
    boxes: dict[frozenset[str], SiliconFigures] = {}
    for found, figures in zip(result.designs, silicon.figures, strict=True):
        parts = found.operation.mixes["sense"].parts
        boxes.setdefault(frozenset(part.material.name for part in parts), figures)
    w = 60 / 1560
    sigma = w * (1 - w) * 1560 * np.hypot(0.05, 0.08)
    assert next(iter(boxes)) == {"b", "c"}
    assert boxes[frozenset("bc")].box_ppm_per_K == pytest.approx(2.968 * sigma, rel=0.06)
    assert boxes[frozenset("ab")].box_ppm_per_K == pytest.approx(2.968 * 53, rel=0.06)


def test_materials_of_one_step_track_and_lose_nothing() -> None:
    step = (CommonPart(part="step", share=1.0),)
    a, b = (film(n, tc, spread=0.05, common=step) for n, tc in (("a", 1500), ("b", -1500)))
    result = design(sensed(a, b, purpose="silicon"))
    assert result.silicon is not None
    assert result.silicon.figures[0].box_ppm_per_K < 0.2
    assert result.silicon.figures[0].spread == pytest.approx(0.05, rel=0.03)


def test_a_trim_that_is_too_short_leaves_what_it_cannot_reach() -> None:
    # spread 5 %, so 0.85 to 1.15 at 3 sigma; the trim reaches 0.9 to 1.1. With the resistor at r
    # the ends come to 1.15 x 0.9 r and 0.85 x 1.1 r; as I = V/R, the best r leaves e with
    # (1 + e)/(1 - e) = 1.035/0.935
    study = sensed(film("a", spread=0.05), pieces=1)
    knobs = Knobs((Knob("sense", None, 0.9, 1.1),), from_trim=True)
    room, band = room_and_band(study, knobs)
    fit = best_silicon_fit(band, Offer(study.resistors["sense"].materials, "series"), room)
    ratio = 1.035 / 0.935
    assert fit is not None
    assert fit.deviation == pytest.approx((ratio - 1) / (ratio + 1), rel=1e-3)
    assert fit.bound == pytest.approx(fit.deviation, rel=5e-3)


@pytest.mark.parametrize("material", [None, "b"])
def test_a_film_is_the_same_halved_in_parallel_and_trimmed(material: str | None) -> None:
    # two films of one step are one film, however they are joined: by hand as for one alone. With
    # one of the two trimmed, the best is to take that one for the whole
    step = (CommonPart(part="step", share=1.0),)
    a, b = (film(name, spread=0.05, common=step) for name in "ab")
    offer = Offer((a, b), "parallel")
    room, band = room_and_band(
        sensed(a, b), Knobs((Knob("sense", material, 0.9, 1.1),), from_trim=True)
    )
    fit = best_silicon_fit(band, offer, room)
    ratio = 1.035 / 0.935
    assert fit is not None
    assert fit.deviation == pytest.approx((ratio - 1) / (ratio + 1), rel=2e-3)
    assert fit.bound == pytest.approx(fit.deviation, rel=5e-3)


def test_trimming_the_whole_and_one_material_of_it_mends_both_value_and_slope() -> None:
    a, b = film("a", 1500, spread=0.05), film("b", -1500, spread=0.05)
    whole, part = Knob("sense", None, 0.5, 2.0), Knob("sense", "a", 0.5, 1.5)
    offer = Offer((a, b), "series")
    room, band = room_and_band(sensed(a, b), Knobs((whole,), from_trim=True))
    once = best_silicon_fit(band, offer, room)
    twice = best_silicon_fit(band, offer, replace(room, knobs=Knobs((whole, part), from_trim=True)))
    assert once is not None
    assert twice is not None
    assert once.deviation > 0.01
    assert twice.deviation < 1e-6


@pytest.mark.parametrize("join", ["series", "parallel"])
def test_without_spread_the_program_is_that_for_paper(join: str) -> None:
    study = mirror_study(3, join)
    room, band = room_and_band(study, Knobs((), from_trim=False))
    bare = replace(room, causes=causes_of(band.operation, []))
    offer = Offer(tuple(MENU[name] for name in ("silicide", "n_well", "p_base")), join)
    ours, paper = best_silicon_fit(band, offer, bare), best_fit(band, offer)
    assert ours is not None
    assert paper is not None
    assert bare.causes.count == 0
    assert ours.deviation == pytest.approx(paper.deviation, rel=5e-3)


def worst_of(band: Band, room: Room, offer: Offer, parts: np.ndarray, points: np.ndarray) -> float:
    """Return the worst shape deviation over given points, from the full solution alone."""
    T = np.linspace(233.15, 423.15, 33)
    q = room.causes.quantities(band.operation, points, T)
    total = sum(
        r * room.causes.ratio(m, points, T) for r, m in zip(parts, offer.materials, strict=True)
    )
    q[resistance_name(band.slot)] = np.asarray(total)
    ratio = currents(band.operation.circuit, q)["I_out"] / band.target.current(T)
    high, low = ratio.max(axis=1), ratio.min(axis=1)
    return float(((high - low) / (high + low)).max())


def test_a_general_optimiser_finds_nothing_better() -> None:
    names = ("silicide", "n_well", "p_base")
    study = mirror_study(3)
    room, band = room_and_band(study, OUTPUT)
    offer = Offer(tuple(MENU[name] for name in names), "series")
    fit = best_silicon_fit(band, offer, room)
    assert fit is not None
    rng = np.random.default_rng(1)
    drawn = rng.standard_normal((300, room.causes.count))
    points = 3 * drawn / np.linalg.norm(drawn, axis=1, keepdims=True)
    points = np.vstack([points, fit.points[1:]])
    values = {p.material.name: p.value for p in fit.operation.mixes["output"].parts}
    ours = worst_of(band, room, offer, np.array([values.get(n, 0.0) for n in names]), points)
    # shares are free, the whole is what the target needs at the reference
    at = np.array([T_0])
    need, unit = float(band.resistance(at, 0.0)[0]), offer.columns(at)[0]
    found = differential_evolution(
        lambda x: worst_of(band, room, offer, x * need / float(unit @ x), points),
        bounds=[(0.3, 1.0), (0.0, 0.5), (0.0, 0.5)],
        maxiter=25, popsize=6, rng=np.random.default_rng(2), polish=False,
    )  # fmt: skip
    assert ours <= found.fun * (1 + 2e-3)
    assert fit.bound <= found.fun * (1 + 5e-3)
    assert fit.deviation == pytest.approx(ours, rel=0.02)


def base_study(join: str = "series") -> Study:
    """Return a sum whose PTAT part alone is too much for some parts: no base current is left."""
    open_slot = OpenSlot.model_validate({"pieces": 2, "join": join})
    slots = {
        "core": {"parts": [{"material": MENU["thin_film"], "value": 4500.0}]},
        "base": open_slot,
    }
    return study_of({"topology": "ptat plus vbe", "area_ratio": (8.0,)}, slots)


@pytest.mark.parametrize("join", ["series", "parallel"])
@pytest.mark.parametrize(
    ("study", "names"),
    [
        (mirror_study(4), ("silicide", "n_well", "p_base", "n_diffusion")),
        (base_study(), ("silicide", "thin_film")),
        (base_study(), ("thin_film", "n_well")),
    ],
    ids=["mirror", "base", "base far from what is needed"],
)
def test_refinement_by_steps_comes_to_the_programs_optimum(
    study: Study, names: tuple[str, ...], join: str
) -> None:
    room, band = room_and_band(study, OUTPUT)
    offer = Offer(tuple(MENU[name] for name in names), join)
    exact = best_silicon_fit(band, offer, room)
    paper = best_fit(band, offer)
    assert paper is not None
    start = {band.slot: offer.coefficients(paper.operation.mixes[band.slot])}
    steps = robust_fit(band.operation, {band.slot: offer}, start, room)
    assert exact is not None
    assert steps is not None
    assert steps.deviation == pytest.approx(exact.deviation, rel=0.015)
    assert steps.deviation >= exact.bound * (1 - 1e-3)
    assert exact.bound == pytest.approx(exact.deviation, rel=0.01)


def test_an_estimate_is_near_the_program_and_orders_offers_alike() -> None:
    room, band = room_and_band(mirror_study(2), OUTPUT)
    pairs = [("silicide", "n_well"), ("silicide", "p_base"), ("p_poly", "n_well")]
    offers = [Offer((MENU[a], MENU[b]), "series") for a, b in pairs]
    estimates = screened(band, offers, room)
    fits = [best_silicon_fit(band, offer, room) for offer in offers]
    reached = [fit.deviation for fit in fits if fit is not None]
    assert [e.deviation for e in estimates] == pytest.approx(reached, rel=0.1)


def test_giving_up_is_a_proof() -> None:
    room, band = room_and_band(mirror_study(2), OUTPUT)
    offer = Offer((MENU["silicide"], MENU["n_well"]), "series")
    fit = best_silicon_fit(band, offer, room)
    assert fit is not None
    assert best_silicon_fit(band, offer, room, fit.points[1:], 0.97 * fit.bound) is None
    assert best_silicon_fit(band, offer, room, None, 1.05 * fit.deviation) is not None


SMALL_MENU = {name: MENU[name] for name in ("silicide", "n_diffusion", "thin_film")}


def test_the_sum_of_two_currents_is_designed_for_silicon() -> None:
    result = design(sum_study(materials=SMALL_MENU, purpose="silicon", limit="50 ppm/K", show=3))
    silicon = result.silicon
    assert silicon is not None
    assert silicon.single is not None
    best = silicon.figures[0].box_ppm_per_K
    assert best <= silicon.paper.silicon.box_ppm_per_K / 5
    assert best <= silicon.single.silicon.box_ppm_per_K
    assert not silicon.bound.proven
    assert result.verdict == silicon.figures[0].limit
    assert result.verdict is not None
    assert result.verdict.met
    assert silicon.paper.silicon.limit is not None
    assert not silicon.paper.silicon.limit.met
    boxes = [figures.box_ppm_per_K for figures in silicon.figures]
    assert boxes == sorted(boxes)


def test_the_bound_holds_for_what_is_drawn_at_random() -> None:
    menu = {name: MENU[name] for name in ("silicide", "n_well", "p_base")}
    trim = Trim(first=Insertion(temperature=T_0, scales="output", reach=0.5))
    study = mirror_study(3, materials=menu, purpose="silicon", trim=trim, samples=8192)
    silicon = design(study).silicon
    assert silicon is not None
    assert silicon.trimmed
    assert silicon.bound.proven
    # 99.7 % of the parts is about 3 sigma; a box of b leaves b times the span, to both sides
    reached = silicon.figures[0].box_ppm_per_K * SPAN / 2
    assert reached == pytest.approx(1e6 * silicon.bound.deviation, rel=0.1)
    assert silicon.figures[0].beyond_trim == 0


def test_the_figures_are_those_of_the_studys_yield_and_of_its_parts() -> None:
    study = mirror_study(2, purpose="silicon", limit="150 ppm/K", samples=1024)
    spread = study.spread.model_copy(update={"wanted_yield": 0.9})
    result = design(study.model_copy(update={"spread": spread}))
    silicon = result.silicon
    assert silicon is not None
    assert silicon.quantile == 0.9
    drawn = spread_of(result.winner.operation)
    boxes = drawn.sample.figures[-1, :, FIGURES.index("residual_box")] * 1e6
    # a tenth of the same parts lie above
    assert (boxes > silicon.figures[0].box_ppm_per_K).sum() == pytest.approx(102, abs=1)


def test_no_band_at_the_deviation_to_give_up_at_is_no_proof() -> None:
    room, band = room_and_band(base_study(), OUTPUT)
    offer = Offer((MENU["silicide"], MENU["thin_film"]), "series")
    fit = best_silicon_fit(band, offer, room)
    assert fit is not None
    for give_up in (1.01, 1.2, 2.0, 5.0):
        again = silicon_outcome(band, offer, room, fit.points[1:], give_up * fit.deviation)
        assert not again.ruled_out
        assert again.fit is not None
        assert again.fit.deviation == pytest.approx(fit.deviation, rel=0.01)


def test_nothing_is_proven_where_the_output_warms_the_die() -> None:
    menu = {name: MENU[name] for name in ("silicide", "n_well")}
    trim = Trim(first=Insertion(temperature=T_0, scales="core", reach=0.5))
    circuit = {"topology": "ptat core", "area_ratio": (8.0,), "supply": 3.0}
    study = study_of(
        circuit, {"core": OpenSlot(pieces=2)}, menu, purpose="silicon", trim=trim, samples=256
    )
    warm = study.range.model_copy(update={"thermal_resistance": 200.0})
    cold = design(study).silicon
    hot = design(study.model_copy(update={"range": warm})).silicon
    assert cold is not None
    assert hot is not None
    assert cold.bound.proven
    assert not hot.bound.proven


def test_a_trim_of_another_slot_is_searched_by_steps() -> None:
    slots = {
        "input": {"parts": [{"material": MENU["p_poly"], "value": 300.0}]},
        "output": OpenSlot(pieces=2),
    }
    menu = {name: MENU[name] for name in ("p_poly", "silicide", "n_well")}
    trim = Trim(first=Insertion(temperature=T_0, scales="input", reach=0.8))
    circuit = {"topology": "degenerated mirror", "input_current": (1e-4,)}
    study = study_of(circuit, slots, menu, current=1e-5, purpose="silicon", trim=trim, samples=1024)
    silicon = design(study).silicon
    assert silicon is not None
    assert not silicon.bound.proven
    assert silicon.single is not None
    assert silicon.figures[0].box_ppm_per_K <= silicon.single.silicon.box_ppm_per_K


def test_choices_alone_are_compared_over_silicon_too() -> None:
    slot = {"parts": [{"material": MENU["silicide"], "value": 5.9e3}]}
    circuit = {
        "topology": "degenerated mirror", "input_current": (1e-4,), "area_ratio": (1.0, 2.0),
    }  # fmt: skip
    study = study_of(circuit, {"output": slot}, current=1e-5, purpose="silicon", samples=1024)
    result = design(study)
    assert result.silicon is not None
    assert len(result.silicon.figures) == 2
    assert result.silicon.single is None


def test_silicon_without_any_spread_is_refused() -> None:
    with pytest.raises(InputError, match=r"search\.for: found 'silicon', but nothing varies"):
        design(sensed(film("a"), film("b", 100), purpose="silicon"))


# IHP SG13G2 open process specification: ohm per square min/typ/max, TC1, TC2 over -40..125 degC
OPEN_PROCESS = {
    "Rsil": (6.2, 7.0, 7.8, 3100.0, 0.3),
    "Rppd": (235.0, 260.0, 285.0, 170.0, 0.4),
    "Rhigh": (1160.0, 1360.0, 1560.0, -2300.0, 2.1),
}


def test_on_an_open_process_a_ptat_core_keeps_to_the_silicide() -> None:
    """Flat from a PTAT core needs 1/T, 3330 ppm/K: Rsil alone falls short by about 230 ppm/K."""
    menu = {
        name: Material(
            name=name, reference=300.0, sheet_resistance=typical, tc1=tc1 * 1e-6, tc2=tc2 * 1e-6,
            spread=(most - least) / 2 / typical / 3,
        )
        for name, (least, typical, most, tc1, tc2) in OPEN_PROCESS.items()
    }  # fmt: skip
    circuit = {"topology": "ptat core", "area_ratio": (8.0,)}
    slots = {"core": OpenSlot(pieces=2, join="either")}
    result = design(study_of(circuit, slots, menu, purpose="silicon"))
    assert result.silicon is not None
    assert result.silicon.single is not None
    alone = result.silicon.single.found.operation.mixes["core"].parts
    assert [part.material.name for part in alone] == ["Rsil"]
    parts = {part.material.name: part for part in result.winner.operation.mixes["core"].parts}
    assert "Rsil" in parts
    assert result.silicon.figures[0].box_ppm_per_K <= result.silicon.single.silicon.box_ppm_per_K


def test_in_two_slots_a_general_optimiser_finds_nothing_much_better() -> None:
    study = sum_study()
    question = question_of(study)
    operation = question.groups[0][0]
    causes = causes_of(operation, [(n, s.materials) for n, s in question.open_slots.items()])
    room = Room(question.target, causes, OUTPUT, 3.0)
    chosen = {
        slot: Offer((MENU[a], MENU["thin_film"]), "series")
        for slot, a in (("core", "n_diffusion"), ("base", "silicide"))
    }
    start = {"core": np.array([300.0, 5200.0]), "base": np.array([3e3, 6e4])}
    fit = robust_fit(operation, chosen, start, room)
    assert fit is not None
    T = np.linspace(233.15, 423.15, 21)
    drawn = np.random.default_rng(1).standard_normal((200, causes.count))
    points = np.vstack([3 * drawn / np.linalg.norm(drawn, axis=1, keepdims=True), fit.points[1:]])
    ratios = {m.name: causes.ratio(m, points, T) for o in chosen.values() for m in o.materials}
    fixed = causes.quantities(operation, points, T)

    def worst(x: np.ndarray) -> float:
        values = {"core": x[:2] * 1e3, "base": x[2:] * 1e4}
        made = {
            resistance_name(slot): sum(
                r * ratios[m.name] for r, m in zip(values[slot], offer.materials, strict=True)
            )
            for slot, offer in chosen.items()
        }
        ratio = currents(operation.circuit, {**fixed, **made})["I_out"]
        ratio = ratio / question.target.current(T)
        high, low = ratio.max(axis=1), ratio.min(axis=1)
        return float(((high - low) / (high + low)).max())

    parts = [
        part.value / unit
        for slot, unit in (("core", 1e3), ("base", 1e4))
        for part in fit.operation.mixes[slot].parts
    ]
    ours = worst(np.array(parts))
    found = differential_evolution(
        worst, [(0.0, 2.0), (5.0, 6.0), (0.0, 2.0), (4.0, 8.0)], maxiter=30, popsize=6,
        rng=np.random.default_rng(2), polish=False,
    )  # fmt: skip
    assert len(parts) == 4
    assert ours <= 1.01 * fit.deviation
    assert ours <= 1.02 * found.fun
