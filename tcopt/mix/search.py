"""`design`: the choices outside, the mixes inside, rounding, and the full solution."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Sequence
from dataclasses import replace
from itertools import product

import numpy as np
from numpy.polynomial import Chebyshev

from tcopt.arrays import Array
from tcopt.assess import Assessment, assess, require_supply
from tcopt.circuits import CIRCUITS
from tcopt.design import Bound, DesignResult, NeededPoint, PlainMirror
from tcopt.devices import diode_voltage
from tcopt.errors import InputError, NoSolutionError
from tcopt.mix.band import Band
from tcopt.mix.joint import search_two_slots
from tcopt.mix.program import Fit
from tcopt.mix.single import Best, Group, search_one_slot
from tcopt.operation import Choices, Mix, Operation, fixed_mixes
from tcopt.study import OpenSlot, Span, Study
from tcopt.targets import target_current

__all__ = [
    "SPARE", "design", "needed_point", "open_slots", "plain_mirror", "rounded", "search_groups",
]  # fmt: skip

SPARE = 5
"""Designs assessed beyond those shown, since rounding may change their order."""
_MOST_CHOICES = 10_000
_STEPS = 10
"""Steps to the range's temperature at which the die has the reference's; each gains digits."""


def design(study: Study, progress: Callable[[int, int], None] | None = None) -> DesignResult:
    """Return the best designs for a study, ranked, with the bound beside them.

    Parameters
    ----------
    study : the question; with no slot open, its choices alone are compared
    progress : called with combinations done and combinations in all

    Raises
    ------
    InputError
        If more slots are open than can be designed together.
    NoSolutionError
        If no allowed design gives a current over the whole range.
    """
    groups = list(_groups(study))
    for group in groups:
        require_supply(study, group[0].choices.area_ratio)
    slots = open_slots(study)
    best, bound = search_groups(study, groups, progress)
    designs = _finished(study, best, tuple(slots))
    if not designs:
        raise NoSolutionError(
            f"{study.path}: no allowed mix gives the target current over the whole range; "
            "accepted: ratios, inputs and materials for which the needed resistance is positive"
        )
    return DesignResult(
        study=study,
        designs=designs,
        plain_mirrors=tuple(plain_mirror(found) for found in designs),
        bound=bound,
        needed={name: needed_point(designs[0], name) for name in slots},
        examined=best.examined,
        skipped=best.skipped,
    )


def open_slots(study: Study) -> dict[str, OpenSlot]:
    """Return the slots that are to be designed."""
    return {name: slot for name, slot in study.resistors.items() if isinstance(slot, OpenSlot)}


def search_groups(
    study: Study,
    groups: Sequence[tuple[Operation, tuple[float, float] | None]],
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
        bands = [Group(Band(operation, name, target), span) for operation, span in groups]
        best, deviation = search_one_slot(bands, slot, keep, progress)
        return best, Bound(deviation, proven=all(span is None for _, span in groups))
    if len(slots) == 2:
        best, deviation = search_two_slots(groups, slots, target, keep, progress)
        return best, Bound(deviation, proven=False)
    if not slots:
        return _fixed_slots_only(groups, keep)
    raise InputError(
        f"{study.path}: resistors: found {len(slots)} open slots "
        f"({', '.join(slots)}); accepted: at most two, the others with parts"
    )


def _groups(study: Study) -> Iterator[tuple[Operation, tuple[float, float] | None]]:
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


def _fixed_slots_only(
    groups: Sequence[tuple[Operation, tuple[float, float] | None]], keep: int
) -> tuple[Best, Bound]:
    """Compare the choices of a study whose resistors are all settled."""
    best = Best(keep)
    for number, (operation, span) in enumerate(groups):
        if span is not None:
            raise InputError(
                f"{operation.study.path}: circuit: found a range of input currents with every "
                "resistor settled; accepted: a list of input currents, or an open slot"
            )
        found = assess(operation)
        deviation = found.residual_drift.deviation_ppm / 1e6
        best.add(Fit(operation, deviation, deviation), number)
    return best, Bound(min(fit.deviation for fit in best.ranked()), proven=True)


def _finished(study: Study, best: Best, names: Sequence[str]) -> tuple[Assessment, ...]:
    """Round the values of the best designs, solve them fully, and rank what they then do."""
    keep = study.search.show
    found: list[Assessment] = []
    for fit in best.ranked()[: keep + SPARE]:
        try:
            found.append(assess(rounded(fit.operation, names)))
        except NoSolutionError:
            continue
    found.sort(key=lambda item: item.residual_drift.deviation_ppm)
    return tuple(found[:keep])


def rounded(operation: Operation, names: Sequence[str]) -> Operation:
    """Return a design with the resistors in these slots, and its input, to the study's digits."""
    digits = operation.study.search.digits
    mixes = dict(operation.mixes)
    for name in names:
        mixes[name] = _rounded(mixes[name], digits)
    choices = operation.choices
    # one of a list is what the user can have: it is not rounded away from there
    if choices.input_current is not None and isinstance(operation.study.input_currents, Span):
        choices = replace(choices, input_current=_round(choices.input_current, digits))
    return replace(operation, choices=choices, mixes=mixes)


def _round(value: float, digits: int) -> float:
    return float(f"{value:.{digits}g}")


def _rounded(mix: Mix, digits: int) -> Mix:
    parts = tuple(
        part.model_copy(update={"value": _round(part.value, digits)}) for part in mix.parts
    )
    return Mix(parts, mix.join)


def plain_mirror(found: Assessment) -> PlainMirror | None:
    """Return what a mirror without emitter resistors would take for the same output."""
    operation = found.operation
    study = operation.study
    made = study.circuit
    if not CIRCUITS[made.topology].is_mirror or made.transistor is None:
        return None
    T = np.array([study.range.reference])
    current = found.target.current(T) / operation.choices.area_ratio
    feed = None
    if made.supply is not None:
        V_BE = diode_voltage(made, current, 1.0, T)
        feed = float(((made.supply - V_BE) / current)[0])
    return PlainMirror(float(current[0]), feed)


def needed_point(found: Assessment, slot: str) -> NeededPoint:
    """Return the perfect resistor's value and coefficients, from the needed resistance.

    Its derivatives are those of its Chebyshev interpolant over a few kelvin
    about the reference, where it is smooth to rounding. They belong to the
    resistor's own temperature, the die's.
    """
    operation = found.operation
    others = {name: mix for name, mix in operation.mixes.items() if name != slot}
    open_again = replace(operation, mixes=others)
    reference = operation.study.range.reference

    def die(T: Array) -> Array:
        return open_again.pinned_die_temperature(slot, found.target.current(T), T)

    def need(T: Array) -> Array:
        return open_again.needed(slot, found.target.current(T), die(T))

    at = reference
    for _ in range(_STEPS):
        at -= float(die(np.array([at]))[0]) - reference
    reach = 10.0
    R, own = (Chebyshev.interpolate(f, 10, domain=[at - reach, at + reach]) for f in (need, die))
    value, rise = float(R(at)), float(own.deriv(1)(at))
    slope = float(R.deriv(1)(at)) / rise
    bend = (float(R.deriv(2)(at)) - slope * float(own.deriv(2)(at))) / rise**2
    return NeededPoint(value, slope / value, bend / value / 2)
