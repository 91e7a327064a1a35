"""V_BE reference: one base-emitter voltage across a resistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    I_out = terms.symbol("I_out")
    q1 = terms.bipolar(I_out)
    return (Loop("I_out", q1.base_emitter_voltage - I_out * terms.resistance("base")),)


CIRCUIT = Circuit(
    topology="vbe reference",
    summary="a base-emitter voltage across a resistor",
    unknowns=("I_out",),
    slots=(Slot("base", "from base to emitter"),),
    loops=_loops,
    rests_at_zero=True,
)
