"""Gate-source reference: one gate-source voltage across a resistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot
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
    rests_at_zero=True,
    devices=("mos",),
)
