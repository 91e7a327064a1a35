"""The table [layout]: what resistors are drawn or ordered as."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import model_validator

from tcopt.study.deviations import Area
from tcopt.study.fields import quantity, refusal, whole, words
from tcopt.study.gate import Model
from tcopt.study.part import MOST_SEGMENTS
from tcopt.study.process import Length
from tcopt.units import format_quantity

__all__ = ["SERIES", "Layout"]

SERIES: dict[str, float] = {
    "E3": 0.4, "E6": 0.2, "E12": 0.1, "E24": 0.05, "E48": 0.02, "E96": 0.01, "E192": 0.005,
}  # fmt: skip
"""The series of IEC 60063 and the tolerance that each is made for [1]."""

_MISMATCH = quantity("1", "one standard deviation such as '0.2 %'", above=0, below=1)
_TOLERANCE = quantity("1", "a tolerance to either side such as '1 %'", above=0, below=0.5)
_SQUARES = quantity("1", "a number of squares such as 5", above=0, below=1e6)
_Gap = Annotated[float, quantity("m", at_least=0, below=1)]


class Layout(Model):
    """Sizes for a mask, or standard values for a board.

    Attributes
    ----------
    standard : series of IEC 60063 from which values are ordered; with `tolerance` alone
    tolerance : to either side; that of the series if it is not given [1]
    grid : every width and length is a whole multiple of it [m]
    unit : parts of one 'material' share one segment, so that they track; or each 'part' has
        its own
    segment : length of a segment, if it is settled [m]
    longest : longest segment [m]
    least_squares : squares of a segment that it must not fall below, since ends count there
    most_segments : of one part
    spacing : between neighbouring segments, counted into the area [m]
    mismatch : of the output current at the reference, from the resistors' matching: one
        standard deviation that must not be exceeded; it sets the area [1]
    area_limit : of all resistors together [m^2]
    front : points of the front of drift against area; 0: none
    """

    standard: (
        Annotated[Literal["E3", "E6", "E12", "E24", "E48", "E96", "E192"], words(*SERIES)] | None
    ) = None
    tolerance: Annotated[float, _TOLERANCE] | None = None
    grid: Length = 1e-8
    unit: Annotated[Literal["material", "part"], words("material", "part")] = "material"
    segment: Length | None = None
    longest: Length = 1e-4
    least_squares: Annotated[float, _SQUARES] = 5.0
    most_segments: Annotated[int, whole(1, MOST_SEGMENTS)] = 200
    spacing: _Gap = 0.0
    mismatch: Annotated[float, _MISMATCH] | None = None
    area_limit: Area | None = None
    front: Annotated[int, whole(0, 20)] = 6

    @property
    def made_tolerance(self) -> float | None:
        """Tolerance of a standard part to either side [1]; None where sizes are drawn."""
        if self.standard is None:
            return None
        return SERIES[self.standard] if self.tolerance is None else self.tolerance

    @model_validator(mode="after")
    def _one_or_the_other(self) -> Layout:
        drawn = self.model_fields_set - {"standard", "tolerance"}
        given = [key for key in type(self).model_fields if key in drawn]
        if self.standard is not None and given:
            raise refusal(
                f"{given[0]} beside a standard series",
                "standard with tolerance for a board, or the keys of a drawn layout",
                given[0],
            )
        if self.standard is None and self.tolerance is not None:
            raise refusal("a tolerance without a standard series", "it with standard", "tolerance")
        longest = self.longest if self.segment is None else self.segment
        if longest < self.grid:
            key = "longest" if self.segment is None else "segment"
            least = f"at least the grid, {format_quantity(self.grid, 'm')}"
            raise refusal(format_quantity(longest, "m"), least, key)
        return self
