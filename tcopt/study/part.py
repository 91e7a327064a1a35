"""A resistor of a settled slot: its value, and how it is drawn if that is known."""

from __future__ import annotations

from typing import Annotated

from pydantic import model_validator

from tcopt.study.choices import MaterialName
from tcopt.study.fields import Resistance, refusal, whole
from tcopt.study.gate import Model
from tcopt.study.process import Length, Material
from tcopt.units import format_quantity

__all__ = ["MOST_SEGMENTS", "Part", "drawn_material", "drawn_value"]

MOST_SEGMENTS = 10_000
"""Segments of one part beyond which a count is a slip."""
_AGREES = 1e-3
"""How far a value may be off what its sizes make, relative to it: sizes stand rounded in files."""


class Part(Model):
    """A resistor.

    Attributes
    ----------
    material : what it is made of; where the sizes are given, with the coefficients of body
        and ends together
    value : resistance at that material's reference, ends included [ohm]
    width : as drawn, for the area that matching goes with [m]
    length : of one segment, between its ends [m]; with a width alone
    series, parallel : equal segments, one behind the other and side by side: so many in
        series, of so many in parallel each
    """

    material: MaterialName
    value: Resistance
    width: Length | None = None
    length: Length | None = None
    series: Annotated[int, whole(1, MOST_SEGMENTS)] = 1
    parallel: Annotated[int, whole(1, MOST_SEGMENTS)] = 1

    @model_validator(mode="after")
    def _as_drawn(self) -> Part:
        if self.length is None:
            if self.series * self.parallel > 1:
                raise refusal(
                    "segments without a length", "width and length of a segment", "length"
                )
            return self
        if self.width is None:
            raise refusal("nothing", "the width that belongs to the length", "width")
        if self.material.sheet_resistance is None:
            raise refusal(
                f"a length of {self.material.name}, which has no sheet_resistance",
                "sizes of materials with a sheet resistance",
                "length",
            )
        made = drawn_value(self.material, self.width, self.length, self.series, self.parallel)
        if abs(made / self.value - 1) > _AGREES:
            raise refusal(
                format_quantity(self.value, "ohm", 5),
                f"what the sizes make, {format_quantity(made, 'ohm', 5)}",
                "value",
            )
        # a frozen model's own validator may still complete it
        self.__dict__["material"] = drawn_material(self.material, self.length)
        return self

    @property
    def squares(self) -> float | None:
        """Length over width of one segment, or of all where only the value is known [1]."""
        if self.length is not None and self.width is not None:
            return self.length / self.width
        sheet = self.material.sheet_resistance
        return None if sheet is None else self.value / sheet

    @property
    def area(self) -> float | None:
        """Drawn area [m^2]: squares times the width squared; None without the data for it."""
        if self.width is None or self.squares is None:
            return None
        return self.squares * self.width**2 * self.series * self.parallel

    def area_taken(self, spacing: float) -> float | None:
        """Return the area with the gaps of this width [m] beside its segments [m^2].

        As drawn; at the narrowest where it is not; None where the data for that are missing.
        """
        width = self.width if self.width is not None else self.material.min_width
        if width is None or self.squares is None:
            return None
        return self.squares * width * (width + spacing) * self.series * self.parallel


def drawn_value(
    material: Material, width: float, length: float, series: int = 1, parallel: int = 1
) -> float:
    """Return the resistance of equal segments at the material's reference [ohm].

    ``R = (series/parallel) (R_sheet L + 2 R_end)/W``, R_end the resistance of one end
    times its width.

    Parameters
    ----------
    material : with a sheet resistance
    width, length : of one segment [m]
    series, parallel : segments
    """
    if material.sheet_resistance is None:
        raise ValueError(f"{material.name}: found no sheet resistance; accepted: one")
    body = material.sheet_resistance * length
    return series / parallel * (body + 2 * (material.end_resistance or 0.0)) / width


def drawn_material(material: Material, length: float) -> Material:
    """Return a material with the coefficients of body and ends together.

    Both are parabolas about one reference, so their sum is, each weighing by its
    share: ``TC1 = (R_sheet L TC1_body + 2 R_end TC1_end)/(R_sheet L + 2 R_end)``, and
    TC2 alike. Returned as it is where the ends have no coefficients of their own.
    """
    ends = 2 * (material.end_resistance or 0.0)
    if material.sheet_resistance is None or ends == 0:
        return material
    share = ends / (material.sheet_resistance * length + ends)
    own = (material.end_tc1, material.end_tc2)
    tc1, tc2 = (
        body if end is None else (1 - share) * body + share * end
        for body, end in zip((material.tc1, material.tc2), own, strict=True)
    )
    law = {"tc1": tc1, "tc2": tc2, "end_tc1": None, "end_tc2": None}
    return material.model_copy(update=law)
