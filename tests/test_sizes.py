"""Sizes that can be drawn or ordered: by hand, by full enumeration, and against standards."""

from __future__ import annotations

from dataclasses import replace
from itertools import product
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from scipy.optimize import minimize

from tcopt.assess import assess
from tcopt.check import check
from tcopt.errors import InputError, NoSolutionError
from tcopt.finish import finished_study
from tcopt.mix.influence import Influence
from tcopt.mix.search import design
from tcopt.mix.segments import least_areas
from tcopt.mix.standard import standard_values
from tcopt.operation import Mix
from tcopt.spread.pelgrom import device_deviation
from tcopt.study import (
    Layout,
    Material,
    OpenSlot,
    Part,
    Study,
    drawn_material,
    drawn_value,
    load_study,
    study_text,
)
from tests.gate import write
from tests.silicon_studies import MENU, T_0, mirror_study, study_of, sum_study

UM = 1e-6
FEW = {name: MENU[name] for name in ("silicide", "n_well", "p_base", "n_diffusion")}


def film(name: str = "film", **data: Any) -> Material:
    given = {"sheet_resistance": 320.0, "tc1": 0.0, "min_width": 2 * UM, "matching": 0.02 * UM}
    return Material(**{"name": name, "reference": T_0, **given, **data})


def sensed(*materials: Material, current: float = 1e-5, **given: Any) -> Study:
    """Return a flat 1.2 V over an open resistor of one material."""
    circuit = {"topology": "reference over resistor", "reference_voltage": 1.2, "transistor": False}
    menu = {material.name: material for material in materials}
    return study_of(circuit, {"sense": OpenSlot()}, menu, current=current, **given)


def test_a_segment_is_body_and_two_ends() -> None:
    # 5 squares of 320 ohm, and two ends of 150 ohm um over 2 um
    material = film(end_resistance=150 * UM)
    assert drawn_value(material, 2 * UM, 10 * UM) == pytest.approx(1600 + 2 * 75)
    assert drawn_value(material, 2 * UM, 10 * UM, series=4) == pytest.approx(7000)
    assert drawn_value(material, 2 * UM, 10 * UM, parallel=5) == pytest.approx(350)


def test_ends_bring_their_coefficients_by_their_share() -> None:
    # ends of 300 ohm um beside a body of 320 x 10 = 3200 ohm um: a share of 3/35
    material = film(tc1=-180e-6, tc2=7e-7, end_resistance=150 * UM, end_tc1=900e-6)
    made = drawn_material(material, 10 * UM)
    assert made.tc1 == pytest.approx((3200 * -180e-6 + 300 * 900e-6) / 3500)
    assert made.tc2 == pytest.approx(7e-7)
    assert drawn_material(made, 10 * UM) == made
    assert drawn_material(film(end_resistance=1e-4), 1 * UM).tc1 == 0.0


def test_a_part_with_sizes_has_the_law_of_its_segments() -> None:
    material = film(end_resistance=150 * UM, end_tc1=900e-6)
    part = Part(material=material, value=7000, width=2 * UM, length=10 * UM, series=4)
    T = np.array([T_0 + 100])
    by_hand = 4 * (1600 + 150 * (1 + 900e-6 * 100))
    assert Mix((part,)).resistance(T) == pytest.approx(by_hand)
    assert part.squares == pytest.approx(5)
    assert part.area == pytest.approx(4 * 20 * UM**2)
    beside = Part(material=material, value=350, width=2 * UM, length=10 * UM, parallel=5)
    assert beside.area == pytest.approx(5 * 20 * UM**2)


def test_one_resistor_is_drawn_as_whole_segments_on_the_grid() -> None:
    # 120 kohm of 320 ohm at 2 um: 375 squares, 750 um, in 8 segments of at most 100 um
    result = design(sensed(film(), layout=Layout(grid=0.05 * UM, front=0)))
    (part,) = result.winner.operation.mixes["sense"].parts
    assert part.length is not None
    assert part.series * part.length == pytest.approx(750 * UM, rel=1e-3)
    assert part.width == pytest.approx(2 * UM)
    assert part.series >= 8
    assert part.length / (0.05 * UM) == pytest.approx(round(part.length / (0.05 * UM)))
    assert result.winner.residual_drift.deviation_ppm < 1
    assert result.sizes[0].area == pytest.approx(1500 * UM**2, rel=1e-3)


def test_less_than_a_few_squares_are_drawn_side_by_side() -> None:
    # 160 ohm is half a square: at five squares a segment, ten or more side by side
    result = design(sensed(film(), current=7.5e-3, layout=Layout(front=0)))
    (part,) = result.winner.operation.mixes["sense"].parts
    assert part.series == 1
    assert part.parallel >= 10
    assert part.squares is not None
    assert part.squares >= 5
    assert result.winner.residual_drift.deviation_ppm < 1000


