"""What a slot's resistor must be so that the output is what it is pinned to."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from types import MappingProxyType

import sympy as sp

from tcopt.derive.chain import Chain, Equality, solve_chain
from tcopt.derive.names import INVERSE_T_0, bend, coefficient, positive, with_temperatures
from tcopt.derive.orders import Orders
from tcopt.derive.tidying import tidy
from tcopt.symbols import resistance_name

__all__ = ["bends", "perfect_resistors", "rules"]

_NOTHING: Mapping[sp.Symbol, sp.Expr] = MappingProxyType({})


def rules(orders: Orders, target: sp.Expr) -> Mapping[str, Chain]:
    """Return the local coefficient that each slot needs for a TC(I_out), where it can give it.

    Parameters
    ----------
    target : TC(I_out), in ``INVERSE_T``
    """
    pinned = {coefficient(orders.unknowns[-1]): target}
    return _per_slot(
        orders,
        lambda slot: _solved(
            orders.first, orders, coefficient(resistance_name(slot)), None, pinned
        ),
    )


def bends(orders: Orders, pinned: Mapping[sp.Symbol, sp.Expr] = _NOTHING) -> Chain:
    """Return what each K stands for."""
    return tuple(
        Equality(K, with_temperatures(value.subs(pinned))) for K, value in orders.bends.items()
    )


def perfect_resistors(orders: Orders, first: sp.Expr, second: sp.Expr) -> Mapping[str, Chain]:
    """Return TC1 and TC2 that each slot needs, where it can give them.

    Parameters
    ----------
    first, second : TC1 and TC2 of the output at T_0, in ``INVERSE_T_0``
    """
    output = orders.unknowns[-1]
    pinned = {coefficient(output, 1): first, coefficient(output, 2): second}
    of_slot = {e.symbol: e for e in bends(orders, pinned)}

    def both(slot: str) -> Chain | None:
        TC1, TC2 = (coefficient(resistance_name(slot), order) for order in (1, 2))
        K = of_slot.get(bend(slot))
        one = _solved(orders.first_at_reference, orders, TC1, 1, pinned)
        two = _solved(orders.second, orders, K.symbol if K else TC2, 2, pinned)
        if one is None or two is None:
            return None
        if K is None:
            return (*one, *_shortest(one[-1], two))
        used = {s for line in two for s in line.expression.free_symbols}
        others = [line for symbol, line in of_slot.items() if symbol in used - {K.symbol}]
        return (*one, *others, *two, Equality(TC2, K.symbol - (K.expression - TC2)))

    return _per_slot(orders, both)


def _solved(
    equations: Sequence[sp.Expr],
    orders: Orders,
    wanted: sp.Symbol,
    order: int | None,
    pinned: Mapping[sp.Symbol, sp.Expr],
) -> Chain | None:
    """Solve for a slot's coefficient with the output's pinned."""
    inner = [coefficient(name, order) for name in orders.unknowns[:-1]]
    return solve_chain([sp.expand(e.subs(pinned)) for e in equations], [*inner, wanted], wanted)


def _shortest(known: Equality, chain: Chain) -> Chain:
    """Put the slot's TC1 into the line for its TC2 where that makes it shorter."""
    *before, line = chain
    put = line.expression.subs({known.symbol: known.expression})
    put = with_temperatures(tidy(sp.expand(put).subs(1 / positive("T_0"), INVERSE_T_0)))
    if sp.count_ops(put) < sp.count_ops(line.expression):
        line = Equality(line.symbol, put)
    return (*before, line)


def _per_slot(orders: Orders, solve: Callable[[str], Chain | None]) -> Mapping[str, Chain]:
    found = {slot: solve(slot) for slot in orders.slots}
    return MappingProxyType({slot: chain for slot, chain in found.items() if chain is not None})
