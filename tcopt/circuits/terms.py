"""The sympy side of a circuit's statement: its symbols and its transistors."""

from __future__ import annotations

import sympy as sp

from tcopt.circuits.statement import Circuit, Loop
from tcopt.laws.bipolar import Transistor
from tcopt.symbols import NOMENCLATURE, resistance_name

__all__ = ["Terms", "statement_of"]


class Terms:
    """Hands out the symbols in which loops are written; each is positive."""

    log = staticmethod(sp.log)

    def symbol(self, name: str) -> sp.Symbol:
        """Return the symbol of a quantity of the nomenclature."""
        return sp.Symbol(NOMENCLATURE[name].name, positive=True)

    def resistance(self, slot: str) -> sp.Symbol:
        """Return the resistance of a slot [ohm]."""
        return sp.Symbol(resistance_name(slot), positive=True)

    def bipolar(self, current: sp.Expr, area: sp.Expr | int = 1) -> Transistor:
        """Return a bipolar transistor of this collector current [A] and area [1]."""
        return Transistor(
            current, sp.sympify(area), V_T=self.symbol("V_T"), I_S=self.symbol("I_S")
        )


def statement_of(circuit: Circuit, feed: str) -> tuple[Loop, ...]:
    """Return the circuit's loops in sympy, in the order in which they fix the unknowns."""
    loops = circuit.loops(Terms(), feed)
    if tuple(loop.unknown for loop in loops) != circuit.unknowns:
        raise AssertionError(f"{circuit.topology}: a loop each for {circuit.unknowns}, in order")
    return loops
