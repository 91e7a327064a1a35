"""Formulas as text and as LaTeX, with terms and factors in the order that the trade writes them.

sympy's own printers sort by names, which puts ``-TC_R + 1/T`` for ``1/T - TC_R``
and ``x + 1`` for ``1 + x``; for a formula that is to be read the order is half
of the meaning.
"""

from __future__ import annotations

from abc import ABC, abstractmethod

import sympy as sp
from sympy.core.function import AppliedUndef

from tcopt.derive.names import is_quantity, is_voltage, quantity_of, slot_of
from tcopt.derive.reading import plainly
from tcopt.symbols import NOMENCLATURE

__all__ = ["Latex", "Text", "Writer", "fraction_of", "is_negative", "ordered", "without_sign"]

_PURE = [name for name, entry in NOMENCLATURE.items() if entry.unit == "1"]
_LATE = [name for name, entry in NOMENCLATURE.items() if entry.unit == "V"]
_ORDER = {name: k for k, name in enumerate(NOMENCLATURE)}


def _symbol_rank(name: str) -> tuple[int, int, str]:
    """Ratios, currents, resistances, voltages; then drops and shares; then coefficients."""
    parsed = quantity_of(name)
    if parsed is None:
        kind = 1 if name in _PURE else 4 if name in _LATE else 3 if slot_of(name) else 2
        return (kind, _ORDER.get(name, len(_ORDER)), name)
    if parsed.prefix in {"x", "w"}:
        return (5, int(is_voltage(name)), name)
    if parsed.prefix == "K":
        return (6, 0, name)
    return (7, len(parsed.prefix), name)


def _factor_rank(factor: sp.Expr) -> tuple[int, int, str]:
    base = factor.base if isinstance(factor, sp.Pow) else factor
    if base.is_number:
        return (0, 0, str(base))
    if base.is_Symbol:
        return _symbol_rank(base.name)
    if isinstance(base, sp.Add):
        names = {s.name for s in base.free_symbols}
        # T - T_0 belongs behind its coefficient, the sum of two currents where a current stands
        kinds = {_symbol_rank(name)[0] for name in names}
        place = 9 if names <= {"T", "T_0"} else kinds.pop() if kinds in ({2}, {3}) else 6
        return (place, len(_ORDER), str(base))
    return (8, 0, str(base))


def is_negative(term: sp.Expr) -> bool:
    """Say whether a term is written with a minus sign."""
    return bool(term.as_coeff_Mul()[0].is_negative)


def _term_rank(term: sp.Expr) -> tuple[bool, int, int, tuple[tuple[int, int, str], ...]]:
    """Positive before negative; then numbers, logarithms, drops, all else."""
    _, rest = term.as_coeff_Mul()
    factors = sorted(map(_factor_rank, sp.Mul.make_args(rest)))
    names = {s.name for s in rest.free_symbols}
    if rest.is_number:
        group = 0
    elif rest.has(sp.log):
        group = 1
    elif names <= {"T", "T_0"}:
        group = 2
    elif any(_symbol_rank(name)[0] == 5 and not is_voltage(name) for name in names):
        group = 3
    else:
        group = 4
    return (is_negative(term), group, len(rest.atoms(sp.Add)), tuple(factors))


class Writer(ABC):
    """Writes expressions; what a notation looks like is left to the subclass."""

    @abstractmethod
    def symbol(self, name: str) -> str:
        """Return a symbol."""

    @abstractmethod
    def fraction(self, numerator: sp.Expr, denominator: sp.Expr) -> str:
        """Return a quotient."""

    @abstractmethod
    def power(self, base: str, exponent: str) -> str:
        """Return a power."""

    @abstractmethod
    def root(self, argument: str) -> str:
        """Return a square root."""

    @abstractmethod
    def call(self, name: str, argument: str) -> str:
        """Return a function of an argument."""

    @abstractmethod
    def lambert(self, argument: str, branch: int) -> str:
        """Return Lambert's W."""

    @abstractmethod
    def parenthesised(self, text: str) -> str:
        """Return the text in parentheses."""

    @abstractmethod
    def foreign(self, expression: sp.Expr) -> str:
        """Return an expression of another kind, as sympy prints it."""

    def write(self, expression: sp.Expr) -> str:
        """Return the expression in this notation."""
        if isinstance(expression, sp.Add):
            terms = ordered(expression)
            if all(map(is_negative, terms)):
                return f"-{self.parenthesised(self.write(sp.Add(*map(without_sign, terms))))}"
            return "".join(self.term(term, first=k == 0) for k, term in enumerate(terms))
        if is_negative(expression):
            return self.term(expression, first=True)
        numerator, denominator = fraction_of(expression)
        if denominator != 1:
            return self.fraction(numerator, denominator)
        if isinstance(expression, sp.Mul):
            factors = sorted(expression.args, key=_factor_rank)
            return " ".join(self._factor(factor) for factor in factors)
        return self._atom(expression)

    def term(self, term: sp.Expr, first: bool) -> str:
        """Return a term of a sum with its sign."""
        if not is_negative(term):
            return self.write(term) if first else f" + {self.write(term)}"
        positive = without_sign(term)
        text = self.write(positive)
        if isinstance(positive, sp.Add):
            text = self.parenthesised(text)
        return f"-{text}" if first else f" - {text}"

    def _factor(self, factor: sp.Expr) -> str:
        text = self.write(factor)
        return self.parenthesised(text) if isinstance(factor, sp.Add) else text

    def _atom(self, expression: sp.Expr) -> str:
        if expression.is_Symbol:
            return self.symbol(expression.name)
        if isinstance(expression, sp.Pow):
            return self._power(expression)
        if isinstance(expression, AppliedUndef | sp.exp | sp.log | sp.LambertW):
            return self._function(expression)
        plain = plainly(expression)
        return self.foreign(expression) if plain == expression else self.write(plain)

    def _power(self, expression: sp.Pow) -> str:
        base, exponent = expression.args
        text = self.write(base)
        if exponent == sp.Rational(1, 2):
            return self.root(text)
        return self.power(
            text if base.is_Symbol else self.parenthesised(text), self.write(exponent)
        )

    def _function(self, expression: sp.Expr) -> str:
        argument = self.write(expression.args[0])
        if isinstance(expression, sp.LambertW):
            branch = int(expression.args[1]) if len(expression.args) > 1 else 0
            return self.lambert(argument, branch)
        if isinstance(expression, AppliedUndef):
            return self.symbol(expression.func.__name__) + self.parenthesised(argument)
        return self.call("exp" if isinstance(expression, sp.exp) else "ln", argument)


