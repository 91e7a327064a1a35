"""V_BE reference: one base-emitter voltage across a resistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT", "junction_over_resistor"]


def junction_over_resistor(terms: Terms, slot: str) -> tuple[Loop, ...]:
    """Return the loop: the first transistor's control voltage lies across the slot.

    The second transistor carries the output; its emitter feeds the resistor and
    the first one's base.
    """
    I_out = terms.current("I_out", area=1)
    q2 = terms.transistor(I_out)
    q1 = terms.transistor(I_out - terms.supplied(q2.base_current))
    through = q2.emitter_current - q1.base_current
    return (Loop("I_out", q1.control_voltage - through * terms.resistance(slot)),)


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    return junction_over_resistor(terms, "base")


CIRCUIT = Circuit(
    topology="vbe reference",
    summary="a base-emitter voltage across a resistor",
    unknowns=("I_out",),
    slots=(Slot("base", "from base to emitter"),),
    loops=_loops,
    rests_at_zero=True,
)
