"""The generated file of a circuit with real transistors: what Newton's method needs.

Currents are solved for in their logarithms, voltages as they are. ``step``
holds the solution of the linear system of one Newton step in closed form, so
that a million points are solved by array arithmetic alone. ``pin_`` functions
are the same for a resistance that takes the place of the output current among
the unknowns.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import sympy as sp

from tcopt.circuits.emit import (
    LOG_I_S,
    assigned,
    expand_logs,
    finite,
    function,
    module,
    text,
    tuple_text,
)
from tcopt.circuits.statement import Circuit
from tcopt.circuits.terms import Device, Terms, terms_of

__all__ = ["device_module", "partials_source", "quantity_names"]


def _is_voltage(unknown: sp.Symbol) -> bool:
    return str(unknown.name).startswith("V_")


def _solved_for(unknown: sp.Symbol) -> sp.Symbol:
    """Return the symbol in which Newton's method works: a logarithm, or the voltage itself."""
    if _is_voltage(unknown):
        return sp.Symbol(unknown.name, real=True)
    return sp.Symbol(f"log_{unknown.name}", real=True)


def _in_logs(expression: sp.Expr, unknowns: Iterable[sp.Symbol]) -> sp.Expr:
    """Write currents and I_S as exponentials of their logarithms, which do not underflow."""
    swaps: dict[sp.Symbol, sp.Expr] = {Terms().symbol("I_S"): sp.exp(LOG_I_S)}
    for unknown in unknowns:
        own = _solved_for(unknown)
        swaps[unknown] = own if _is_voltage(unknown) else sp.exp(own)
    return sp.expand_log(sp.expand_log(expression, force=True).subs(swaps), force=True)


def quantity_names(expressions: Iterable[sp.Expr], unknowns: set[sp.Symbol]) -> list[str]:
    """Return the names of what the expressions take besides the unknowns."""
    names = {s.name for e in expressions for s in e.free_symbols if s not in unknowns}
    return sorted(LOG_I_S.name if name == "I_S" else name for name in names)


def _by_quantity(expression: sp.Expr, name: str) -> sp.Expr:
    """Return the partial by a resistance [1/ohm], by log I_S, or by the logarithm of another."""
    if name == LOG_I_S.name:
        return sp.diff(expression, LOG_I_S)
    q = sp.Symbol(name, positive=True)
    slope = sp.diff(expression, q)
    return slope if name.startswith("R_") else sp.expand(q * slope)


def partials_source(
    residuals: Sequence[sp.Expr],
    unknowns: Sequence[sp.Symbol],
    quantities: Sequence[str],
    name: str = "partials",
    summary: str = "Return the loops, their partials by unknown, and by quantity.",
) -> str:
    """Return a function of expressions and both sets of partials, shared terms once."""
    in_logs = [_in_logs(r, unknowns) for r in residuals]
    own = [_solved_for(u) for u in unknowns]
    flat: list[sp.Expr] = list(in_logs)
    flat += [sp.diff(r, x) for r in in_logs for x in own]
    flat += [_by_quantity(r, q) for r in in_logs for q in quantities]
    body, results = assigned(flat)
    n, u, m = len(residuals), len(own), len(quantities)
    texts = [text(r) for r in results]
    rows = [tuple_text(texts[n + k * u : n + (k + 1) * u]) for k in range(n)]
    start = n + n * u
    columns = [tuple_text(texts[start + k * m : start + (k + 1) * m]) for k in range(n)]
    body.append(
        f"return (\n        {tuple_text(texts[:n])},\n        {tuple_text(rows)},\n"
        f"        {tuple_text(columns)},\n    )"
    )
    return function(name, summary, [*(x.name for x in own), *quantities], body)


def _values_source(
    name: str,
    summary: str,
    expressions: Sequence[sp.Expr],
    unknowns: Sequence[sp.Symbol],
    quantities: Sequence[str],
) -> str:
    """Return a function of expressions alone."""
    body, results = assigned([_in_logs(e, unknowns) for e in expressions])
    body.append(f"return {tuple_text([text(r) for r in results])}")
    return function(name, summary, [*(_solved_for(u).name for u in unknowns), *quantities], body)