def ordered(total: sp.Expr) -> list[sp.Expr]:
    """Return the terms of a sum in the order in which they are written; half squares as one."""
    terms = list(sp.Add.make_args(total))
    halves = [
        t
        for t in terms
        if abs(t.as_coeff_Mul()[0]) == sp.Rational(1, 2) and isinstance(t.as_coeff_Mul()[1], sp.Pow)
    ]
    if len(halves) > 1:
        both = sp.Add(*(2 * t for t in halves))
        terms = [t for t in terms if t not in halves]
        terms.append(sp.Mul(sp.Rational(1, 2), both, evaluate=False))
    return sorted(terms, key=_term_rank)


def without_sign(term: sp.Expr) -> sp.Expr:
    """Return the negative of a term, leaving its sums as they are."""
    number, rest = term.as_coeff_Mul()
    return rest if number == -1 else sp.Mul(-number, *sp.Mul.make_args(rest), evaluate=False)


def fraction_of(expression: sp.Expr) -> tuple[sp.Expr, sp.Expr]:
    """Return numerator and denominator without touching the sums in them."""
    above, below = [], []
    for factor in sp.Mul.make_args(expression):
        if isinstance(factor, sp.Pow) and factor.exp.is_number and factor.exp.is_negative:
            below.append(factor.base ** (-factor.exp))
        elif factor.is_Rational and not factor.is_Integer:
            below.append(sp.Integer(factor.q))
            above += [sp.Integer(factor.p)] if factor.p != 1 else []
        else:
            above.append(factor)
    return sp.Mul(*above, evaluate=False), sp.Mul(*below, evaluate=False)


class Text(Writer):
    """Plain text: ``V_T ln(N I_in/I_out)``."""

    def symbol(self, name: str) -> str:
        """``TC1_I_in`` is TC1(I_in), all others are as they are."""
        parsed = quantity_of(name)
        if parsed and parsed.prefix not in {"x", "w"} and is_quantity(parsed.of):
            return f"{parsed.prefix}({parsed.of})"
        return name

    def fraction(self, numerator: sp.Expr, denominator: sp.Expr) -> str:  # noqa: D102
        above, below = self._factor(numerator), self.write(denominator)
        single = denominator.is_Symbol or denominator.is_number
        single = single or isinstance(denominator, sp.Pow | AppliedUndef)
        return f"{above}/{below if single else self.parenthesised(below)}"

    def power(self, base: str, exponent: str) -> str:  # noqa: D102
        return f"{base}^{exponent}"

    def root(self, argument: str) -> str:  # noqa: D102
        return f"sqrt({argument})"

    def call(self, name: str, argument: str) -> str:  # noqa: D102
        return f"{name}({argument})"

    def lambert(self, argument: str, branch: int) -> str:  # noqa: D102
        return f"W{'' if branch == 0 else f'_{branch}'}({argument})"

    def parenthesised(self, text: str) -> str:  # noqa: D102
        return f"({text})"

    def foreign(self, expression: sp.Expr) -> str:  # noqa: D102
        return str(sp.sstr(expression))


class Latex(Writer):
    """LaTeX, in commands that plain math mode knows."""

    def symbol(self, name: str) -> str:  # noqa: D102
        parsed = quantity_of(name)
        if parsed and parsed.prefix not in {"x", "w", "K"}:
            head = rf"\mathrm{{{parsed.prefix}}}"
            if is_quantity(parsed.of):
                return rf"{head}({self.symbol(parsed.of)})"
            return rf"{head}_{{\mathrm{{{parsed.of}}}}}"
        base, _, index = name.partition("_")
        base = rf"\{base}" if len(base) > 1 else base
        if not index:
            return base
        italic = len(index) == 1
        return f"{base}_{{{index}}}" if italic else rf"{base}_{{\mathrm{{{index}}}}}"

    def fraction(self, numerator: sp.Expr, denominator: sp.Expr) -> str:  # noqa: D102
        return rf"\frac{{{self.write(numerator)}}}{{{self.write(denominator)}}}"

    def power(self, base: str, exponent: str) -> str:  # noqa: D102
        return f"{base}^{{{exponent}}}"

    def root(self, argument: str) -> str:  # noqa: D102
        return rf"\sqrt{{{argument}}}"

    def call(self, name: str, argument: str) -> str:  # noqa: D102
        return rf"\{name}\left({argument}\right)"

    def lambert(self, argument: str, branch: int) -> str:  # noqa: D102
        return rf"W{'' if branch == 0 else f'_{{{branch}}}'}\left({argument}\right)"

    def parenthesised(self, text: str) -> str:  # noqa: D102
        return rf"\left({text}\right)"

    def foreign(self, expression: sp.Expr) -> str:  # noqa: D102
        return str(sp.latex(expression))
