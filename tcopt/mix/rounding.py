"""Values that can be made, found together: near-by choices for each part, the best of all joint.

To round each value by itself leaves errors that add up as they please. Here the
near-by choices of all parts are taken together: to first order the output moves
by ``sum G_i(T) ln(v_i/v_i0)``, G_i the influence of part i, so many joint
choices are judged at once and only the best are solved.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field

import numpy as np
from scipy.optimize import linprog

from tcopt.arrays import Array
from tcopt.mix.influence import Influence, Place
from tcopt.study import Part

__all__ = ["Option", "balanced_values", "best_jointly"]

_BEAM = 400
_SHOWN = 8
_ALIKE = 0.05
"""Deviations this near to each other, relatively, are taken for equal; area then decides."""
_FLOOR = 1e-6
_REACH = 0.5
"""How far a logarithm of a value may move in one step."""


@dataclass(frozen=True)
class Option:
    """One way to make some of the parts.

    Attributes
    ----------
    parts : as they would be drawn or ordered
    area : of them all [m^2]; 0 where there is none
    segments : of them all
    """

    parts: Mapping[Place, Part]
    area: float = 0.0
    segments: int = 0


@dataclass(frozen=True)
class _Joint:
    """Joint choices so far: what they do to ln I, shape (choices, n), and what they are."""

    shift: Array
    chosen: list[tuple[Option, ...]] = field(default_factory=lambda: [()])


def best_jointly(
    influence: Influence, groups: Sequence[Sequence[Option]], goal: Array
) -> list[Mapping[Place, Part]]:
    """Return the best joint choices, one option from each group, best first.

    Parameters
    ----------
    influence : a design near what is wanted
    groups : options of the parts that are made together
    goal : ``ln(I/I_target)`` that is wanted at the nodes, zero for the target itself
    """
    start = influence.off - goal
    joint = _Joint(start[None, :])
    for options in groups:
        shifts = np.stack([_shift(influence, option) for option in options])
        shift = (joint.shift[:, None, :] + shifts[None, :, :]).reshape(-1, shifts.shape[1])
        score = np.abs(shift).max(axis=1)
        best = np.argsort(score, kind="stable")[:_BEAM]
        chosen = [
            (*joint.chosen[k // len(options)], options[k % len(options)]) for k in best.tolist()
        ]
        joint = _Joint(shift[best], chosen)
    score = np.abs(joint.shift).max(axis=1)
    least = float(score.min())
    order = sorted(
        range(len(score)),
        key=lambda k: (
            max(0, round(float(np.log((score[k] + _FLOOR) / (least + _FLOOR))) / _ALIKE)),
            sum(option.area for option in joint.chosen[k]),
            sum(option.segments for option in joint.chosen[k]),
        ),
    )
    return [
        {place: part for option in joint.chosen[k] for place, part in option.parts.items()}
        for k in order[:_SHOWN]
    ]


def _shift(influence: Influence, option: Option) -> Array:
    total = np.zeros_like(influence.off)
    for place, part in option.parts.items():
        total += influence.move(place, part)
    return total


def balanced_values(influence: Influence, goal: Array) -> dict[Place, float]:
    """Return the values that come nearest to a goal, any value being allowed [ohm].

    A linear program in the logarithms of the values about a design: where ends bring
    coefficients of their own, the values that were best without them are so no more.

    Parameters
    ----------
    influence : the design
    goal : ``ln(I/I_target)`` that is wanted at the nodes
    """
    places = list(influence.parts)
    moves = np.stack([influence.by_part[place] for place in places], axis=-1)
    off = influence.off - goal
    ones = np.ones((len(off), 1))
    answer = linprog(
        np.append(np.zeros(len(places)), 1.0),
        A_ub=np.vstack([np.hstack([moves, -ones]), np.hstack([-moves, -ones])]),
        b_ub=np.concatenate([-off, off]),
        bounds=[(-_REACH, _REACH)] * len(places) + [(0, None)],
        method="highs",
    )
    changes = answer.x[:-1] if answer.status == 0 else np.zeros(len(places))
    return {
        place: influence.parts[place].value * float(np.exp(change))
        for place, change in zip(places, changes, strict=True)
    }
