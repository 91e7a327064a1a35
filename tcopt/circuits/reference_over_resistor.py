"""A reference voltage held across a resistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    return (
        Loop("I_out", terms.symbol("V_ref") - terms.current("I_out") * terms.resistance("sense")),
    )


CIRCUIT = Circuit(
    topology="reference over resistor",
    summary="a reference voltage across a resistor",
    unknowns=("I_out",),
    slots=(Slot("sense", "carries the output current"),),
    loops=_loops,
    devices=(),
    needs_reference_voltage=True,
)
