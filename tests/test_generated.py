"""The committed numerics are what the statements in sympy give now.

Usually the text is the same to the letter. Another version of sympy may order the terms of a
sum differently, or share other parts of an expression; that is no fault of the files. So where
the text differs, everything around the bodies of the functions must still be the same (names,
arguments, imports, tables, docstrings) and the functions must give the same numbers. That
these comparisons can fail is tested too.
"""

from __future__ import annotations

import ast
from collections.abc import Callable, Iterator
from pathlib import Path
from types import FunctionType
from typing import Any

import numpy as np
import pytest

from tcopt.circuits.generate import modules

DERIVED = modules()
HOUSE = next(path.parent for path in DERIVED if path.name == "__init__.py").parents[1]
HAS_CODE = [path for path, text in DERIVED.items() if "def " in text]
CLOSED = [p for p in HAS_CODE if p.stem.endswith("_ideal") or p.parent.name == "laws"]
DECADES = {
    "R_": (1, 5),
    "I_L": (-7, -5.5),
    "I_": (-6, -3),
    "J_": (-6, -3),
    "inverse_": (-1.2, -0.4),
}
"""Decades of the random arguments, by how their names begin; the rest lies between 0.5 and 5.

Effects are larger than in life, so that none of their terms is lost beside the others.
"""


def difference(kept: str, derived: str) -> str | None:
    """Say in what two sources differ that matters, or return None."""
    if kept == derived:
        return None
    if _without_bodies(kept) != _without_bodies(derived):
        return "names, arguments, imports or docstrings differ"
    one, other = _functions(kept), _functions(derived)
    rng = np.random.default_rng(7)
    for name, function in one.items():
        arguments = {a: _drawn(a, rng) for a in function.__code__.co_varnames[: _count(function)]}
        with np.errstate(all="ignore"):
            pair = [_numbers(f(**arguments)) for f in (function, other[name])]
        if len(pair[0]) != len(pair[1]):
            return f"{name} returns {len(pair[0])} numbers, not {len(pair[1])}"
        scale = max(1.0, *(float(np.nanmax(np.abs(value))) for value in pair[0]))
        for a, b in zip(*pair, strict=True):
            if not np.allclose(a, b, rtol=1e-9, atol=1e-13 * scale, equal_nan=True):
                return f"{name} gives other numbers"
    return None


def _without_bodies(source: str) -> str:
    tree = ast.parse(source)
    for node in tree.body:
        if isinstance(node, ast.FunctionDef):
            node.body = node.body[:1]
    return ast.dump(tree)


def _functions(source: str) -> dict[str, Callable[..., Any]]:
    room: dict[str, Any] = {}  # the project's own source, which importing would run just so
    exec(compile(source, "generated", "exec"), room)
    return {
        name: thing
        for name, thing in room.items()
        if isinstance(thing, FunctionType) and thing.__module__ is None
    }


def _count(function: Callable[..., Any]) -> int:
    return function.__code__.co_argcount


def _drawn(name: str, rng: np.random.Generator) -> Any:
    low, high = next((d for start, d in DECADES.items() if name.startswith(start)), (-0.3, 0.7))
    drawn = 10 ** rng.uniform(low, high, 64)
    return np.log(drawn) - 12 if name.startswith("log_") else drawn


def _numbers(result: Any) -> list[Any]:
    def flat(item: Any) -> Iterator[Any]:
        if isinstance(item, tuple):
            for part in item:
                yield from flat(part)
        else:
            yield np.asarray(item, dtype=float)

    return list(flat(result))


@pytest.mark.parametrize("path", DERIVED, ids=lambda path: path.stem)
def test_kept_file_is_what_is_derived_now(path: Path) -> None:
    assert difference(path.read_text(encoding="utf-8"), DERIVED[path]) is None


def test_no_file_is_left_over() -> None:
    folder = HOUSE / "circuits" / "generated"
    assert set(folder.glob("*.py")) == {path for path in DERIVED if path.parent == folder}


@pytest.mark.parametrize("path", HAS_CODE, ids=lambda path: path.stem)
def test_every_formula_is_compared(path: Path) -> None:
    """Spoil operators of the formulas, one at a time; every one must be noticed.

    All operators of closed forms and laws; of real transistors, whose files hold hundreds, some
    forty spread over the file.
    """
    text = DERIVED[path]
    spoiled = list(_spoiled(text))
    if path not in CLOSED:
        spoiled = spoiled[:: max(1, len(spoiled) // 40)]
    for good, bad, place in spoiled:
        assert difference(good, bad), place
    assert spoiled or path.stem.startswith("reference_over_resistor")


def _spoiled(text: str) -> Iterator[tuple[str, str, str]]:
    """Yield a function with what it imports, the same with one operator wrong, and the place."""
    tree = ast.parse(text)
    functions = [node for node in tree.body if isinstance(node, ast.FunctionDef)]
    head = text[: _offset(text, functions[0].lineno, 0)]
    for function in functions:
        start = _offset(text, function.lineno, 0)
        end = _offset(text, function.end_lineno, function.end_col_offset)
        for node in ast.walk(function):
            if isinstance(node, ast.BinOp) and isinstance(node.op, ast.Add | ast.Sub | ast.Mult):
                gap_start = _offset(text, node.left.end_lineno, node.left.end_col_offset)
                gap_end = _offset(text, node.right.lineno, node.right.col_offset)
                gap = text[gap_start:gap_end]
                for operator, wrong in (("+", "-"), ("-", "+"), ("*", "/")):
                    if operator in gap:
                        gap = gap.replace(operator, wrong, 1)
                        break
                bad = head + text[start:gap_start] + gap + text[gap_end:end]
                place = f"{function.name}: {text[max(gap_start - 40, start) : gap_end + 40]}"
                yield head + text[start:end], bad, place


def _offset(text: str, line: int | None, column: int | None) -> int:
    assert line is not None
    assert column is not None
    return sum(len(row) for row in text.splitlines(keepends=True)[: line - 1]) + column


def test_a_reordered_sum_is_the_same_and_another_name_is_not() -> None:
    text = next(text for path, text in DERIVED.items() if path.stem.startswith("ptat_core"))
    assert difference(text, text.replace("log(M) + log(N)", "log(N) + log(M)")) is None
    assert "names" in str(difference(text, text.replace("R_core", "R_other")))
    assert "names" in str(difference(text, text.replace("from numpy", "from math")))
    shorter = text.replace("    return (I_out,)", "    return ()")
    assert "returns 1 numbers, not 0" in str(difference(text, shorter))
    assert "other numbers" in str(difference(text, text.replace("V_T*(", "1.000001*V_T*(", 1)))
