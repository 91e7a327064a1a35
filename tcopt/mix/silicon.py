"""The exact match of need and offer in one slot, with silicon's spread in the program.

One copy of the band for every scenario of spread: with the columns ``c_ik(T)``
of the parts in scenario k, and a free scale ``u_k`` where a trim sets it,
``u_k R_low(T, e) <= sum r_i c_ik(T) <= u_k R_high(T, e)``. For a given e that is
linear in r and u together, and the feasible sets are nested in e, so the
program linearised in e can stand still only at the optimum, as without spread
(`tcopt.mix.program`). Conductances take the place of resistances in parallel.

The scenarios are not listed beforehand. All points of spread at sigma standard
deviations from the middle count; the program starts with few, the worst points
for the mix that it finds are added, and again, until the mix has no worse
point than those it was made for: cutting planes for a robust program (Mutapcic
and Boyd 2009, *Optimization Methods and Software* 24). At each stage the
program is a relaxation, so its optimum is a bound.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from tcopt.arrays import Array
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer
from tcopt.mix.program import Fit, best_fit, peaks
from tcopt.mix.room import Room
from tcopt.mix.scenario_program import FULL, Program, Solved
from tcopt.operation import Operation

__all__ = ["Outcome", "SiliconFit", "best_silicon_fit", "silicon_outcome"]

_ROUNDS = 12
_PROGRAMS = 16
_SCALINGS = 6
_CLOSE = 3e-3
_FLOOR = 1e-9


@dataclass(frozen=True)
class SiliconFit:
    """The best mix that was found for silicon.

    Attributes
    ----------
    operation : the typical design with this mix in its slot
    deviation : ``max |I/I_target - 1|`` over the scenarios, trim included [1]
    bound : the program's optimum, which no mix of the same offer falls below [1]
    typical : ``max |I/I_target - 1|`` without spread [1]
    points : the scenarios, shape (points, causes)
    """

    operation: Operation
    deviation: float
    bound: float
    typical: float
    points: Array

    def as_fit(self) -> Fit:
        """Return what the searches with and without spread have in common."""
        return Fit(self.operation, self.deviation, self.bound)


@dataclass(frozen=True)
class Outcome:
    """What a search of one offer came to.

    Attributes
    ----------
    fit : the best that was found, or None
    ruled_out : whether it is proven that no mix comes below the deviation to give up at
    """

    fit: SiliconFit | None
    ruled_out: bool = False


def best_silicon_fit(
    band: Band,
    offer: Offer,
    room: Room,
    points: Array | None = None,
    give_up: float = np.inf,
) -> SiliconFit | None:
    """Return the best mix of an offer for silicon; None if none was found, as `silicon_outcome`."""
    return silicon_outcome(band, offer, room, points, give_up).fit


def silicon_outcome(
    band: Band,
    offer: Offer,
    room: Room,
    points: Array | None = None,
    give_up: float = np.inf,
    *,
    try_once: bool = False,
    whole: bool = False,
) -> Outcome:
    """Return the best mix of an offer for silicon, or that it is ruled out.

    Where the program comes to no end, the mix is refined by steps
    (`tcopt.mix.robust`), and the bound is that of the last stage that did, 0 if there is none.

    Parameters
    ----------
    band : the need of the open slot
    offer : materials and join
    room : spread, trim, sigma and limits
    points : scenarios to begin with, at most sigma from the middle, shape (points, causes)
    give_up : end as soon as the bound exceeds this deviation [1]
    try_once : stop after the first solution, when the question is whether to give up
    whole : the offer is the whole menu, of which few parts need be used, for the bound
    """
    program = Program(band, offer, room, points, whole=whole)
    if np.isfinite(give_up):
        program.e, program.unit = min(give_up, 0.9), max(give_up, 1e-8)
        solved = program.solve()
        for _ in range(_SCALINGS):
            if solved is None or solved.bound <= give_up:
                break
            if solved.bound > give_up * (1 + program.doubt(solved)):
                return Outcome(None, ruled_out=True)
            solved = program.solve() if program.off(solved) is not None else None
        if try_once:
            return Outcome(None)
    best: SiliconFit | None = None
    bound, ended = 0.0, False
    for _ in range(_ROUNDS):
        found = _settled(program)
        if found is None:
            break
        solved, typical, deviation, agrees = found
        operation = program.filled(solved)
        more = program.worst(operation)
        worst = max([deviation, *(each.deviation for each in more if not each.at_most)])
        bound = solved.bound if agrees else bound
        if best is None or worst < best.deviation:
            best = SiliconFit(operation, worst, bound, typical, program.points)
        best = replace(best, bound=min(bound, best.deviation), points=program.points)
        more = [each for each in more if each.deviation > deviation * (1 + 2 * _CLOSE) + _FLOOR]
        ended = agrees
        if not more or try_once:
            break
        ended = False
        for each in more:
            program.take_in(each.points)
        if best.bound > give_up:
            return Outcome(None, ruled_out=True)
    if ended or whole:
        return Outcome(best)
    return Outcome(_by_steps(program, best, bound, give_up))


def _by_steps(
    program: Program, best: SiliconFit | None, bound: float, give_up: float
) -> SiliconFit | None:
    """Return the better of a mix and what refinement by steps makes of it, or of that on paper."""
    from tcopt.mix.robust import robust_fit  # noqa: PLC0415  it knows this module's result

    band, offer, room = program.band, program.offer, program.room
    start = best or best_fit(band, offer)
    if start is None:
        return None
    first = offer.coefficients(start.operation.mixes[band.slot])
    found = robust_fit(
        band.operation, {band.slot: offer}, {band.slot: first}, room,
        points=program.points[1:], give_up=give_up,
    )  # fmt: skip
    if found is None or (best is not None and best.deviation <= found.deviation):
        return best
    made = offer.coefficients(found.operation.mixes[band.slot])
    if room.is_limited and room.area(offer, made) > FULL * room.area_limit:
        return best
    return replace(found, bound=min(bound, found.deviation))


def _settled(program: Program) -> tuple[Solved, float, float, bool] | None:
    """Solve the program for its scenarios until e, scales and the full solution agree.

    Return the solution, the deviations of the typical part and of the worst, and whether they do.
    """
    best: tuple[Solved, float, float] | None = None
    settled = False
    for _ in range(_PROGRAMS):
        solved = program.solve()
        if solved is None and program.e < 0.5 and best is None:
            program.e = program.unit = 0.5
            continue
        if solved is None:
            settled = False
            break
        if program.cut_off(solved.parts):
            program.e, program.unit = min(solved.e, 0.9), max(solved.e, 1e-8)
            continue
        off = program.off(solved)
        if off is None:
            settled = False
            break
        each = np.abs(off).max(axis=1)
        deviation = float(each.max())
        if best is None or deviation < best[2]:
            best = (solved, float(each[0]), deviation)
        settled = abs(solved.e - program.e) <= 0.01 * solved.e + _FLOOR
        program.e, program.unit = min(solved.e, 0.9), max(solved.e, 1e-8)
        program.typical = min(solved.typical, 0.9)
        program.scale = np.clip(solved.scale, 0.2, 5.0)
        settled = settled and deviation <= solved.e * (1 + _CLOSE) + _FLOOR
        if settled:
            break
        program.add_nodes(peaks(program.fine, off[int(each.argmax())]))
    return None if best is None else (*best, settled)
