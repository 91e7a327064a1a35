"""Searches within a room: for silicon, within an area, or both; and the designs they come to."""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass, replace

import numpy as np

from tcopt.assess import Assessment
from tcopt.design import Bound
from tcopt.errors import NoSolutionError
from tcopt.mix.answer import SPARE, SPARE_WITH_SIZES, finished
from tcopt.mix.causes import causes_of, no_causes
from tcopt.mix.knobs import Knobs, knobs_of
from tcopt.mix.made import area_of
from tcopt.mix.paper import groups_of
from tcopt.mix.program import Fit
from tcopt.mix.question import Question
from tcopt.mix.room import Room
from tcopt.mix.silicon_one import search_one_slot_for_silicon
from tcopt.mix.silicon_steps import search_one_slot_by_steps
from tcopt.mix.silicon_two import search_two_slots_for_silicon
from tcopt.mix.single import Best
from tcopt.operation import Operation
from tcopt.study import Layout
from tcopt.units import format_quantity

__all__ = ["WORTHLESS", "Progress", "Within", "candidates", "portion", "room_of", "search_within"]

Progress = Callable[[int, int], None]

WORTHLESS = 2e5
"""Deviation [ppm] beyond which what fits into an area is no design: its current is another."""
_TIGHTENED = 3
"""Searches with a tighter limit, where drawn sizes take more than the least that was counted."""


def portion(progress: Progress | None, first: float, last: float) -> Progress | None:
    """Return a report of part of the work as that part of the whole."""
    if progress is None:
        return None
    whole = 1000

    def report(done: int, steps: int) -> None:
        progress(round(whole * (first + (last - first) * done / max(1, steps))), whole)

    return report


def room_of(question: Question, area_limit: float | None = None) -> Room:
    """Return what a study's search goes by.

    Parameters
    ----------
    question : of which study
    area_limit : of all resistors [m^2]; None: as much as it takes
    """
    study = question.study
    operation = question.groups[0][0]
    if study.search.purpose == "silicon":
        menus = [(name, slot.materials) for name, slot in question.open_slots.items()]
        causes, knobs = causes_of(operation, menus), knobs_of(study)
    else:
        causes, knobs = no_causes(operation), Knobs((), from_trim=False)
    room = Room(question.target, causes, knobs, study.search.sigma)
    layout = study.layout
    if area_limit is None or layout is None:
        return room
    settled = sum(
        part.area_taken(layout.spacing) or 0.0
        for mix in operation.mixes.values()
        for part in mix.parts
    )
    per_ohm = {
        material.name: material.min_width
        * (material.min_width + layout.spacing)
        / material.sheet_resistance
        for slot in question.open_slots.values()
        for material in slot.materials
        if material.min_width is not None and material.sheet_resistance is not None
    }
    left = max(area_limit - settled, 1e-6 * area_limit)
    return replace(room, area_limit=left, area_per_ohm=per_ohm)


def search_within(
    question: Question,
    room: Room,
    keep: int,
    paper: Sequence[Operation],
    progress: Progress | None = None,
    *,
    brief: bool = False,
) -> tuple[Best, Fit | None, Bound]:
    """Return the best designs of one or two open slots, the best single material, the bound.

    Parameters
    ----------
    question : with one or two open slots
    room : what the search goes by
    keep : how many designs are wanted
    paper : the best designs on paper, to start from where nothing is proven
    progress : called with steps done and steps in all
    brief : with two open slots, from fewer starts
    """
    slots = question.open_slots
    if len(slots) == 2:
        best, single, least = search_two_slots_for_silicon(
            question.groups, slots, room, keep, paper, progress, brief=brief
        )
        return best, single, Bound(least, proven=False)
    ((name, slot),) = slots.items()
    groups = groups_of(question)
    if all(knob.slot in {None, name} for knob in room.knobs.each):
        best, single, least = search_one_slot_for_silicon(groups, slot, room, keep, progress)
        # without a trim the scale of the output is settled by choosing again and again, and a
        # free input is tried over a grid: neither is part of the program, nor is the heat that a
        # current off its target gives the die
        free = any(span is not None for _, span in question.groups)
        warms = bool(question.study.range.thermal_resistance)
        if least <= 0:
            # nothing but that no deviation is below zero
            least = min((fit.deviation for fit in best.ranked()), default=np.inf)
            return best, single, Bound(least, proven=False)
        return best, single, Bound(least, proven=room.knobs.is_linear and not free and not warms)
    best, single, least = search_one_slot_by_steps(groups, slot, room, keep, progress)
    return best, single, Bound(least, proven=False)


@dataclass(frozen=True)
class Within:
    """What a search within a room came to: finished designs, and what is told beside them."""

    designs: list[Assessment]
    best: Best
    single: Fit | None
    bound: Bound


def candidates(
    question: Question,
    keep: int,
    paper: Sequence[Operation],
    area_limit: float | None,
    progress: Progress | None = None,
    *,
    brief: bool = False,
) -> Within:
    """Search, finish the designs as they can be made, and leave out what takes too much area.

    The search counts the least area that values take. Where whole segments and matching take
    more, it is made again within less.
    """
    silicon = question.study.search.purpose == "silicon"
    layout = question.study.layout
    count = keep + (SPARE if layout is None else SPARE_WITH_SIZES)
    counted = area_limit
    found: Within | None = None
    for tries in range(_TIGHTENED + 1):
        # most often the first is the last
        report = portion(progress, 1 - 2.0 ** (-2 * tries), 1 - 2.0 ** (-2 * tries - 2))
        best, single, bound = search_within(
            question, room_of(question, counted), keep, paper, report, brief=brief
        )
        fits = best.ranked()[:count]
        if single is not None:
            fits = [*fits, single]
        made = finished(question, fits, keep_shape=silicon)
        found = Within(made, best, single, bound if found is None else found.bound)
        if area_limit is None or counted is None or layout is None:
            break
        areas = [area_of(each.operation, layout) or np.inf for each in made]
        fit_in = [
            each
            for each, area in zip(made, areas, strict=True)
            if area <= area_limit * (1 + 1e-9) and each.residual_drift.deviation_ppm < WORTHLESS
        ]
        found = replace(found, designs=fit_in)
        if fit_in or not areas:
            break
        counted *= 0.97 * area_limit / min(areas)
    if found is None:
        raise AssertionError("there is always a first search")
    return found


def require_some(
    question: Question, designs: Sequence[Assessment], layout: Layout, smallest: float | None
) -> None:
    """Refuse an area that nothing fits into, and say what would.

    Raises
    ------
    NoSolutionError
        If there is no design.
    """
    if designs or layout.area_limit is None:
        return
    least = (
        "no design at all" if smallest is None
        else f"{format_quantity(smallest * 1e12, '1', 4)} um^2 or more, the smallest that was found"
    )  # fmt: skip
    raise NoSolutionError(
        f"{question.study.path}: layout.area_limit: found "
        f"{format_quantity(layout.area_limit * 1e12, '1', 4)} um^2, which no design fits into; "
        f"accepted: {least}"
    )