def test_parts_of_one_material_share_their_segment() -> None:
    menu = {"n_poly": MENU["n_poly"]}
    # segments of a square and more, so that there are enough of them for any ratio
    result = design(sum_study(pieces=1, materials=menu, layout=Layout(front=0, least_squares=1)))
    mixes = result.winner.operation.mixes
    (core,), (base,) = mixes["core"].parts, mixes["base"].parts
    assert (core.width, core.length) == (base.width, base.length)
    assert core.series / core.parallel != base.series / base.parallel
    apart = design(sum_study(pieces=1, materials=menu, layout=Layout(front=0, unit="part")))
    exact = design(sum_study(pieces=1, materials=menu))
    ideal = exact.winner.residual_drift.deviation_ppm
    assert apart.winner.residual_drift.deviation_ppm == pytest.approx(ideal, rel=0.02)
    assert result.winner.residual_drift.deviation_ppm == pytest.approx(ideal, rel=0.1)


def test_pelgroms_law_sets_the_area() -> None:
    """k = 15 nm, as of Rppd in the IHP SG13G2 open process specification, and 0.1 %."""
    # of a pair k/sqrt(area), of one resistor k/sqrt(2 area): 112.5 um^2
    study = sensed(film(matching=15e-9), layout=Layout(mismatch=1e-3, front=0))
    result = design(study)
    sizes = result.sizes[0]
    assert sizes.area is not None
    assert sizes.mismatch is not None
    assert sizes.area == pytest.approx(1500 * UM**2, rel=0.01)  # the least width rules
    narrow = study.process.materials["film"].model_copy(update={"min_width": 0.2 * UM})
    result = design(sensed(narrow, layout=Layout(mismatch=1e-3, front=0)))
    sizes = result.sizes[0]
    assert sizes.area == pytest.approx(112.5 * UM**2, rel=0.05)
    assert sizes.mismatch == pytest.approx(1e-3, rel=0.03)
    assert sizes.mismatch <= 1e-3


def test_areas_for_a_mismatch_are_the_least_in_all() -> None:
    study = mirror_study(layout=Layout(mismatch=2e-3))
    operation = design(mirror_study()).winner.operation
    influence = Influence(assess(replace(operation, study=study)), {"output"})
    layout = study.layout
    assert layout is not None
    areas = least_areas(influence, layout)
    places = list(areas)
    pulls = [influence.at_reference[place] for place in places]
    matching = [influence.parts[place].material.matching or 0.0 for place in places]

    def excess(log_areas: np.ndarray) -> float:
        own = [
            (g * device_deviation(k, float(np.exp(a)) * UM**2)) ** 2
            for g, k, a in zip(pulls, matching, log_areas, strict=True)
        ]
        return 1 - sum(own) / 4e-6

    found = minimize(
        lambda logs: float(np.exp(logs).sum()),
        np.log([1000.0] * len(places)),
        bounds=[(0, 20)] * len(places),
        constraints={"type": "ineq", "fun": excess},
    )
    assert sum(areas.values()) / UM**2 == pytest.approx(found.fun, rel=1e-3)


def test_settled_resistors_may_exceed_the_mismatch_alone() -> None:
    slots = {
        "input": {"parts": [{"material": MENU["p_poly"], "value": 300.0}]},
        "output": OpenSlot(),
    }
    circuit = {"topology": "degenerated mirror", "input_current": (1e-4,)}
    study = study_of(circuit, slots, current=1e-5, layout=Layout(mismatch=1e-5, front=0))
    with pytest.raises(InputError, match=r"layout\.mismatch: found 0\.001 %, which the resistors"):
        design(study)


def test_a_part_that_no_segments_make_is_refused() -> None:
    layout = Layout(most_segments=3, longest=20 * UM, front=0)
    with pytest.raises(NoSolutionError, match=r"found no segments for 120 kohm in sense of film"):
        design(sensed(film(), layout=layout))


@pytest.mark.parametrize(
    ("series", "count", "some"),
    [
        # IEC 60063, from memory
        ("E24", 24, (1.0, 1.1, 1.2, 1.3, 2.7, 3.0, 3.3, 4.7, 8.2, 9.1)),
        ("E96", 96, (1.0, 1.02, 1.05, 4.64, 4.75, 4.87, 9.53, 9.76)),
        ("E192", 192, (1.01, 4.7, 9.09, 9.2, 9.31, 9.88)),
    ],
)
def test_standard_values_are_those_of_the_standard(
    series: str, count: int, some: tuple[float, ...]
) -> None:
    decade = standard_values(series, 99.9, 2 * count)
    whole = [value for value in decade if 10 <= value < 99.95]
    assert len(whole) == count
    assert {round(10 * value, 6) for value in some} <= set(whole)
    if count > 24:  # rounded powers of ten, but for 9.20 of E192
        powers = {float(f"{10 ** (1 + k / count):.3g}") for k in range(count)}
        assert set(whole) - powers == ({92.0} if series == "E192" else set())


