"""Resistors as they are drawn: equal unit segments, in series or side by side.

``value = (series/parallel) (R_sheet L + 2 R_end)/W``. The width is the
narrowest that process and matching allow: for a standard deviation s of the
output from mismatch, with influences g_i and Pelgrom's coefficients k_i, the
least total area is ``A_i = g_i k_i sum(g_j k_j)/(2 s^2)`` (the least sum of areas
under ``sum (g_i k_i)^2/(2 A_i) = s^2``, by a multiplier of Lagrange).
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass
from itertools import product
from math import ceil, floor, inf, log, sqrt

from tcopt.errors import InputError, NoSolutionError
from tcopt.mix.influence import Influence, Place
from tcopt.mix.rounding import Option
from tcopt.spread.pelgrom import device_deviation
from tcopt.study import Layout, Material, Part, drawn_value
from tcopt.units import format_quantity

__all__ = ["Wanted", "least_areas", "segment_options"]

_KEPT = 150
_WIDTHS = 3
"""Widths tried, in steps of the grid from the least."""


@dataclass(frozen=True, slots=True)
class Wanted:
    """What a part is to be: its material, as the process has it, and its value [ohm]."""

    material: Material
    value: float


def segment_options(
    influence: Influence, wanted: Mapping[Place, Wanted], layout: Layout
) -> list[list[Option]]:
    """Return the options of each group of parts that share a segment.

    Parameters
    ----------
    influence : the design
    wanted : what each of its parts is to be
    layout : the rules

    Raises
    ------
    InputError
        If settled parts alone exceed the mismatch that is allowed.
    NoSolutionError
        If a part cannot be made of the segments that the layout allows.
    """
    areas = least_areas(influence, layout)
    groups: dict[object, dict[Place, Wanted]] = {}
    for place, part in wanted.items():
        key = part.material.name if layout.unit == "material" else place
        groups.setdefault(key, {})[place] = part
    return [_options(parts, areas, layout, influence) for parts in groups.values()]


def least_areas(influence: Influence, layout: Layout) -> dict[Place, float]:
    """Return the area that matching asks of each part [m^2]; none without a limit on mismatch.

    Parts that are settled keep their areas and take their share of the mismatch first.

    Raises
    ------
    InputError
        If the settled parts alone exceed the mismatch that is allowed.
    """
    if layout.mismatch is None:
        return {}
    left = layout.mismatch**2
    for slot, mix in influence.operation.mixes.items():
        for index, part in enumerate(mix.parts):
            area = part.area_taken(0.0)
            if (slot, index) in influence.parts or area is None or part.material.matching is None:
                continue
            own = influence.at_reference[slot, index] * device_deviation(
                part.material.matching, area
            )
            left -= own**2
    if left <= 0:
        raise InputError(
            f"{influence.operation.study.path}: layout.mismatch: found "
            f"{100 * layout.mismatch:.3g} %, which the resistors that are settled exceed already; "
            "accepted: more, or more area for those"
        )
    pulls = {
        place: influence.at_reference[place] * (part.material.matching or 0.0)
        for place, part in influence.parts.items()
    }
    total = sum(pulls.values())
    return {place: pull * total / (2 * left) for place, pull in pulls.items()}


@dataclass(frozen=True)
class _Unit:
    """One segment: width and length in steps of the grid, and what it makes."""

    width: float
    length: float
    value: float


def _options(
    parts: Mapping[Place, Wanted],
    areas: Mapping[Place, float],
    layout: Layout,
    influence: Influence,
) -> list[Option]:
    material = next(iter(parts.values())).material
    found: list[tuple[float, float, _Unit, tuple[tuple[int, int], ...]]] = []
    for unit in _units(material, list(parts.values()), _width(parts, areas, layout), layout):
        counts = [_counts(part.value / unit.value, layout) for part in parts.values()]
        for chosen in product(*counts):
            error = total = 0.0
            for (place, part), (series, parallel) in zip(parts.items(), chosen, strict=True):
                count = series * parallel
                if count * unit.width * unit.length < (1 - 1e-9) * areas.get(place, 0.0):
                    break
                off = abs(log(unit.value * series / parallel / part.value))
                error = max(error, off * influence.at_reference[place])
                total += count * unit.length * (unit.width + layout.spacing)
            else:
                found.append((error, total, unit, chosen))
    if not found:
        raise _cannot(material, parts, layout, influence)
    found.sort(key=lambda item: item[:2])
    return [
        Option(
            {
                place: _made(material, unit, series, parallel)
                for place, (series, parallel) in zip(parts, chosen, strict=True)
            },
            total,
            sum(series * parallel for series, parallel in chosen),
        )
        for _, total, unit, chosen in found[:_KEPT]
    ]


def _made(material: Material, unit: _Unit, series: int, parallel: int) -> Part:
    return Part(
        material=material,
        value=float(f"{unit.value * series / parallel:.9g}"),
        width=unit.width,
        length=unit.length,
        series=series,
        parallel=parallel,
    )


def _width(parts: Mapping[Place, Wanted], areas: Mapping[Place, float], layout: Layout) -> float:
    """Return the least width for process and matching, on the grid [m].

    A part of fewer squares than a segment has is drawn as segments side by side,
    which takes more area at the same width, by the square of their number.
    """
    least = 0.0
    for place, part in parts.items():
        material = part.material
        if material.min_width is None or material.sheet_resistance is None:
            raise ValueError(f"{material.name}: found no width or sheet resistance; accepted: both")
        squares = part.value / material.sheet_resistance
        beside = max(1, ceil(layout.least_squares / squares - 1e-9))
        wanted = sqrt(areas.get(place, 0.0) / squares) / beside
        least = max(least, material.min_width, wanted)
    return least


def _units(
    material: Material, parts: Sequence[Wanted], width: float, layout: Layout
) -> Iterator[_Unit]:
    """Yield segments of which the largest part is a whole number, or one of the segment."""
    first = ceil(width / layout.grid - 1e-9)
    value = max(part.value for part in parts)
    if layout.segment is not None:
        length = _on_grid(round(layout.segment / layout.grid), layout)
        for k in sorted(set(_widths(material, value, first, length, layout))):
            W = _on_grid(k, layout)
            yield _Unit(W, length, drawn_value(material, W, length))
        return
    for k in range(first, first + _WIDTHS):
        W = _on_grid(k, layout)
        for number in sorted(set(_lengths(material, value, W, layout))):
            L = _on_grid(number, layout)
            yield _Unit(W, L, drawn_value(material, W, L))


def _widths(
    material: Material, value: float, first: int, length: float, layout: Layout
) -> Iterator[int]:
    """Yield widths, in steps of the grid, at which whole numbers of a settled segment make a value.

    The least width is among them, whatever it makes.
    """
    yield first
    times_width = drawn_value(material, 1.0, length)
    widest = floor(length / layout.least_squares / layout.grid * (1 + 1e-9))
    counts = range(1, layout.most_segments + 1)
    for exact in (
        *(times_width * n / value for n in counts),
        *(times_width / (n * value) for n in counts),
    ):
        for k in (floor(exact / layout.grid), ceil(exact / layout.grid)):
            if first <= k <= max(first, widest):
                yield k


def _lengths(material: Material, value: float, W: float, layout: Layout) -> Iterator[int]:
    """Yield lengths, in steps of the grid, at which whole numbers of segments make a value."""
    sheet, ends = material.sheet_resistance or inf, 2 * (material.end_resistance or 0.0)
    shortest = max(layout.grid, layout.least_squares * W)
    low, high = ((sheet * L + ends) / W for L in (shortest, layout.longest))
    in_series = range(max(1, ceil(value / high - 1e-9)), floor(value / low) + 1)
    beside = range(2, floor(high / value) + 1)
    wanted = [value / n for n in in_series[: layout.most_segments]]
    wanted += [value * n for n in beside[: layout.most_segments]]
    for unit in wanted:
        exact = (unit * W - ends) / sheet / layout.grid
        for number in (floor(exact), ceil(exact)):
            if shortest <= number * layout.grid * (1 + 1e-9):
                yield number


def _counts(ratio: float, layout: Layout) -> list[tuple[int, int]]:
    """Return whole numbers of segments, in series or side by side, near a ratio of values."""
    found: set[tuple[int, int]] = set()
    if ratio > 0.6:
        found |= {(n, 1) for n in _around(ratio)}
    if ratio < 1.6:
        found |= {(1, n) for n in _around(1 / ratio)}
    return sorted(pair for pair in found if max(pair) <= layout.most_segments)


def _around(exact: float) -> set[int]:
    return {max(1, floor(exact)), max(1, ceil(exact))}


def _on_grid(steps: int, layout: Layout) -> float:
    # a product such as 205 * 1e-8 has a last bit that no file should show
    return float(f"{steps * layout.grid:.12g}")


def _cannot(
    material: Material, parts: Mapping[Place, Wanted], layout: Layout, influence: Influence
) -> NoSolutionError:
    slots = ", ".join(
        f"{format_quantity(part.value, 'ohm')} in {slot}" for (slot, _), part in parts.items()
    )
    return NoSolutionError(
        f"{influence.operation.study.path}: layout: found no segments for {slots} of "
        f"{material.name}, of at most {layout.most_segments} segments up to "
        f"{format_quantity(layout.segment or layout.longest, 'm')} long and of "
        f"{layout.least_squares:g} squares or more; accepted: more or longer segments"
    )
