"""Check several outputs of one reference branch together."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from contextlib import contextmanager
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from tcopt.arrays import Array
from tcopt.assess import Verdict
from tcopt.cascade import Cascade
from tcopt.check import CheckResult, check_operation, finished_operation
from tcopt.devices import device_quantities
from tcopt.errors import InputError, NoSolutionError
from tcopt.operation import celsius
from tcopt.symbols import INVERSE

if TYPE_CHECKING:
    from tcopt.study import CascadeStudy

__all__ = [
    "CascadeCheck", "CascadeVerdict", "check_cascade", "named", "overall_verdict",
    "warnings_for_cascade",
]  # fmt: skip

_WORTH_SAYING = 0.01
"""Share of the input in the outputs' bases from which on it is said (common practice)."""


@dataclass(frozen=True, slots=True)
class CascadeVerdict:
    """All limits together.

    Attributes
    ----------
    met : whether every output that has a limit meets it
    worst : the output whose figure is largest relative to its limit
    relative : that figure over its limit [1]
    """

    met: bool
    worst: str
    relative: float


@dataclass(frozen=True)
class CascadeCheck:
    """What `check` found for several outputs, everything solved together.

    Attributes
    ----------
    study : what was checked
    outputs : name -> what was found for this output
    limit : verdict on all limits, or None where no output has one
    base_share : base currents of all outputs over the input at the cold end, the reference
        and the hot end [1]; None where the outputs draw none
    warnings : traps of the whole; those of each output stand with it
    """

    study: CascadeStudy
    outputs: Mapping[str, CheckResult]
    limit: CascadeVerdict | None
    base_share: tuple[float, ...] | None
    warnings: tuple[str, ...]


def overall_verdict(limits: Mapping[str, Verdict | None]) -> CascadeVerdict | None:
    """Return the verdict on all outputs that have a limit, None if none has."""
    relative = {
        name: limit.value / limit.bound for name, limit in limits.items() if limit is not None
    }
    if not relative:
        return None
    worst = max(relative, key=lambda name: relative[name])
    met = all(limit.met for limit in limits.values() if limit is not None)
    return CascadeVerdict(met, worst, relative[worst])


def check_cascade(study: CascadeStudy) -> CascadeCheck:
    """Check several outputs of one reference branch.

    Raises
    ------
    InputError
        If something is still open in an output.
    NoSolutionError
        If the circuit has no solution somewhere in the range.
    """
    if not study.is_finished:
        still = [name for name, single in study.outputs.items() if not single.is_finished]
        raise InputError(
            f"{study.path}: found slots or choices that are still open ({', '.join(still)}); "
            "accepted: finished outputs, whose resistors have parts and whose choices are single "
            "values ('design' writes such a file)"
        )
    cascade = Cascade({name: finished_operation(single) for name, single in study.outputs.items()})
    outputs: dict[str, CheckResult] = {}
    for name, operation in cascade.together().items():
        with named(name):
            outputs[name] = check_operation(operation)
    return CascadeCheck(
        study=study,
        outputs=_with_others_following(cascade, outputs),
        limit=overall_verdict({n: found.assessment.limit for n, found in outputs.items()}),
        base_share=_base_share(cascade) if cascade.is_coupled else None,
        warnings=warnings_for_cascade(cascade),
    )


@contextmanager
def named(name: str) -> Iterator[None]:
    """Let errors inside say which output they are about."""
    try:
        yield
    except NoSolutionError as error:
        raise NoSolutionError(f"outputs.{name}: {error}") from None


