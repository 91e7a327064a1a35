"""Peaking source: a resistor in the input collector takes drive from the output transistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import GIVEN, SUPPLY, Circuit, Loop, Slot, input_loop

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:
    N = terms.symbol("N")
    I_in, I_out = terms.current("I_in", area=1), terms.current("I_out", area=N)
    q2 = terms.transistor(I_out, N, to_output=True)
    # the resistor carries the input transistor's collector and the other's base current
    q1 = terms.input_diode(I_in, collector=q2.control_voltage)
    through = I_in + terms.supplied(q2.base_current)
    drop = through * terms.resistance("drop")
    drawn = through + terms.supplied(q1.base_current)
    terms.observe(V_in=q1.control_voltage, first=q1, output=q2, I_top=drawn)
    return (
        input_loop(terms, feed, drawn, q1.control_voltage),
        Loop("I_out", q1.control_voltage - drop - q2.control_voltage),
    )


CIRCUIT = Circuit(
    topology="peaking source",
    summary="an output with a maximum: more input current also takes more drive away",
    unknowns=("I_in", "I_out"),
    slots=(
        Slot("feed", "from the supply to the input", feeds=(SUPPLY,), one_way=False),
        Slot("drop", "between the base of the input transistor and its collector"),
    ),
    loops=_loops,
    choices=("area_ratio",),
    feeds=(GIVEN, SUPPLY),
    is_mirror=True,
    devices=("bipolar", "mos"),
    takes_follower=False,
)
