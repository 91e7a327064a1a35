"""Linear equations between temperature coefficients, solved one after the other, and tidied.

A chain reads like a hand calculation: each line uses what the lines above it
found. Substituting everything into one fraction would hide which part of a
circuit does what.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from itertools import combinations, count

import sympy as sp

from tcopt.derive.names import INVERSE_T, INVERSE_T_0, is_voltage, quantity_of, with_temperatures

__all__ = ["Chain", "Equality", "groups", "solve_chain", "substituted", "tidy"]


@dataclass(frozen=True, slots=True)
class Equality:
    """One line of a derivation: ``symbol = expression``."""

    symbol: sp.Symbol
    expression: sp.Expr
    together: int = 0
    """Lines with the same number other than 0 hang together: they are solved at once."""


_LARGEST = 2
_group = count(1)

Chain = tuple[Equality, ...]
"""Lines of a derivation; each uses the ones above it, the last is the one of interest."""


def solve_chain(
    equations: Sequence[sp.Expr], unknowns: Sequence[sp.Symbol], last: sp.Symbol
) -> Chain | None:
    """Solve ``equation = 0`` for the unknowns, in an order in which each line stands alone.

    Parameters
    ----------
    equations : linear in the unknowns, polynomial in all else
    unknowns : as many as equations
    last : the unknown of interest; where several hang together it is found last

    Returns
    -------
    The lines, in order; None where the equations do not fix the unknowns.
    """
    lines = _solve(list(equations), list(unknowns), last)
    if lines is None:
        return None
    return tuple(replace(line, expression=with_temperatures(line.expression)) for line in lines)


def _solve(
    equations: list[sp.Expr], unknowns: list[sp.Symbol], last: sp.Symbol
) -> list[Equality] | None:
    lines: list[Equality] = []
    while unknowns:
        block = _smallest_block(equations, unknowns)
        if block is None:
            return None
        members = [u for u in unknowns if any(e.has(u) for e in block)]
        solved = _solve_block(block, members, last)
        if solved is None:
            return None
        lines += solved
        equations = [e for e in equations if e not in block]
        unknowns = [u for u in unknowns if u not in members]
    return lines


def _smallest_block(
    equations: Sequence[sp.Expr], unknowns: Sequence[sp.Symbol]
) -> list[sp.Expr] | None:
    """Return the fewest equations that hold as many of the unknowns as they are."""
    for size in range(1, len(equations) + 1):
        for block in combinations(equations, size):
            if sum(any(e.has(u) for e in block) for u in unknowns) == size:
                return list(block)
    return None


def _solve_block(
    block: list[sp.Expr], unknowns: list[sp.Symbol], last: sp.Symbol
) -> list[Equality] | None:
    if len(block) > _LARGEST:
        return _together(block, unknowns)
    chosen = last if last in unknowns else unknowns[-1]
    pivot = min((e for e in block if e.has(chosen)), key=sp.count_ops)
    slope = sp.expand(pivot).coeff(chosen, 1)
    if slope == 0:
        return None
    rest = []
    for equation in block:
        if equation is pivot:
            continue
        other = sp.expand(equation).coeff(chosen, 1)
        common = sp.gcd(slope, other)
        rest.append(sp.expand(equation * sp.cancel(slope / common) - pivot * (other / common)))
    before = _solve(rest, [u for u in unknowns if u is not chosen], last)
    if before is None:
        return None
    free = sp.expand(pivot - slope * chosen)
    return [*before, Equality(chosen, tidy(-free / slope))]


def _together(block: list[sp.Expr], unknowns: list[sp.Symbol]) -> list[Equality] | None:
    """Solve each equation for one unknown, whatever of the others stands in it.

    One fraction for each of many unknowns would fill pages and say nothing.
    """
    owner = _matched(block, unknowns, {})
    if owner is None:
        return None
    lines = []
    group = next(_group)
    for symbol in unknowns:
        equation = owner[symbol]
        slope = equation.coeff(symbol, 1)
        free = sp.expand(equation - slope * symbol)
        lines.append(Equality(symbol, tidy(-free / slope), group))
    return lines


def _matched(
    block: list[sp.Expr], unknowns: list[sp.Symbol], taken: dict[sp.Symbol, sp.Expr]
) -> dict[sp.Symbol, sp.Expr] | None:
    """Give each unknown an equation of its own, the latest ones first: these are definitions."""
    left = [u for u in unknowns if u not in taken]
    if not left:
        return taken
    symbol = left[-1]
    for equation in reversed(block):
        if equation.has(symbol) and equation not in taken.values():
            found = _matched(block, unknowns, {**taken, symbol: equation})
            if found is not None:
                return found
    return None


def substituted(lines: Iterable[Equality]) -> sp.Expr:
    """Return the last line with all the lines above put in."""
    known: dict[sp.Symbol, sp.Expr] = {}
    for group in groups(lines):
        if len(group) == 1:
            known[group[0].symbol] = group[0].expression.xreplace(known)
            continue
        symbols = [line.symbol for line in group]
        equations = [line.symbol - line.expression.xreplace(known) for line in group]
        (values,) = sp.linsolve(equations, symbols)
        known |= dict(zip(symbols, values, strict=True))
    return next(reversed(known.values()))


def groups(lines: Iterable[Equality]) -> list[list[Equality]]:
    """Return the lines one by one, those that hang together as one."""
    found: list[list[Equality]] = []
    for line in lines:
        if line.together and found and found[-1][0].together == line.together:
            found[-1].append(line)
        else:
            found.append([line])
    return found


def tidy(expression: sp.Expr, factored: bool = False) -> sp.Expr:
    """Bring a rational expression to the form in which a designer would write it.

    One fraction with a positive denominator; in the numerator one term for each
    drop, and what hangs on temperature written as ``1/T - TC``; or, if
    ``factored``, a product.
    """
    numerator, denominator = sp.fraction(sp.cancel(expression))
    if _leans_negative(denominator):
        numerator, denominator = -numerator, -denominator
    if factored:
        below = [1 / part for part in sp.Mul.make_args(sp.factor(denominator)) if part != 1]
        return sp.Mul(*_turned(sp.factor(numerator)), *below, evaluate=False)
    content, denominator = sp.factor(denominator).as_coeff_Mul()
    numerator = sp.expand(numerator / content)
    if denominator.has(sp.Add):
        return _divided(_grouped(numerator), denominator)
    parts: dict[sp.Expr, sp.Expr] = {}
    for term in sp.Add.make_args(numerator):
        over = sp.denom(sp.cancel(term / denominator)).as_coeff_Mul()[1]
        parts[over] = parts.get(over, 0) + term / denominator * over
    return sp.Add(*(_divided(_grouped(sp.expand(part)), over) for over, part in parts.items()))


def _divided(total: sp.Expr, over: sp.Expr) -> sp.Expr:
    """Divide, with the sign before the fraction where every term has it."""
    if isinstance(total, sp.Add) and all(t.as_coeff_Mul()[0].is_negative for t in total.args):
        bare = sp.Add(*(_negated(t) for t in total.args))
        return sp.Mul(-1, bare, 1 / over, evaluate=False)
    return total / over


def _negated(term: sp.Expr) -> sp.Expr:
    number, rest = term.as_coeff_Mul()
    return rest if number == -1 else sp.Mul(-number, rest)


def _leans_negative(expression: sp.Expr) -> bool:
    """Say whether the terms with symbols, and so all of it for large drops, are negative."""
    terms = [t for t in sp.Add.make_args(sp.expand(expression)) if not t.is_number]
    signs = [1 if t.as_coeff_Mul()[0] > 0 else -1 for t in terms] or [int(sp.sign(expression))]
    return sum(signs) < 0


def _prefix(symbol: sp.Symbol) -> str:
    parsed = quantity_of(symbol.name)
    return parsed.prefix if parsed else ""


def _is_weight(symbol: sp.Symbol) -> bool:
    """Say whether terms are grouped by it: drops over resistances, and shares."""
    parsed = quantity_of(symbol.name)
    return parsed is not None and parsed.prefix in {"x", "w"} and not is_voltage(symbol.name)


def _grouped(expression: sp.Expr) -> sp.Expr:
    """Collect a polynomial: first by coefficients of currents, then by drops and shares."""
    symbols = sorted(expression.free_symbols, key=lambda s: s.name)
    done = []
    for lead in [s for s in symbols if s.name.startswith(("TC_I_", "TC1_I_", "TC2_I_"))]:
        factor = expression.coeff(lead, 1)
        # 1 + x, and not what belongs to the coefficient of a drop
        if factor.is_number or not all(_is_weight(s) for s in factor.free_symbols):
            continue
        done.append(_times(lead, factor))
        expression = sp.expand(expression - factor * lead)
    weights = [s for s in symbols if _is_weight(s)]
    if not weights or expression == 0:
        return sp.Add(*done, _shaped(expression))
    for powers, factor in sp.Poly(expression, *weights).terms():
        weight = sp.Mul(*(w**p for w, p in zip(weights, powers, strict=True)))
        done.append(_times(weight, _shaped(factor)))
    return sp.Add(*done)


def _times(weight: sp.Expr, factor: sp.Expr) -> sp.Expr:
    """Multiply without distributing the sign over the sum."""
    if weight != 1 and isinstance(factor, sp.Add) and _faces_away(factor):
        return sp.Mul(-1, weight, -factor, evaluate=False)
    return weight * factor


def _faces_away(total: sp.Expr) -> bool:
    """Say whether a sum should be written with the other sign: ``1/T - TC``, not ``TC - 1/T``."""
    for symbol in (INVERSE_T, INVERSE_T_0):
        alone = [t for t in total.args if t.has(symbol)]
        if alone:
            return all(t.as_coeff_Mul()[0] < 0 for t in alone)
    signs = sum(1 if t.as_coeff_Mul()[0] > 0 else -1 for t in total.args)
    if signs != 0:
        return signs < 0
    numbers = [t for t in total.args if t.is_number]
    return bool(numbers and numbers[0] < 0)


def _turned(product: sp.Expr) -> list[sp.Expr]:
    """Write each factor of a product with the sign that reads best; the number comes first."""
    number, rest = product.as_coeff_Mul()
    factors = []
    for part in sp.Mul.make_args(rest):
        away = isinstance(part, sp.Add) and _faces_away(part)
        factors.append(-part if away else part)
        number = -number if away else number
    factors = [part for part in factors if part != 1]
    return [number, *factors] if number != 1 or not factors else factors


def _shaped(factor: sp.Expr) -> sp.Expr:
    """Write a sum as ``TC2 + (1/T - TC1)(1/T - a)`` where it is one."""
    if not isinstance(factor, sp.Add):
        return factor
    second = sp.Add(*(t for t in factor.args if any(_prefix(s) == "TC2" for s in t.free_symbols)))
    rest = factor - second
    inverses = [s for s in (INVERSE_T, INVERSE_T_0) if rest.has(s)]
    # without a linear term it is a difference of squares, which is better left alone
    if inverses and any(rest.coeff(s, 1) != 0 for s in inverses):
        product = sp.factor(rest)
        if any(isinstance(p, sp.Add) and p.has(*inverses) for p in sp.Mul.make_args(product)):
            return second + sp.Mul(*_turned(product))
    gathered = sp.collect(rest, [s**k for s in inverses for k in (2, 1)])
    return second + sp.Add(*(sp.Mul(*_turned(term)) for term in sp.Add.make_args(gathered)))
