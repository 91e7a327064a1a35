"""How silicon, sizes and the front of drift against area are shown."""

from __future__ import annotations

import json
from io import StringIO

import pytest
from rich.console import Console

from tcopt.design import DesignResult
from tcopt.mix.search import design
from tcopt.show.csv import designs_csv, front_csv
from tcopt.show.json import design_document, json_text
from tcopt.show.plots import encoded, front_picture
from tcopt.show.tables.design import design_report
from tcopt.study import Insertion, Layout, Trim
from tests.silicon_studies import MENU, T_0, mirror_study

FEW = {name: MENU[name] for name in ("silicide", "n_well", "n_diffusion")}
reports: list[tuple[int, int]] = []


@pytest.fixture(scope="module")
def result() -> DesignResult:
    trim = Trim(first=Insertion(temperature=T_0, scales="output", reach=0.3))
    study = mirror_study(
        2, materials=FEW, purpose="silicon", samples=1024, show=3, limit="300 ppm/K", trim=trim,
        layout=Layout(front=2, area_limit=2e-9),
    )  # fmt: skip
    return design(study, lambda done, steps: reports.append((done, steps)))


def report(result: DesignResult) -> str:
    text = StringIO()
    Console(file=text, width=160, color_system=None).print(design_report(result))
    return text.getvalue()


def test_progress_only_rises_to_the_whole(result: DesignResult) -> None:
    assert result.silicon is not None
    shares = [done / steps for done, steps in reports]
    assert shares == sorted(shares)
    assert shares[-1] == 1
    assert len(set(shares)) > 10


def test_the_document_has_silicon_sizes_and_front(result: DesignResult) -> None:
    document = json.loads(json_text(design_document(result)))
    silicon = result.silicon
    assert silicon is not None
    first = document["designs"][0]
    assert first["silicon"]["box_ppm_per_K"] == silicon.figures[0].box_ppm_per_K
    assert set(first["silicon"]) == {
        "parts", "box_ppm_per_K", "median_box_ppm_per_K", "untrimmed_box_ppm_per_K",
        "deviation_ppm", "spread", "beyond_trim", "limit",
    }  # fmt: skip
    assert first["silicon"]["limit"]["bound"] == 300
    part = first["resistors"]["output"]["parts"][0]
    assert {"width_m", "length_m", "squares", "series", "parallel", "segments", "area_m2"} <= set(
        part
    )
    assert part["segments"] == part["series"] * part["parallel"]
    assert first["sizes"]["area_m2"] <= 2e-9
    assert document["silicon"]["quantile"] == 0.997
    assert document["silicon"]["trimmed"] is True
    assert document["silicon"]["bound"]["proven"] is True
    for name in ("paper_optimum", "best_single_material"):
        assert document["silicon"][name]["silicon"]["box_ppm_per_K"] > 0
    assert [point["area_m2"] for point in document["front"]] == [p.area for p in result.front]


def test_the_report_shows_paper_and_silicon_side_by_side(result: DesignResult) -> None:
    words = report(result)
    for said in (
        "What silicon makes of it",
        "best for silicon",
        "best on paper",
        "best single",
        "Each part is trimmed as the study says",
        "keeps every part within 3 sigma, trimmed, closer to the target than",
        "Over silicon the limit is met: 99.7 % of the best design's parts are within",
        "The best design as drawn",
        "Drift against area",
        "None of the designs that were found is better in both than one of these.",
    ):
        assert said in " ".join(words.split()), said


def test_the_tables_have_their_columns(result: DesignResult) -> None:
    heading, first, *_ = designs_csv(result).splitlines()
    assert heading.endswith(
        '"box, 99.7 % of parts [ppm/K]","box, median [ppm/K]",spread of value [1],area [m^2],'
        "segments,mismatch [1]"
    )
    assert str(result.sizes[0].area) in first
    heading, *rows = front_csv(result).splitlines()
    assert heading.startswith("area [m^2],deviation [ppm],box [ppm/K],")
    assert len(rows) == len(result.front)


def test_the_front_is_drawn(result: DesignResult) -> None:
    pictures = encoded(front_picture(result))
    assert set(pictures) == {"png", "svg"}
    picture = pictures["svg"]
    text = picture if isinstance(picture, str) else picture.decode()
    assert "Area of all resistors" in text


def test_standard_values_say_what_their_tolerance_comes_to() -> None:
    found = design(mirror_study(1, materials=FEW, show=2, layout=Layout(standard="E96")))
    words = " ".join(report(found).split())
    assert "Standard values, each within 1 %." in words
    assert "With every part at either limit the current is off its target by" in words
    assert design_document(found)["designs"][0]["sizes"]["tolerance"] == 0.01
