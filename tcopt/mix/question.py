"""A study as a search sees it: the choices outside, the slots that are open, the target."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import product

import numpy as np

from tcopt.assess import require_supply
from tcopt.errors import InputError, NoSolutionError
from tcopt.operation import Choices, Operation, fixed_mixes
from tcopt.study import OpenSlot, Span, Study
from tcopt.targets import TargetCurrent, target_current

__all__ = ["Question", "Spanned", "open_slots", "question_of"]

_MOST_CHOICES = 10_000

Spanned = tuple[Operation, tuple[float, float] | None]
"""One choice of ratios and input, and the input's span [A] if it is free."""


@dataclass(frozen=True)
class Question:
    """What is asked.

    Attributes
    ----------
    study : the study
    groups : every choice of ratios and input
    open_slots : slots to design, by name
    target : what the current should be
    """

    study: Study
    groups: tuple[Spanned, ...]
    open_slots: Mapping[str, OpenSlot]
    target: TargetCurrent


def question_of(study: Study) -> Question:
    """Return what a study asks.

    Raises
    ------
    InputError
        If there are too many choices.
    NoSolutionError
        If the supply lies below the voltage that the target current takes, for every choice.
    """
    groups = _with_enough_supply(tuple(_groups(study)))
    target = target_current(study.target, study.range.reference)
    return Question(study, groups, open_slots(study), target)


def open_slots(study: Study) -> dict[str, OpenSlot]:
    """Return the slots that are to be designed."""
    return {name: slot for name, slot in study.resistors.items() if isinstance(slot, OpenSlot)}


def _with_enough_supply(groups: Sequence[Spanned]) -> tuple[Spanned, ...]:
    """Return the choices whose junctions the supply can feed; refuse only if none is left."""
    enough: list[Spanned] = []
    failure: NoSolutionError | None = None
    for group in groups:
        operation, _ = group
        try:
            require_supply(operation.study, operation.choices.area_ratio)
        except NoSolutionError as error:
            failure = failure or error
        else:
            enough.append(group)
    if failure is not None and not enough:
        raise failure
    return tuple(enough)


def _groups(study: Study) -> Iterator[Spanned]:
    """Yield every choice of ratios and input; a free input starts at the middle of its span."""
    inputs = study.input_currents
    spans: Sequence[tuple[float | None, tuple[float, float] | None]]
    if inputs is None:
        spans = [(None, None)]
    elif isinstance(inputs, Span):
        spans = [(float(np.sqrt(inputs.low * inputs.high)), (inputs.low, inputs.high))]
    else:
        spans = [(value, None) for value in inputs]
    made = study.circuit
    if len(made.area_ratio) * len(made.mirror_ratio) * len(spans) > _MOST_CHOICES:
        raise InputError(
            f"{study.path}: circuit: found more than {_MOST_CHOICES} combinations of ratios and "
            "inputs; accepted: fewer choices"
        )
    fixed = fixed_mixes(study)
    for area, mirror, (current, span) in product(made.area_ratio, made.mirror_ratio, spans):
        yield Operation(study, Choices(area, mirror, current), fixed), span
