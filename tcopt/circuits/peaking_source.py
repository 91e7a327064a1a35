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
    q1 = terms.input_diode(I_in, other_bases=q2.base_current)
    bases = q1.base_current + q2.base_current
    drop = (I_in + terms.supplied(q2.base_current)) * terms.resistance("drop")
    voltage = q1.control_voltage + terms.above_base(bases)
    return (
        input_loop(terms, feed, I_in + terms.supplied(bases), voltage),
        Loop("I_out", q1.control_voltage - drop - q2.control_voltage),
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
    devices=("bipolar", "mos"),
)
