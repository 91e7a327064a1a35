"""Mirror with a resistor in either emitter; plain mirror and Widlar source are special cases."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import GIVEN, SUPPLY, Circuit, Loop, Slot, input_loop

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:
    N = terms.symbol("N")
    I_in, I_out = terms.current("I_in", area=1), terms.current("I_out", area=N)
    q2 = terms.transistor(I_out, N, terms.resistance("output"), to_output=True)
    # what else hangs on the reference branch takes its base currents from it, too
    others = q2.base_current + terms.other_outputs()
    q1 = terms.input_diode(I_in, terms.resistance("input"), others)
    bases = q1.base_current + others
    voltage = q1.control_voltage + terms.above_base(bases)
    drawn = I_in + terms.supplied(bases)
    terms.observe(V_in=terms.collector(q1, voltage), first=q1, output=q2, I_top=drawn)
    return (
        input_loop(terms, feed, drawn, voltage),
        Loop("I_out", q1.control_voltage - q2.control_voltage),
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
    devices=("bipolar", "mos"),
)
