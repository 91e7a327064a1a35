"""From a circuit's statement to its formulas: currents, drift, rules, the perfect resistor."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace
from functools import cached_property
from itertools import combinations
from types import MappingProxyType

import sympy as sp

from tcopt.circuits import CIRCUITS, Circuit, Loop
from tcopt.circuits.closed_form import Kind, Root, forward, need
from tcopt.circuits.terms import Device, Terms, kinds_of
from tcopt.derive.chain import Chain, Equality, solve_chain, substituted
from tcopt.derive.names import INVERSE_T, INVERSE_T_0, coefficient, positive, with_temperatures
from tcopt.derive.orders import Orders
from tcopt.derive.pinned import bends, perfect_resistors, rules
from tcopt.derive.reading import combined, over, sides
from tcopt.derive.temperature import coefficient_law, ruled_by_law
from tcopt.derive.tidying import factored
from tcopt.symbols import resistance_name

__all__ = ["Derivation", "derive", "shorted"]


@dataclass(frozen=True)
class Derivation:
    """What follows from one circuit's loops; each part is derived when it is asked for.

    ``TC_q`` is the local temperature coefficient ``(dq/dT)/q`` [1/K]; ``TC1_q``
    and ``TC2_q`` [1/K, 1/K^2] are first and second order about T_0, so that
    ``q(T)/q(T_0) = 1 + TC1_q (T - T_0) + TC2_q (T - T_0)^2``. For a resistance
    the slot stands for q: ``TC1_output`` belongs to ``R_output``.

    Attributes
    ----------
    whole, feed, device : what was derived
    shorts : optional slots that are shorted
    """

    whole: Circuit
    feed: str
    device: Device
    shorts: tuple[str, ...] = ()

    @cached_property
    def circuit(self) -> Circuit:
        """The circuit without the slots that are shorted."""
        return shorted(self.whole, self.shorts) if self.shorts else self.whole

    @cached_property
    def slots(self) -> tuple[str, ...]:
        """Names of the resistor slots."""
        return self._orders.slots

    @cached_property
    def given(self) -> tuple[str, ...]:
        """Names of the quantities that have a TC1 and TC2 of their own."""
        return self._orders.given

    @cached_property
    def quantities(self) -> tuple[str, ...]:
        """Names of all that stands in the loops, but for what is derived from it."""
        made = set(self._orders.unknowns) - {*self.solved_for, self.circuit.unknowns[-1]}
        return tuple(q for q in self._orders.quantities if q not in made)

    @cached_property
    def fitted(self) -> tuple[str, ...]:
        """Those of the given for which the TC1 and TC2 of the data are the law."""
        return self._orders.fitted

    @cached_property
    def solved_for(self) -> tuple[str, ...]:
        """Names of what the loops are solved for."""
        return tuple(symbol.name for symbol in self._orders.solved_for)

    @cached_property
    def loops(self) -> tuple[tuple[sp.Expr, sp.Expr], ...]:
        """Both sides of each equation, all terms positive."""
        return tuple(sides(loop.residual, self.solved_for) for loop in self._orders.loops)

    @cached_property
    def roots(self) -> tuple[Root, ...] | None:
        """The currents as `tcopt.circuits.closed_form` has them, for numerics."""
        return forward(self._orders.loops) if self.device is Device.IDEAL else None

    @cached_property
    def closed_form(self) -> Chain | None:
        """The currents in the order in which the loops fix them; None without closed form."""
        return None if self.roots is None else self._currents(self.roots)

    @cached_property
    def abbreviations(self) -> Chain:
        """What ``x``, voltages in units of V_T, and ``w``, shares of currents, stand for."""
        return self._orders.abbreviations

    @cached_property
    def laws(self) -> Chain:
        """Local coefficients of what the loops are made of, where a law gives them."""
        quantities = self._orders.quantities
        ruled = [
            Equality(coefficient(q), with_temperatures(law))
            for q, law in ruled_by_law().items()
            if q in quantities
        ]
        return (*ruled, *(Equality(coefficient(q), coefficient_law(q)) for q in self.fitted))

    @cached_property
    def first(self) -> Chain:
        """Local temperature coefficients of the currents; the last is the output's."""
        return self._chain(self._orders.first, None)

    @cached_property
    def temperature_coefficient(self) -> sp.Expr:
        """TC(I_out) with the lines above it put in [1/K]."""
        return substituted(self.first)

    @cached_property
    def bends(self) -> Chain:
        """What ``K`` stands for, the second order of a drop but for its current's own."""
        return bends(self._orders)

    @cached_property
    def second(self) -> Chain:
        """Second-order coefficients of the currents at T_0; the last is the output's."""
        return self._chain(self._orders.second, 2)

    @cached_property
    def sensitivities(self) -> Mapping[str, sp.Expr]:
        """``d ln I_out / d ln q`` by name of q: one changes, all others stand still.

        Empty where coefficients hang together, so that no formula would be readable.
        """
        orders = self._orders
        if any(line.together for line in self.first):
            return MappingProxyType({})
        causes = [q for q in orders.quantities if q not in {*orders.unknowns, "V_T"}]
        found = {}
        for cause in causes:
            rates = {coefficient(q): int(q == cause) for q in [*causes, "V_T"]}
            equations = [sp.expand(e.subs(rates)) for e in orders.causes]
            found[cause] = factored(substituted(self._chain(equations, None)))
        return MappingProxyType(found)

    @cached_property
    def flat(self) -> Mapping[str, Chain]:
        """The local coefficient that a slot needs for TC(I_out) = 0, by slot."""
        return rules(self._orders, sp.Integer(0))

    @cached_property
    def ptat(self) -> Mapping[str, Chain]:
        """The local coefficient that a slot needs for TC(I_out) = 1/T, by slot."""
        return rules(self._orders, INVERSE_T)

    @cached_property
    def needed(self) -> Mapping[str, Chain | None]:
        """The resistance that a slot needs to pin I_out, by slot; None without closed form."""
        return MappingProxyType({slot: self._needed(slot) for slot in self.slots})

    @cached_property
    def perfect(self) -> Mapping[str, Chain]:
        """TC1 and TC2 that the needed resistance has at T_0, by slot.

        In terms of TC1 and TC2 of the output; the two of interest are the lines
        for ``TC1_slot`` and, the last, ``TC2_slot``. They are ``R'/R`` and
        ``R''/(2 R)`` of the needed resistance.
        """
        output = self._orders.unknowns[-1]
        return perfect_resistors(self._orders, coefficient(output, 1), coefficient(output, 2))

    @cached_property
    def perfect_flat(self) -> Mapping[str, Chain]:
        """The same for an output that stands still."""
        return perfect_resistors(self._orders, sp.Integer(0), sp.Integer(0))

    @cached_property
    def perfect_ptat(self) -> Mapping[str, Chain]:
        """The same for an output in proportion to T."""
        return perfect_resistors(self._orders, INVERSE_T_0, sp.Integer(0))

    @cached_property
    def special_cases(self) -> tuple[Derivation, ...]:
        """The same circuit with optional slots shorted: one, several, all."""
        optional = [slot.name for slot in self.circuit.slots_for(self.feed) if slot.optional]
        cases = [c for k in range(1, len(optional) + 1) for c in combinations(optional, k)]
        return tuple(replace(self, shorts=(*self.shorts, *case)) for case in cases)

    @cached_property
    def _orders(self) -> Orders:
        return Orders(self.circuit, self.feed, self.device)

    def _chain(self, equations: Sequence[sp.Expr], order: int | None) -> Chain:
        unknowns = [coefficient(name, order) for name in self._orders.unknowns]
        chain = solve_chain(equations, unknowns, unknowns[-1])
        if chain is None:
            raise AssertionError(f"{self.circuit.topology}: the loops do not fix the currents")
        return chain

    def _currents(self, roots: Sequence[Root]) -> Chain:
        lines = []
        for root in roots:
            formula = root.formula
            if root.kind is Kind.LINEAR:
                readings = (combined(formula, self.solved_for), over(formula, self.solved_for))
                formula = min(readings, key=sp.count_ops)
            lines.append(Equality(root.unknown, formula))
        return tuple(lines)

    def _needed(self, slot: str) -> Chain | None:
        found = need(self.circuit, self.feed, slot) if self.device is Device.IDEAL else None
        if found is None:
            return None
        resistance = over(found.resistance, self.solved_for)
        line = Equality(positive(resistance_name(slot)), resistance)
        return (*self._currents(found.roots), line)


