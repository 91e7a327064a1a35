"""The parts of the report of `design` on silicon, sizes, and drift against area."""

from __future__ import annotations

from typing import TYPE_CHECKING

from rich.console import RenderableType
from rich.text import Text

from tcopt.show.tables.parts import PPM, heading, new_table, row
from tcopt.show.words import limit_words, menu_words, mix_words, number
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.design import DesignResult, FrontPoint
    from tcopt.mix.sampled import SiliconResult

__all__ = ["front_section", "silicon_section", "sizes_section", "square_micrometres"]


def square_micrometres(area: float) -> str:
    """Return an area [m^2] in um^2, without the unit.

    >>> square_micrometres(7.8667e-10)
    '786.7'
    """
    return number(area * 1e12)


def silicon_section(result: DesignResult) -> list[RenderableType]:
    """Return what silicon makes of the winner, beside paper's optimum and the best single part."""
    silicon = result.silicon
    if silicon is None:
        return []
    best = silicon.figures[0]
    table = new_table(
        "", "resistors", "box\nppm/K\ntypical", "box\nppm/K\nmedian",
        f"box\nppm/K\n{_share(silicon)}", "spread\nof value", numbers=(2, 3, 4, 5),
    )  # fmt: skip
    from tcopt.mix.sampled import Compared  # noqa: PLC0415  slow to import

    named = [("best for silicon", Compared(result.winner, best)), ("best on paper", silicon.paper)]
    if silicon.single is not None:
        named.append(("best single", silicon.single))
    for name, each in named:
        found, figures = each.found, each.silicon
        mixes = found.operation.mixes
        slots = result.needed or mixes
        words = "\n".join(
            f"{slot + ': ' if len(slots) > 1 else ''}{mix_words(mixes[slot])}" for slot in slots
        )
        row(
            table,
            name,
            words,
            number(found.residual_drift.box_ppm_per_K),
            number(figures.median_box_ppm_per_K),
            number(figures.box_ppm_per_K),
            f"{number(100 * figures.spread, 3)} %",
        )
    return [
        heading("What silicon makes of it"),
        table,
        Text(_explained(silicon)),
        Text(_bounded(silicon, menu_words(result.study))),
        *_verdict(silicon),
    ]


def _share(silicon: SiliconResult) -> str:
    return f"{100 * silicon.quantile:.4g} %"


def _explained(silicon: SiliconResult) -> str:
    figures = silicon.figures[0]
    words = (
        f"Of {figures.parts} parts drawn at random, {_share(silicon)} stay within the figure in "
        "its column; half of them within the median. Spread of value: one standard deviation "
        "of the current at T_ref, untrimmed. "
    )
    if silicon.trimmed:
        words += "Each part is trimmed as the study says"
        if figures.beyond_trim:
            words += (
                f"; {100 * figures.beyond_trim:.3g} % of the best design's lie beyond its reach"
            )
        return f"{words}."
    return (
        f"{words}The study has no trim, so nothing sets the value right: the search went by the "
        "shape of the drift alone."
    )


def _bounded(silicon: SiliconResult, menu: str) -> str:
    bound = f"{number(PPM * silicon.bound.deviation)} ppm"
    trimmed = "trimmed" if silicon.trimmed else "its value set right"
    if silicon.bound.proven:
        return (
            f"No {menu}, of however many pieces, keeps every part within "
            f"{silicon.sigma:g} sigma, {trimmed}, closer to the target than {bound}."
        )
    return (
        f"The closest that the search came with every part within {silicon.sigma:g} sigma, "
        f"{trimmed}, is {bound} from the target; there is no proof that nothing comes closer."
    )


def _verdict(silicon: SiliconResult) -> list[Text]:
    limit = silicon.figures[0].limit
    if limit is None:
        return []
    name = limit.figure.split("_", 1)[0]
    unit = "ppm/K" if name == "box" else "ppm"
    style = "bold green" if limit.met else "bold red"
    words = (
        f"Over silicon the limit is {'met' if limit.met else 'not met'}: {_share(silicon)} of "
        f"the best design's parts are within {number(limit.value)} {unit} ({name}), "
        f"{limit_words(limit.figure, limit.bound)} allowed."
    )
    return [Text(words, style=style)]


def sizes_section(result: DesignResult) -> list[RenderableType]:
    """Return how the winner is drawn, or what its tolerances come to."""
    if not result.sizes:
        return []
    sizes = result.sizes[0]
    if sizes.tolerance is not None:
        words = f"Standard values, each within {100 * sizes.tolerance:g} %."
        if sizes.tolerance_deviation_ppm is not None and sizes.tolerance_box_ppm_per_K is not None:
            words += (
                " With every part at either limit the current is off its target by "
                f"{number(sizes.tolerance_deviation_ppm / 1e4, 3)} % at the most, and drifts by "
                f"{number(sizes.tolerance_box_ppm_per_K)} ppm/K (box)."
            )
        return [heading("The best design as ordered"), Text(words)]
    table = new_table(
        "resistor", "material", "value", "width\num", "length\num", "squares", "segments",
        "area\num^2", numbers=(2, 3, 4, 5, 7),
    )  # fmt: skip
    for slot, mix in result.winner.operation.mixes.items():
        for index, part in enumerate(mix.parts):
            if part.length is None or part.width is None or part.squares is None:
                continue
            count = part.series * part.parallel
            joined = "" if count == 1 else " in series" if part.series > 1 else " side by side"
            row(
                table,
                slot if index == 0 else "",
                part.material.name,
                format_quantity(part.value, "ohm", 5),
                number(1e6 * part.width),
                number(1e6 * part.length),
                number(part.squares),
                f"{count}{joined}",
                square_micrometres(part.area_taken(0.0) or 0.0),
            )
    words = "Width, length and squares of one segment; values with their ends."
    if sizes.area is not None:
        words += (
            f" All resistors with the gaps between segments: {square_micrometres(sizes.area)} um^2."
        )
    if sizes.mismatch is not None:
        words += (
            f" Their mismatch moves the current at T_ref by {number(100 * sizes.mismatch, 3)} % "
            "(one standard deviation)."
        )
    return [heading("The best design as drawn"), table, Text(words)]


def front_section(result: DesignResult) -> list[RenderableType]:
    """Return the front of drift against area."""
    if not result.front:
        return []
    silicon = result.silicon is not None
    headings = ["area\num^2", "deviation\nppm", "box\nppm/K"]
    if silicon and result.silicon is not None:
        headings.append(f"box\nppm/K\n{_share(result.silicon)}")
    table = new_table(*headings, "resistors", numbers=range(len(headings)))
    for point in result.front:
        left = point.found.residual_drift
        cells = [
            square_micrometres(point.area),
            number(left.deviation_ppm),
            number(left.box_ppm_per_K),
        ]
        if point.silicon is not None:
            cells.append(number(point.silicon.box_ppm_per_K))
        row(table, *cells, _mixes(point, result))
    return [
        heading("Drift against area"),
        table,
        Text("None of the designs that were found is better in both than one of these."),
    ]


def _mixes(point: FrontPoint, result: DesignResult) -> str:
    mixes = point.found.operation.mixes
    slots = result.needed or mixes
    return "\n".join(
        f"{slot + ': ' if len(slots) > 1 else ''}{mix_words(mixes[slot])}" for slot in slots
    )
