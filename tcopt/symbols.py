"""Every symbol once: its name in formulas, its unit, its meaning.

The nomenclature is plain data, so that commands which only compute need not
load sympy. ``laws`` and ``circuits`` make their sympy symbols from it, the
formulas that users read take their legend from it.
"""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["INVERSE", "NOMENCLATURE", "Entry", "resistance_name"]


@dataclass(frozen=True, slots=True)
class Entry:
    """One symbol: its name, its unit ('1' for a pure number) and what it means."""

    name: str
    unit: str
    meaning: str


def _table(*rows: tuple[str, str, str]) -> dict[str, Entry]:
    return {name: Entry(name, unit, meaning) for name, unit, meaning in rows}


NOMENCLATURE = _table(
    ("T", "K", "absolute temperature"),
    ("T_0", "K", "reference temperature"),
    ("V_T", "V", "thermal voltage k T / q"),
    ("I_S", "A", "saturation current of one unit of emitter area"),
    ("V_G0", "V", "bandgap voltage, extrapolated to 0 K"),
    ("eta", "1", "temperature exponent of the saturation current"),
    ("N", "1", "area ratio, output transistor to input transistor"),
    ("M", "1", "mirror ratio, input-side current to output-side current"),
    ("I_in", "A", "current of the input transistor"),
    ("I_core", "A", "current of the PTAT core"),
    ("I_out", "A", "output current"),
    ("I_given", "A", "current forced into the input"),
    ("V_CC", "V", "supply voltage"),
    ("V_ref", "V", "reference voltage"),
    ("V_out", "V", "voltage of the output node"),
    ("beta", "1", "current gain, collector current to base current"),
    ("V_A", "V", "Early voltage"),
    ("I_L", "A", "leakage of the collector or drain junction of one unit of area"),
    ("J_in", "A", "input transistor's current without leakage"),
    ("J_core", "A", "PTAT core's current without leakage"),
    ("J_out", "A", "output transistor's current without leakage"),
    ("I_others", "A", "base currents of the other outputs that share the input"),
    ("V_D", "V", "collector-emitter or drain-source voltage of the diode-connected transistor"),
    ("V_in", "V", "voltage of the node that the input, or the mirror on top, feeds"),
    ("V_foot", "V", "emitter or source voltage of the output transistor"),
    ("I_top", "A", "current that the branches draw at their top"),
    ("D_in", "A", "current of the input transistor per unit of area"),
    ("D_out", "A", "current of the output transistor per unit of area"),
    ("V_TH", "V", "threshold voltage"),
    ("n", "1", "slope factor"),
    ("n_S", "1", "weight of the source voltage: n in the common bulk, 1 in a well of its own"),
    ("I_spec", "A", "specific current of the unit device, 2 n mu C_ox V_T^2 W/L"),
    ("TC1", "1/K", "first-order temperature coefficient of a resistance"),
    ("TC2", "1/K^2", "second-order temperature coefficient of a resistance"),
)
"""Symbols that more than one place uses; a resistor slot names its own (`resistance_name`)."""

INVERSE = {"beta": "inverse_beta", "V_A": "inverse_V_A"}
"""Symbols that are infinite in the ideal transistor, and the numerics' names of their inverses."""


def resistance_name(slot: str) -> str:
    """Return the symbol of the resistance in a slot: ``output`` is ``R_output``, in ohm."""
    return f"R_{slot}"
