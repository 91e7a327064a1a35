"""Sum of a PTAT current and a current that falls with V_BE."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.ptat_core import core
from tcopt.circuits.statement import Circuit, Loop, Slot, Start

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    q1, loop = core(terms, "I_core")
    falling = terms.current("I_out") - terms.current("I_core")
    terms.observe(I_top=terms.observed["I_top"] + falling)
    return (
        loop,
        Loop("I_out", q1.over_emitter - falling * terms.resistance("base")),
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
    start=Start("core", "base and collector of the diode-connected transistor", "ptat core"),
    devices=("bipolar", "mos"),
)
