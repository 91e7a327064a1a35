"""What the gate takes and refuses of layouts, drawn parts, ends, and searches for silicon."""

from __future__ import annotations

import re
from pathlib import Path
from typing import Any

import pytest

from tcopt.errors import InputError
from tcopt.study import load_study, study_text

from .gate import PROCESS, STUDY, changed, write

WELL = {
    "materials.poly.min_width": "0.8 um", "materials.poly.end_resistance": "150 ohm um",
    "materials.poly.matching": "2 % um", "materials.well.sheet_resistance": "1 kohm",
    "materials.well.min_width": "2 um",
}  # fmt: skip
PART = {"material": "poly", "value": "1750 ohm", "width": "2 um", "length": "10 um"}
DRAWN = {"resistors": {"output": {"parts": [PART]}}}

REFUSALS: list[tuple[dict[str, Any], dict[str, Any], str]] = [
    ({}, {"layout": {"grid": "-1 nm"}}, "layout.grid: found '-1 nm'; accepted: a length such as"),
    ({}, {"layout": {"grid": "2 m"}}, "layout.grid: found '2 m'; accepted: a length such as"),
    ({}, {"layout": {"grids": "1 nm"}}, "layout.grids: found an unknown key; accepted: standard, "),
    ({}, {"layout": {"unit": "slot"}}, "layout.unit: found 'slot'; accepted: 'material', 'part'"),
    (
        {},
        {"layout": {"grid": "1 um", "longest": "0.5 um"}},
        "layout.longest: found 500 nm; accepted: at least the grid, 1 um",
    ),
    (
        {},
        {"layout": {"grid": "1 um", "segment": "0.5 um"}},
        "layout.segment: found 500 nm; accepted: at least the grid, 1 um",
    ),
    ({}, {"layout": {"area_limit": "0 um^2"}}, "layout.area_limit: found '0 um^2'; accepted: an a"),
    ({}, {"layout": {"area_limit": "5 um"}}, "layout.area_limit: found '5 um'; accepted: an area "),
    ({}, {"layout": {"mismatch": "0 %"}}, "layout.mismatch: found '0 %'; accepted: one standard d"),
    ({}, {"layout": {"mismatch": "150 %"}}, "layout.mismatch: found '150 %'; accepted: one standa"),
    ({}, {"layout": {"least_squares": 0}}, "layout.least_squares: found 0; accepted: a number of "),
    ({}, {"layout": {"most_segments": 0}}, "layout.most_segments: found 0; accepted: a whole numb"),
    ({}, {"layout": {"most_segments": 2.5}}, "layout.most_segments: found 2.5; accepted: a whole "),
    ({}, {"layout": {"spacing": "-1 um"}}, "layout.spacing: found '-1 um'; accepted: a length suc"),
    ({}, {"layout": {"front": 21}}, "layout.front: found 21; accepted: a whole number from 0 to 2"),
    ({}, {"layout": {"standard": "E97"}}, "layout.standard: found 'E97'; accepted: 'E3', 'E6', 'E"),
    (
        {},
        {"layout": {"standard": "E96", "grid": "10 nm"}},
        "layout.grid: found grid beside a standard series; accepted: standard with tolerance for",
    ),
    (
        {},
        {"layout": {"tolerance": "1 %"}},
        "layout.tolerance: found a tolerance without a standard series; accepted: it with standard",
    ),
    (
        {},
        {"layout": {"standard": "E96", "tolerance": "-1 %"}},
        "layout.tolerance: found '-1 %'; accepted: a tolerance to either side such as '1 %'",
    ),
    (
        {"materials.well.sheet_resistance": 0},
        {},
        "materials.well.sheet_resistance: found 0; accepted: a resistance",
    ),
    (
        {"materials.poly.end_resistance": "-3 ohm um"},
        {},
        "materials.poly.end_resistance: found '-3 ohm um'; accepted: the resistance of one end",
    ),
    (
        {"materials.well.end_tc1": "900 ppm/K"},
        {},
        "materials.well.end_tc1: found end_tc1 without end_resistance; accepted: both, or neither",
    ),
    (
        {},
        {"layout": {"mismatch": "0.2 %"}},
        "resistors.output.materials[1]: found 'well', which has no matching; accepted: materials "
        "with a matching, since layout.mismatch sets the area",
    ),
    ({}, {"search.for": "paper mill"}, "search.for: found 'paper mill'; accepted: 'paper', 'silic"),
    ({}, {"search.sigma": 0}, "search.sigma: found 0; accepted: a pure number such as 3, above 0 "),
    (
        {},
        {"resistors.output": {"parts": [{**PART, "value": "2 kohm"}]}},
        "resistors.output.parts[0].value: found 2 kohm; accepted: what the sizes make, 1.75 kohm",
    ),
    (
        {},
        {"resistors.output": {"parts": [{k: v for k, v in PART.items() if k != "width"}]}},
        "resistors.output.parts[0].width: found nothing; accepted: the width that belongs to the",
    ),
    (
        {},
        {"resistors.output": {"parts": [{"material": "poly", "value": "1 kohm", "series": 2}]}},
        "resistors.output.parts[0].length: found segments without a length; accepted: width and",
    ),
    (
        {},
        {"resistors.output": {"parts": [{**PART, "parallel": 0}]}},
        "resistors.output.parts[0].parallel: found 0; accepted: a whole number from 1 to",
    ),
    (
        {"materials.diving.tc1": "0 ppm/K"},
        {"resistors.output": {"parts": [{**PART, "material": "diving"}]}},
        "resistors.output.parts[0].length: found a length of diving, which has no sheet_resist",
    ),
]