def _step_source(
    in_logs: Sequence[sp.Expr],
    own: Sequence[sp.Symbol],
    arguments: Sequence[str],
    name: str = "step",
) -> str:
    """Return the change of each of ``own`` in one Newton step, by elimination in symbols."""
    n = len(own)
    slopes = [[sp.diff(r, x) for x in own] for r in in_logs]
    body, results = assigned([*in_logs, *(item for row in slopes for item in row)])
    stand_ins: list[sp.Expr] = []
    for k, value in enumerate(results):
        if value.is_number:
            stand_ins.append(value)
            continue
        part = f"f{k}" if k < n else f"a{(k - n) // n}{(k - n) % n}"
        body.append(f"{part} = {text(value)}")
        stand_ins.append(sp.Symbol(part, real=True))
    matrix = sp.Matrix(n, n, stand_ins[n:])
    solution = -(matrix.adjugate() * sp.Matrix(stand_ins[:n])) / matrix.det()
    more, changes = assigned(list(solution), prefix="y")
    body += more
    body.append(f"return {tuple_text([text(c) for c in changes])}")
    summary = "Return the change of each unknown in one Newton step."
    return function(name, summary, [*(x.name for x in own), *arguments], body)


def _pins_source(
    circuit: Circuit,
    feed: str,
    residuals: Sequence[sp.Expr],
    unknowns: Sequence[sp.Symbol],
    output: tuple[sp.Symbol, sp.Expr],
    quantities: Sequence[str],
) -> str:
    """Return what solves for a slot's resistance when the output is given.

    ``output``: the last current's unknown, and the current itself. That is the
    unknown plus what does not depend on any, so it gives the unknown at once.
    """
    last, current = output
    apart = sp.expand(current - last)
    if apart.free_symbols & set(unknowns):
        raise AssertionError(f"{circuit.topology}: the output is more than its unknown")
    pinned = sp.log(Terms().symbol("I_out") - apart)
    source = function(
        "pinned",
        f"Return {_solved_for(last).name} from the output current.",
        ["I_out", *(q for q in quantities if not q.startswith("R_"))],
        [f"return {text(pinned)}"],
    )
    in_logs = [_in_logs(r, unknowns) for r in residuals]
    pins: list[str] = []
    for slot in circuit.slots_for(feed):
        resistance = Terms().resistance(slot.name)
        own = [*(_solved_for(u) for u in unknowns if u != last), resistance]
        arguments = [_solved_for(last).name, *(q for q in quantities if q != resistance.name)]
        source += _step_source(in_logs, own, arguments, f"pin_{slot.name}")
        names = tuple_text([repr(u.name) for u in own])
        without = [str(k) for k, r in enumerate(in_logs) if not r.has(resistance)]
        pins.append(f'"{slot.name}": (pin_{slot.name}, {names}, {tuple_text(without)})')
    return source + f"\n\nPINS = {{{', '.join(pins)}}}\n"


def device_module(circuit: Circuit, feed: str, device: Device) -> str:
    """Return the source of one topology with one kind of input and of transistor."""
    terms, loops = terms_of(circuit, feed, device)
    residuals = [expand_logs(finite(loop.residual)) for loop in loops]
    unknowns = [terms.unknowns[loop.unknown] for loop in loops]
    outputs = [finite(terms.currents[name]) for name in circuit.unknowns]
    quantities = quantity_names([*residuals, *outputs], set(unknowns))
    in_logs = [_in_logs(r, unknowns) for r in residuals]
    source = _values_source(
        "loops", "Return what is left of each loop.", residuals, unknowns, quantities
    )
    source += _values_source(
        "across",
        "Return the collector-emitter voltages that have an Early effect [V].",
        [sp.expand(finite(voltage)) for voltage in terms.across],
        unknowns,
        quantities,
    )
    source += _step_source(in_logs, [_solved_for(u) for u in unknowns], quantities)
    source += partials_source(residuals, unknowns, quantities)
    source += partials_source(
        [sp.log(current) for current in outputs],
        unknowns,
        quantities,
        "outputs",
        "Return the logarithm of each current, its partials by unknown, and by quantity.",
    )
    last = circuit.unknowns[-1]
    output = (terms.unknowns[last], outputs[-1])
    source += _pins_source(circuit, feed, residuals, unknowns, output, quantities)
    constants = (
        f"\nCURRENTS = {tuple_text([repr(n) for n in circuit.unknowns])}"
        f"\nUNKNOWNS = {tuple_text([repr(_solved_for(u).name) for u in unknowns])}"
        f"\nQUANTITIES = {tuple_text([repr(n) for n in quantities])}\n"
    )
    title = f"{circuit.topology}, {device.value.replace('_', ', ')} transistors, input: {feed}"
    return module(title, source, constants)
