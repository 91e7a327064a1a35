"""A wanted current against temperature, from a CSV file.

Two columns; the header names quantity and unit of each:
``temperature [degC], current [uA]``.
"""

from __future__ import annotations

import csv
import math
import re
from dataclasses import dataclass
from pathlib import Path

from tcopt.errors import InputError
from tcopt.files import read_text
from tcopt.units import format_quantity, parse, shown

__all__ = ["Curve", "Problem", "first_problem", "read_curve"]

Curve = tuple[tuple[float, ...], tuple[float, ...]]
"""Temperatures [K], strictly rising, and the current [A] at each."""

_HEADING = re.compile(r"(temperature|current) *\[([^\[\]]{1,20})\]")
_NUMBER = re.compile(r"[+-]?[0-9.]+([eE][+-]?[0-9]+)?")
_HEADER = "the header 'temperature [degC], current [uA]', in units of the file's own"
_MOST_POINTS = 100_000


@dataclass(frozen=True, slots=True)
class Problem:
    """What no current could follow: at which point, what was found, what is accepted."""

    index: int
    found: str
    accepted: str


def first_problem(curve: Curve) -> Problem | None:
    """Return what is wrong with a curve, None if nothing is."""
    temperatures, currents = curve
    if not 2 <= len(temperatures) <= _MOST_POINTS or len(temperatures) != len(currents):
        found = f"{len(temperatures)} temperatures and {len(currents)} currents"
        return Problem(0, found, f"as many of each, 2 to {_MOST_POINTS}")
    before = 0.0
    for index, (temperature, current) in enumerate(zip(temperatures, currents, strict=True)):
        if not before < temperature < math.inf:
            found = f"{format_quantity(temperature, 'K')} after {format_quantity(before, 'K')}"
            return Problem(index, found, "temperatures that rise from point to point")
        if not 0 < current < math.inf:
            return Problem(index, format_quantity(current, "A"), "a current above 0 A")
        before = temperature
    return None


def _units(cells: list[str]) -> tuple[str, str] | None:
    headings = [_HEADING.fullmatch(cell) for cell in cells]
    if [heading and heading[1] for heading in headings] != ["temperature", "current"]:
        return None
    first, second = (heading[2] for heading in headings if heading)
    return first, second


def read_curve(path: Path) -> Curve:
    """Return temperatures [K], strictly rising, and the current [A] at each.

    Blank lines, and lines that begin with ``#``, are passed over.

    Raises
    ------
    InputError : not a CSV file of that form, or values that no current could follow
    """

    def refuse(line: int, found: str, accepted: str) -> InputError:
        return InputError(f"{path}: line {line}: found {found}; accepted: {accepted}")

    units: tuple[str, str] | None = None
    lines: list[int] = []
    curve: tuple[list[float], list[float]] = ([], [])
    rows = csv.reader(read_text(path).splitlines(), strict=True)
    try:
        for row in rows:
            cells, line = [cell.strip() for cell in row], rows.line_num
            if not any(cells) or cells[0].startswith("#"):
                continue
            if units is None:
                units = _units(cells)
                if units is None:
                    raise refuse(line, shown(",".join(cells)), _HEADER)
                continue
            if len(cells) != 2 or not all(_NUMBER.fullmatch(cell) for cell in cells):
                raise refuse(line, shown(",".join(cells)), "two numbers with a comma between")
            for values, cell, unit, si in zip(curve, cells, units, ("K", "A"), strict=True):
                try:
                    values.append(parse(f"{cell} {unit}", si))
                except ValueError as error:
                    raise InputError(f"{path}: line {line}: {error}") from None
            lines.append(line)
    except csv.Error as error:
        raise refuse(rows.line_num, f"broken CSV ({error})", "a CSV file") from None
    whole = (tuple(curve[0]), tuple(curve[1]))
    problem = first_problem(whole)
    if problem is None:
        return whole
    if not lines:
        raise InputError(f"{path}: found no points; accepted: {_HEADER}, and at least two points")
    raise refuse(lines[problem.index], problem.found, problem.accepted)
