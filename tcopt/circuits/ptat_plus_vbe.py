"""Sum of a PTAT current and a current that falls with V_BE."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits import ptat_core
from tcopt.circuits.statement import Circuit, Loop, Slot

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:
    I_core, I_out = terms.symbol("I_core"), terms.symbol("I_out")
    (core,) = ptat_core.CIRCUIT.loops(terms, feed)
    q1 = terms.bipolar(terms.symbol("M") * I_core)
    return (
        Loop("I_core", core.residual.subs(I_out, I_core)),
        Loop("I_out", q1.base_emitter_voltage - (I_out - I_core) * terms.resistance("base")),
    )


CIRCUIT = Circuit(
    topology="ptat plus vbe",
    summary="a PTAT core and a base-emitter voltage over a second resistor, added",
    unknowns=("I_core", "I_out"),
    slots=(
        Slot("core", "in the emitter of the larger transistor: sets the rising part"),
        Slot("base", "across a base-emitter voltage: sets the falling part"),
    ),
    loops=_loops,
    choices=("area_ratio", "mirror_ratio"),
    rests_at_zero=True,
)
