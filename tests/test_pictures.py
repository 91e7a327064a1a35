"""Pictures: what they show, that nothing is cut off, covered or too small, and always the same."""

from __future__ import annotations

from functools import cache
from itertools import combinations
from typing import Any

import matplotlib as mpl
import numpy as np
import pytest
from matplotlib.figure import Figure
from matplotlib.text import Text

from tcopt.assess import Assessment, assess
from tcopt.design import DesignResult
from tcopt.menu import menu, menu_range
from tcopt.mix.ratio import ratio_sweep
from tcopt.mix.search import design
from tcopt.operation import Choices, Mix, Operation
from tcopt.show.plots import (
    causes_picture,
    current_picture,
    encoded,
    menu_map,
    ratio_picture,
    residual_picture,
    resistor_map,
)
from tcopt.show.plots.map import _outline
from tcopt.show.plots.style import pretty
from tcopt.study import Part
from tests.small import first_design, material, mirror_study, process, reference_study

LONG = (
    "A title as long as titles may be, of 200 letters, in which $V_{BE}$ and <b> stand: "
    + "w" * 130
)
LONGEST_NAME = "a_material_whose_name_is_as_long_as_names_are_allowed_to_be_"


@cache
def _designed(case: str) -> DesignResult:
    """Return a design whose resistor map is hard to draw."""
    if case == "first":
        return first_design()
    if case == "one":
        return design(mirror_study(process(material("only_film", -60, 0.1)), title=LONG[:200]))
    if case == "clustered":
        menu_ = [material(f"poly_{k}", 100 + 7 * k, 0.5 + 0.02 * (5 * k % 7)) for k in range(12)]
        return design(mirror_study(process(*menu_)))
    if case == "on a line":
        line = [material(LONGEST_NAME, 0), material("_b", 2000, 2), material("c", 4000, 4)]
        return design(mirror_study(process(*line), title=LONG[:200]))
    if case == "far":
        some = [material("p_poly", -180, 0.7), material("p_base", 1750, 4.6), material("n", 120)]
        asked = {"shape": "ptat", "low": 290.15, "high": 310.15, "limit": "0.5 %"}
        made = mirror_study(process(*some), **asked)
        near = made.circuit.model_copy(update={"input_current": (1.1e-5,)})
        return design(made.model_copy(update={"circuit": near}))
    assert case == "parallel"
    two = [material("n_well", 5600, 11), material("n_diffusion", 1450, 0.9)]
    return design(mirror_study(process(*two, material("p", -180)), join="parallel"))


CASES = ("first", "one", "clustered", "on a line", "far", "parallel")
SWEPT = ("first", "on a line", "parallel")


def _slot_map(case: str) -> Figure:
    return resistor_map(_designed(case), "output")


def _ratio(case: str) -> Figure:
    winner = _designed(case).winner
    return ratio_picture(ratio_sweep(winner, "output"), winner)


PICTURES = {
    **{f"map, {case}": lambda case=case: _slot_map(case) for case in CASES},
    **{f"menu, {case}": lambda case=case: menu_map(
        menu(_designed(case).study.process, menu_range(None, None, None))
    ) for case in CASES},
    **{f"current, {case}": lambda case=case: current_picture(_designed(case).winner)
       for case in CASES},
    **{f"residual, {case}": lambda case=case: residual_picture(_designed(case).winner)
       for case in CASES},
    **{f"causes, {case}": lambda case=case: causes_picture(_designed(case).winner)
       for case in CASES},
    **{f"ratio, {case}": lambda case=case: _ratio(case) for case in SWEPT},
}  # fmt: skip


@cache
def _picture(name: str) -> Figure:
    return PICTURES[name]()


def _texts(figure: Figure) -> list[Text]:
    found = figure.findobj(Text)
    return [text for text in found if isinstance(text, Text) and text.get_text().strip()]


def _labels(figure: Figure) -> list[Text]:
    """Return the labels inside the axes."""
    return list(figure.axes[0].texts)


@pytest.mark.parametrize("name", PICTURES)
def test_all_text_is_readable_and_inside_the_picture(name: str) -> None:
    figure = _picture(name)
    figure.draw_without_rendering()
    page = figure.bbox.padded(0.5)
    for text in _texts(figure):
        if not text.get_visible():
            continue
        assert text.get_fontsize() >= 8, text.get_text()
        box = text.get_window_extent()
        inside = box.x0 >= page.x0 and box.y0 >= page.y0 and box.x1 <= page.x1 and box.y1 <= page.y1
        axis = text in figure.axes[0].get_xticklabels() + figure.axes[0].get_yticklabels()
        assert inside or axis, (text.get_text(), box)


