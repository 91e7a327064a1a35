"""What `design` answers: ranked designs, the bound beside them, the point that was needed."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from tcopt.assess import Assessment, Verdict

if TYPE_CHECKING:
    from tcopt.mix.made import SizeFigures
    from tcopt.mix.sampled import SiliconFigures, SiliconResult
    from tcopt.study import Study

__all__ = ["Bound", "DesignResult", "FrontPoint", "NeededPoint", "PlainMirror"]


@dataclass(frozen=True)
class PlainMirror:
    """What a mirror without resistors in its emitters would take for the same output.

    Attributes
    ----------
    input_current : the input it needs, ``I_out/N`` [A]
    feed_resistance : the resistor from the supply to its input [ohm]; None without a supply
    """

    input_current: float
    feed_resistance: float | None


@dataclass(frozen=True)
class Bound:
    """The best deviation that any mix of the menu, of any number of pieces, can reach.

    Attributes
    ----------
    deviation : smallest ``max |I/I_target - 1|`` [1]
    proven : True if it is the optimum of the linear program; False if it is the best
        found by a search over two slots at once, which has no proof
    """

    deviation: float
    proven: bool


@dataclass(frozen=True)
class NeededPoint:
    """What the perfect resistor in a slot would have, about the study's reference.

    Attributes
    ----------
    resistance : at the reference [ohm]
    tc1, tc2 : [1/K], [1/K^2]
    """

    resistance: float
    tc1: float
    tc2: float


@dataclass(frozen=True)
class FrontPoint:
    """A design that none of those found beats in both area and drift.

    Attributes
    ----------
    area : of all resistors [m^2]
    found : the design
    silicon : what silicon makes of it, where the search was for silicon
    """

    area: float
    found: Assessment
    silicon: SiliconFigures | None


@dataclass(frozen=True)
class DesignResult:
    """What `design` found.

    Attributes
    ----------
    study : the question
    designs : best first; each from the full solution of its rounded values
    plain_mirrors : beside each design; None where the circuit is no mirror
    bound : no mix of the menu does better
    needed : slot -> the perfect resistor, with the winner's choices
    examined, skipped : combinations solved, and ruled out by the bound without solving
    sizes : beside each design, where the study has a layout
    silicon : what silicon makes of the designs, where the search was for it
    front : drift against area, from the smallest up, where the layout asks for it
    """

    study: Study
    designs: tuple[Assessment, ...]
    plain_mirrors: tuple[PlainMirror | None, ...]
    bound: Bound
    needed: Mapping[str, NeededPoint]
    examined: int
    skipped: int
    sizes: tuple[SizeFigures, ...] = ()
    silicon: SiliconResult | None = None
    front: tuple[FrontPoint, ...] = ()

    @property
    def winner(self) -> Assessment:
        """The best design."""
        return self.designs[0]

    @property
    def verdict(self) -> Verdict | None:
        """The winner against the limit: over the parts of silicon where the search was for it."""
        if self.silicon is not None:
            return self.silicon.figures[0].limit
        return self.winner.limit