def shorted(circuit: Circuit, slots: Sequence[str]) -> Circuit:
    """Return the circuit with these slots shorted."""
    short = {positive(resistance_name(slot)): 0 for slot in slots}

    def without(loops: Sequence[Loop]) -> tuple[Loop, ...]:
        return tuple(Loop(loop.unknown, loop.residual.subs(short)) for loop in loops)

    def loops(terms: Terms, feed: str) -> tuple[Loop, ...]:
        stated = circuit.loops(terms, feed)
        terms.extra[:] = without(terms.extra)
        return without(stated)

    left = tuple(slot for slot in circuit.slots if slot.name not in slots)
    return replace(circuit, loops=loops, slots=left)


def derive(
    circuit: Circuit | str, feed: str | None = None, device: Device | None = None
) -> Derivation:
    """Derive the formulas of a circuit.

    Parameters
    ----------
    circuit : the circuit, or its topology in the words of `tcopt.circuits.CIRCUITS`
    feed : kind of input, one of ``circuit.feeds``; the first of them by default
    device : kind of transistor; the first that the circuit is stated for by default

    Raises
    ------
    ValueError
        For a feed or a device that the circuit does not have.

    Notes
    -----
    Everything is linear in the coefficients of the highest order, so each
    result solves linear equations; see `tcopt.derive.orders`.

    Examples
    --------
    >>> derive("ptat core").temperature_coefficient
    -TC_core + 1/T
    """
    circuit = CIRCUITS[circuit] if isinstance(circuit, str) else circuit
    feed = circuit.feeds[0] if feed is None else feed
    if feed not in circuit.feeds:
        raise ValueError(f"{circuit.topology}: found input {feed!r}; accepted: {circuit.feeds}")
    kinds = kinds_of(circuit)
    device = kinds[0] if device is None else device
    if device not in kinds:
        raise ValueError(
            f"{circuit.topology}: found {device.value!r} transistors; "
            f"accepted: {[kind.value for kind in kinds]}"
        )
    return Derivation(circuit, feed, device)