@pytest.mark.parametrize(("process", "study", "message"), REFUSALS, ids=[r[2] for r in REFUSALS])
def test_a_refusal_says_where_and_what(
    tmp_path: Path, process: dict[str, Any], study: dict[str, Any], message: str
) -> None:
    path = write(tmp_path, changed(PROCESS, {**WELL, **process}), changed(STUDY, study))
    with pytest.raises(InputError, match=re.escape(message)):
        load_study(path)


def test_a_material_without_sheet_resistance_is_named_where_sizes_are_drawn(tmp_path: Path) -> None:
    path = write(tmp_path, PROCESS, changed(STUDY, {"layout": {"grid": "10 nm"}}))
    message = (
        "resistors.output.materials[0]: found 'poly', which has no min_width; accepted: materials "
        "with a min_width, since sizes are drawn"
    )
    with pytest.raises(InputError, match=re.escape(message)):
        load_study(path)
    poly = {"materials.poly.min_width": "1 um"}
    write(tmp_path, changed(PROCESS, poly), None)
    message = "resistors.output.materials[1]: found 'well', which has no sheet_resistance; accepted"
    with pytest.raises(InputError, match=re.escape(message)):
        load_study(path)


def test_standard_values_need_no_sheet_resistance(tmp_path: Path) -> None:
    layout = {"layout": {"standard": "E96"}}
    study = load_study(write(tmp_path, PROCESS, changed(STUDY, layout)))
    assert study.layout is not None
    assert study.layout.made_tolerance == 0.01


@pytest.mark.parametrize(
    "given",
    [
        {"layout": {"grid": "20 nm", "unit": "part", "longest": "80 um", "least_squares": 4,
                    "most_segments": 50, "spacing": "0.5 um", "area_limit": "2000 um^2",
                    "front": 3}},
        {"layout": {"segment": "20 um"}, "search": {"for": "silicon", "sigma": 4, "digits": 5,
                                                    "show": 3}},
        {"layout": {"standard": "E24", "tolerance": "2 %"}},
        {**DRAWN, "resistors": {"output": {"parts": [{**PART, "value": "7 kohm", "series": 4}]}}},
    ],
)  # fmt: skip
def test_what_is_written_reads_back(tmp_path: Path, given: dict[str, Any]) -> None:
    ends = {"materials.poly.end_tc1": "900 ppm/K"}
    path = write(tmp_path, changed(PROCESS, {**WELL, **ends}), changed(STUDY, given))
    study = load_study(path)
    (tmp_path / "again.toml").write_text(study_text(study, tmp_path), encoding="utf-8")
    assert load_study(tmp_path / "again.toml") == study
