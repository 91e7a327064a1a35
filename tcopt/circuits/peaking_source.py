"""Peaking source: a resistor in the input collector takes drive from the output transistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import GIVEN, SUPPLY, Circuit, Loop, Slot, input_loop

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:
    I_in, I_out = terms.symbol("I_in"), terms.symbol("I_out")
    q1, q2 = terms.bipolar(I_in), terms.bipolar(I_out, area=terms.symbol("N"))
    drop = (I_in + q2.base_current) * terms.resistance("drop")
    return (
        input_loop(
            terms, feed, I_in + q1.base_current + q2.base_current, q1.base_emitter_voltage
        ),
        Loop("I_out", q1.base_emitter_voltage - drop - q2.base_emitter_voltage),
    )


CIRCUIT = Circuit(
    topology="peaking source",
    summary="an output with a maximum where the drop across the resistor is one thermal voltage",
    unknowns=("I_in", "I_out"),
    slots=(
        Slot("feed", "from the supply to the input", feeds=(SUPPLY,)),
        Slot("drop", "between the base of the input transistor and its collector"),
    ),
    loops=_loops,
    choices=("area_ratio",),
    feeds=(GIVEN, SUPPLY),
    is_mirror=True,
)
