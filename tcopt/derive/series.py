"""One term of a loop as a series in temperature: ``q(T) = q (1 + TC1 d + TC2 d^2)`` put in.

Logarithms are differentiated as they are. For any other function f of an inner
y, ``y f'(y)`` and ``y^2 f''(y)`` get symbols, so that what is made of the terms
stays a polynomial.
"""

from __future__ import annotations

import sympy as sp

from tcopt.derive.names import INVERSE_T, INVERSE_T_0, coefficient, steepness

__all__ = ["at_reference", "first_order", "opaque", "second_order"]


def opaque(term: sp.Expr) -> list[sp.Function]:
    """Return the functions in a term other than logarithms."""
    return [f for f in term.atoms(sp.Function) if not isinstance(f, sp.log)]


def first_order(term: sp.Expr) -> sp.Expr:
    """Return the coefficient of d, in local coefficients of all that stands in the term."""
    plain, factors = _apart(term)
    found = [sp.diff(plain, q) * q * coefficient(q.name) for q in _symbols(plain)]
    found = [part.xreplace(factors) for part in found]
    for place, function in factors.items():
        y = function.args[0]
        rate = steepness(y, 1) * coefficient(y.name)
        found.append(sp.diff(plain, place) * rate)
    return sp.Add(*found)


def second_order(term: sp.Expr) -> sp.Expr:
    """Return the coefficient of d^2, in TC1 and TC2 of all that stands in the term."""
    plain, factors = _apart(term)
    symbols = _symbols(plain)
    found = [sp.diff(plain, q) * q * coefficient(q.name, 2) for q in symbols]
    found += [
        sp.diff(plain, p, q) * p * q * coefficient(p.name, 1) * coefficient(q.name, 1) / 2
        for p in symbols
        for q in symbols
    ]
    for place, function in factors.items():
        y = function.args[0]
        slope, curve = steepness(y, 1), steepness(y, 2)
        one, two = coefficient(y.name, 1), coefficient(y.name, 2)
        by_function = sp.diff(plain, place)
        found.append(by_function * (slope * two + curve * one**2 / 2))
        found += [
            sp.diff(by_function, q) * q * coefficient(q.name, 1) * slope * one for q in symbols
        ]
    return sp.Add(*(part.xreplace(factors) for part in found))


def _apart(term: sp.Expr) -> tuple[sp.Expr, dict[sp.Symbol, sp.Function]]:
    """Return a term with a symbol in the place of each function other than a logarithm."""
    factors = {function: sp.Dummy() for function in opaque(term)}
    return term.xreplace(factors), {place: function for function, place in factors.items()}


def at_reference(symbol: sp.Symbol) -> sp.Symbol:
    """Return what a local coefficient, or 1/T, is at T_0."""
    if symbol == INVERSE_T:
        return INVERSE_T_0
    local = symbol.name.startswith("TC_")
    return sp.Symbol(symbol.name.replace("TC_", "TC1_", 1), real=True) if local else symbol


def _symbols(term: sp.Expr) -> list[sp.Symbol]:
    named = (s for s in term.free_symbols if not isinstance(s, sp.Dummy))
    return sorted(named, key=lambda s: s.name)
