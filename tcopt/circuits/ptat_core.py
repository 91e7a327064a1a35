"""PTAT core: two junctions at different current densities, their difference across a resistor."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.statement import Circuit, Loop, Slot, Start

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms, Transistor

__all__ = ["CIRCUIT", "core"]


def core(terms: Terms, current: str) -> tuple[Transistor, Loop]:
    """Return the diode-connected transistor of a core, and the loop that fixes its current."""
    N = terms.symbol("N")
    I_core = terms.current(current, area=N)
    q2 = terms.transistor(I_core, N, terms.resistance("core"), to_output=True)
    forced = terms.symbol("M") * I_core
    q1 = terms.diode(forced, other_bases=q2.base_current)
    node = terms.collector(q1, q1.control_voltage)
    terms.observe(V_in=node, first=q1, output=q2, I_top=forced + I_core)
    return q1, Loop(current, q1.control_voltage - q2.control_voltage)


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    return (core(terms, "I_out")[1],)


CIRCUIT = Circuit(
    topology="ptat core",
    summary="the difference of two base-emitter voltages across a resistor",
    unknowns=("I_out",),
    slots=(Slot("core", "in the emitter of the larger transistor"),),
    loops=_loops,
    choices=("area_ratio", "mirror_ratio"),
    start=Start("core", "base and collector of the diode-connected transistor"),
    devices=("bipolar", "mos"),
)
