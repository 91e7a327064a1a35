"""Loops and closed forms, arranged as a designer would write them."""

from __future__ import annotations

from collections.abc import Sequence

import sympy as sp
from sympy.core.function import AppliedUndef

from tcopt.derive.names import positive, slot_of

__all__ = ["combined", "over", "plainly", "sides"]

_I_S = positive("I_S")
_KNOWN = (sp.log, sp.exp, sp.LambertW, AppliedUndef)


def combined(expression: sp.Expr, currents: Sequence[str] = ()) -> sp.Expr:
    """Gather logarithms into one per factor, and what shares a resistance or a current.

    ``V_T ln I_in - V_T ln I_S + I_in R_feed + I_in R_input`` becomes
    ``V_T ln(I_in/I_S) + I_in (R_feed + R_input)``.
    """
    positives, negatives = _gathered(expression, currents)
    return sp.Add(*positives, *(_minus(term) for term in negatives))


def sides(residual: sp.Expr, currents: Sequence[str]) -> tuple[sp.Expr, sp.Expr]:
    """Bring ``residual = 0`` to an equation with positive terms on both sides."""
    positives, negatives = _gathered(residual, currents)
    return sp.Add(*positives), sp.Add(*negatives)


def over(value: sp.Expr, currents: Sequence[str]) -> sp.Expr:
    """Write a quotient with a combined numerator and a denominator that is positive."""
    numerator, denominator = sp.fraction(sp.together(sp.expand_log(value, force=True)))
    outermost = [I for I in map(positive, currents) if denominator.has(I)]
    if outermost and sp.expand(denominator).coeff(outermost[-1]).could_extract_minus_sign():
        numerator, denominator = -numerator, -denominator
    return combined(numerator, currents) / denominator


def plainly(expression: sp.Expr) -> sp.Expr:
    """Write functions that have numerics of their own in terms of those that readers know."""
    own = [f for f in expression.atoms(sp.Function) if not isinstance(f, _KNOWN)]
    y = sp.Dummy(positive=True)
    plain = {f: f.func(y).rewrite(sp.log).rewrite(sp.exp).subs(y, f.args[0]) for f in own}
    return expression.xreplace({f: value for f, value in plain.items() if not value.has(f.func)})


def _minus(term: sp.Expr) -> sp.Expr:
    return sp.Mul(-1, term, evaluate=not isinstance(term, sp.Add))


def _gathered(expression: sp.Expr, currents: Sequence[str]) -> tuple[list[sp.Expr], list[sp.Expr]]:
    """Return the positive terms, and the negative ones without their sign."""
    expanded = sp.expand(sp.expand_log(sp.expand(expression), force=True))
    arguments: dict[sp.Expr, sp.Expr] = {}
    rest = []
    for term in sp.Add.make_args(expanded):
        logs = [f for f in sp.Mul.make_args(term) if isinstance(f, sp.log)]
        if len(logs) != 1:
            rest.append(term)
            continue
        factor = term / logs[0]
        away = factor.could_extract_minus_sign()
        inner = 1 / logs[0].args[0] if away else logs[0].args[0]
        factor = -factor if away else factor
        arguments[factor] = arguments.get(factor, sp.Integer(1)) * inner
    found = [
        (factor * sp.log(1 / inner), True)
        if sp.numer(inner).has(_I_S)
        else (factor * sp.log(inner), False)
        for factor, inner in arguments.items()
    ]
    found += _shared(sp.Add(*rest), [positive(name) for name in currents])
    return [t for t, away in found if not away], [t for t, away in found if away]


def _shared(rest: sp.Expr, currents: Sequence[sp.Symbol]) -> list[tuple[sp.Expr, bool]]:
    """Return terms without sign, and whether it is negative; ``(I_out - I_core) R_base`` is one."""
    found = []
    for R in sorted((s for s in rest.free_symbols if slot_of(s.name)), key=lambda s: s.name):
        through = rest.coeff(R, 1)
        inside = [I for I in currents if through.has(I)]
        if isinstance(through, sp.Add) and inside:
            away = through.coeff(inside[-1], 1).could_extract_minus_sign()
            found.append(((-through if away else through) * R, away))
            rest = sp.expand(rest - through * R)
    for sign in (1, -1):
        terms = [t for t in sp.Add.make_args(rest) if t.could_extract_minus_sign() == (sign < 0)]
        same = sp.collect(sp.Add(*(sign * t for t in terms)), list(currents))
        found += [(t, sign < 0) for t in sp.Add.make_args(same) if t != 0]
    return found
