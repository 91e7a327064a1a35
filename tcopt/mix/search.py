"""`design`: the choices outside, the mixes inside, rounding, and the full solution."""

from __future__ import annotations

from collections.abc import Callable

from tcopt.design import DesignResult
from tcopt.mix.answer import (
    SPARE,
    SPARE_WITH_SIZES,
    answer,
    finished,
    needed_point,
    plain_mirror,
    rounded,
)
from tcopt.mix.paper import search_groups
from tcopt.mix.question import open_slots, question_of
from tcopt.study import Study

__all__ = [
    "SPARE", "design", "needed_point", "open_slots", "plain_mirror", "rounded", "search_groups",
]  # fmt: skip

Progress = Callable[[int, int], None]


def design(study: Study, progress: Progress | None = None) -> DesignResult:
    """Return the best designs for a study, ranked, with the bound beside them.

    Parameters
    ----------
    study : the question; with no slot open, its choices alone are compared
    progress : called with combinations done and combinations in all

    Raises
    ------
    InputError
        If more slots are open than can be designed together, or a part cannot be made as
        the layout asks, or silicon is asked for and nothing varies.
    NoSolutionError
        If no allowed design gives a current over the whole range, or none within the area.
    """
    question = question_of(study)
    if study.search.purpose == "silicon":
        from tcopt.mix.silicon_design import design_for_silicon  # noqa: PLC0415  on demand

        return design_for_silicon(question, progress)
    if study.layout is not None and study.layout.standard is None:
        from tcopt.mix.area import design_on_area  # noqa: PLC0415  on demand

        return design_on_area(question, progress)
    keep = study.search.show
    best, bound = search_groups(study, question.groups, progress)
    spare = SPARE if study.layout is None else SPARE_WITH_SIZES
    designs = finished(question, best.ranked()[: keep + spare])[:keep]
    return answer(question, designs, best, bound)
