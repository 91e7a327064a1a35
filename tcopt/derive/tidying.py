"""Rational expressions in the form in which a designer would write them.

sympy's own simplification looks for few operations; a reader looks for the
meaning of a term: ``x (1/T - TC)`` is the drift of a drop, whatever it costs.
"""

from __future__ import annotations

import sympy as sp

from tcopt.derive.names import INVERSE_T, INVERSE_T_0, is_voltage, quantity_of

__all__ = ["factored", "tidy"]

_ONE = sp.Integer(1)


def tidy(expression: sp.Expr, over: sp.Expr = _ONE) -> sp.Expr:
    """Bring a rational expression to the form in which a designer would write it.

    One fraction with a positive denominator; in the numerator one term for each
    drop, and what hangs on temperature written as ``1/T - TC``.

    Parameters
    ----------
    over : what the expression is to be divided by
    """
    expanded = sp.expand(expression / over)
    terms = [sp.fraction(term) for term in sp.Add.make_args(expanded)]
    if any(below.has(sp.Add) for _, below in terms):
        numerator, denominator = _signed(sp.cancel(expression / over))
        content, denominator = sp.factor(denominator).as_coeff_Mul()
        numerator = sp.expand(numerator / content)
        if denominator.has(sp.Add):
            return _divided(_grouped(numerator), denominator)
        terms = [sp.fraction(term) for term in sp.Add.make_args(sp.expand(numerator / denominator))]
    parts: dict[sp.Expr, sp.Expr] = {}
    for above, below in terms:
        number, denominator = below.as_coeff_Mul()
        parts[denominator] = parts.get(denominator, 0) + above / number
    return sp.Add(*(_divided(_grouped(sp.expand(part)), below) for below, part in parts.items()))


def factored(expression: sp.Expr) -> sp.Expr:
    """Write a rational expression as a product over a product."""
    numerator, denominator = _signed(sp.cancel(expression))
    below = [1 / part for part in sp.Mul.make_args(sp.factor(denominator)) if part != 1]
    return sp.Mul(*_turned(sp.factor(numerator)), *below, evaluate=False)


def _signed(quotient: sp.Expr) -> tuple[sp.Expr, sp.Expr]:
    """Return numerator and denominator, the denominator positive."""
    numerator, denominator = sp.fraction(quotient)
    return (-numerator, -denominator) if _leans_negative(denominator) else (numerator, denominator)


def _divided(total: sp.Expr, over: sp.Expr) -> sp.Expr:
    """Divide, with the sign before the fraction where every term has it."""
    if (
        over != 1
        and isinstance(total, sp.Add)
        and all(t.as_coeff_Mul()[0].is_negative for t in total.args)
    ):
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
