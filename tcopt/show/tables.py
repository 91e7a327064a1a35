"""Results as tables for a terminal or a pipe; pure, printing is done elsewhere.

All marks are ASCII and nothing is told by colour alone.
"""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from typing import TYPE_CHECKING, Literal

from rich.box import Box
from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from tcopt.circuits import GIVEN
from tcopt.menu import TOLERANCE
from tcopt.show.words import (
    circuit_words,
    number,
    range_words,
    target_words,
    verdict_words,
)
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.assess import Assessment
    from tcopt.check import CheckResult
    from tcopt.design import DesignResult, PlainMirror
    from tcopt.menu import Menu
    from tcopt.study import Study

__all__ = ["check_report", "design_report", "menu_report"]

_LINES = Box("    \n    \n -- \n    \n    \n -- \n    \n    \n", ascii=True)
_PPM = 1e6
_PLAIN_MIRROR = (
    " Plain mirror: what one without resistors in its emitters would take for the same output."
)


def _heading(words: str) -> Text:
    return Text(f"\n{words}", style="bold")


def _table(*columns: str, numbers: Sequence[int] = ()) -> Table:
    table = Table(box=_LINES, show_edge=False, padding=(0, 1, 0, 0), header_style="bold")
    for index, column in enumerate(columns):
        right = index in numbers
        # folded, since the mark of a cut-off cell is not ASCII
        justify: Literal["left", "right"] = "right" if right else "left"
        table.add_column(column, justify=justify, no_wrap=right, overflow="fold")
    return table


def _row(table: Table, *cells: str) -> None:
    table.add_row(*(Text(cell) for cell in cells))


def _verdict(found: Assessment, by: str = "") -> Text:
    if found.limit is None:
        return Text("No limit is set.")
    style = "bold green" if found.limit.met else "bold red"
    return Text(f"{verdict_words(found.limit, by)}.", style=style)


def _listed(lines: Iterable[str]) -> Table:
    grid = Table.grid(padding=(0, 1, 0, 0))
    for line in lines:
        grid.add_row(Text("-"), Text(line))
    return grid


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
        _heading(f"Drift {range_words(study)}"),
        _drift_table(found),
        Text(
            f"I_ref = I(T_ref); span = T_max - T_min = {over.high - over.low:g} K; against the "
            "target, I stands for I/I_target."
        ),
        Text(_extremes(found)),
        _verdict(found),
        _heading("Causes of the local temperature coefficient (dI/dT)/I, ppm/K"),
        _causes(result),
    ]
    if (sensitivity := _sensitivity(result)) is not None:
        parts += [_heading("What 1 % more of it does to the output, %"), sensitivity]
    if result.warnings:
        parts += [_heading("Warnings"), _listed(result.warnings)]
    return Group(*parts)


def _resistors(found: Assessment) -> Table:
    table = _table("resistor", "material", "value", "joined in", "in all at T_ref", numbers=(2, 4))
    reference = found.operation.study.range.reference
    for slot, mix in found.operation.mixes.items():
        for index, part in enumerate(mix.parts):
            first = index == 0
            _row(
                table,
                slot if first else "",
                part.material.name,
                format_quantity(part.value, "ohm", 5),
                mix.join if first and len(mix.parts) > 1 else "",
                format_quantity(float(mix.resistance(reference)), "ohm") if first else "",
            )
    return table


def _drift_table(found: Assessment) -> Table:
    table = _table("figure", "of the current", "against target", "definition", numbers=(1, 2))
    current, left = found.drift, found.residual_drift
    _row(table, "deviation", "", f"{number(left.deviation_ppm)} ppm", "max |I/I_target - 1|")
    for name, definition in (
        ("box", "(max - min)/(I_ref span)"),
        ("endpoint", "(I(T_max) - I(T_min))/(I_ref span)"),
        ("slope", "(dI/dT)/I at T_ref"),
    ):
        values = (getattr(drift, f"{name}_ppm_per_K") for drift in (current, left))
        signed = name != "box"
        _row(table, name, *(f"{number(v, signed=signed)} ppm/K" for v in values), definition)
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
    table = _table("cause", *_temperatures(result), numbers=(1, 2, 3))
    for cause in result.budget[0].shares:
        _row(table, cause, *(_ppm(row.shares[cause]) for row in result.budget))
    table.add_section()
    _row(table, "all together", *(_ppm(row.total) for row in result.budget))
    return table


