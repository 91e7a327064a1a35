"""A design as it would be drawn, or ordered: joint choices, each checked by the full solution."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np

from tcopt.arrays import Array
from tcopt.assess import Assessment, assess
from tcopt.errors import NoSolutionError
from tcopt.mix.influence import Influence, Place, mismatch_of
from tcopt.mix.rounding import balanced_values, best_jointly
from tcopt.mix.segments import Wanted, segment_options
from tcopt.mix.standard import standard_options, within_tolerance
from tcopt.operation import Mix, Operation
from tcopt.study import Layout, Part

_ROUNDS = 4
_GAIN = 0.97

__all__ = ["SizeFigures", "area_of", "drawn", "ordered", "size_figures"]


@dataclass(frozen=True, slots=True)
class SizeFigures:
    """What a design takes, and what its making leaves open.

    Attributes
    ----------
    area : of all resistors, gaps included [m^2]; None for standard values
    segments : drawn, of all resistors; None for standard values
    mismatch : one standard deviation of the output at the reference from mismatch of resistors
        [1]; None where no part has both a matching coefficient and an area
    tolerance : of each standard part to either side [1]; None for drawn sizes
    tolerance_deviation_ppm, tolerance_box_ppm_per_K : the worst of all corners of the
        tolerance, of the residual; None for drawn sizes, or for more parts than can be tried
    """

    area: float | None
    segments: int | None
    mismatch: float | None
    tolerance: float | None
    tolerance_deviation_ppm: float | None
    tolerance_box_ppm_per_K: float | None


def drawn(
    found: Assessment, slots: frozenset[str], layout: Layout, *, keep_shape: bool
) -> Assessment:
    """Return a design with its slots drawn as equal segments.

    Where ends have coefficients of their own they change what the values should be: drawn
    once, the values are balanced anew, and drawn again, as long as that helps.

    Parameters
    ----------
    found : the design with the values that are wanted
    slots : those whose parts are to be drawn
    layout : the rules
    keep_shape : True to stay near the design as it is, False to come near the target

    Raises
    ------
    InputError
        If settled parts alone exceed the mismatch that is allowed.
    NoSolutionError
        If a part cannot be made of the segments that the layout allows.
    """
    influence = Influence(found, slots)
    goal = influence.off if keep_shape else np.zeros_like(influence.off)
    raw = {place: part.material for place, part in influence.parts.items()}
    values = {place: part.value for place, part in influence.parts.items()}
    best: Assessment | None = None
    least = np.inf
    for _ in range(_ROUNDS):
        wanted = {place: Wanted(raw[place], value) for place, value in values.items()}
        groups = segment_options(influence, wanted, layout)
        made = _best_of(influence, best_jointly(influence, groups, goal), goal)
        influence = Influence(made, slots)
        miss = _miss(influence, goal)
        if miss >= least * _GAIN:
            break
        best, least = made, miss
        values = balanced_values(influence, goal)
    if best is None:
        raise AssertionError("the first drawing counts, whatever it is")
    return best


def ordered(
    found: Assessment, slots: frozenset[str], layout: Layout, *, keep_shape: bool
) -> Assessment:
    """Return a design with standard values in its slots; see `drawn`."""
    influence = Influence(found, slots)
    goal = influence.off if keep_shape else np.zeros_like(influence.off)
    groups = standard_options(influence, layout.standard or "")
    return _best_of(influence, best_jointly(influence, groups, goal), goal)


def _miss(influence: Influence, goal: Array) -> float:
    return float(np.abs(influence.off - goal).max())


def _best_of(
    influence: Influence, choices: Sequence[Mapping[Place, Part]], goal: Array
) -> Assessment:
    """Solve joint choices; return the first of those that are as good as any.

    Raises
    ------
    NoSolutionError
        If none of them gives a current over the whole range.
    """
    T = influence.nodes
    solved: list[tuple[float, Operation]] = []
    failure: NoSolutionError | None = None
    for chosen in choices:
        mixes = {
            slot: Mix(
                tuple(chosen.get((slot, k), part) for k, part in enumerate(mix.parts)), mix.join
            )
            for slot, mix in influence.operation.mixes.items()
        }
        made = replace(influence.operation, mixes=mixes)
        try:
            off = np.log(made.output(T) / influence.found.target.current(T))
        except NoSolutionError as error:
            failure = error
            continue
        solved.append((float(np.abs(off - goal).max()), made))
    if not solved:
        raise failure or NoSolutionError("no joint choice of values; accepted: one at least")
    least = min(miss for miss, _ in solved)
    return assess(next(made for miss, made in solved if miss <= 1.05 * least + 1e-6))


def area_of(operation: Operation, layout: Layout) -> float | None:
    """Return the area of all resistors of a design [m^2]; None where one's is not known."""
    total = 0.0
    for mix in operation.mixes.values():
        for part in mix.parts:
            area = part.area_taken(layout.spacing)
            if area is None:
                return None
            total += area
    return total


def size_figures(found: Assessment, slots: frozenset[str], layout: Layout) -> SizeFigures:
    """Return what a finished design takes."""
    operation = found.operation
    tolerance = layout.made_tolerance
    if tolerance is not None:
        worst = within_tolerance(found, slots, tolerance)
        deviation, box = (None, None) if worst is None else (1e6 * worst[0], 1e6 * worst[1])
        return SizeFigures(None, None, None, tolerance, deviation, box)
    parts = [part for mix in operation.mixes.values() for part in mix.parts]
    return SizeFigures(
        area_of(operation, layout),
        sum(part.series * part.parallel for part in parts if part.length is not None),
        mismatch_of(operation),
        None,
        None,
        None,
    )
