"""A wanted current against temperature, from a CSV file.

Two columns; the header names quantity and unit of each:
``temperature [degC], current [uA]``.
"""

from __future__ import annotations

import csv
import re
from pathlib import Path

from tcopt.errors import InputError
from tcopt.files import read_text
from tcopt.units import parse, shown

__all__ = ["read_curve"]

_HEADING = re.compile(r"(temperature|current) *\[([^\[\]]{1,20})\]")
_HEADER = "the header 'temperature [degC], current [uA]', with units of the file's own"
_MOST_ROWS = 100_000


def read_curve(path: Path) -> tuple[tuple[float, ...], tuple[float, ...]]:
    """Return temperatures [K], strictly rising, and the current [A] at each.

    Raises
    ------
    InputError : not a CSV file of that form, or values that no current could follow
    """

    def refuse(line: int, found: str, accepted: str) -> InputError:
        return InputError(f"{path}: line {line}: found {found}; accepted: {accepted}")

    rows = csv.reader(read_text(path).splitlines(), skipinitialspace=True, strict=True)
    units: list[str] = []
    curve: tuple[list[float], list[float]] = ([], [])
    try:
        for row in rows:
            cells = [cell.strip() for cell in row]
            line = rows.line_num
            if not any(cells) or cells[0].startswith("#"):
                continue
            if not units:
                headings = [_HEADING.fullmatch(cell) for cell in cells]
                if [heading and heading[1] for heading in headings] != ["temperature", "current"]:
                    raise refuse(line, shown(",".join(cells)), _HEADER)
                units = [heading[2] for heading in headings if heading]
                continue
            if len(cells) != 2 or line > _MOST_ROWS:
                raise refuse(line, f"{len(cells)} cells", f"two, in at most {_MOST_ROWS} lines")
            for values, cell, unit, si in zip(curve, cells, units, ("K", "A"), strict=True):
                try:
                    values.append(parse(f"{cell} {unit}", si))
                except ValueError as error:
                    raise InputError(f"{path}: line {line}: {error}") from None
            temperatures, currents = curve
            if temperatures[-1] <= 0 or currents[-1] <= 0:
                raise refuse(line, shown(",".join(cells)), "above absolute zero, and above 0 A")
            if len(temperatures) > 1 and not temperatures[-2] < temperatures[-1]:
                raise refuse(line, shown(cells[0]), "temperatures that rise from line to line")
    except csv.Error as error:
        raise refuse(rows.line_num, f"broken CSV ({error})", "a CSV file") from None
    if not units or len(curve[0]) < 2:
        raise InputError(
            f"{path}: found {len(curve[0])} points; accepted: {_HEADER}, and at least two points"
        )
    return tuple(curve[0]), tuple(curve[1])
