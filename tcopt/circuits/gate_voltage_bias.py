"""A MOS transistor at a fixed gate voltage, with or without a resistor in its source.

At one gate voltage the falling threshold and the falling mobility cancel: the
bias point at which the current does not move with temperature.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    N = terms.symbol("N")
    I_out = terms.current("I_out", area=N)
    q1 = terms.transistor(I_out, N, terms.resistance("source"), to_output=True)
    terms.observe(output=q1)
    return (Loop("I_out", terms.symbol("V_ref") - q1.control_voltage),)


CIRCUIT = Circuit(
    topology="gate voltage bias",
    summary="a reference voltage at the gate: one of them gives a current that stands still",
    unknowns=("I_out",),
    slots=(Slot("source", "in the source", optional=True),),
    loops=_loops,
    choices=("area_ratio",),
    needs_reference_voltage=True,
    devices=("mos",),
)
