"""The report of `check`."""

from __future__ import annotations

from typing import TYPE_CHECKING

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from tcopt.show.tables.devices import device_sections
from tcopt.show.tables.parts import heading, listed, new_table, ppm, row, verdict
from tcopt.show.words import circuit_words, number, range_words, target_words
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.assess import Assessment
    from tcopt.check import CheckResult

__all__ = ["check_report"]


def check_report(result: CheckResult) -> RenderableType:
    """Return the report of `check`: design, current, drift, verdict, causes, warnings."""
    found, study = result.assessment, result.study
    choices = found.operation.choices
    over = study.range
    circuit = circuit_words(study, choices.area_ratio, choices.mirror_ratio, choices.input_current)
    parts: list[RenderableType] = [
        Text(study.title, style="bold"),
        Text(f"{circuit}; target {target_words(study)}"),
        Text(),
        _resistors(found),
        heading(f"Drift {range_words(study)}"),
        _drift_table(found),
        Text(
            f"I_ref = I(T_ref); span = T_max - T_min = {over.high - over.low:g} K; against the "
            "target, I stands for I/I_target."
        ),
        Text(_extremes(found)),
        verdict(found),
        heading("Causes of the local temperature coefficient (dI/dT)/I, ppm/K"),
        _causes(result),
    ]
    if (sensitivity := _sensitivity(result)) is not None:
        parts += [heading("What 1 % more of it does to the output, %"), sensitivity]
    parts += device_sections(result, _temperatures(result))
    if result.warnings:
        parts += [heading("Warnings"), listed(result.warnings)]
    return Group(*parts)


def _resistors(found: Assessment) -> Table:
    table = new_table(
        "resistor", "material", "value", "joined in", "in all at T_ref", numbers=(2, 4)
    )
    reference = found.operation.study.range.reference
    for slot, mix in found.operation.mixes.items():
        for index, part in enumerate(mix.parts):
            first = index == 0
            row(
                table,
                slot if first else "",
                part.material.name,
                format_quantity(part.value, "ohm", 5),
                mix.join if first and len(mix.parts) > 1 else "",
                format_quantity(float(mix.resistance(reference)), "ohm") if first else "",
            )
    return table


def _drift_table(found: Assessment) -> Table:
    table = new_table("figure", "of the current", "against target", "definition", numbers=(1, 2))
    current, left = found.drift, found.residual_drift
    row(table, "deviation", "", f"{number(left.deviation_ppm)} ppm", "max |I/I_target - 1|")
    for name, definition in (
        ("box", "(max - min)/(I_ref span)"),
        ("endpoint", "(I(T_max) - I(T_min))/(I_ref span)"),
        ("slope", "(dI/dT)/I at T_ref"),
    ):
        values = (getattr(drift, f"{name}_ppm_per_K") for drift in (current, left))
        signed = name != "box"
        row(table, name, *(f"{number(v, signed=signed)} ppm/K" for v in values), definition)
    return table


def _extremes(found: Assessment) -> str:
    lowest, highest = (
        f"{format_quantity(extreme.value, 'A', 5)} at {format_quantity(extreme.temperature, 'K')}"
        for extreme in (found.drift.lowest, found.drift.highest)
    )
    return f"Current: lowest {lowest}, highest {highest}."


def _temperatures(result: CheckResult) -> list[str]:
    return [f"{row.place}\n{format_quantity(row.temperature, 'K')}" for row in result.budget]


def _causes(result: CheckResult) -> Table:
    table = new_table("cause", *_temperatures(result), numbers=(1, 2, 3))
    for cause in result.budget[0].shares:
        row(table, cause, *(ppm(row.shares[cause]) for row in result.budget))
    table.add_section()
    row(table, "all together", *(ppm(row.total) for row in result.budget))
    return table


def _sensitivity(result: CheckResult) -> Table | None:
    rows = {
        "supply voltage": result.supply_sensitivity,
        "input current": result.input_sensitivity,
    }
    if all(values is None for values in rows.values()):
        return None
    table = new_table("of", *_temperatures(result), numbers=(1, 2, 3))
    for name, values in rows.items():
        if values is not None:
            row(table, name, *(f"{value:+.3f}" for value in values))
    return table
