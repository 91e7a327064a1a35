"""Constant-transconductance bias: the PTAT core's loop, in MOS and any region of inversion."""

from __future__ import annotations

from typing import TYPE_CHECKING

from tcopt.circuits.ptat_core import core
from tcopt.circuits.statement import Circuit, Loop, Slot, Start

if TYPE_CHECKING:
    from tcopt.circuits.terms import Terms

__all__ = ["CIRCUIT"]


def _loops(terms: Terms, feed: str) -> tuple[Loop, ...]:  # noqa: ARG001
    return (core(terms, "I_out")[1],)


CIRCUIT = Circuit(
    topology="constant transconductance bias",
    summary="the difference of two gate-source voltages across a resistor: g_m follows 1/R",
    unknowns=("I_out",),
    slots=(Slot("core", "in the source of the wider transistor"),),
    loops=_loops,
    choices=("area_ratio", "mirror_ratio"),
    start=Start("core", "gate and drain of the diode-connected transistor"),
    devices=("mos",),
)
