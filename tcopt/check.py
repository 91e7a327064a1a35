"""Check a finished design: its current, its figures, the causes of its drift, its traps."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.assess import Assessment, assess
from tcopt.circuits import GIVEN, SUPPLY
from tcopt.errors import InputError
from tcopt.headroom import Headroom, headroom
from tcopt.operation import Choices, Operation, fixed_mixes
from tcopt.start_up import StartUp, start_up
from tcopt.still_point import StillPoint, still_point
from tcopt.sweep import Sweep, sweep
from tcopt.traps import warnings_for

if TYPE_CHECKING:
    from tcopt.study import Study

__all__ = ["Budget", "CheckResult", "check", "check_operation", "finished_operation"]

_ROWS = 61
"""Temperatures at which the current is tabulated and drawn; no figure depends on it."""


@dataclass(frozen=True)
class Budget:
    """The output's local temperature coefficient at one temperature, by cause.

    Attributes
    ----------
    place : 'cold', 'reference' or 'hot'
    temperature : [K]
    total : [1/K]
    shares : cause -> [1/K]; they add up to the total
    """

    place: str
    temperature: float
    total: float
    shares: Mapping[str, float]


@dataclass(frozen=True)
class CheckResult:
    """What `check` found.

    Attributes
    ----------
    study : what was checked
    assessment : figures and verdict
    temperature : [K], shape (n,)
    currents : every current of the circuit by symbol [A], shape (n,)
    target : [A], shape (n,)
    budget : at the cold end, the reference and the hot end
    supply_sensitivity : ``d ln I_out/d ln V_CC`` at the same three places, or None
    input_sensitivity : ``d ln I_out/d ln I_in`` of a given input there, or None
    warnings : traps that were found, in plain words
    sweep : what else it does against ``temperature``
    headroom : the lowest supply and output voltage there; None without transistors
    sweep_at_places, headroom_at_places : the same at the cold end, the reference, the hot end
    start_up : how it leaves zero current, if it also rests there
    still_point : of a MOS transistor at a fixed gate voltage: where its current does not move
    """

    study: Study
    assessment: Assessment
    temperature: Array
    currents: Mapping[str, Array]
    target: Array
    budget: tuple[Budget, ...]
    supply_sensitivity: tuple[float, ...] | None
    input_sensitivity: tuple[float, ...] | None
    warnings: tuple[str, ...]
    sweep: Sweep
    headroom: Headroom | None
    sweep_at_places: Sweep
    headroom_at_places: Headroom | None
    start_up: StartUp | None
    still_point: StillPoint | None

    @property
    def current(self) -> Array:
        """Output current [A], shape (n,)."""
        return self.currents["I_out"]


def finished_operation(study: Study) -> Operation:
    """Return a finished study's design.

    Raises
    ------
    InputError
        If a slot or a choice is still open.
    """
    if not study.is_finished:
        raise InputError(
            f"{study.path}: found slots or choices that are still open; accepted: a finished "
            "design, in which every slot has parts and every choice is a single value "
            "('design' writes one)"
        )
    made = study.circuit
    inputs = study.input_currents if made.feed == GIVEN else None
    return Operation(
        study,
        Choices(
            made.area_ratio[0],
            made.mirror_ratio[0],
            inputs[0] if isinstance(inputs, tuple) else None,
        ),
        fixed_mixes(study),
    )


def check(study: Study) -> CheckResult:
    """Check a finished design.

    Raises
    ------
    InputError
        If the study is not finished.
    NoSolutionError
        If the circuit has no solution somewhere in the range.
    """
    return check_operation(finished_operation(study))


def check_operation(operation: Operation) -> CheckResult:
    """Check a design at its temperatures; it may be one output of several (`tcopt.cascade`).

    Raises
    ------
    NoSolutionError
        If the circuit has no solution somewhere in the range.
    """
    study = operation.study
    found = assess(operation)
    T = np.linspace(study.range.low, study.range.high, _ROWS)
    places = np.array([study.range.low, study.range.reference, study.range.high])
    causes = operation.causes(places)
    budget = tuple(
        Budget(
            place,
            float(places[k]),
            float(sum(share[k] for share in causes.values())),
            {cause: float(share[k]) for cause, share in causes.items()},
        )
        for k, place in enumerate(("cold", "reference", "hot"))
    )
    by_quantity = operation.sensitivities(places)
    feed = study.circuit.feed
    return CheckResult(
        study=study,
        assessment=found,
        temperature=T,
        currents=operation.currents(T),
        target=found.target.current(T),
        budget=budget,
        supply_sensitivity=tuple(map(float, by_quantity["V_CC"])) if feed == SUPPLY else None,
        input_sensitivity=tuple(map(float, by_quantity["I_given"])) if feed == GIVEN else None,
        warnings=warnings_for(found),
        sweep=sweep(operation, T),
        headroom=headroom(operation, T),
        sweep_at_places=sweep(operation, places),
        headroom_at_places=headroom(operation, places),
        start_up=start_up(operation),
        still_point=still_point(operation),
    )
