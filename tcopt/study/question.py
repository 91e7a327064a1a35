"""The parts of one question: range, resistors, search."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal

from pydantic import Discriminator, Field, Tag, ValidationInfo, field_validator, model_validator

from tcopt.study.choices import MaterialName
from tcopt.study.fields import (
    Temperature,
    quantity,
    refusal,
    whole,
    without_repeats,
    words,
)
from tcopt.study.gate import Model
from tcopt.study.part import Part
from tcopt.study.process import Material
from tcopt.units import format_quantity, parse, shown

__all__ = [
    "GRADES", "SLOT_TAGS", "FixedSlot", "OpenSlot", "Part", "ResistorSlot", "Search",
    "TemperatureRange",
]  # fmt: skip

_AUTOMOTIVE = {0: 150.0, 1: 125.0, 2: 105.0, 3: 85.0}
GRADES: dict[str, tuple[float, float]] = {
    f"automotive {grade}": (parse("-40 degC", "K"), parse(f"{high} degC", "K"))
    for grade, high in _AUTOMOTIVE.items()
} | {
    "commercial": (parse("0 degC", "K"), parse("70 degC", "K")),
    "industrial": (parse("-40 degC", "K"), parse("85 degC", "K")),
    "military": (parse("-55 degC", "K"), parse("125 degC", "K")),
}
"""Ambient ranges [K]: the grades of AEC-Q100, and those of common practice."""

_EITHER = f"either from and to, or grade = {', '.join(repr(grade) for grade in GRADES)}"
_MOST_PARTS = 16
_MOST_PIECES = 4
_ThermalResistance = Annotated[
    float, quantity("K/W", "a thermal resistance such as '150 K/W'", above=0, below=1e9)
]


class TemperatureRange(Model):
    """The range over which the current is owed, and the temperature at which it is stated [K].

    ``thermal_resistance``: from the junctions, all at one temperature, to the place whose
    range this is [K/W]; None: they are as warm as that place.
    """

    grade: Annotated[str, words(*GRADES)] | None = None
    low: Temperature = Field(default=None, validation_alias="from", validate_default=True)
    high: Temperature = Field(default=None, validation_alias="to", validate_default=True)
    reference: Temperature = Field(default=parse("27 degC", "K"), validate_default=True)
    thermal_resistance: _ThermalResistance | None = None

    @model_validator(mode="before")
    @classmethod
    def _graded_or_given(cls, data: Any, info: ValidationInfo) -> Any:
        if isinstance(data, Mapping) and data.get("grade") is None:
            for key in ("low", "high") if info.context is None else ("from", "to"):
                if key not in data:
                    raise refusal("nothing", _EITHER, key)
        return data

    @field_validator("low", "high", mode="before")
    @classmethod
    def _of_the_grade(cls, value: Any, info: ValidationInfo) -> Any:
        if "grade" not in info.data:
            return 300.0  # The grade was refused already; that is the message to give.
        grade = info.data["grade"]
        if grade is None:
            return value
        if value is not None:
            raise refusal(f"{shown(value)} beside grade {grade!r}", _EITHER)
        return GRADES[grade][0 if info.field_name == "low" else 1]

    @model_validator(mode="after")
    def _rising(self) -> TemperatureRange:
        if not self.low < self.high:
            raise refusal(
                f"{format_quantity(self.high, 'K')}, not above {format_quantity(self.low, 'K')}",
                "a range that rises",
                "to",
            )
        if not self.low <= self.reference <= self.high:
            inside = f"{format_quantity(self.low, 'K')} to {format_quantity(self.high, 'K')}"
            raise refusal(
                format_quantity(self.reference, "K"), f"inside the range, {inside}", "reference"
            )
        return self


Join = Annotated[Literal["series", "parallel"], words("series", "parallel")]


class FixedSlot(Model):
    """A resistor that is settled: its parts, all in series or all in parallel."""

    parts: tuple[Part, ...]
    join: Join = "series"

    @field_validator("parts")
    @classmethod
    def _some(cls, value: tuple[Part, ...]) -> tuple[Part, ...]:
        if not 0 < len(value) <= _MOST_PARTS:
            found = f"{len(value)} parts" if value else "an empty list"
            raise refusal(found, f"one to {_MOST_PARTS} parts")
        return value


class OpenSlot(Model):
    """A resistor to design: materials to choose among and the most pieces to use.

    No materials means, inside a study, all of its process. Four pieces at the
    most: three already reach every series mix of second-order materials.
    """

    materials: tuple[MaterialName, ...] = ()
    pieces: Annotated[int, whole(1, _MOST_PIECES)] = 1
    join: Annotated[
        Literal["series", "parallel", "either"], words("series", "parallel", "either")
    ] = "series"

    @field_validator("materials")
    @classmethod
    def _each_once(cls, value: tuple[Material, ...]) -> tuple[Material, ...]:
        return without_repeats(value, lambda material: material.name)


def _which_slot(value: Any) -> str:
    fixed = isinstance(value, FixedSlot) or (isinstance(value, Mapping) and "parts" in value)
    return "<parts>" if fixed else "<open>"


SLOT_TAGS = frozenset({"<parts>", "<open>"})
ResistorSlot = Annotated[
    Annotated[FixedSlot, Tag("<parts>")] | Annotated[OpenSlot, Tag("<open>")],
    Discriminator(_which_slot),
]


class Search(Model):
    """How far to search and how much to show.

    ``digits``: significant digits to which resistor values are rounded.
    ``show``: designs in the table, best first.
    ``purpose`` (the key ``for``): 'paper', the typical part alone; or 'silicon', all parts
    within ``sigma`` standard deviations of what varies from lot to lot, each trimmed.
    """

    digits: Annotated[int, whole(2, 8)] = 5
    show: Annotated[int, whole(1, 1000)] = 10
    purpose: Annotated[Literal["paper", "silicon"], words("paper", "silicon")] = Field(
        default="paper", validation_alias="for"
    )
    sigma: Annotated[float, quantity("1", "a pure number such as 3", above=0, below=10)] = 3.0
