"""What `design` answers for several outputs of one reference branch."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING

from tcopt.assess import Assessment
from tcopt.check_cascade import CascadeVerdict
from tcopt.design import DesignResult

if TYPE_CHECKING:
    from tcopt.study import CascadeStudy

__all__ = ["CascadeCandidate", "CascadeDesign"]


@dataclass(frozen=True)
class CascadeCandidate:
    """One complete design of all outputs, rounded, everything solved together.

    Attributes
    ----------
    input_current : that they share [A]; None where it comes from a supply
    outputs : name -> figures
    limit : verdict on all limits, or None where no output has one
    """

    input_current: float | None
    outputs: Mapping[str, Assessment]
    limit: CascadeVerdict | None


@dataclass(frozen=True)
class CascadeDesign:
    """What `design` found for several outputs.

    Attributes
    ----------
    study : the question
    designs : best first, one for each input current; the first is the best of all
    outputs : name -> the designs of this output, the others being as in the best design;
        so is its bound
    warnings : traps of the whole best design
    examined, skipped : combinations solved; and ruled out by the bound without solving,
        together with designs that, rounded or beside the other outputs, have no solution
    """

    study: CascadeStudy
    designs: tuple[CascadeCandidate, ...]
    outputs: Mapping[str, DesignResult]
    warnings: tuple[str, ...]
    examined: int
    skipped: int

    @property
    def winner(self) -> CascadeCandidate:
        """The best design of all outputs."""
        return self.designs[0]
