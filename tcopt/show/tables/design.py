"""The report of `design`."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

from rich.console import Group, RenderableType
from rich.table import Table
from rich.text import Text

from tcopt.circuits import GIVEN
from tcopt.mix.point import mix_point
from tcopt.show.tables.made import (
    front_section,
    silicon_section,
    sizes_section,
    square_micrometres,
)
from tcopt.show.tables.parts import PPM, heading, listed, new_table, ppm, row, verdict
from tcopt.show.words import menu_words, mix_words, number, range_words, target_words
from tcopt.traps import warnings_for
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.assess import Assessment
    from tcopt.design import DesignResult, PlainMirror
    from tcopt.study import Study

__all__ = ["bound_sentence", "design_report"]

_SILICON = (
    " Ranked by the box drift that all but a few parts of silicon stay within; the limit is "
    "against that."
)
_PLAIN_MIRROR = (
    " Plain mirror: what one without resistors in its emitters would take for the same output."
)


def design_report(result: DesignResult) -> RenderableType:
    """Return the report of `design`: the ranked designs, the bound, what was needed."""
    study = result.study
    parts: list[RenderableType] = [
        Text(study.title, style="bold"),
        Text(f"{study.circuit.topology}{_in_common(result)}; target {target_words(study)}"),
        *_settled(result),
        heading(f"Designs, best first, {range_words(study)}"),
        _designs(result),
        Text(
            "Figures against the target, from the full solution with the values shown: deviation "
            "= max |I/I_target - 1|; box = (max - min)/(value at T_ref x (T_max - T_min)) of "
            "I/I_target. '+' joins in series, '||' in parallel."
            + (_SILICON if result.silicon else "")
            + (_PLAIN_MIRROR if any(result.plain_mirrors) else "")
        ),
        verdict(result.winner, by=" by the best design"),
        *silicon_section(result),
        *sizes_section(result),
        *front_section(result),
        heading("Bound"),
        Text(bound_sentence(result)),
    ]
    if result.needed:
        parts += [
            heading("The resistor that would be perfect, beside the best design"),
            _needed(result),
            Text(
                f"TC1 and TC2 about T_ref = {format_quantity(study.range.reference, 'K')}, with "
                "the best design's ratios and input."
            ),
        ]
    if warnings := warnings_for(result.winner):
        parts += [heading("Warnings for the best design"), listed(warnings)]
    return Group(*parts)


def bound_sentence(result: DesignResult) -> str:
    """Return what the bound means, in a sentence."""
    bound = PPM * result.bound.deviation
    best = result.winner.residual_drift.deviation_ppm
    if not result.needed:
        return f"No resistor is open; the best of all choices deviates by {number(best)} ppm."
    beside = f"the best design deviates by {number(best)} ppm"
    if bound > 0 and best / bound < 1000:
        beside += f", {number(max(best / bound, 1.0), 3)} times that"
    if result.bound.proven:
        return (
            f"No {menu_words(result.study)}, of however many pieces, can keep the current closer "
            f"to its target than {number(bound)} ppm everywhere in the range; {beside}."
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
    made = result.study.circuit
    if made.supply is not None:
        words.append(f", supply {format_quantity(made.supply, 'V')}")
    if made.effects:
        words.append(f", with {' and '.join(made.effects)}")
    return "".join(words)


def _settled(result: DesignResult) -> list[Text]:
    """Return the resistors that were not designed."""
    mixes = result.winner.operation.mixes
    words = [
        f"{slot}: {mix_words(mix, 5)}" for slot, mix in mixes.items() if slot not in result.needed
    ]
    return [Text(f"Settled: {'; '.join(words)}")] if words else []


def _designs(result: DesignResult) -> Table:
    varied = [
        (heading, cell)
        for heading, cell in _choice_columns(result.study)
        if len({cell(found) for found in result.designs}) > 1
    ]
    mirrors = result.plain_mirrors if any(result.plain_mirrors) else ()
    limited = result.winner.limit is not None
    designed = bool(result.needed)
    headings = [
        "",
        *(["resistors"] if designed else []),
        *(heading.replace(" ", "\n") for heading, _ in varied),
    ]
    silicon = result.silicon
    drawn = bool(result.sizes) and all(sizes.area is not None for sizes in result.sizes)
    headings += ["deviation\nppm", "box\nppm/K"]
    headings += [f"box\nppm/K\n{100 * silicon.quantile:.4g} %"] if silicon else []
    headings += [*(["limit"] if limited else []), "ohm in\nall", *(["area\num^2"] if drawn else [])]
    if mirrors:
        fed = mirrors[0] is not None and mirrors[0].feed_resistance is not None
        headings.append(f"plain\nmirror\n{'feed' if fed else 'input'}")
    table = new_table(*headings, numbers=(0, *range(1 + designed, len(headings))))
    for index, found in enumerate(result.designs):
        left = found.residual_drift
        cells = [
            str(index + 1),
            *([_mixes(found, result)] if designed else []),
            *(cell(found) for _, cell in varied),
        ]
        cells += [number(left.deviation_ppm), number(left.box_ppm_per_K)]
        limit = found.limit
        if silicon is not None:
            cells.append(number(silicon.figures[index].box_ppm_per_K))
            limit = silicon.figures[index].limit
        if limit is not None:
            cells.append("met" if limit.met else "not met")
        total = sum(mix.total_value for mix in found.operation.mixes.values())
        cells.append(format_quantity(total, "ohm").removesuffix("ohm").replace(" ", ""))
        if drawn:
            cells.append(square_micrometres(result.sizes[index].area or 0.0))
        if mirrors:
            cells.append(_plain_mirror(mirrors[index]))
        row(table, *cells)
    return table


def _plain_mirror(mirror: PlainMirror | None) -> str:
    if mirror is None:
        return ""
    if mirror.feed_resistance is not None:
        return format_quantity(mirror.feed_resistance, "ohm", 3)
    return format_quantity(mirror.input_current, "A", 3)


def _mixes(found: Assessment, result: DesignResult) -> str:
    """Return the designed resistors, a part a line, so that no value is torn from its unit."""
    digits = result.study.search.digits
    mixes = {slot: found.operation.mixes[slot] for slot in result.needed}
    lines: list[str] = []
    for slot, mix in mixes.items():
        sign = {"series": "+ ", "parallel": "|| "}[mix.join]
        if len(mixes) > 1:
            lines.append(f"{slot}:")
        for index, part in enumerate(mix.parts):
            value = format_quantity(part.value, "ohm", digits)
            lines.append(f"{sign if index else ''}{part.material.name} {value}")
    return "\n".join(lines)


def _needed(result: DesignResult) -> Table:
    reference = result.study.range.reference
    table = new_table("resistor", "", "at T_ref", "TC1 ppm/K", "TC2 ppm/K^2", numbers=(2, 3, 4))
    for slot, point in result.needed.items():
        mix = result.winner.operation.mixes[slot]
        has = mix_point(mix, reference)
        for name, R, tc1, tc2 in (
            ("needed", point.resistance, point.tc1, point.tc2),
            ("chosen", float(mix.resistance(reference)), has.tc1, has.tc2),
        ):
            row(
                table,
                slot if name == "needed" else "",
                name,
                format_quantity(R, "ohm"),
                ppm(tc1),
                ppm(tc2, 3),
            )
    return table
