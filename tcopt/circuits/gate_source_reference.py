"""Gate-source reference: one gate-source voltage across a resistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot, Start
from tcopt.circuits.vbe_reference import junction_over_resistor

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    return junction_over_resistor(terms, "gate")


CIRCUIT = Circuit(
    topology="gate source reference",
    summary="a gate-source voltage across a resistor",
    unknowns=("I_out",),
    slots=(Slot("gate", "from gate to source"),),
    loops=_loops,
    start=Start("gate", "drain of the first transistor, which is the gate of the second"),
    devices=("mos",),
)
