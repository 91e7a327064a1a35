"""What the factory, or the parts drawer, offers: materials and transistors."""

from __future__ import annotations

import math
from collections.abc import Mapping
from pathlib import Path
from typing import Annotated, Any

from pydantic import Field, ValidationInfo, field_validator
from scipy.constants import Boltzmann, elementary_charge

from tcopt.study.fields import (
    Current,
    Curvature,
    Fraction,
    Name,
    Resistance,
    SaturationCurrent,
    Slope,
    Temperature,
    Text,
    Title,
    Voltage,
    quantity,
    refusal,
)
from tcopt.study.gate import INTERNAL, Model, quoted
from tcopt.units import shown

__all__ = ["BaseEmitter", "Material", "Process", "Transistor"]

_Length = Annotated[float, quantity("m", above=0)]
_Matching = Annotated[
    float,
    quantity("m", "a matching coefficient such as '2 % um', or a bare number in m", at_least=0),
]
_Positive = Annotated[float, quantity("1", "a pure number", above=0)]
_Exponent = Annotated[float, quantity("1", "a pure number", at_least=-10, below=10)]


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
    matching : Pelgrom's coefficient: sigma(dR/R) times the root of the area [m]
    min_width : narrowest resistor drawn [m]
    valid : range in which the coefficients were fitted [K]
    source : where the figures come from
    """

    name: Name = Field(validation_alias=f"{INTERNAL}name")
    reference: Temperature
    tc1: Slope
    tc2: Curvature = 0.0
    sheet_resistance: Resistance | None = None
    spread: Fraction | None = None
    matching: _Matching | None = None
    min_width: _Length | None = None
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


class BaseEmitter(Model):
    """One measured point of a junction of unit emitter area, at the transistor's reference."""

    voltage: Voltage
    current: Current


class Transistor(Model):
    """A bipolar transistor of unit emitter area.

    Attributes
    ----------
    name : as the process calls it
    reference : temperature of saturation current and current gain [K]
    base_emitter : the measured point from which the saturation current was made, if it was
    saturation_current : at the reference [A]
    bandgap_voltage : extrapolated to 0 K [V]
    temperature_exponent : of the saturation current [1]
    current_gain, current_gain_exponent : at the reference, and its power of temperature [1]
    early_voltage : [V]
    """

    name: Name = Field(validation_alias=f"{INTERNAL}name")
    reference: Temperature
    base_emitter: BaseEmitter | None = None
    saturation_current: SaturationCurrent = Field(default=None, validate_default=True)
    bandgap_voltage: Voltage
    temperature_exponent: _Exponent
    current_gain: _Positive | None = None
    current_gain_exponent: _Exponent = 0.0
    early_voltage: Voltage | None = None

    @field_validator("saturation_current", mode="before")
    @classmethod
    def _given_or_computed(cls, value: Any, info: ValidationInfo) -> Any:
        either = "either saturation_current or base_emitter = { voltage = , current = }"
        if not {"base_emitter", "reference"} <= info.data.keys():
            return 1.0  # One of them was refused already; that is the message to give.
        point: BaseEmitter | None = info.data["base_emitter"]
        if value is not None and point is not None:
            raise refusal("both", either)
        if point is None:
            if value is None:
                raise refusal("nothing", either)
            return value
        thermal_voltage = Boltzmann * info.data["reference"] / elementary_charge
        return point.current * math.exp(-point.voltage / thermal_voltage)


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
    transistors: dict[str, Transistor] = Field(default_factory=dict)
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