@pytest.mark.parametrize("name", [name for name in PICTURES if not name.startswith("causes")])
def test_labels_cover_neither_each_other_nor_the_points(name: str) -> None:
    figure = _picture(name)
    figure.draw_without_rendering()
    boxes = [(text.get_text(), text.get_window_extent()) for text in _labels(figure)]
    for (one, first), (other, second) in combinations(boxes, 2):
        assert not first.overlaps(second), (one, other)
    axes = figure.axes[0]
    for line in axes.lines:
        if line.get_marker() in {"None", "", None}:
            continue
        for x, y in axes.transData.transform(line.get_xydata()):
            for text, box in boxes:
                assert not box.contains(x, y), text


@pytest.mark.parametrize("name", ["map, first", "causes, first"])
def test_the_same_result_gives_the_same_bytes(name: str) -> None:
    first = encoded(PICTURES[name]())
    with mpl.rc_context({"font.size": 30, "svg.hashsalt": "other", "axes.grid": False}):
        second = encoded(PICTURES[name]())
    assert first == second
    assert first["png"].startswith(b"\x89PNG")
    assert first["svg"].startswith(b"<?xml")
    assert b"dc:date" not in first["svg"]


def test_a_title_in_a_script_that_the_font_lacks_is_no_warning() -> None:
    found = design(mirror_study(process(material("only_film", -60)), title="電流 $x$"))
    assert encoded(resistor_map(found, "output"))["png"]


def test_the_picture_layer_asks_for_no_window() -> None:
    import sys

    assert PICTURES["current, first"]()
    assert "matplotlib.pyplot" not in sys.modules


# --- the resistor map ---


def _marked(figure: Figure, marker: str) -> list[tuple[float, float]]:
    lines = figure.axes[0].lines
    return [tuple(line.get_xydata()[0]) for line in lines if line.get_marker() == marker]


def test_the_map_marks_need_choice_and_materials() -> None:
    figure = _slot_map("first")
    result = _designed("first")
    needed = [m for m in _marked(figure, "o") if m == pytest.approx((1e6 / 300.15, 0), abs=1e-3)]
    assert len(needed) == 1
    # by the lever rule from the parts' values: TC1 3200 and 5600, TC2 0.4 and 11
    values = np.array([part.value for part in result.winner.operation.mixes["output"].parts])
    share = values / values.sum()
    assert _marked(figure, "D") == [
        pytest.approx((share @ [3200, 5600], share @ [0.4, 11.0]), rel=1e-9)
    ]
    assert sorted(_marked(figure, "s")) == [
        pytest.approx((3200, 0.4)),
        pytest.approx((5600, 11.0)),
    ]
    words = "\n".join(text.get_text() for text in _labels(figure))
    assert all(name in words for name in result.study.process.materials)
    assert f"silicide\n{100 * share[0]:.3g} %" in words


def test_the_title_of_the_map_says_which_resistor() -> None:
    assert _slot_map("first").get_suptitle() == (
        "Resistor output: 95.6\xa0% silicide + 4.45\xa0% n_well in series fits best"
    )
    assert _slot_map("one").get_suptitle() == "Resistor output: only_film alone fits best"


def test_a_need_far_away_is_pointed_to() -> None:
    figure = _slot_map("far")
    words = [text.get_text() for text in _labels(figure) if "needed" in text.get_text()]
    assert len(words) == 1
    assert words[0].endswith("(outside the picture)")
    assert "TC1 \N{MINUS SIGN}" in words[0]
    # so that the materials keep the picture to themselves
    low, high = figure.axes[0].get_xlim()
    assert high - low < 5 * (1750 + 180)


def test_the_map_says_that_the_lever_line_is_exact_in_series_only() -> None:
    result = _designed("parallel")
    assert result.winner.operation.mixes["output"].join == "parallel"
    figure = _slot_map("parallel")
    assert "exact in series only" in figure.get_supxlabel().replace("\n", " ")
    ((x, y),) = _marked(figure, "D")
    on_line = np.interp(x, [1450, 5600], [0.9, 11.0])
    assert y < on_line - 1
    assert "exact in series only" not in _slot_map("first").get_supxlabel()


@pytest.mark.parametrize(
    ("points", "corners"),
    [
        ([(1, 1)], [(1, 1)]),
        ([(0, 0), (2, 1)], [(0, 0), (2, 1)]),
        ([(1, 1), (0, 0), (3, 3), (2, 2)], [(0, 0), (3, 3)]),
        ([(5, 1), (5, 1), (5, 1)], [(5, 1)]),
        ([(0, 2), (0, 7), (0, 4)], [(0, 2), (0, 7)]),
        ([(0, 0), (4, 0), (0, 4), (1, 1)], [(0, 0), (0, 4), (4, 0)]),
    ],
)
def test_the_outline_of_a_menu(points: Any, corners: Any) -> None:
    found = _outline(np.array(points, dtype=float))
    assert sorted(map(tuple, found.tolist())) == [tuple(map(float, corner)) for corner in corners]


# --- curves ---


