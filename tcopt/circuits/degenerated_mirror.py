"""Mirror with a resistor in either emitter; plain mirror and Widlar source are special cases."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import GIVEN, SUPPLY, Circuit, Loop, Slot, input_loop

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:
    I_in, I_out = terms.symbol("I_in"), terms.symbol("I_out")
    q1, q2 = terms.bipolar(I_in), terms.bipolar(I_out, area=terms.symbol("N"))
    input_side = q1.base_emitter_voltage + q1.emitter_current * terms.resistance("input")
    output_side = q2.base_emitter_voltage + q2.emitter_current * terms.resistance("output")
    taken = I_in + q1.base_current + q2.base_current
    return (
        input_loop(terms, feed, taken, input_side),
        Loop("I_out", input_side - output_side),
    )


CIRCUIT = Circuit(
    topology="degenerated mirror",
    summary="copies an input current, scaled down or up by resistors in the emitters",
    unknowns=("I_in", "I_out"),
    slots=(
        Slot("feed", "from the supply to the input", feeds=(SUPPLY,)),
        Slot("input", "in the emitter of the input transistor", optional=True),
        Slot("output", "in the emitter of the output transistor", optional=True),
    ),
    loops=_loops,
    choices=("area_ratio",),
    feeds=(GIVEN, SUPPLY),
    is_mirror=True,
)
