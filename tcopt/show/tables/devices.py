"""What the report of `check` says of transistors, headroom, start-up and self-heating."""

from __future__ import annotations

from collections.abc import Sequence
from typing import TYPE_CHECKING

import numpy as np
from rich.console import RenderableType
from rich.table import Table
from rich.text import Text

from tcopt.circuits import SUPPLY
from tcopt.show.tables.parts import heading, new_table, row
from tcopt.show.words import number
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.arrays import Array
    from tcopt.check import CheckResult
    from tcopt.headroom import Headroom, Limit
    from tcopt.start_up import StartUp
    from tcopt.still_point import StillPoint

__all__ = ["device_sections", "still_sentence"]


def device_sections(result: CheckResult, places: Sequence[str]) -> list[RenderableType]:
    """Return headed tables, as far as the design has something to show in them.

    ``places``: headings of the columns for the cold end, the reference and the hot end.
    """
    parts: list[RenderableType] = []
    if rows := _across(result):
        table = new_table("figure", *places, numbers=(1, 2, 3))
        for name, cells in rows:
            row(table, name, *cells)
        parts += [heading("Across the range"), table]
    if result.still_point is not None:
        parts.append(Text(still_sentence(result.still_point)))
    if result.headroom_at_places is not None:
        parts += _headroom(result, result.headroom_at_places, places)
    if result.start_up is not None:
        parts += [heading("Start-up"), _start_up(result.start_up, places)]
    return parts


def still_sentence(point: StillPoint) -> str:
    """Return what is known of the gate voltage at which the current stands still, in words."""
    gate = f"At a gate voltage of {format_quantity(point.gate_voltage, 'V', 5)} the current"
    if point.current is None or point.inversion_coefficient is None:
        return f"{gate} would stand still at T_ref, but there is none: {point.why_not}."
    still = (
        f"{gate}, then {format_quantity(point.current, 'A')} at an inversion coefficient of "
        f"{number(point.inversion_coefficient)}, stands still at T_ref; "
    )
    if point.box_ppm_per_K is None:
        return f"{still}it does not exist all over the range: {point.why_not}."
    return f"{still}over the range {number(point.box_ppm_per_K)} ppm/K (box) are left."


def _cells(values: Array, unit: str, digits: int = 4) -> list[str]:
    return [
        format_quantity(float(value), unit, digits) if np.isfinite(value) else "-"
        for value in values
    ]


def _across(result: CheckResult) -> list[tuple[str, list[str]]]:
    found = result.sweep_at_places
    rows = [
        (f"inversion coefficient, {place}", [f"{value:.3g}" for value in values])
        for place, values in found.inversion.items()
    ]
    if found.output_resistance is not None:
        rows.append(("output resistance", _cells(found.output_resistance, "ohm", 3)))
    if found.die_temperature is not None and found.power is not None:
        rows.append(("temperature of the die", _cells(found.die_temperature, "K", 6)))
        rows.append(("power that heats it", _cells(found.power, "W")))
    return rows


def _headroom(result: CheckResult, found: Headroom, places: Sequence[str]) -> list[RenderableType]:
    table = new_table("lowest voltage, V", *places, "largest", "at", numbers=(1, 2, 3, 4, 5))
    made = result.study.circuit
    row(
        table,
        f"output node{_given(made.output_voltage)}",
        *(f"{value:.3f}" for value in found.lowest_output),
        *_largest(found.output_limit),
    )
    limit = found.supply_limit
    if limit is not None:
        for name, need in found.branches.items():
            own = limit if name == limit.set_by else None
            row(table, name, *(f"{value:.3f}" for value in need), *_largest(own))
    notes = []
    if limit is not None:
        what = "node that the input feeds" if made.input_current is not None else "supply"
        notes.append(
            f"Lowest {what}{_given(made.supply)}: {limit.voltage:.3f} V, for {limit.set_by} at "
            f"{format_quantity(limit.temperature, 'K')}."
        )
    if limit is not None and made.feed == SUPPLY:
        notes.append(
            "There the feed resistor has no drop left and carries no current; the output follows "
            "the supply long before, as its sensitivity says."
        )
    if limit is not None and not found.complete:
        notes.append(
            "What stands on top of it (mirror_drop, mirror_transistor) is not given and not "
            "counted."
        )
    parts: list[RenderableType] = [heading("Headroom"), table]
    return [*parts, Text(" ".join(notes))] if notes else parts


def _given(voltage: float | None) -> str:
    return "" if voltage is None else f" (given: {format_quantity(voltage, 'V')})"


def _largest(limit: Limit | None) -> tuple[str, str]:
    if limit is None:
        return "", ""
    return f"{limit.voltage:.3f}", format_quantity(limit.temperature, "K", 4)


def _start_up(found: StartUp, places: Sequence[str]) -> Table:
    table = new_table(f"into {found.node}", *places, numbers=(1, 2, 3))
    row(table, "current at work", *_cells(found.current, "A"))
    row(table, "second solution, below which it dies away", *_cells(found.second_current, "A", 3))
    gains = [f"{gain:.3g}" if np.isfinite(gain) else "-" for gain in found.gain]
    row(table, "gain of the loop at a millionth of it", *gains)
    row(table, "start-up current needed at least", *_cells(found.least, "A", 3))
    return table
