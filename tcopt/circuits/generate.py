"""Write the numpy side of every circuit and law from its statement in sympy.

Run as ``python -m tcopt.circuits.generate``. The result is kept beside the
statements, so that commands which only compute need not load sympy; a test
derives it again and compares.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from pathlib import Path

import sympy as sp
from sympy.printing.numpy import NumPyPrinter

from tcopt.circuits import CIRCUITS, Circuit, module_name
from tcopt.circuits.closed_form import Kind, Root, forward, need
from tcopt.circuits.terms import Terms, statement_of
from tcopt.laws import bipolar, resistor

__all__ = ["circuit_module", "laws_module", "modules", "write"]

_HEAD = '''"""{title}.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

from numpy import exp, log
'''
_PRINTER = NumPyPrinter({"fully_qualified_modules": False, "precision": 17})
_LOG_I_S = sp.Symbol("log_I_S", real=True)


def _text(expression: sp.Expr) -> str:
    return str(_PRINTER.doprint(expression))


def _in_logs(expression: sp.Expr, currents: Iterable[sp.Symbol]) -> sp.Expr:
    """Write currents and I_S as exponentials of their logarithms, which do not underflow."""
    I_S = Terms().symbol("I_S")
    swaps = {I: sp.exp(_log_of(I)) for I in currents} | {I_S: sp.exp(_LOG_I_S)}
    return sp.expand_log(sp.expand_log(expression, force=True).subs(swaps), force=True)


def _log_of(current: sp.Symbol) -> sp.Symbol:
    return sp.Symbol(f"log_{current.name}", real=True)


def _function(name: str, summary: str, arguments: Sequence[str], body: Iterable[str]) -> str:
    signature = ", ".join(f"{a}: Any" for a in arguments)
    lines = "\n".join(f"    {line}" for line in body)
    return f'\n\ndef {name}({signature}) -> Any:\n    """{summary}"""\n{lines}\n'


def _tuple(items: Sequence[str]) -> str:
    return "(" + ", ".join(items) + ("," if len(items) == 1 else "") + ")"


def _root_lines(root: Root, known: Sequence[sp.Symbol]) -> list[str]:
    """Return statements that set I and log_I of one root; `known` currents are set before."""
    logs = {sp.log(I): _log_of(I) for I in known} | {sp.log(Terms().symbol("I_S")): _LOG_I_S}
    A, B, C = (sp.expand_log(part, force=True).subs(logs) for part in (root.A, root.B, root.C))
    name, log_name = root.unknown.name, _log_of(root.unknown).name
    if root.kind is Kind.LINEAR:
        return [f"{name} = {_text(sp.factor(-C / B))}", f"{log_name} = log({name})"]
    lines = [f"log_free = {_text(sp.expand(-C / A))}"]
    if root.kind is Kind.EXPONENTIAL:
        lines += [f"{log_name} = log_free"]
    else:
        share = sp.factor(B / A if root.kind is Kind.OMEGA else -B / A)
        lines.append(f"share = {_text(share)}")
        if root.kind is Kind.OMEGA:
            lines.append(f"{log_name} = log_free - wrightomega(log(share) + log_free)")
        else:
            lines.append(f"{log_name} = log_free + upper_root(-log(share) - log_free)")
    return [*lines, f"{name} = exp({log_name})"]


def _quantities(expressions: Iterable[sp.Expr], currents: set[sp.Symbol]) -> list[str]:
    names = {s.name for e in expressions for s in e.free_symbols if s not in currents}
    return sorted("log_I_S" if name == "I_S" else name for name in names)


def circuit_module(circuit: Circuit, feed: str) -> str:
    """Return the source of one topology with one kind of input."""
    terms = Terms()
    loops = statement_of(circuit, feed)
    # expanded, so that what cancels (I_S between two junctions) is not asked for
    residuals = [sp.expand(sp.expand_log(sp.expand(loop.residual), force=True)) for loop in loops]
    currents = [terms.symbol(name) for name in circuit.unknowns]
    quantities = _quantities(residuals, set(currents))
    roots = forward(loops)
    if roots is None:
        raise AssertionError(f"{circuit.topology}: no closed form")
    lines: list[str] = []
    known: list[sp.Symbol] = []
    for root in roots:
        lines += _root_lines(root, known)
        known.append(root.unknown)
    if roots[-1].kind is Kind.LINEAR:
        lines.pop()  # nothing reads the logarithm of the last current
    functions = [
        _function(
            "closed_form",
            "Return the currents [A].",
            quantities,
            [*lines, f"return {_tuple(circuit.unknowns)}"],
        ),
        _residual_functions(residuals, currents, quantities),
    ]
    slots = []
    for slot in circuit.slots_for(feed):
        found = need(circuit, feed, slot.name)
        if found is None:
            raise AssertionError(f"{circuit.topology}: slot {slot.name} has no closed form")
        own = terms.resistance(slot.name).name
        arguments = ["I_out", *(q for q in quantities if q != own)]
        body = ["log_I_out = log(I_out)"]
        known = [currents[-1]]
        for root in found.roots:
            body += _root_lines(root, known)
            known.append(root.unknown)
        logs = {sp.log(I): _log_of(I) for I in currents} | {sp.log(terms.symbol("I_S")): _LOG_I_S}
        value = sp.expand_log(found.resistance, force=True).subs(logs)
        body.append(f"return {_text(value)}")
        functions.append(
            _function(f"need_{slot.name}", "Return the needed resistance [ohm].", arguments, body)
        )
        slots.append(f'"{slot.name}": need_{slot.name}')
    source = "".join(functions)
    imports = "\nfrom scipy.special import wrightomega\n" if "wrightomega" in source else ""
    if "upper_root" in source:
        imports += "\nfrom tcopt.laws.roots import upper_root\n"
    constants = (
        f"\nUNKNOWNS = {_tuple([repr(n) for n in circuit.unknowns])}"
        f"\nQUANTITIES = {_tuple([repr(n) for n in quantities])}\n"
    )
    table = "\n\nNEEDS = {" + ", ".join(slots) + "}\n"
    head = _HEAD.format(title=f"{circuit.topology}, input: {feed}")
    return head + imports + constants + source + table


def _residual_functions(
    residuals: Sequence[sp.Expr], currents: Sequence[sp.Symbol], quantities: Sequence[str]
) -> str:
    """Return ``partials``: loops, d/d(log current), d/d(log quantity), with shared terms once."""
    in_logs = [_in_logs(r, currents) for r in residuals]
    logs = [_log_of(I) for I in currents]
    flat: list[sp.Expr] = list(in_logs)
    flat += [sp.diff(r, x) for r in in_logs for x in logs]
    for r in in_logs:
        for name in quantities:
            if name == "log_I_S":
                flat.append(sp.diff(r, _LOG_I_S))
            else:
                q = sp.Symbol(name, positive=True)
                flat.append(sp.expand(q * sp.diff(r, q)))
    shared, results = sp.cse(flat)
    body = [f"{symbol} = {_text(value)}" for symbol, value in shared]
    n, m = len(residuals), len(quantities)
    texts = [_text(r) for r in results]
    rows = [_tuple(texts[n + k * n : n + (k + 1) * n]) for k in range(n)]
    start = n + n * n
    columns = [_tuple(texts[start + k * m : start + (k + 1) * m]) for k in range(n)]
    inner = "".join(f"        {_tuple(part)},\n" for part in (texts[:n], rows, columns))
    body.append(f"return (\n{inner}    )")
    return _function(
        "partials",
        "Return the loops, their partials by log current, and by log quantity.",
        [*(x.name for x in logs), *quantities],
        body,
    )


def laws_module() -> str:
    """Return the source of the laws: values and slopes against temperature."""
    T, T_0, TC1, TC2, eta, V_G0, k_q = sp.symbols("T T_0 TC1 TC2 eta V_G0 k_q", positive=True)
    ratio = resistor.ratio(T, T_0, TC1, TC2)
    moved_tc1, moved_tc2 = resistor.about(T, T_0, TC1, TC2)
    growth = bipolar.log_saturation_growth(T, T_0, eta, V_G0, k_q)
    both = (
        ("resistance_ratio", ratio, "T T_0 TC1 TC2", "Return R(T)/R(T_0)"),
        ("resistance_ratio_slope", sp.diff(ratio, T), "T T_0 TC1 TC2", "Return d(R/R_0)/dT [1/K]"),
        ("moved_tc1", moved_tc1, "T T_0 TC1 TC2", "Return TC1 with T as the reference [1/K]"),
        ("moved_tc2", moved_tc2, "T T_0 TC1 TC2", "Return TC2 with T as the reference [1/K^2]"),
        ("thermal_voltage", bipolar.thermal_voltage(T, k_q), "T k_q", "Return V_T [V]"),
        ("log_saturation_growth", growth, "T T_0 eta V_G0 k_q", "Return ln(I_S(T)/I_S(T_0))"),
        (
            "log_saturation_slope",
            sp.diff(growth, T),
            "T T_0 eta V_G0 k_q",
            "Return d(ln I_S)/dT [1/K]",
        ),
    )
    functions = [
        _function(name, f"{summary}.", arguments.split(), [f"return {_text(expression)}"])
        for name, expression, arguments, summary in both
    ]
    head = _HEAD.format(title="The laws of the parts").replace("exp, log", "log")
    return head + "".join(functions)


def modules() -> dict[Path, str]:
    """Return every generated file and its source."""
    here = Path(__file__).parent
    found = {here.parent / "laws" / "generated.py": laws_module()}
    found[here / "generated" / "__init__.py"] = '"""Numerics made from the statements."""\n'
    for circuit in CIRCUITS.values():
        for feed in circuit.feeds:
            name = module_name(circuit.topology, feed)
            found[here / "generated" / f"{name}.py"] = circuit_module(circuit, feed)
    return found


def write() -> None:
    """Write all generated files."""
    for path, source in modules().items():
        path.parent.mkdir(exist_ok=True)
        path.write_text(source, encoding="utf-8")


if __name__ == "__main__":
    write()
