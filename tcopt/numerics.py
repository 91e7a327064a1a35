"""The numpy functions that were made from a circuit's statement, found by its name."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import lru_cache
from importlib import import_module
from types import MappingProxyType, ModuleType
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from tcopt.circuits import CIRCUITS, module_name

__all__ = ["FOLLOWED", "IDEAL", "Numerics", "Real", "arguments_of", "numerics"]

IDEAL = "ideal"
"""The kind of transistor that has closed forms."""
FOLLOWED = "bipolar_followed"
"""The kind of transistor whose base currents come through a follower."""


@dataclass(frozen=True)
class Real:
    """What Newton's method needs of a circuit with real transistors.

    Attributes
    ----------
    loops : what is left of each loop
    across : collector-emitter voltages that have an Early effect
    step : the change of each unknown in one step
    outputs : the logarithms of the currents, and their partials by unknown and by quantity
    pinned : the last current's unknown, from the output current
    pins : by slot, when the output is pinned: the step; its unknowns, the resistance last;
        the numbers of the loops which that resistance is not in
    """

    loops: Callable[..., Any]
    across: Callable[..., Any]
    step: Callable[..., Any]
    outputs: Callable[..., Any]
    pinned: Callable[..., Any]
    pins: Mapping[str, tuple[Callable[..., Any], tuple[str, ...], tuple[int, ...]]]


@dataclass(frozen=True)
class Numerics:
    """The numpy functions that were made from one circuit, kind of input and of transistor.

    Attributes
    ----------
    device : kind of transistor
    currents : the currents' names, the output last
    unknowns : what the loops are solved for
    quantities : what the functions take
    partials : loops, and their partials by unknown and by quantity
    closed_form, needs : with ideal transistors
    real : with all others
    ideal : the same circuit with ideal transistors, where it can have them
    rests_at_zero : the loops also hold next to no current
    """

    device: str
    currents: tuple[str, ...]
    unknowns: tuple[str, ...]
    quantities: tuple[str, ...]
    partials: Callable[..., Any]
    closed_form: Callable[..., Any] | None
    needs: Mapping[str, Callable[..., Any]]
    real: Real | None
    ideal: Numerics | None
    rests_at_zero: bool

    @property
    def followed(self) -> bool:
        """Whether a follower supplies the base currents."""
        return self.device == FOLLOWED


@lru_cache
def numerics(topology: str, feed: str, device: str = IDEAL) -> Numerics:
    """Return the numerics of a topology (`tcopt.circuits.CIRCUITS`) with one kind of input.

    ``device``: 'ideal', 'bipolar', 'bipolar_followed' or 'mos', as far as the topology has it.
    """
    circuit = CIRCUITS[topology]
    made = import_module(f"tcopt.circuits.generated.{module_name(topology, feed, device)}")
    has_ideal = device != IDEAL and "bipolar" in circuit.devices and device != "mos"
    return Numerics(
        device,
        made.CURRENTS,
        made.UNKNOWNS,
        made.QUANTITIES,
        made.partials,
        getattr(made, "closed_form", None),
        MappingProxyType(getattr(made, "NEEDS", {})),
        None if device == IDEAL else _real(made),
        numerics(topology, feed) if has_ideal else None,
        circuit.rests_at_zero,
    )


def _real(made: ModuleType) -> Real:
    pins = MappingProxyType(made.PINS)
    return Real(made.loops, made.across, made.step, made.outputs, made.pinned, pins)


def arguments_of(names: tuple[str, ...], quantities: Mapping[str, ArrayLike]) -> dict[str, Any]:
    """Return the quantities of these names as arrays."""
    return {name: np.asarray(quantities[name], dtype=float) for name in names}