def _ppm(slope: float, decimals: int = 1) -> str:
    """Return a slope in ppm to fixed decimals: columns that add up are read down their digits."""
    text = f"{_PPM * slope:+.{decimals}f}"
    return text if any(digit in text for digit in "123456789") else text[1:]


def _sensitivity(result: CheckResult) -> Table | None:
    rows = {
        "supply voltage": result.supply_sensitivity,
        "input current": result.input_sensitivity,
    }
    if all(values is None for values in rows.values()):
        return None
    table = _table("of", *_temperatures(result), numbers=(1, 2, 3))
    for name, values in rows.items():
        if values is not None:
            _row(table, name, *(f"{value:+.3f}" for value in values))
    return table


def design_report(result: DesignResult) -> RenderableType:
    """Return the report of `design`: the ranked designs, the bound, what was needed."""
    study = result.study
    parts: list[RenderableType] = [
        Text(study.title, style="bold"),
        Text(f"{study.circuit.topology}{_in_common(result)}; target {target_words(study)}"),
        _heading(f"Designs, best first, {range_words(study)}"),
        _designs(result),
        Text(
            "Figures against the target, from the full solution with the values shown: deviation "
            "= max |I/I_target - 1|; box = (max - min)/(value at T_ref x (T_max - T_min)) of "
            "I/I_target. '+' joins in series, '||' in parallel."
            + (_PLAIN_MIRROR if any(result.plain_mirrors) else "")
        ),
        _verdict(result.winner, by=" by the best design"),
        _heading("Bound"),
        Text(bound_sentence(result)),
    ]
    if result.needed:
        parts += [
            _heading("The resistor that would be perfect, beside the best design"),
            _needed(result),
            Text(
                f"TC1 and TC2 about T_ref = {format_quantity(study.range.reference, 'K')}, with "
                "the best design's ratios and input."
            ),
        ]
    return Group(*parts)


def bound_sentence(result: DesignResult) -> str:
    """Return what the bound means, in a sentence."""
    bound = _PPM * result.bound.deviation
    best = result.winner.residual_drift.deviation_ppm
    if not result.needed:
        return f"No resistor is open; the best of all choices deviates by {number(best)} ppm."
    beside = f"the best design deviates by {number(best)} ppm"
    if bound > 0 and best / bound < 1000:
        beside += f", {number(max(best / bound, 1.0), 3)} times that"
    if result.bound.proven:
        return (
            f"No mix of this menu, of however many pieces, can keep the current closer to its "
            f"target than {number(bound)} ppm everywhere in the range; {beside}."
        )
    return (
        f"The closest that a search over the whole menu, with however many pieces, came to the "
        f"target is {number(bound)} ppm; {beside}. With this much open at once there is no proof "
        "that nothing comes closer."
    )


_Column = tuple[str, Callable[["Assessment"], str]]


def _choice_columns(study: Study) -> list[_Column]:
    made = study.circuit
    columns: list[_Column] = []
    if "area_ratio" in made.circuit.choices:
        columns.append(("area ratio", lambda a: f"{a.operation.choices.area_ratio:.6g}"))
    if "mirror_ratio" in made.circuit.choices:
        columns.append(("mirror ratio", lambda a: f"{a.operation.choices.mirror_ratio:.6g}"))
    if made.feed == GIVEN:
        columns.append(
            ("input", lambda a: format_quantity(a.operation.choices.input_current or 0.0, "A"))
        )
    return columns


def _in_common(result: DesignResult) -> str:
    """Return what no choice was left in, so that it takes no column."""
    words = [
        f", {heading} {cell(result.winner)}"
        for heading, cell in _choice_columns(result.study)
        if len({cell(found) for found in result.designs}) == 1
    ]
    supply = result.study.circuit.supply
    return "".join(words) + (f", supply {format_quantity(supply, 'V')}" if supply else "")


