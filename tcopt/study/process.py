"""What the factory, or the parts drawer, offers: materials and transistors."""

from __future__ import annotations

from collections.abc import Mapping
from pathlib import Path
from typing import Annotated, Any

from pydantic import Field, ValidationInfo, field_validator, model_validator

from tcopt.study.deviations import CommonParts, deviation
from tcopt.study.fields import (
    Curvature,
    Name,
    Resistance,
    Slope,
    Temperature,
    Text,
    Title,
    quantity,
    refusal,
)
from tcopt.study.gate import INTERNAL, Model, quoted
from tcopt.study.transistors import AnyTransistor
from tcopt.units import shown

__all__ = ["Length", "Material", "Process"]

Length = Annotated[float, quantity("m", above=0, below=1)]
_EndResistance = Annotated[
    float,
    quantity(
        "ohm m",
        "the resistance of one end times its width such as '200 ohm um', or a bare number in ohm m",
        at_least=0,
        below=1,
    ),
]
_Matching = Annotated[
    float,
    quantity("m", "a matching coefficient such as '2 % um', or a bare number in m", at_least=0),
]
_SheetSpread = Annotated[float, deviation("1", "5 %", below=0.2)]
_FirstOrderSpread = Annotated[float, deviation("1/K", "100 ppm/K", below=0.01)]
_SecondOrderSpread = Annotated[float, deviation("1/K^2", "0.1 ppm/K^2", below=1e-4)]


class Material(Model):
    """A resistor material.

    ``R(T) = R_0 (1 + tc1 (T - reference) + tc2 (T - reference)^2)``.

    Attributes
    ----------
    name : as the process calls it
    reference : temperature to which the coefficients belong [K]
    tc1, tc2 : temperature coefficients [1/K], [1/K^2]
    sheet_resistance : per square, at the reference [ohm]
    spread : one standard deviation of the sheet resistance, lot to lot [1]
    tc1_spread, tc2_spread : one standard deviation of the coefficients [1/K], [1/K^2]
    common : steps of the factory that other entries share, with their shares of the
        variance of sheet resistance, tc1 and tc2
    matching : Pelgrom's coefficient: sigma(dR/R) times the root of the area [m]
    min_width : narrowest resistor drawn [m]
    end_resistance : of one end, contacts and current crowding, times its width [ohm m]
    end_tc1, end_tc2 : coefficients of the ends; those of the body if not given
    valid : range in which the coefficients were fitted [K]
    source : where the figures come from
    """

    name: Name = Field(validation_alias=f"{INTERNAL}name")
    reference: Temperature
    tc1: Slope
    tc2: Curvature = 0.0
    sheet_resistance: Resistance | None = None
    spread: _SheetSpread | None = None
    tc1_spread: _FirstOrderSpread | None = None
    tc2_spread: _SecondOrderSpread | None = None
    common: CommonParts = ()
    matching: _Matching | None = None
    min_width: Length | None = None
    end_resistance: _EndResistance | None = None
    end_tc1: Slope | None = None
    end_tc2: Curvature | None = None
    valid: tuple[Temperature, Temperature] | None = None
    source: Text = ""

    @field_validator("valid", mode="before")
    @classmethod
    def _two(cls, value: Any) -> Any:
        if value is not None and (not isinstance(value, (list, tuple)) or len(value) != 2):
            raise refusal(shown(value), "two temperatures, such as ['-55 degC', '175 degC']")
        return value

    @field_validator("valid")
    @classmethod
    def _rising(cls, value: tuple[float, float] | None) -> tuple[float, float] | None:
        if value is not None and not value[0] < value[1]:
            raise refusal("a range that does not rise", "the lower temperature first")
        return value

    @model_validator(mode="after")
    def _ends_have_a_resistance(self) -> Material:
        for key in ("end_tc1", "end_tc2"):
            if getattr(self, key) is not None and self.end_resistance is None:
                raise refusal(f"{key} without end_resistance", "both, or neither", key)
        return self


def _named(value: Any, info: ValidationInfo, example: str) -> Any:
    """Give each entry of a file its name and, where it has none, the process's reference."""
    if info.context is None:
        if isinstance(value, Mapping):
            for key, entry in value.items():
                if getattr(entry, "name", key) != key:
                    raise refusal(
                        f"{entry.name!r} under another name", "its own name", quoted(str(key))
                    )
        return value
    if not isinstance(value, Mapping):
        raise refusal(shown(value), f"tables such as {example}")
    default = {"reference": info.data["reference"]} if "reference" in info.data else {}
    return {
        key: {**default, **entry, f"{INTERNAL}name": key} if isinstance(entry, Mapping) else entry
        for key, entry in value.items()
    }


class Process(Model):
    """A menu of materials and transistors, by name.

    ``reference`` [K] is that of every coefficient whose entry has none of its
    own. ``path`` is the file it was read from; it does not count in comparisons.
    """

    title: Title
    reference: Temperature
    materials: dict[str, Material] = Field(
        description="at least one table such as [materials.p_poly]"
    )
    transistors: dict[str, AnyTransistor] = Field(default_factory=dict)
    path: Path | None = Field(default=None, validation_alias=f"{INTERNAL}path")

    @field_validator("materials", mode="before")
    @classmethod
    def _materials_named(cls, value: Any, info: ValidationInfo) -> Any:
        return _named(value, info, "[materials.p_poly]")

    @field_validator("transistors", mode="before")
    @classmethod
    def _transistors_named(cls, value: Any, info: ValidationInfo) -> Any:
        return _named(value, info, "[transistors.npn]")

    @field_validator("materials")
    @classmethod
    def _some(cls, value: dict[str, Material]) -> dict[str, Material]:
        if not value:
            raise refusal("no material", "at least one table such as [materials.p_poly]")
        return value

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Process) and _without_path(self) == _without_path(other)

    __hash__ = None  # type: ignore[assignment]


def _without_path(process: Process) -> dict[str, Any]:
    return {name: value for name, value in process if name != "path"}
