"""V_BE reference: one base-emitter voltage across a resistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot, Start

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT", "junction_over_resistor"]


def junction_over_resistor(terms: Terms, slot: str) -> tuple[Loop, ...]:
    """Return the loop: the first transistor's control voltage lies across the slot.

    The second transistor carries the output; its emitter feeds the resistor and
    the first one's base, its base hangs on the first one's collector.
    """
    I_out = terms.current("I_out", area=1)
    bare = terms.transistor(I_out)
    left = I_out - terms.supplied(bare.base_current)
    through = bare.emitter_current - terms.transistor(left).base_current
    drop = through * terms.resistance(slot)
    q2 = terms.transistor(I_out, raised=drop, to_output=True)
    collector = q2.control_voltage + terms.above_base(q2.base_current)
    q1 = terms.input_diode(left, collector=collector)
    # as much as the output is forced into the first transistor's collector
    node = terms.collector(q1, collector)
    terms.observe(V_in=node, first=q1, output=q2, I_top=2 * I_out)
    return (Loop("I_out", q1.control_voltage - drop),)


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    return junction_over_resistor(terms, "base")


CIRCUIT = Circuit(
    topology="vbe reference",
    summary="a base-emitter voltage across a resistor",
    unknowns=("I_out",),
    slots=(Slot("base", "from base to emitter"),),
    loops=_loops,
    start=Start("base", "collector of the first transistor, which is the base of the second"),
)
