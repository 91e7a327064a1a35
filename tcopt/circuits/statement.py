"""What a circuit's file states, and the words in which it states it.

A file under ``circuits`` says which resistor slots a topology has, which
currents are unknown, and its loops. The loops are built from the `Terms` that
are handed in, so that the file itself loads no sympy and the gate for input
can read slots and choices at no cost.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    import sympy as sp

    from tcopt.circuits.terms import Terms

__all__ = ["GIVEN", "SELF", "SUPPLY", "Circuit", "Loop", "Slot", "Start", "input_loop"]

SELF = "self"
"""The circuit makes its own current: nothing is fed in."""
GIVEN = "given"
"""The input is a given current."""
SUPPLY = "supply"
"""The input comes from a supply through a feed resistor."""


@dataclass(frozen=True, slots=True)
class Slot:
    """A place for a resistor: a part, or a mix of parts.

    ``optional``: without it the slot is a short. ``feeds``: the inputs with
    which the slot exists; empty means all. ``one_way``: the output follows its resistance
    one way only, so that one resistance belongs to one current.
    """

    name: str
    meaning: str
    optional: bool = False
    feeds: tuple[str, ...] = ()
    one_way: bool = True

    def exists(self, feed: str) -> bool:
        """Say whether the slot exists with this kind of input."""
        return not self.feeds or feed in self.feeds


@dataclass(frozen=True, slots=True)
class Start:
    """How a loop that also rests at zero current leaves it.

    ``slot``: the resistor that sets the loop's current. ``node``: where a start-up
    current has to flow in. ``topology``: the loop alone, where the circuit is more.
    """

    slot: str
    node: str
    topology: str | None = None


@dataclass(frozen=True)
class Loop:
    """One equation of the circuit, ``residual = 0``, and the current that it fixes."""

    unknown: str
    residual: sp.Expr


@dataclass(frozen=True)
class Circuit:
    """One topology.

    Attributes
    ----------
    topology : the words that users type
    summary : one line on what it does
    unknowns : currents in the order in which the loops fix them, the output last
    slots : resistor slots
    choices : 'area_ratio', 'mirror_ratio': the whole-number freedoms it has
    feeds : SELF, or GIVEN and SUPPLY: where its input current comes from
    loops : builds the loops from the terms, for one of the feeds
    start : how it is started, if its loop also holds with no current; else None
    is_mirror : copies an input current, so a plain mirror is a fair comparison
    devices : kinds of transistor that it takes: 'bipolar', 'mos', or none
    takes_follower : all bases hang on one node, so that a follower can supply them
    """

    topology: str
    summary: str
    unknowns: tuple[str, ...]
    slots: tuple[Slot, ...]
    loops: Callable[[Terms, str], tuple[Loop, ...]]
    choices: tuple[str, ...] = ()
    feeds: tuple[str, ...] = (SELF,)
    needs_reference_voltage: bool = False
    start: Start | None = None
    is_mirror: bool = False
    devices: tuple[str, ...] = ("bipolar",)
    takes_follower: bool = True

    @property
    def rests_at_zero(self) -> bool:
        """Whether its loop also holds with no current, so that it needs a start-up."""
        return self.start is not None

    @property
    def needs_transistor(self) -> bool:
        """Whether a study has to name a transistor."""
        return bool(self.devices)

    def slots_for(self, feed: str) -> tuple[Slot, ...]:
        """Return the slots that exist with this kind of input."""
        return tuple(slot for slot in self.slots if slot.exists(feed))


def input_loop(terms: Terms, feed: str, current: sp.Expr, voltage: sp.Expr) -> Loop:
    """Return the loop that fixes the input current.

    ``current`` [A] is all that the input branch takes, ``voltage`` [V] what it
    drops to ground: ``I_given = current``, or ``V_CC = voltage + current R_feed``.
    """
    if feed == GIVEN:
        return Loop("I_in", current - terms.symbol("I_given"))
    return Loop("I_in", terms.symbol("V_CC") - voltage - current * terms.resistance("feed"))