def _designs(result: DesignResult) -> Table:
    varied = [
        (heading, cell)
        for heading, cell in _choice_columns(result.study)
        if len({cell(found) for found in result.designs}) > 1
    ]
    mirrors = result.plain_mirrors if any(result.plain_mirrors) else ()
    limited = result.winner.limit is not None
    headings = ["", "resistors", *(heading.replace(" ", "\n") for heading, _ in varied)]
    headings += ["deviation\nppm", "box\nppm/K", *(["limit"] if limited else []), "ohm in\nall"]
    if mirrors:
        fed = mirrors[0] is not None and mirrors[0].feed_resistance is not None
        headings.append(f"plain\nmirror\n{'feed' if fed else 'input'}")
    table = _table(*headings, numbers=(0, *range(2, len(headings))))
    for index, found in enumerate(result.designs):
        left = found.residual_drift
        cells = [str(index + 1), _mixes(found), *(cell(found) for _, cell in varied)]
        cells += [number(left.deviation_ppm), number(left.box_ppm_per_K)]
        if found.limit is not None:
            cells.append("met" if found.limit.met else "not met")
        total = sum(mix.total_value for mix in found.operation.mixes.values())
        cells.append(format_quantity(total, "ohm").removesuffix("ohm").replace(" ", ""))
        if mirrors:
            cells.append(_plain_mirror(mirrors[index]))
        _row(table, *cells)
    return table


def _plain_mirror(mirror: PlainMirror | None) -> str:
    if mirror is None:
        return ""
    if mirror.feed_resistance is not None:
        return format_quantity(mirror.feed_resistance, "ohm", 3)
    return format_quantity(mirror.input_current, "A", 3)


def _mixes(found: Assessment) -> str:
    """Return a part a line, so that no value is torn from its unit."""
    digits = found.operation.study.search.digits
    mixes = found.operation.mixes
    lines: list[str] = []
    for slot, mix in mixes.items():
        sign = {"series": "+ ", "parallel": "|| "}[mix.join]
        name = f"{slot}: " if len(mixes) > 1 else ""
        for index, part in enumerate(mix.parts):
            value = format_quantity(part.value, "ohm", digits)
            lines.append(f"{sign if index else name}{part.material.name} {value}")
    return "\n".join(lines)


def _needed(result: DesignResult) -> Table:
    from tcopt.mix.point import mix_point  # noqa: PLC0415  tables of `check` do not need it

    reference = result.study.range.reference
    table = _table("resistor", "", "at T_ref", "TC1 ppm/K", "TC2 ppm/K^2", numbers=(2, 3, 4))
    for slot, point in result.needed.items():
        mix = result.winner.operation.mixes[slot]
        has = mix_point(mix, reference)
        for name, R, tc1, tc2 in (
            ("needed", point.resistance, point.tc1, point.tc2),
            ("chosen", float(mix.resistance(reference)), has.tc1, has.tc2),
        ):
            _row(
                table,
                slot if name == "needed" else "",
                name,
                format_quantity(R, "ohm"),
                _ppm(tc1),
                _ppm(tc2, 3),
            )
    return table


def menu_report(found: Menu) -> RenderableType:
    """Return a process's materials: what each does to a PTAT voltage, and its data."""
    process = found.process
    reference = format_quantity(process.reference, "K")
    low, high = format_quantity(found.low, "K"), format_quantity(found.high, "K")
    entries = sorted(found.entries, key=lambda entry: entry.tc1)
    roles = _table(
        "material", "ohm per\nsquare", "TC1\nppm/K", "TC2\nppm/K^2", "role for a PTAT\nvoltage",
        "1/T - TC1\nppm/K", "box of\nV_T/R\nppm/K", numbers=(1, 2, 3, 5, 6),
    )  # fmt: skip
    for entry in entries:
        sheet = entry.material.sheet_resistance
        _row(
            roles,
            entry.material.name,
            "-" if sheet is None else format_quantity(sheet, "ohm").removesuffix("ohm"),
            _ppm(entry.tc1, 0),
            _ppm(entry.tc2, 2),
            f"{entry.role} 1/T",
            _ppm(entry.left, 0),
            "-" if entry.drift is None else number(entry.drift.box_ppm_per_K),
        )
    data = _table("material", "spread", "valid", "reference", "source", numbers=(1,))
    for entry in entries:
        material = entry.material
        valid = [format_quantity(t, "K") for t in material.valid or ()]
        _row(
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
            f"Role: TC1 against 1/T = {_PPM / process.reference:.0f} ppm/K at T_ref; within "
            f"{100 * TOLERANCE:g} % of it it matches. 1/T - TC1 is the slope at T_ref that a "
            "current V_T/R is left with: positive, it rises with temperature. Box: (max - "
            f"min)/(I(T_ref) (T_max - T_min)) of V_T/R over {low} to {high}."
        ),
        _heading("Data (spread: one standard deviation of the sheet resistance, lot to lot)"),
        data,
    )