def test_standard_values_are_the_best_of_all_pairs() -> None:
    study = mirror_study(2, layout=Layout(standard="E24"))
    result = design(study)
    operation = result.winner.operation
    parts = operation.mixes["output"].parts
    decades = [float(f"{m}e{k}") for k in range(6) for m in standard_values("E24", 3.1, 12)]
    near = [[v for v in decades if 0.5 < v / part.value < 2] for part in parts]
    least = np.inf
    for values in product(*near):
        mix = Mix(
            tuple(p.model_copy(update={"value": v}) for p, v in zip(parts, values, strict=True))
        )
        found = assess(replace(operation, mixes={"output": mix}))
        least = min(least, found.residual_drift.deviation_ppm)
    assert result.winner.residual_drift.deviation_ppm == pytest.approx(least, rel=1e-9)


def test_tolerance_at_its_worst() -> None:
    # I = V/R: with R 1 % low the current is 1/0.99 of what it was
    result = design(sensed(film(), current=1.2e-4, layout=Layout(standard="E96")))
    sizes = result.sizes[0]
    assert result.winner.operation.mixes["sense"].parts[0].value == 1e4
    assert sizes.tolerance == 0.01
    assert sizes.tolerance_deviation_ppm == pytest.approx(1e6 * (1 / 0.99 - 1), rel=1e-6)
    assert sizes.tolerance_box_ppm_per_K == pytest.approx(0, abs=1e-9)
    assert sizes.area is None


@pytest.fixture(scope="module")
def limited() -> Study:
    return mirror_study(2, materials=FEW, show=3, layout=Layout(area_limit=1e-10, front=2))


def test_an_area_is_kept_and_costs_drift(limited: Study) -> None:
    free = design(mirror_study(2, materials=FEW, show=3, layout=Layout(front=0)))
    tight = design(limited)
    assert free.sizes[0].area is not None
    assert free.sizes[0].area > 1e-10
    assert all(sizes.area is not None and sizes.area <= 1e-10 for sizes in tight.sizes)
    worse = tight.winner.residual_drift.deviation_ppm
    assert worse > free.winner.residual_drift.deviation_ppm
    areas = [point.area for point in tight.front]
    drifts = [point.found.residual_drift.deviation_ppm for point in tight.front]
    assert len(areas) >= 2
    assert areas == sorted(areas)
    assert drifts == sorted(drifts, reverse=True)
    assert drifts[-1] <= worse


def test_an_area_that_nothing_fits_into_names_the_smallest() -> None:
    study = mirror_study(2, materials=FEW, layout=Layout(area_limit=1e-12))
    message = (
        r"layout\.area_limit: found 1 um\^2, which no design fits into; accepted: [\d.]+ um\^2"
    )
    with pytest.raises(NoSolutionError, match=message):
        design(study)


def test_sizes_in_parallel_mixes_keep_the_area_too() -> None:
    result = design(
        mirror_study(2, "parallel", materials=FEW, show=2, layout=Layout(area_limit=3e-9, front=0))
    )
    assert all(sizes.area is not None and sizes.area <= 3e-9 for sizes in result.sizes)


def test_ends_are_counted_before_the_design_is_called_good() -> None:
    strong = {
        name: MENU[name].model_copy(update={"end_tc1": 2000e-6}) for name in ("silicide", "n_well")
    }
    result = design(mirror_study(2, materials=strong, layout=Layout(front=0)))
    plain = design(mirror_study(2, materials=strong))
    # balanced anew with their ends, the values still come within a few times the ideal
    assert (
        result.winner.residual_drift.deviation_ppm < 3 * plain.winner.residual_drift.deviation_ppm
    )
    parts = result.winner.operation.mixes["output"].parts
    assert any(part.material.tc1 != strong[part.material.name].tc1 for part in parts)


def test_a_drawn_winner_reads_back_with_the_very_same_figures(tmp_path: Path) -> None:
    process = {
        "title": "Invented", "reference": "27 degC",
        "materials": {
            "poly": {"sheet_resistance": "320 ohm", "tc1": "-180 ppm/K", "min_width": "0.8 um",
                     "end_resistance": "150 ohm um", "end_tc1": "900 ppm/K"},
            "base": {"sheet_resistance": "640 ohm", "tc1": "1750 ppm/K", "tc2": "4.6 ppm/K^2",
                     "min_width": "1.2 um"},
        },
        "transistors": {"npn": {"saturation_current": "1.2e-16 A", "bandgap_voltage": "1.17 V",
                                "temperature_exponent": 3.6}},
    }  # fmt: skip
    asked = {
        "title": "Invented", "process": "process.toml", "range": {"grade": "industrial"},
        "circuit": {"topology": "ptat core", "transistor": "npn", "area_ratio": 8},
        "target": {"shape": "ptat", "current": "10 uA"},
        "resistors": {"core": {"pieces": 2}}, "layout": {"grid": "20 nm", "front": 0},
    }  # fmt: skip
    result = design(load_study(write(tmp_path, process, asked)))
    winner = tmp_path / "winner.toml"
    winner.write_text(
        study_text(finished_study(result.winner.operation), tmp_path), encoding="utf-8"
    )
    assert "length =" in winner.read_text(encoding="utf-8")
    found = check(load_study(winner)).assessment
    assert found.residual_drift == result.winner.residual_drift
