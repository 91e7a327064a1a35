"""A derivation with numbers put in, at the reference temperature."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from types import MappingProxyType

import sympy as sp

from tcopt.derive.chain import Equality, groups
from tcopt.derive.derivation import Derivation
from tcopt.derive.names import coefficient, described, positive
from tcopt.errors import NoSolutionError
from tcopt.laws.numbers import VOLT_PER_KELVIN
from tcopt.symbols import resistance_name
from tcopt.units import format_quantity

__all__ = ["FLAT", "PTAT", "TARGET", "Numbers", "expected_names", "with_numbers"]

FLAT, PTAT, TARGET = "flat", "PTAT", "target"
_DIGITS = 5
_PRECISION = 30
_TARGET = {"I_target": "I_out", "TC1_target": "TC1_I_out", "TC2_target": "TC2_I_out"}

State = Mapping[sp.Symbol, sp.Float]


@dataclass(frozen=True)
class Numbers:
    """A derivation and the value of every symbol in it, in SI.

    Attributes
    ----------
    derivation : of the circuit, or of its special case where a slot's resistance is zero
    given : what was put in
    state : every symbol that follows from it, for the circuit as it is
    pinned : by slot and by target (FLAT, PTAT, TARGET): every symbol, with that slot's resistor
        what it must be for the target, so that ``TC1_output`` is the TC1 of the perfect resistor
    """

    derivation: Derivation
    given: Mapping[str, float]
    state: State
    pinned: Mapping[str, Mapping[str, State]]

    def __getitem__(self, name: str) -> float:
        """Return the value of a symbol by name, for the circuit as it is."""
        for symbol, value in self.state.items():
            if symbol.name == name:
                return float(value)
        raise KeyError(name)

    def perfect(self, slot: str, target: str) -> tuple[float, float] | None:
        """Return TC1 [1/K] and TC2 [1/K^2] of the perfect resistor; None where numbers lack."""
        state = self.pinned.get(slot, {}).get(target, {})
        both = [coefficient(resistance_name(slot), order) for order in (1, 2)]
        if any(symbol not in state for symbol in both):
            return None
        return float(state[both[0]]), float(state[both[1]])

    def shown(self, expression: sp.Expr, state: State, unit_of: str) -> str:
        """Return the value of an expression as text with its unit; empty where numbers lack."""
        value = _value(expression, state)
        return "" if value is None else self.text(float(value), unit_of)

    def text(self, value: float, name: str) -> str:
        """Return a value with the unit of a symbol."""
        return format_quantity(value, described(name, self.derivation.circuit).unit, _DIGITS)


def expected_names(derivation: Derivation) -> tuple[str, ...]:
    """Return the names of the values that `with_numbers` understands.

    ``T_0``; ratios ``N``, ``M``; sources ``I_given``, ``V_ref``, ``V_CC``; the
    transistor's ``I_S`` (at T_0), ``V_G0``, ``eta``; ``R_slot`` of each slot at
    T_0, 0 for a short; ``TC1_slot``, ``TC2_slot``, and the same of the sources,
    ``TC1_I_given``, ``TC2_V_ref`` and so on. Not needed, but taken: ``V_T``,
    else k T_0/q; the currents, else those of the closed form; ``I_target``,
    ``TC1_target``, ``TC2_target`` of the output that is wanted.
    """
    names = {"T_0", "V_T", *derivation.quantities, *_TARGET}
    names |= {coefficient(q, order).name for q in derivation.given for order in (1, 2)}
    names |= {resistance_name(slot) for slot in derivation.shorts}
    names |= {
        coefficient(resistance_name(slot), k).name for slot in derivation.shorts for k in (1, 2)
    }
    if "I_S" in names:
        names |= {"V_G0", "eta"}
    return tuple(sorted(names))


def with_numbers(derivation: Derivation, values: Mapping[str, float]) -> Numbers:
    """Put numbers into a derivation.

    What follows from the values is evaluated, what does not is left open: so a
    circuit in which one slot is still to be designed (its ``R_slot`` not
    given, ``I_target`` given) shows what that slot needs.

    Parameters
    ----------
    derivation : of the circuit
    values : by name, in SI, at T_0; see `expected_names`

    Raises
    ------
    ValueError
        For a name that is not expected, or a value that is not finite.
    NoSolutionError
        Where no current solves the loops with these values.
    """
    accepted = expected_names(derivation)
    for name, value in values.items():
        if name not in accepted:
            raise ValueError(f"values: found {name!r}; accepted: {', '.join(accepted)}")
        if not math.isfinite(value):
            raise ValueError(f"values: {name}: found {value}; accepted: a finite number")
    if "T_0" not in values:
        raise ValueError("values: found no 'T_0'; accepted: the reference temperature in K")
    zero = tuple(
        slot.name
        for slot in derivation.circuit.slots_for(derivation.feed)
        if slot.optional and values.get(resistance_name(slot.name)) == 0
    )
    if zero:
        derivation = next(case for case in derivation.special_cases if case.shorts == zero)
    given = {name: value for name, value in values.items() if name not in _TARGET}
    given.setdefault("V_T", VOLT_PER_KELVIN * values["T_0"])
    base = {_symbol(name): _number(value) for name, value in given.items()}
    base |= {positive("T"): base[positive("T_0")]}
    target = {_symbol(name): _number(values[key]) for key, name in _TARGET.items() if key in values}
    return Numbers(
        derivation=derivation,
        given=MappingProxyType(dict(values)),
        state=_own_state(derivation, base, target),
        pinned=MappingProxyType(
            {slot: _pinned_states(derivation, slot, base, target) for slot in derivation.slots}
        ),
    )


def _symbol(name: str) -> sp.Symbol:
    return sp.Symbol(name, real=True) if name.startswith("TC") else positive(name)


def _number(value: float) -> sp.Float:
    return sp.Float(value, _PRECISION)


def _value(expression: sp.Expr, state: State) -> sp.Float | None:
    if not expression.free_symbols <= state.keys():
        return None
    value = expression.subs(state) if expression.is_Symbol else expression.xreplace(dict(state))
    value = sp.N(value, _PRECISION)
    return value if value.is_real and value.is_finite else None


def _follow(state: dict[sp.Symbol, sp.Float], chain: Iterable[Equality]) -> None:
    """Add what a chain says to a state, line by line, where all that a line needs is there."""
    for group in groups(chain):
        if len(group) > 1:
            _follow_together(state, group)
            continue
        (line,) = group
        value = _value(line.expression, state)
        if value is not None:
            state[line.symbol] = value
        elif line.expression.free_symbols <= state.keys() and line.symbol.is_positive:
            raise NoSolutionError(f"with these values no {line.symbol.name} solves the loops")


def _follow_together(state: dict[sp.Symbol, sp.Float], group: Sequence[Equality]) -> None:
    symbols = [line.symbol for line in group]
    needed = set().union(*(line.expression.free_symbols for line in group)) - set(symbols)
    if needed <= state.keys():
        known = {symbol: state[symbol] for symbol in needed}
        equations = [line.symbol - line.expression.xreplace(known) for line in group]
        matrix, right = sp.linear_eq_to_matrix(equations, symbols)
        values = sp.N(matrix, _PRECISION).LUsolve(sp.N(right, _PRECISION))
        state |= dict(zip(symbols, values, strict=True))


def _own_state(derivation: Derivation, base: State, target: State) -> State:
    """Return the circuit as it is; where one resistance is open, as the target wants it."""
    state = dict(base)
    open_slots = [s for s in derivation.slots if positive(resistance_name(s)) not in state]
    if len(open_slots) == 1 and positive("I_out") in target:
        state[positive("I_out")] = target[positive("I_out")]
        _follow(state, derivation.needed[open_slots[0]] or ())
    else:
        known = set(state)
        chain = derivation.closed_form or ()
        _follow(state, [line for line in chain if line.symbol not in known])
    _around(derivation, state)
    _follow(state, derivation.first)
    for line in derivation.first:
        if line.symbol in state:
            state[sp.Symbol(line.symbol.name.replace("TC_", "TC1_", 1), real=True)] = state[
                line.symbol
            ]
    _follow(state, (*derivation.bends, *derivation.second))
    return MappingProxyType(state)


def _around(derivation: Derivation, state: dict[sp.Symbol, sp.Float]) -> None:
    """Add drops, shares, and the local coefficients at T_0."""
    _follow(state, derivation.abbreviations)
    _follow(state, derivation.laws)
    for q in derivation.given:
        if coefficient(q, 1) in state:
            state[coefficient(q)] = state[coefficient(q, 1)]
    saturation = coefficient("I_S")
    if saturation in state:
        state[coefficient("I_S", 1)] = state[saturation]


def _pinned_states(
    derivation: Derivation, slot: str, base: State, target: State
) -> Mapping[str, State]:
    own = _own_state(derivation, base, target)
    output, R = positive("I_out"), positive(resistance_name(slot))
    current = target.get(output, own.get(output))
    T_0 = base[positive("T_0")]
    wanted = {FLAT: (_number(0), _number(0)), PTAT: (1 / T_0, _number(0))}
    both = [target.get(coefficient("I_out", order)) for order in (1, 2)]
    if both[0] is not None and both[1] is not None:
        wanted[TARGET] = (both[0], both[1])
    rules = {FLAT: derivation.flat, PTAT: derivation.ptat, TARGET: {}}
    perfect = {
        FLAT: derivation.perfect_flat,
        PTAT: derivation.perfect_ptat,
        TARGET: derivation.perfect,
    }
    own_coefficients = {coefficient(R.name, order) for order in (1, 2)}
    others = {symbol: value for symbol, value in base.items() if symbol not in own_coefficients}
    found = {}
    for name, (first, second) in wanted.items():
        state = dict(others)
        needed = derivation.needed[slot]
        if needed is None:
            solved = (positive(n) for n in derivation.solved_for)
            state |= {symbol: own[symbol] for symbol in solved if symbol in own}
        elif current is not None:
            state[output] = current
            state.pop(R, None)
            for name_ in set(derivation.solved_for) - {output.name}:
                state.pop(positive(name_), None)
            _follow(state, needed)
        _around(derivation, state)
        state |= {coefficient("I_out", 1): first, coefficient("I_out", 2): second}
        _follow(state, rules[name].get(slot, ()))
        _follow(state, perfect[name].get(slot, ()))
        found[name] = MappingProxyType(state)
    return MappingProxyType(found)
