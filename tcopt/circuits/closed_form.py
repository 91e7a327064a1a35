"""Solve loops in closed form, in sympy: currents forward, a resistance when the output is pinned.

A loop of ideal transistors, seen as an equation for one current I, reads
``A ln I + B I + C = 0``. With ``y = |B/A| I`` it becomes ``y + ln y = z``, whose
root is the Wright omega function of z, or ``y - ln y = u``, whose larger root is
``-W_{-1}(-exp(-u))``; see Corless, Jeffrey, "The Wright omega function", 2002.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from enum import Enum
from itertools import permutations

import sympy as sp

from tcopt.circuits.statement import Circuit, Loop
from tcopt.circuits.terms import Terms, statement_of

__all__ = ["Kind", "Need", "Root", "forward", "need", "solve_loop"]


class Kind(Enum):
    """How a loop is solved for its current."""

    LINEAR = "linear"
    EXPONENTIAL = "exponential"
    OMEGA = "Wright omega"
    LOWER = "lower branch of Lambert W"


@dataclass(frozen=True)
class Root:
    """The current ``unknown`` from ``A ln I + B I + C = 0``."""

    unknown: sp.Symbol
    kind: Kind
    A: sp.Expr
    B: sp.Expr
    C: sp.Expr

    @property
    def formula(self) -> sp.Expr:
        """The current as users read it, with Lambert W where it takes one."""
        A, B, C = self.A, self.B, self.C
        if self.kind is Kind.LINEAR:
            return sp.simplify(-C / B)
        if self.kind is Kind.EXPONENTIAL:
            return sp.simplify(sp.exp(-C / A))
        inner = sp.simplify(B / A * sp.exp(-C / A))
        branch = 0 if self.kind is Kind.OMEGA else -1
        return sp.simplify(A / B) * sp.LambertW(inner, branch)


@dataclass(frozen=True)
class Need:
    """A slot's resistance with the output pinned: the other currents, then the resistance."""

    slot: str
    roots: tuple[Root, ...]
    resistance: sp.Expr


def solve_loop(residual: sp.Expr, unknown: sp.Symbol) -> Root | None:
    """Bring ``residual = 0`` to the form of `Root` for this current, or return None."""
    expanded = sp.expand(sp.expand_log(sp.expand(residual), force=True))
    logarithm = sp.log(unknown)
    A = expanded.coeff(logarithm)
    B = sp.expand(expanded - A * logarithm).coeff(unknown, 1)
    C = sp.expand(expanded - A * logarithm - B * unknown)
    if any(part.has(unknown) for part in (A, B, C)) or (A == 0 and B == 0):
        return None
    if A == 0:
        return Root(unknown, Kind.LINEAR, A, B, C)
    if B == 0:
        return Root(unknown, Kind.EXPONENTIAL, A, B, C)
    share = sp.factor(B / A)
    if share.is_positive:
        return Root(unknown, Kind.OMEGA, A, B, C)
    return Root(unknown, Kind.LOWER, A, B, C) if share.is_negative else None


def _chain(residuals: Sequence[sp.Expr], unknowns: Iterable[sp.Symbol]) -> tuple[Root, ...] | None:
    """Solve loops one after the other, each for a current that the earlier ones left open."""
    unknowns = tuple(unknowns)
    for order in permutations(unknowns):
        roots: list[Root] = []
        for residual, unknown in zip(residuals, order, strict=True):
            later = set(order[len(roots) + 1 :])
            root = None if residual.free_symbols & later else solve_loop(residual, unknown)
            if root is None:
                break
            roots.append(root)
        else:
            return tuple(roots)
    return None


def forward(loops: Sequence[Loop]) -> tuple[Root, ...] | None:
    """Return the currents in the order in which the loops fix them, or None without closed form."""
    terms = Terms()
    return _chain([loop.residual for loop in loops], [terms.symbol(loop.unknown) for loop in loops])


def need(circuit: Circuit, feed: str, slot: str) -> Need | None:
    """Return the resistance that a slot needs so that the output is what it is pinned to.

    One loop, linear in the resistance, gives it; put into the others, it leaves
    as many loops as there are currents other than the output.
    """
    terms = Terms()
    loops = [sp.expand(loop.residual) for loop in statement_of(circuit, feed)]
    resistance = terms.resistance(slot)
    others = [terms.symbol(name) for name in circuit.unknowns[:-1]]
    for index, loop in enumerate(loops):
        slope = loop.coeff(resistance, 1)
        if slope == 0:
            continue
        value = -loop.subs(resistance, 0) / slope
        rest = [
            sp.numer(sp.together(sp.expand(other.subs(resistance, value))))
            for k, other in enumerate(loops)
            if k != index
        ]
        for arranged in permutations(rest):
            roots = _chain(arranged, others)
            if roots is not None:
                return Need(slot, roots, value)
    return None
