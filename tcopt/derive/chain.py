"""Linear equations between temperature coefficients, solved one after the other.

A chain reads like a hand calculation: each line uses what the lines above it
found. Substituting everything into one fraction would hide which part of a
circuit does what.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field, replace
from itertools import combinations, count

import sympy as sp

from tcopt.derive.names import with_temperatures
from tcopt.derive.tidying import tidy

__all__ = ["Chain", "Equality", "groups", "solve_chain", "substituted"]


@dataclass(frozen=True, slots=True)
class Equality:
    """One line of a derivation: ``symbol = expression``."""

    symbol: sp.Symbol
    expression: sp.Expr
    together: int = field(default=0, compare=False)
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
    return [*before, Equality(chosen, tidy(-free, slope))]


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
        lines.append(Equality(symbol, tidy(-free, slope), group))
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
