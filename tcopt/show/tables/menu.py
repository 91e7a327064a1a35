"""The report of `materials`."""

from __future__ import annotations

from typing import TYPE_CHECKING

from rich.console import Group, RenderableType
from rich.text import Text

from tcopt.menu import TOLERANCE
from tcopt.show.tables.parts import PPM, heading, new_table, ppm, row
from tcopt.show.words import number
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.menu import Menu

__all__ = ["menu_report"]


def menu_report(found: Menu) -> RenderableType:
    """Return a process's materials: what each does to a PTAT voltage, and its data."""
    process = found.process
    reference = format_quantity(process.reference, "K")
    low, high = format_quantity(found.low, "K"), format_quantity(found.high, "K")
    entries = sorted(found.entries, key=lambda entry: entry.tc1)
    roles = new_table(
        "material", "ohm per\nsquare", "TC1\nppm/K", "TC2\nppm/K^2", "role for a PTAT\nvoltage",
        "1/T - TC1\nppm/K", "box of\nV_T/R\nppm/K", numbers=(1, 2, 3, 5, 6),
    )  # fmt: skip
    for entry in entries:
        sheet = entry.material.sheet_resistance
        row(
            roles,
            entry.material.name,
            "-" if sheet is None else format_quantity(sheet, "ohm").removesuffix("ohm"),
            ppm(entry.tc1, 0),
            ppm(entry.tc2, 2),
            f"{entry.role} 1/T",
            ppm(entry.left, 0),
            "-" if entry.drift is None else number(entry.drift.box_ppm_per_K),
        )
    data = new_table("material", "spread", "valid", "reference", "source", numbers=(1,))
    for entry in entries:
        material = entry.material
        valid = [format_quantity(t, "K") for t in material.valid or ()]
        row(
            data,
            material.name,
            "-" if material.spread is None else f"{100 * material.spread:g} %",
            " to ".join(valid) or "-",
            format_quantity(material.reference, "K"),
            material.source or "-",
        )
    return Group(
        Text(process.title, style="bold"),
        Text(f"Materials in order of TC1; TC1 and TC2 about T_ref = {reference}."),
        roles,
        Text(
            f"Role: TC1 against 1/T = {PPM / process.reference:.0f} ppm/K at T_ref; within "
            f"{100 * TOLERANCE:g} % of it it matches. 1/T - TC1 is the slope at T_ref that a "
            "current V_T/R is left with: positive, it rises with temperature. Box: (max - "
            f"min)/(I(T_ref) (T_max - T_min)) of V_T/R over {low} to {high}."
        ),
        heading("Data (spread: one standard deviation of the sheet resistance, lot to lot)"),
        data,
    )
