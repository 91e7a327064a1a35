"""`design` for silicon: mixes for all parts of a factory, beside those for paper.

The search goes by scenarios at so many sigma; the figures that are shown and
that rank the designs come from parts drawn at random, rounded values and all.
"""

from __future__ import annotations

from collections.abc import Sequence

from tcopt.assess import Assessment
from tcopt.design import DesignResult, FrontPoint
from tcopt.errors import InputError
from tcopt.mix.answer import SPARE, answer, different, finished, misses, what_is_made
from tcopt.mix.area import front_of, smallest_design
from tcopt.mix.made import area_of
from tcopt.mix.paper import search_groups
from tcopt.mix.question import Question
from tcopt.mix.sampled import Compared, SiliconResult, silicon_figures
from tcopt.mix.within import Progress, Within, candidates, portion, require_some, room_of

__all__ = ["design_for_silicon"]

_PAPER, _SEARCH, _DRAWN = 0.25, 0.7, 0.85
"""Shares of the work after which the paper search, the search, the sampling are done."""
_KEPT_ON_PAPER = 6
"""Best designs on paper that the search for silicon starts from and compares with."""


def design_for_silicon(question: Question, progress: Progress | None = None) -> DesignResult:
    """Return the best designs for silicon, ranked by their drift over the parts of a factory.

    The best design on paper and the best single material are among those that are
    ranked, so that neither ever does better than the winner. Those that meet the study's
    limit come first.

    Raises
    ------
    InputError
        If nothing that the designs take varies.
    NoSolutionError
        If no allowed design gives a current over the whole range, or none within the area.
    """
    study, layout = question.study, question.study.layout
    room = room_of(question)
    if question.open_slots and room.causes.count == 0:
        raise InputError(
            f"{study.path}: search.for: found 'silicon', but nothing varies: no material in "
            "use has a spread, tc1_spread or tc2_spread; accepted: a process with spreads, or "
            "for = 'paper'"
        )
    keep = study.search.show
    # as many as a search for paper keeps: near ties among them are only told apart once rounded
    paper_best, paper_bound = search_groups(study, question.groups, portion(progress, 0, _PAPER))
    on_paper = finished(question, paper_best.ranked()[: keep + SPARE])[:_KEPT_ON_PAPER]
    if not on_paper:
        return answer(question, on_paper, paper_best, paper_bound)
    limit = layout.area_limit if layout is not None else None
    singles: list[Assessment] = []
    if question.open_slots:
        operations = [each.operation for each in on_paper]
        within = candidates(question, keep, operations, limit, portion(progress, _PAPER, _SEARCH))
        singles = (
            [] if within.single is None else finished(question, [within.single], keep_shape=True)
        )
    else:
        within = Within(on_paper, paper_best, None, paper_bound)
    pool = different([*within.designs, *singles, *on_paper[:1]])
    if layout is not None and limit is not None:
        areas = [area_of(each.operation, layout) or float("inf") for each in pool]
        pool = [each for each, area in zip(pool, areas, strict=True) if area <= limit]
        smallest = smallest_design(question, layout) if not pool else None
        least = area_of(smallest.operation, layout) if smallest is not None else None
        require_some(question, pool, layout, least)
    report = portion(progress, _SEARCH, _DRAWN)
    compared = []
    for done, each in enumerate(pool):
        compared.append(Compared(each, silicon_figures(each)))
        if report is not None:
            report(done + 1, len(pool))
    compared.sort(key=lambda each: (misses(each.silicon.limit), each.silicon.box_ppm_per_K))
    shown = compared[:keep]
    silicon = SiliconResult(
        sigma=room.sigma,
        trimmed=room.knobs.from_trim,
        figures=tuple(each.silicon for each in shown),
        bound=within.bound,
        paper=_of(on_paper[0], compared),
        single=_of(singles[0], compared) if singles else None,
        causes=tuple(variate.name for variate in room.causes.variation.variates),
        quantile=study.spread.wanted_yield,
    )
    front: Sequence[FrontPoint] = ()
    if layout is not None and layout.standard is None and layout.front and question.open_slots:
        front = front_of(
            question,
            [each.found for each in shown],
            smallest_design(question, layout),
            portion(progress, _DRAWN, 1),
        )
    if progress is not None:
        progress(1000, 1000)
    designs = [each.found for each in shown]
    return answer(question, designs, within.best, paper_bound, silicon, front)


def _of(found: Assessment, compared: Sequence[Compared]) -> Compared:
    same = [each for each in compared if what_is_made(each.found) == what_is_made(found)]
    return same[0] if same else Compared(found, silicon_figures(found))
