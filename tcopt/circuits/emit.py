"""Sympy to source text: the printing that all generated files share."""

from __future__ import annotations

from collections.abc import Iterable, Sequence

import sympy as sp
from sympy.printing.numpy import NumPyPrinter

from tcopt.symbols import INVERSE

__all__ = [
    "LOG_I_S",
    "assigned",
    "expand_logs",
    "finite",
    "function",
    "module",
    "text",
    "tuple_text",
]

LOG_I_S = sp.Symbol("log_I_S", real=True)
"""Stands for ln(I_S), since I_S itself underflows when cold."""

_HEAD = '''"""{title}.

Written by ``python -m tcopt.circuits.generate`` from the statement in sympy; not edited by hand.
"""

from typing import Any

'''
_NUMPY = ("exp", "expm1", "log", "sqrt")


class _Printer(NumPyPrinter):  # type: ignore[misc]
    """Numpy text, with the functions that have numerics of their own."""

    def _print_LogExpm1(self, expression: sp.Expr) -> str:
        return f"log_expm1({self._print(expression.args[0])})"

    def _print_Expm1(self, expression: sp.Expr) -> str:
        return f"expm1({self._print(expression.args[0])})"


_PRINTER = _Printer({"fully_qualified_modules": False, "precision": 17})


def text(expression: sp.Expr) -> str:
    """Return an expression as numpy source."""
    return str(_PRINTER.doprint(expression))


def tuple_text(items: Sequence[str]) -> str:
    """Return items as the source of a tuple."""
    return "(" + ", ".join(items) + ("," if len(items) == 1 else "") + ")"


def finite(expression: sp.Expr) -> sp.Expr:
    """Write what is infinite in the ideal transistor as one over its inverse."""
    swaps = {
        sp.Symbol(name, positive=True): 1 / sp.Symbol(inverse, positive=True)
        for name, inverse in INVERSE.items()
    }
    return expression.subs(swaps)


def expand_logs(expression: sp.Expr) -> sp.Expr:
    """Expand products and the logarithms of products; every symbol stands for a positive number."""
    return sp.expand(sp.expand_log(sp.expand(expression), force=True))


def function(name: str, summary: str, arguments: Sequence[str], body: Iterable[str]) -> str:
    """Return the source of a function."""
    signature = ", ".join(f"{a}: Any" for a in arguments)
    lines = "\n".join(f"    {line}" for line in body)
    return f'\n\ndef {name}({signature}) -> Any:\n    """{summary}"""\n{lines}\n'


def assigned(expressions: Sequence[sp.Expr], prefix: str = "x") -> tuple[list[str], list[sp.Expr]]:
    """Return statements for what the expressions share, and the expressions in those terms."""
    shared, results = sp.cse(
        list(expressions), symbols=(sp.Symbol(f"{prefix}{k}", real=True) for k in range(10_000))
    )
    return [f"{symbol} = {text(value)}" for symbol, value in shared], list(results)


def module(title: str, source: str, constants: str = "") -> str:
    """Return a whole file: head, the imports that the source uses, constants, source."""
    head = _HEAD.format(title=title)
    used = [name for name in _NUMPY if f"{name}(" in source.replace("log_expm1(", "")]
    if used:
        head += f"from numpy import {', '.join(used)}\n"
    if "wrightomega(" in source:
        head += "from scipy.special import wrightomega\n"
    own = [name for name in ("log_expm1", "upper_root") if f"{name}(" in source]
    if own:
        head += f"\nfrom tcopt.laws.roots import {', '.join(own)}\n"
    return head + constants + source