def _sense(limit: str | None, *coefficients: float) -> Assessment:
    """Return 1 V over one resistor: ``I = 1 V/R``."""
    made = material("m", *coefficients)
    study = reference_study(process(made), limit=limit)
    mix = Mix((Part(material=made, value=1e5),))
    return assess(Operation(study, Choices(), {"sense": mix}))


def _dashed(figure: Figure) -> list[float]:
    return sorted(
        float(line.get_ydata()[0])
        for line in figure.axes[0].lines
        if line.get_linestyle() == "--" and len(set(line.get_ydata())) == 1
    )


def test_a_limit_on_the_box_is_a_band_of_limit_times_span() -> None:
    found = _sense("100 ppm/K", 50.0)
    low, high = _dashed(residual_picture(found))
    assert high - low == pytest.approx(100 * 190)  # the residual is 1 at T_ref
    left = found.residual_drift
    middle = 1e6 * ((left.lowest.value + left.highest.value) / 2 - 1)
    assert (high + low) / 2 == pytest.approx(middle)


def test_a_limit_on_the_deviation_is_a_band_about_zero() -> None:
    assert _dashed(residual_picture(_sense("1 %", 50.0))) == [pytest.approx(-1e4), 1e4]


def test_a_limit_wider_than_the_picture_is_told() -> None:
    figure = residual_picture(_sense("10 %", 1.0))
    assert _dashed(figure) == []
    assert figure.get_supxlabel().startswith("Shaded, wider than the picture: the limit, ±100000")


def test_the_extremes_of_the_residual_are_marked() -> None:
    # by hand: R is least at T_ref - TC1/(2 TC2) = T_ref + 25 K, so I is largest there
    figure = residual_picture(_sense(None, -50.0, 1.0))
    ((x, y),) = _marked(figure, "^")
    assert x == pytest.approx(52, abs=1e-6)
    assert y == pytest.approx(1e6 * (1 / (1 - 25e-6 * 25) - 1), rel=1e-9)
    ((x, y),) = _marked(figure, "v")
    d = 423.15 - 300.15
    assert x == pytest.approx(150)
    assert y == pytest.approx(1e6 * (1 / (1 - 50e-6 * d + 1e-6 * d * d) - 1), rel=1e-9)


def test_a_flat_current_looks_flat() -> None:
    figure = current_picture(_sense(None, 0.0))
    low, high = figure.axes[0].get_ylim()
    assert (low, high) == (pytest.approx(9.8), pytest.approx(10.2))
    assert figure.axes[0].get_ylabel() == "Output current [µA]"


def test_the_causes_are_stacked_to_their_sum() -> None:
    winner = _designed("first").winner
    axes = causes_picture(winner).axes[0]
    tops = np.array([c.get_paths()[0].vertices[:, 1].max() for c in axes.collections])
    feet = np.array([c.get_paths()[0].vertices[:, 1].min() for c in axes.collections])
    T = np.array([233.15])
    causes = [1e6 * float(share[0]) for share in winner.operation.causes(T).values()]
    # both stacks are highest at the cold end
    assert tops.max() == pytest.approx(sum(c for c in causes if c > 0))
    assert feet.min() == pytest.approx(sum(c for c in causes if c < 0))
    total = next(line for line in axes.lines if line.get_label() == "all together")
    assert total.get_ydata()[0] == pytest.approx(sum(causes))
    look = {(c.get_facecolor().tobytes(), c.get_hatch()) for c in axes.collections[::2]}
    assert len(look) == len(axes.collections[::2])


def test_more_causes_than_layers_are_added_up() -> None:
    many = [material(f"m{k}", 1000 * (k + 1), k) for k in range(6)]
    study = mirror_study(process(*many))
    mix = Mix(tuple(Part(material=each, value=1e3) for each in many))
    found = assess(Operation(study, Choices(input_current=1e-4), {"output": mix}))
    axes = causes_picture(found).axes[0]
    names = [text.get_text() for text in axes.get_legend().get_texts()]
    assert len(names) == 9
    assert names[-2:] == ["the other 5", "all together"]


def test_the_ratio_picture_shades_the_tolerance() -> None:
    winner = _designed("first").winner
    sweep = ratio_sweep(winner, "output")
    axes = ratio_picture(sweep, winner).axes[0]
    (band,) = axes.patches
    x0, x1 = band.get_extents().transformed(axes.transData.inverted()).intervalx
    assert (x0, x1) == (pytest.approx(100 * sweep.low), pytest.approx(100 * sweep.high))
    assert axes.get_yscale() == "log"


@pytest.mark.parametrize(
    ("plain", "printed"),
    [
        ("-40 degC to 150 degC", "\N{MINUS SIGN}40 °C to 150 °C"),
        ("max |I/I_target - 1|", "max |I/I_target - 1|"),
        ("n-2 1.5 kohm, 3 uA, 2 ppm/K^2", "n-2 1.5 kΩ, 3 µA, 2 ppm/K²"),
    ],
)
def test_units_as_they_are_printed(plain: str, printed: str) -> None:
    assert pretty(plain) == printed
