"""From the mixes of a search to designs that can be made: rounded, solved fully, ranked."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import replace

import numpy as np
from numpy.polynomial import Chebyshev

from tcopt.arrays import Array
from tcopt.assess import Assessment, Verdict, assess
from tcopt.circuits import CIRCUITS
from tcopt.design import Bound, DesignResult, FrontPoint, NeededPoint, PlainMirror
from tcopt.devices import diode_voltage
from tcopt.errors import NoSolutionError
from tcopt.mix.made import drawn, ordered, size_figures
from tcopt.mix.program import Fit
from tcopt.mix.question import Question
from tcopt.mix.sampled import SiliconResult
from tcopt.mix.single import Best
from tcopt.mix.two_sided import is_two_sided, need_near
from tcopt.operation import Mix, Operation
from tcopt.study import Span

__all__ = [
    "SPARE", "SPARE_WITH_SIZES", "answer", "different", "finished", "misses", "needed_point",
    "plain_mirror", "rounded", "what_is_made",
]  # fmt: skip

SPARE = 5
"""Designs assessed beyond those shown, since rounding may change their order."""
SPARE_WITH_SIZES = 15
_REACH = 10.0
"""Kelvin to either side of the reference over which the need is followed."""
_STEPS = 10
"""Steps to the range's temperature at which the die has the reference's; each gains digits."""


def finished(
    question: Question, fits: Iterable[Fit], *, keep_shape: bool = False
) -> list[Assessment]:
    """Return designs with values that can be made, from the full solution, best first.

    Those that meet the study's limit come before those that do not.

    Parameters
    ----------
    question : whose layout, or number of digits, says what can be made
    fits : mixes with values of any precision
    keep_shape : True to stay near each design as it is, False to come near the target

    Raises
    ------
    InputError
        If the layout allows less mismatch than settled parts have.
    NoSolutionError
        If the layout allows no segments for any of them.
    """
    found: list[Assessment] = []
    failure: NoSolutionError | None = None
    for fit in fits:
        try:
            found.append(_made(question, fit.operation, keep_shape=keep_shape))
        except NoSolutionError as error:
            failure = failure or error
    if failure is not None and not found and question.study.layout is not None:
        raise failure
    found.sort(key=lambda item: (misses(item.limit), item.residual_drift.deviation_ppm))
    return different(found)


def misses(limit: Verdict | None) -> bool:
    """Say whether there is a limit that is not met."""
    return limit is not None and not limit.met


def what_is_made(found: Assessment) -> tuple[object, ...]:
    """Return what makes a finished design another one: choices, and parts with their values."""
    operation = found.operation
    return operation.choices, tuple(
        (slot, mix.join, tuple((part.material.name, part.value) for part in mix.parts))
        for slot, mix in operation.mixes.items()
    )


def different(designs: Iterable[Assessment]) -> list[Assessment]:
    """Return designs without those that rounding has made the same."""
    return list({what_is_made(each): each for each in designs}.values())


def answer(
    question: Question,
    designs: Sequence[Assessment],
    best: Best,
    bound: Bound,
    silicon: SiliconResult | None = None,
    front: Sequence[FrontPoint] = (),
) -> DesignResult:
    """Return finished designs with all that is told beside them.

    Raises
    ------
    NoSolutionError
        If there is no design.
    """
    study = question.study
    if not designs:
        raise NoSolutionError(
            f"{study.path}: no allowed mix gives the target current over the whole range; "
            "accepted: ratios, inputs and materials for which the needed resistance is positive"
        )
    slots = frozenset(question.open_slots)
    layout = study.layout
    return DesignResult(
        study=study,
        designs=tuple(designs),
        plain_mirrors=tuple(plain_mirror(found) for found in designs),
        bound=bound,
        needed={name: needed_point(designs[0], name) for name in question.open_slots},
        examined=best.examined,
        skipped=best.skipped,
        sizes=()
        if layout is None
        else tuple(size_figures(found, slots, layout) for found in designs),
        silicon=silicon,
        front=tuple(front),
    )


def _made(question: Question, operation: Operation, *, keep_shape: bool) -> Assessment:
    layout = question.study.layout
    # values that are drawn or ordered are not rounded first
    names = tuple(question.open_slots) if layout is None else ()
    exact = assess(rounded(operation, names))
    if layout is None:
        return exact
    if layout.standard is not None:
        return ordered(exact, frozenset(question.open_slots), layout, keep_shape=keep_shape)
    return drawn(exact, frozenset(question.open_slots), layout, keep_shape=keep_shape)


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
        if is_two_sided(operation.study, slot):
            return need_near(operation, slot, found.target.current(T), die(T))
        return open_again.needed(slot, found.target.current(T), die(T))

    at = reference
    for _ in range(_STEPS):
        at -= float(die(np.array([at]))[0]) - reference
    # within the range, beyond which a target that is a table says nothing
    span = operation.study.range
    domain = [max(span.low, at - _REACH), min(span.high, at + _REACH)]
    R, own = (Chebyshev.interpolate(f, 10, domain=domain) for f in (need, die))
    value, rise = float(R(at)), float(own.deriv(1)(at))
    slope = float(R.deriv(1)(at)) / rise
    bend = (float(R.deriv(2)(at)) - slope * float(own.deriv(2)(at))) / rise**2
    return NeededPoint(value, slope / value, bend / value / 2)
