"""The symbols that derived formulas add to the nomenclature, and the legend of all of them.

Names are valid in Python and in a mapping of numbers; how they look on paper is
left to the writers. ``q`` stands for a quantity's name, ``slot`` for a
resistor's: the coefficients of ``R_output`` are ``TC1_output`` and
``TC2_output``, those of the given current ``TC1_I_given`` and ``TC2_I_given``.
"""

from __future__ import annotations

from dataclasses import dataclass

import sympy as sp

from tcopt.circuits import Circuit
from tcopt.symbols import NOMENCLATURE, Entry, resistance_name

__all__ = [
    "INVERSE_T",
    "INVERSE_T_0",
    "bend",
    "coefficient",
    "described",
    "drop",
    "inner",
    "is_quantity",
    "is_voltage",
    "positive",
    "quantity_of",
    "sensitivity",
    "share",
    "slot_of",
    "steepness",
    "through",
    "with_temperatures",
]

_TARGET = {
    "I_target": Entry("I_target", "A", "output current that is wanted, at T_0"),
    "TC1_target": Entry("TC1_target", NOMENCLATURE["TC1"].unit, "its first order"),
    "TC2_target": Entry("TC2_target", NOMENCLATURE["TC2"].unit, "its second order"),
}
_RESISTANCE = resistance_name("")
_PREFIXES = ("TC1_", "TC2_", "TC_", "x_", "w_", "S_", "K_")

# 1/T and 1/T_0 as symbols of their own, so that every formula on the way is a
# polynomial and factors the way a reader would factor it.
INVERSE_T = sp.Symbol("inverse_T", positive=True)
INVERSE_T_0 = sp.Symbol("inverse_T_0", positive=True)


def positive(name: str) -> sp.Symbol:
    """Return the symbol of a quantity: the one that the loops are written in."""
    return sp.Symbol(name, positive=True)


def slot_of(quantity: str) -> str | None:
    """Return the slot of a resistance's symbol, None for any other quantity."""
    return quantity.removeprefix(_RESISTANCE) if quantity.startswith(_RESISTANCE) else None


def coefficient(quantity: str, order: int | None = None) -> sp.Symbol:
    """Return the temperature coefficient of a quantity: first or second order, or local (None)."""
    return sp.Symbol(f"TC{order or ''}_{slot_of(quantity) or quantity}", real=True)


def drop(of: str) -> sp.Symbol:
    """Return the symbol of a voltage in units of V_T: over a slot's resistance, or a source."""
    return sp.Symbol(f"x_{of}", positive=True)


def share(of: str) -> sp.Symbol:
    """Return the symbol of one part's share in a sum of currents."""
    return sp.Symbol(f"w_{of}", positive=True)


def through(slot: str) -> sp.Symbol:
    """Return the symbol of the current through a slot's resistance."""
    name = f"I_{slot}"
    return positive(f"I_R{slot}" if name in NOMENCLATURE else name)


def inner(number: int) -> sp.Symbol:
    """Return the symbol of what stands inside a function."""
    return positive(f"y_{number}")


def steepness(of: sp.Symbol, order: int) -> sp.Symbol:
    """Return the symbol of ``y f'(y)``, or of ``y^2 f''(y)``, for a function f of an inner y."""
    number = of.name.removeprefix("y_")
    return sp.Symbol(f"{'gh'[order - 1]}_{number}", real=True)


def bend(slot: str) -> sp.Symbol:
    """Return the symbol of the second order of a slot's drop, but for its current's own."""
    return sp.Symbol(f"K_{slot}", real=True)


def sensitivity(quantity: str) -> sp.Symbol:
    """Return the symbol of the output's relative change per relative change of a quantity."""
    return sp.Symbol(f"S_{quantity}", real=True)


def with_temperatures(expression: sp.Expr) -> sp.Expr:
    """Write ``1/T`` and ``1/T_0`` for the symbols that stood for them."""
    return expression.xreplace({INVERSE_T: 1 / positive("T"), INVERSE_T_0: 1 / positive("T_0")})


@dataclass(frozen=True, slots=True)
class Parsed:
    """A name taken apart: 'TC1_output' is prefix 'TC1' and quantity 'output'."""

    prefix: str
    of: str


def quantity_of(name: str) -> Parsed | None:
    """Take apart the name of a derived symbol; None for a symbol of the loops."""
    for prefix in _PREFIXES:
        if name.startswith(prefix):
            return Parsed(prefix.rstrip("_"), name.removeprefix(prefix))
    return None


def is_voltage(name: str) -> bool:
    """Say whether an x is a voltage of the nomenclature in units of V_T, not a drop over a slot."""
    return name.startswith("x_") and f"V_{name.removeprefix('x_')}" in NOMENCLATURE


def is_quantity(name: str) -> bool:
    """Say whether it names a quantity, and not a slot: slots are words in small letters."""
    return name in NOMENCLATURE or name[0].isupper() or name.startswith("y_")


def described(name: str, circuit: Circuit) -> Entry:
    """Return name, unit and meaning of one symbol of a derivation."""
    known = {**NOMENCLATURE, **_TARGET, **_of_slots(circuit)}
    if name in known:
        return known[name]
    parsed = quantity_of(name)
    if parsed is not None:
        return _derived(name, parsed)
    if slot_of(name):
        return Entry(name, "ohm", "resistance that is a short")
    if name[:2] in {"y_", "g_", "h_"}:
        return Entry(name, "1", "abbreviation, defined with the temperature coefficient")
    raise AssertionError(f"{name} stands in a formula and not in the nomenclature")


def _of_slots(circuit: Circuit) -> dict[str, Entry]:
    found = {}
    for slot in circuit.slots:
        R, current = resistance_name(slot.name), through(slot.name).name
        found[R] = Entry(R, "ohm", f"resistance: {slot.meaning}")
        found[current] = Entry(current, "A", f"current through {R}")
    return found


def _derived(name: str, parsed: Parsed) -> Entry:
    of = parsed.of if is_quantity(parsed.of) else resistance_name(parsed.of)
    first, second = NOMENCLATURE["TC1"].unit, NOMENCLATURE["TC2"].unit
    drop_of = f"V_{parsed.of}" if is_voltage(name) else f"drop over {of}"
    unit, meaning = {
        "TC": (first, f"temperature coefficient of {of} at T"),
        "TC1": (first, f"first-order temperature coefficient of {of}"),
        "TC2": (second, f"second-order temperature coefficient of {of}"),
        "K": (second, f"second order of the drop over {of}, but for its current's own"),
        "x": ("1", f"{drop_of} in units of V_T"),
        "w": ("1", f"share of I_{parsed.of} in a sum of currents"),
        "S": ("1", f"d ln I_out / d ln {of}"),
    }[parsed.prefix]
    return Entry(name, unit, meaning)