def _with_others_following(
    cascade: Cascade, outputs: Mapping[str, CheckResult]
) -> dict[str, CheckResult]:
    """Return the results with sensitivities that take in how the other outputs follow.

    How far an output follows itself, by way of the others, is of second order in the
    base currents, and left out of the output resistance.
    """
    places, T = _places(cascade), next(iter(outputs.values())).temperature

    def settled(T: Array, read: Callable[[CheckResult], ArrayLike | None]) -> dict[str, Array]:
        held = {name: read(found) for name, found in outputs.items()}
        shares = {name: np.asarray(value) for name, value in held.items() if value is not None}
        return cascade.propagated(T, shares) if len(shares) == len(held) else {}

    by_input = settled(places, lambda found: found.input_sensitivity)
    by_supply = settled(places, lambda found: found.supply_sensitivity)
    swept = settled(T, lambda found: found.sweep.supply_sensitivity)
    return {
        name: replace(
            found,
            input_sensitivity=_floats(by_input.get(name)),
            supply_sensitivity=_floats(by_supply.get(name)),
            sweep=replace(found.sweep, supply_sensitivity=swept.get(name)),
            sweep_at_places=replace(found.sweep_at_places, supply_sensitivity=by_supply.get(name)),
        )
        for name, found in outputs.items()
    }


def _floats(values: Array | None) -> tuple[float, ...] | None:
    return None if values is None else tuple(map(float, values))


def _places(cascade: Cascade) -> Array:
    over = next(iter(cascade.alone.values())).study.range
    return np.array([over.low, over.reference, over.high])


def _base_share(cascade: Cascade) -> tuple[float, ...]:
    """Return what the input has to give for the outputs' bases, over all it gives [1]."""
    T = _places(cascade)
    operation = next(iter(cascade.together().values()))
    quantities = operation.quantities(T)
    inverse = quantities[INVERSE["beta"]]
    followed = operation.study.circuit.base_current == "through follower"
    supplied = inverse / (1 + inverse) if followed else 1.0
    outputs = cascade.base_currents(T).sum(axis=0)
    I_in = operation.currents(T)["I_in"]
    own = (I_in - quantities["I_L"]) * inverse
    share = supplied * outputs / (I_in + supplied * (own + outputs))
    return tuple(map(float, share))


def warnings_for_cascade(cascade: Cascade) -> tuple[str, ...]:
    """Return the traps of outputs that share an input."""
    return tuple(text for trap in (_coupled, _left_out) for text in trap(cascade))


def _coupled(cascade: Cascade) -> Iterator[str]:
    """Say how much of the input the bases take, and how far one output moves another."""
    if not cascade.is_coupled:
        return
    share = _base_share(cascade)
    if share[0] < _WORTH_SAYING and share[2] < _WORTH_SAYING:
        return
    T = _places(cascade)
    cold, _, hot = (celsius(float(t)) for t in T)
    bases = cascade.base_currents(T)[:, 0]
    names = list(cascade.alone)
    pulls = {}
    for k, (name, operation) in enumerate(cascade.together().items()):
        others = np.delete(bases, k)
        steepness = float(operation.sensitivities(T)["I_others"][0])
        strongest = int(np.argmax(others))
        by = [other for other in names if other != name][strongest]
        pulls[by, name] = steepness * float(others[strongest] / others.sum())
    (by, name), pull = min(pulls.items(), key=lambda item: item[1])
    yield (
        f"the bases of the outputs take {100 * share[0]:.2g} % of the input at {cold} and "
        f"{100 * share[2]:.2g} % at {hot}, so the outputs are coupled: at {cold}, 1 % more in "
        f"{by} changes {name} by {pull:+.2g} %"
    )


def _left_out(cascade: Cascade) -> Iterator[str]:
    """Say what base currents would take, where the transistor has a gain that does not count."""
    operation = next(iter(cascade.alone.values()))
    made = operation.study.circuit
    transistor = made.transistor
    gain = getattr(transistor, "current_gain", None)
    if cascade.is_coupled or transistor is None or gain is None:
        return
    T = _places(cascade)[:1]
    counted = made.model_copy(update={"effects": (*made.effects, "current gain")})
    inverse = device_quantities(counted)[INVERSE["beta"]].value(T)
    outputs = sum(output.output(T) for output in cascade.alone.values())
    share = float((outputs * inverse / operation.currents(T)["I_in"])[0])
    if share >= _WORTH_SAYING:
        yield (
            f"the base currents are left out: by the current gain of {transistor.name} the "
            f"outputs' bases take {100 * share:.2g} % of the input at {celsius(float(T[0]))}; "
            "effects = ['current gain'] counts them"
        )
