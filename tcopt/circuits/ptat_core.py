"""PTAT core: two junctions at different current densities, their difference across a resistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    I_out = terms.symbol("I_out")
    q1 = terms.bipolar(terms.symbol("M") * I_out)
    q2 = terms.bipolar(I_out, area=terms.symbol("N"))
    return (
        Loop(
            "I_out",
            q1.base_emitter_voltage
            - q2.base_emitter_voltage
            - q2.emitter_current * terms.resistance("core"),
        ),
    )


CIRCUIT = Circuit(
    topology="ptat core",
    summary="the difference of two base-emitter voltages across a resistor",
    unknowns=("I_out",),
    slots=(Slot("core", "in the emitter of the larger transistor"),),
    loops=_loops,
    choices=("area_ratio", "mirror_ratio"),
    rests_at_zero=True,
)
