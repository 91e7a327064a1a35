"""A circuit's loops to first and second order in temperature.

Each quantity is written ``q(T) = q(T_0) (1 + TC1 d + TC2 d^2)``, ``d = T - T_0``.
Put into a loop, the coefficients of d and d^2 must vanish each by itself, and
both are linear in the coefficients of the highest order: implicit
differentiation, for any loop whatever stands in it.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import sympy as sp

from tcopt.circuits import Circuit
from tcopt.circuits.statement import Loop
from tcopt.circuits.terms import Device, Terms, terms_of
from tcopt.derive.chain import Equality
from tcopt.derive.names import (
    INVERSE_T,
    INVERSE_T_0,
    bend,
    coefficient,
    drop,
    inner,
    positive,
    share,
    slot_of,
    steepness,
    through,
)
from tcopt.derive.reading import plainly
from tcopt.derive.series import at_reference, first_order, opaque, second_order
from tcopt.derive.temperature import CONSTANT, SOURCES, ruled_by_law, saturation_slope
from tcopt.symbols import resistance_name

__all__ = ["Orders"]

_V_T = positive("V_T")


@dataclass(frozen=True)
class _Equation:
    """Terms whose sum is zero; ``whole``: what a definition defines, and a sum is the sum of."""

    terms: tuple[sp.Expr, ...]
    whole: sp.Symbol | None = None

    @property
    def is_equality_of_two(self) -> bool:
        """Whether it says ``a = b``, so that a and b change alike."""
        return len(self.terms) == 2 and not any(t.has(sp.Function) for t in self.terms)


@dataclass(frozen=True)
class Orders:
    """The loops of one circuit with one kind of input and of transistor."""

    circuit: Circuit
    feed: str
    device: Device

    @cached_property
    def _stated(self) -> tuple[Terms, tuple[Loop, ...]]:
        return terms_of(self.circuit, self.feed, self.device)

    @cached_property
    def loops(self) -> tuple[Loop, ...]:
        """The loops as stated."""
        return self._stated[1]

    @cached_property
    def solved_for(self) -> tuple[sp.Symbol, ...]:
        """What the loops are solved for."""
        return tuple(self._stated[0].unknowns.values())

    @cached_property
    def unknowns(self) -> tuple[str, ...]:
        """Names of all that is unknown; the output is the last."""
        names = [s.name for s in (*self.solved_for, *self._definitions)]
        output = self.circuit.unknowns[-1]
        return (*(name for name in names if name != output), output)

    @cached_property
    def quantities(self) -> tuple[str, ...]:
        """Names of all that stands in the equations."""
        terms = [term for equation in self._equations for term in equation.terms]
        return tuple(sorted({s.name for term in terms for s in term.free_symbols}))

    @cached_property
    def given(self) -> tuple[str, ...]:
        """Quantities that change with temperature by a TC1 and TC2 of their own."""
        ruled = {*self.unknowns, *CONSTANT, *ruled_by_law(), "V_T"}
        return tuple(q for q in self.quantities if q not in ruled)

    @cached_property
    def fitted(self) -> tuple[str, ...]:
        """Those of the given for which the TC1 and TC2 of the data are the law."""
        return tuple(q for q in self.given if slot_of(q) or q in SOURCES)

    @cached_property
    def slots(self) -> tuple[str, ...]:
        """Names of the slots that exist with this feed."""
        return tuple(slot.name for slot in self.circuit.slots_for(self.feed))

    @cached_property
    def branches(self) -> dict[str, sp.Expr]:
        """The current through each slot's resistance."""
        found: dict[str, sp.Expr] = {}
        for slot in self.slots:
            R = positive(resistance_name(slot))
            currents = (sp.expand(loop.residual).coeff(R, 1) for loop in self.loops)
            current = next((c for c in currents if c != 0), None)
            if current is not None:
                outermost = [I for I in self.solved_for if current.has(I)][-1]
                away = current.coeff(outermost, 1).could_extract_minus_sign()
                found[slot] = sp.factor(-current if away else current)
        return found

    @cached_property
    def sums(self) -> dict[sp.Symbol, sp.Expr]:
        """Currents that are sums: each becomes an unknown of its own."""
        found = {
            through(slot): sp.expand(current)
            for slot, current in self.branches.items()
            if isinstance(sp.expand(current), sp.Add)
        }
        output = self.circuit.unknowns[-1]
        current = self._stated[0].currents[output]
        return found if current.is_Symbol else {**found, positive(output): current}

    @cached_property
    def shares(self) -> dict[sp.Symbol, sp.Expr]:
        """Shares of the unknown currents in each sum of several, by symbol."""
        found = {}
        unknowns = [positive(name) for name in self.unknowns]
        for total in self.sums:
            equation = self._equation_of[total]
            inside = [I for I in unknowns if any(t.has(I) for t in equation.terms)]
            for part in inside if len(inside) > 2 else []:
                if part == equation.whole:
                    continue
                name = part.name.removeprefix("I_")
                of = total.name.removeprefix("I_")
                symbol = share(name if len(self.sums) == 1 else f"{name}_{of}")
                found[symbol] = part / equation.whole
        return found

    @cached_property
    def abbreviations(self) -> tuple[Equality, ...]:
        """Sums of currents, shares and drops: what the symbols of the equations stand for."""
        used = {s.name for e in (*self.causes, *self.second) for s in e.free_symbols}
        found = self.sums | self.shares | self._inner
        for slot in self.branches:
            R = positive(resistance_name(slot))
            if drop(slot).name in used:
                found[drop(slot)] = self._branch(slot) * R / _V_T
        found |= {x: positive(name) / _V_T for name, x in self._sources.items()}
        if "I_S" in self.quantities:
            found[drop("G0")] = positive("V_G0") / _V_T
        found |= {s: value for s, value in self._steepnesses.items() if s.name in used}
        return tuple(Equality(symbol, value) for symbol, value in found.items())

    @cached_property
    def causes(self) -> tuple[sp.Expr, ...]:
        """First order with a coefficient for every quantity, also for those that stay constant."""
        return tuple(self._order(equation, 1) for equation in self._equations)

    @cached_property
    def first(self) -> tuple[sp.Expr, ...]:
        """First order at any T, in local coefficients and ``INVERSE_T``; each is zero."""
        known = {coefficient(name): 0 for name in CONSTANT} | {coefficient("V_T"): INVERSE_T}
        return tuple(sp.expand(e.subs(known)) for e in self.causes)

    @cached_property
    def first_at_reference(self) -> tuple[sp.Expr, ...]:
        """First order at T_0, in TC1 and ``INVERSE_T_0``; each is zero."""
        return tuple(e.xreplace({s: at_reference(s) for s in e.free_symbols}) for e in self.first)

    @cached_property
    def bends(self) -> dict[sp.Symbol, sp.Expr]:
        """Second order of each drop in units of V_T, but for its current's own second order.

        ``K = TC2_R + (1/T_0 - TC1_R)(1/T_0 - TC1_I)``: where a circuit has several
        drops, formulas in K are the shorter ones.
        """
        slots = [slot for slot in self.branches if any(e.has(drop(slot)) for e in self.causes)]
        if len(slots) < 2:
            return {}
        found = {}
        for slot in slots:
            R, current = resistance_name(slot), self._branch(slot)
            slope = sp.cancel(first_order(current) / current)
            slope = slope.xreplace({s: at_reference(s) for s in slope.free_symbols})
            found[bend(slot)] = coefficient(R, 2) + (INVERSE_T_0 - coefficient(R, 1)) * (
                INVERSE_T_0 - slope.subs({coefficient(name, 1): 0 for name in CONSTANT})
            )
        return found

    @cached_property
    def second(self) -> tuple[sp.Expr, ...]:
        """Second order at T_0, in TC1, TC2, K and ``INVERSE_T_0``; each is zero."""
        known = {coefficient(name, k): 0 for name in CONSTANT for k in (1, 2)}
        known |= {coefficient("V_T", 1): INVERSE_T_0, coefficient("V_T", 2): 0}
        curvature = (saturation_slope(2) / 2).subs(INVERSE_T, INVERSE_T_0)
        known[coefficient("I_S", 2)] = coefficient("I_S", 1) ** 2 / 2 + curvature
        for K, value in self.bends.items():
            TC2 = coefficient(resistance_name(K.name.removeprefix("K_")), 2)
            known[TC2] = K - (value - TC2)
        return tuple(sp.expand(self._order(e, 2).subs(known)) for e in self._equations)

    def _branch(self, slot: str) -> sp.Expr:
        return through(slot) if through(slot) in self.sums else self.branches[slot]

    @cached_property
    def _opened(self) -> tuple[tuple[sp.Expr, ...], dict[sp.Symbol, sp.Expr]]:
        """The loops with a symbol for each sum inside a function, and what these stand for."""
        arguments: dict[sp.Expr, sp.Symbol] = {}

        def named(value: sp.Expr) -> sp.Symbol:
            return arguments.setdefault(value, inner(len(arguments) + 1))

        def product(argument: sp.Expr) -> sp.Expr:
            """Return the argument as a product of powers of symbols."""
            if isinstance(argument, sp.Add):
                return named(argument)
            if isinstance(argument, sp.Mul):
                return sp.Mul(*map(product, argument.args))
            if isinstance(argument, sp.Pow):
                return product(argument.base) ** argument.exp
            return argument

        def open_up(expression: sp.Expr) -> sp.Expr:
            if not expression.args:
                return expression
            if not isinstance(expression, sp.Function):
                return expression.func(*map(open_up, expression.args))
            argument = product(open_up(expression.args[0]))
            if isinstance(expression, sp.log):
                return sp.expand_log(sp.log(argument), force=True)
            return expression.func(argument if argument.is_Symbol else named(argument))

        residuals = tuple(sp.expand(open_up(loop.residual)) for loop in self.loops)
        return residuals, {symbol: sp.expand(value) for value, symbol in arguments.items()}

    @cached_property
    def _inner(self) -> dict[sp.Symbol, sp.Expr]:
        return self._opened[1]

    @cached_property
    def _steepnesses(self) -> dict[sp.Symbol, sp.Expr]:
        found = {}
        for term in (t for e in self._equations for t in e.terms):
            for function in opaque(term):
                y = function.args[0]
                for order in (1, 2):
                    value = y**order * sp.diff(function, y, order)
                    found[steepness(y, order)] = plainly(value)
        return found

    @cached_property
    def _definitions(self) -> dict[sp.Symbol, sp.Expr]:
        return self._inner | self.sums

    @cached_property
    def _equation_of(self) -> dict[sp.Symbol, _Equation]:
        """The equation of each definition."""
        found = {}
        for symbol, value in self._definitions.items():
            terms = sp.Add.make_args(sp.expand(symbol - self._in_branches(value)))
            whole = symbol
            if symbol in self.sums:
                # I_base = I_out - I_core is a sum, I_out = I_core + I_base
                signs = [term.could_extract_minus_sign() for term in terms]
                alone = [t for t, sign in zip(terms, signs, strict=True) if signs.count(sign) == 1]
                whole = next((abs(t) for t in alone if abs(t).is_Symbol), symbol)
            found[symbol] = _Equation(terms, whole)
        return found

    @cached_property
    def _equations(self) -> tuple[_Equation, ...]:
        loops = tuple(self._loop_equation(residual) for residual in self._opened[0])
        return (*loops, *self._equation_of.values())

    def _in_branches(self, expression: sp.Expr) -> sp.Expr:
        """Write the current through a resistance as one symbol where it is a sum."""
        for slot, current in self.branches.items():
            R = positive(resistance_name(slot))
            if through(slot) in self.sums:
                part = expression.coeff(R, 1)
                ratio = sp.cancel(part / current)
                if not ratio.has(*self.solved_for):
                    expression = sp.expand(expression + (ratio * through(slot) - part) * R)
        return expression

    def _loop_equation(self, residual: sp.Expr) -> _Equation:
        residual = self._in_branches(residual)
        if residual.has(_V_T):
            # so scaled, the logarithms are constants but for what stands inside them
            residual = sp.expand(residual / _V_T)
        return _Equation(sp.Add.make_args(residual))

    @cached_property
    def _sources(self) -> dict[str, sp.Symbol]:
        """Voltages that stand as a term of their own in a loop with V_T in it."""
        terms = [t for e in self._equations for t in e.terms if t.has(_V_T)]
        names = {s.name for t in terms for s in t.free_symbols if (t * _V_T / s).is_number}
        return {name: drop(name.removeprefix("V_")) for name in sorted(names - {"V_T"})}

    def _order(self, equation: _Equation, order: int) -> sp.Expr:
        values = [second_order(t) if order == 2 else first_order(t) for t in equation.terms]
        if equation.is_equality_of_two:
            a, b = (sp.cancel(v / t) for v, t in zip(values, equation.terms, strict=True))
            return sp.expand(a - b)
        swaps = {
            positive(resistance_name(slot)): drop(slot) * _V_T / self._branch(slot)
            for slot in self.branches
        }
        swaps |= {positive(name): x * _V_T for name, x in self._sources.items()}
        total = sp.expand(sp.Add(*values).subs(swaps))
        if equation.whole is None:
            return total
        parts = {value * equation.whole: symbol for symbol, value in self.shares.items()}
        parts = {part: symbol * equation.whole for part, symbol in parts.items()}
        return sp.expand(sp.expand(total.subs(parts)) / equation.whole)
