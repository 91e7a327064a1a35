"""The generated file of a circuit with ideal transistors: closed forms throughout."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import sympy as sp

from tcopt.circuits.closed_form import Kind, Root, forward, need
from tcopt.circuits.device_module import partials_source, quantity_names
from tcopt.circuits.emit import LOG_I_S, expand_logs, function, module, text, tuple_text
from tcopt.circuits.statement import Circuit
from tcopt.circuits.terms import Terms, terms_of

__all__ = ["ideal_module"]


def _log_of(current: sp.Symbol) -> sp.Symbol:
    return sp.Symbol(f"log_{current.name}", real=True)


def _logs(currents: Iterable[sp.Symbol]) -> dict[sp.Expr, sp.Expr]:
    return {sp.log(I): _log_of(I) for I in currents} | {sp.log(Terms().symbol("I_S")): LOG_I_S}


def _root_lines(root: Root, known: Sequence[sp.Symbol]) -> list[str]:
    """Return statements that set I and log_I of one root; `known` currents are set before."""
    logs = _logs(known)
    A, B, C = (sp.expand_log(part, force=True).subs(logs) for part in (root.A, root.B, root.C))
    name, log_name = root.unknown.name, _log_of(root.unknown).name
    if root.kind is Kind.LINEAR:
        return [f"{name} = {text(sp.factor(-C / B))}", f"{log_name} = log({name})"]
    lines = [f"log_free = {text(sp.expand(-C / A))}"]
    if root.kind is Kind.EXPONENTIAL:
        lines += [f"{log_name} = log_free"]
    else:
        share = sp.factor(B / A if root.kind is Kind.OMEGA else -B / A)
        lines.append(f"share = {text(share)}")
        if root.kind is Kind.OMEGA:
            lines.append(f"{log_name} = log_free - wrightomega(log(share) + log_free)")
        else:
            lines.append(f"{log_name} = log_free + upper_root(-log(share) - log_free)")
    return [*lines, f"{name} = exp({log_name})"]


def _forward_source(circuit: Circuit, roots: Sequence[Root], quantities: Sequence[str]) -> str:
    lines: list[str] = []
    known: list[sp.Symbol] = []
    for root in roots:
        lines += _root_lines(root, known)
        known.append(root.unknown)
    if roots[-1].kind is Kind.LINEAR:
        lines.pop()  # nothing reads the logarithm of the last current
    lines.append(f"return {tuple_text(circuit.unknowns)}")
    return function("closed_form", "Return the currents [A].", quantities, lines)


def _need_source(circuit: Circuit, feed: str, slot: str, quantities: Sequence[str]) -> str:
    terms = Terms()
    currents = [terms.symbol(name) for name in circuit.unknowns]
    found = need(circuit, feed, slot)
    if found is None:
        raise AssertionError(f"{circuit.topology}: slot {slot} has no closed form")
    own = terms.resistance(slot).name
    arguments = ["I_out", *(q for q in quantities if q != own)]
    body = ["log_I_out = log(I_out)"]
    known = [currents[-1]]
    for root in found.roots:
        body += _root_lines(root, known)
        known.append(root.unknown)
    value = sp.expand_log(found.resistance, force=True).subs(_logs(currents))
    body.append(f"return {text(value)}")
    return function(f"need_{slot}", "Return the needed resistance [ohm].", arguments, body)


def ideal_module(circuit: Circuit, feed: str) -> str:
    """Return the source of one topology, its transistors ideal, with one kind of input."""
    terms, loops = terms_of(circuit, feed)
    # expanded, so that what cancels (I_S between two junctions) is not asked for
    residuals = [expand_logs(loop.residual) for loop in loops]
    currents = [terms.symbol(name) for name in circuit.unknowns]
    quantities = quantity_names(residuals, set(currents))
    roots = forward(loops)
    if roots is None:
        raise AssertionError(f"{circuit.topology}: no closed form")
    slots = [slot.name for slot in circuit.slots_for(feed)]
    source = _forward_source(circuit, roots, quantities)
    source += partials_source(residuals, currents, quantities)
    source += "".join(_need_source(circuit, feed, slot, quantities) for slot in slots)
    source += "\n\nNEEDS = {" + ", ".join(f'"{slot}": need_{slot}' for slot in slots) + "}\n"
    constants = (
        f"\nCURRENTS = {tuple_text([repr(n) for n in circuit.unknowns])}"
        f"\nUNKNOWNS = {tuple_text([f'log_{n}' for n in map(repr, circuit.unknowns)])}"
        f"\nQUANTITIES = {tuple_text([repr(n) for n in quantities])}\n"
    ).replace("log_'", "'log_")
    return module(f"{circuit.topology}, ideal transistors, input: {feed}", source, constants)
