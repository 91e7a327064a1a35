"""The search for paper: the typical part alone, with as much area as it likes."""

from __future__ import annotations

from collections.abc import Callable, Sequence

from tcopt.assess import assess
from tcopt.design import Bound
from tcopt.errors import InputError, NoSolutionError
from tcopt.mix.band import Band
from tcopt.mix.joint import search_two_slots
from tcopt.mix.program import FLOOR, Fit
from tcopt.mix.question import Question, Spanned, open_slots
from tcopt.mix.single import Best, Group, search_one_slot
from tcopt.mix.two_sided import is_two_sided, search_two_sided
from tcopt.study import Study
from tcopt.targets import target_current

__all__ = ["groups_of", "search_groups"]

_AGREE = 0.01
"""Relative gap up to which what is proven of the whole menu is what its best reaches."""


def groups_of(question: Question) -> list[Group]:
    """Return the bands of the one open slot, for every choice of ratios and input."""
    (name,) = question.open_slots
    return [
        Group(Band(operation, name, question.target), span) for operation, span in question.groups
    ]


def search_groups(
    study: Study,
    groups: Sequence[Spanned],
    progress: Callable[[int, int], None] | None = None,
) -> tuple[Best, Bound]:
    """Return the best designs over all groups of choices, values not yet rounded, and the bound.

    Parameters
    ----------
    study : the question
    groups : operation with its open slots, and the input's span if it is free
    progress : called with combinations done and combinations in all
    """
    slots = open_slots(study)
    target = target_current(study.target, study.range.reference)
    keep = study.search.show
    if len(slots) == 1:
        ((name, slot),) = slots.items()
        if is_two_sided(study, name):
            best, reached = search_two_sided(groups, name, slot, target, keep, progress)
            return best, Bound(reached, proven=False)
        bands = [Group(Band(operation, name, target), span) for operation, span in groups]
        best, proven, reached = search_one_slot(bands, slot, keep, progress)
        # the die's own heat is taken as the target's, though what is proven is of the band
        certain = proven >= (1 - _AGREE) * reached - FLOOR and not study.range.thermal_resistance
        return best, Bound(proven if certain else reached, proven=certain)
    if len(slots) == 2:
        best, deviation = search_two_slots(groups, slots, target, keep, progress)
        return best, Bound(deviation, proven=False)
    if not slots:
        return _fixed_slots_only(groups, keep)
    raise InputError(
        f"{study.path}: resistors: found {len(slots)} open slots "
        f"({', '.join(slots)}); accepted: at most two, the others with parts"
    )


def _fixed_slots_only(groups: Sequence[Spanned], keep: int) -> tuple[Best, Bound]:
    """Compare the choices of a study whose resistors are all settled."""
    best = Best(keep)
    failure: NoSolutionError | None = None
    for number, (operation, span) in enumerate(groups):
        if span is not None:
            raise InputError(
                f"{operation.study.path}: circuit: found a range of input currents with every "
                "resistor settled; accepted: a list of input currents, or an open slot"
            )
        try:
            deviation = assess(operation).residual_drift.deviation_ppm / 1e6
        except NoSolutionError as error:
            failure = failure or error
            best.add(None, number)
        else:
            best.add(Fit(operation, deviation, deviation), number)
    if failure is not None and not best.found:
        raise failure
    return best, Bound(min(fit.deviation for fit in best.ranked()), proven=True)
