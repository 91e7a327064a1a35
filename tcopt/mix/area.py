"""Drift against area: designs within a limit, the smallest that there is, and the front."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from tcopt.assess import Assessment
from tcopt.design import Bound, DesignResult, FrontPoint
from tcopt.errors import NoSolutionError
from tcopt.mix.answer import SPARE_WITH_SIZES, answer, finished
from tcopt.mix.made import area_of
from tcopt.mix.offer import Offer
from tcopt.mix.paper import groups_of, search_groups
from tcopt.mix.program import best_fit
from tcopt.mix.question import Question
from tcopt.mix.sampled import SiliconFigures, silicon_figures
from tcopt.mix.single import Best
from tcopt.mix.within import WORTHLESS, Progress, candidates, portion, require_some
from tcopt.study import Layout

__all__ = ["design_on_area", "front_of", "smallest_design"]

_SHARE_OF_SEARCH = 0.6
"""Of the work, where a front is asked for as well."""
_SINGLES = 40
_ENOUGH = 5


def design_on_area(question: Question, progress: Progress | None = None) -> DesignResult:
    """Return the best drawn designs on paper, within the layout's area if it has a limit.

    Raises
    ------
    NoSolutionError
        If nothing fits into the area, with the smallest that was found.
    """
    layout = _layout_of(question)
    keep = question.study.search.show
    wants_front = layout.front > 0 and bool(question.open_slots)
    report = portion(progress, 0, _SHARE_OF_SEARCH if wants_front else 1)
    best, bound, designs = _searched(question, layout, keep, report)
    smallest = smallest_design(question, layout) if question.open_slots else None
    if smallest is not None and layout.area_limit is not None and not designs:
        require_some(question, designs, layout, area_of(smallest.operation, layout))
    require_some(question, designs, layout, None)
    front: Sequence[FrontPoint] = ()
    if wants_front:
        front = front_of(question, designs, smallest, portion(progress, _SHARE_OF_SEARCH, 1))
    return answer(question, designs[:keep], best, bound, front=front)


def _layout_of(question: Question) -> Layout:
    if question.study.layout is None:
        raise AssertionError("only a study with a layout has areas")
    return question.study.layout


def _searched(
    question: Question, layout: Layout, keep: int, progress: Progress | None
) -> tuple[Best, Bound, list[Assessment]]:
    if layout.area_limit is not None and question.open_slots:
        paper = []
        if len(question.open_slots) == 2:
            first = portion(progress, 0, 0.4)
            ranked = search_groups(question.study, question.groups, first)[0].ranked()
            paper, progress = [fit.operation for fit in ranked[:keep]], portion(progress, 0.4, 1)
        found = candidates(question, keep, paper, layout.area_limit, progress)
        return found.best, found.bound, found.designs
    best, bound = search_groups(question.study, question.groups, progress)
    designs = finished(question, best.ranked()[: keep + SPARE_WITH_SIZES])
    if layout.area_limit is not None:
        designs = [
            each
            for each in designs
            if (area_of(each.operation, layout) or np.inf) <= layout.area_limit
        ]
    return best, bound, designs


def smallest_design(question: Question, layout: Layout) -> Assessment | None:
    """Return the smallest of the single materials, drawn: of one open slot, with every choice.

    Of those that come near the target at all. None with two open slots, where the designs
    that were found have to do.
    """
    if len(question.open_slots) != 1:
        return None
    ((_, slot),) = question.open_slots.items()
    found = []
    for group in groups_of(question):
        for material in slot.materials:
            fit = best_fit(group.band, Offer((material,), "series"))
            if fit is not None:
                (part,) = fit.operation.mixes[group.band.slot].parts
                width, sheet = material.min_width or np.inf, material.sheet_resistance or 1.0
                squares = part.value / sheet
                beside = max(1.0, layout.least_squares / squares)
                found.append((squares * width**2 * beside**2, fit))
    found.sort(key=lambda item: item[0])
    drawn = []
    for _, fit in found[:_SINGLES]:
        try:
            drawn += finished(question, [fit])
        except NoSolutionError:
            continue
        if sum(each.residual_drift.deviation_ppm < WORTHLESS for each in drawn) >= _ENOUGH:
            break
    good = [each for each in drawn if each.residual_drift.deviation_ppm < WORTHLESS]
    return min(good, key=lambda each: area_of(each.operation, layout) or np.inf, default=None)


def front_of(
    question: Question,
    designs: Sequence[Assessment],
    smallest: Assessment | None,
    progress: Progress | None = None,
) -> tuple[FrontPoint, ...]:
    """Return the front of drift against area, from the smallest up.

    Designs within limits between the smallest area and that of the best design, and of all
    designs known those that no other beats in both.

    Parameters
    ----------
    question : with a layout that asks for so many points
    designs : those that the search came to, best first
    smallest : the smallest that is known
    progress : called with points done and points in all
    """
    layout = _layout_of(question)
    silicon = question.study.search.purpose == "silicon"
    known = [*designs, *([] if smallest is None else [smallest])]
    areas = [area_of(each.operation, layout) or np.inf for each in known]
    low, high = min(areas), areas[0]
    limits: list[float] = []
    if high > 1.05 * low:
        limits = np.geomspace(low * 1.02, high, layout.front + 1)[:-1].tolist()
    paper = [each.operation for each in designs]
    for done, limit in enumerate(limits):
        if progress is not None:
            progress(done, len(limits))
        known += candidates(question, 1, paper[:1], limit, brief=True).designs[:2]
    points = []
    for found in known:
        area = area_of(found.operation, layout)
        if area is not None:
            points.append(FrontPoint(area, found, silicon_figures(found) if silicon else None))
    return tuple(_unbeaten(points))


def _unbeaten(points: Sequence[FrontPoint]) -> list[FrontPoint]:
    def drift(point: FrontPoint) -> float:
        figures: SiliconFigures | None = point.silicon
        if figures is not None:
            return figures.box_ppm_per_K
        return point.found.residual_drift.deviation_ppm

    front: list[FrontPoint] = []
    for point in sorted(points, key=lambda point: (point.area, drift(point))):
        if not front or drift(point) < drift(front[-1]) * (1 - 1e-9):
            front.append(point)
    return front
