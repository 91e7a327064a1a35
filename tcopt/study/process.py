"""What the factory, or the parts drawer, offers: materials and transistors."""

from __future__ import annotations

import math
from collections.abc import Mapping
from contextlib import suppress
from pathlib import Path
from typing import Annotated, Any

from pydantic import Field, ValidationInfo, field_validator, model_validator
from scipy.constants import Boltzmann, elementary_charge

from tcopt.study.deviations import Area, CommonParts, deviation
from tcopt.study.fields import (
    Current,
    Curvature,
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
from tcopt.units import parse, shown

__all__ = ["BaseEmitter", "Length", "Material", "Process", "Transistor"]

_COARSEST_MATCHING = 1e-4
_PAIR_MATCHING_WORDS = (
    "a matching coefficient of V_BE such as '0.5 mV um', or of the saturation current such as "
    "'2 % um', or a bare number in m, at least 0 and below 1e-4 m"
)
Length = Annotated[float, quantity("m", above=0, below=1)]
_Matching = Annotated[
    float,
    quantity("m", "a matching coefficient such as '2 % um', or a bare number in m", at_least=0),
]
_SheetSpread = Annotated[float, deviation("1", "5 %", below=0.2)]
_FirstOrderSpread = Annotated[float, deviation("1/K", "100 ppm/K", below=0.01)]
_SecondOrderSpread = Annotated[float, deviation("1/K^2", "0.1 ppm/K^2", below=1e-4)]
_SaturationSpread = Annotated[float, deviation("1", "20 %", below=1)]
_VoltageSpread = Annotated[float, deviation("V", "3 mV", below=0.1)]
_GainSpread = Annotated[float, deviation("1", "20 %", below=1)]
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
    tc1_spread, tc2_spread : one standard deviation of the coefficients [1/K], [1/K^2]
    common : steps of the factory that other entries share, with their shares of the
        variance of sheet resistance, tc1 and tc2
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
    spread: _SheetSpread | None = None
    tc1_spread: _FirstOrderSpread | None = None
    tc2_spread: _SecondOrderSpread | None = None
    common: CommonParts = ()
    matching: _Matching | None = None
    min_width: Length | None = None
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
    saturation_current_spread : one standard deviation of the saturation current's
        logarithm, lot to lot [1]
    base_emitter_spread : instead of it, one standard deviation of V_BE at the reference
        and a given current [V]
    gain_spread : one standard deviation of the logarithm of the current gain [1]
    common : steps of the factory that other entries share, with their shares of the
        variance of saturation current and gain
    matching : of a pair, Pelgrom's coefficient of ``ln I_S``: sigma times the root of the
        emitter area of either [m]; from a file also of V_BE, as '1 mV um'
    emitter_area : of the unit transistor, as drawn [m^2]
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
    saturation_current_spread: _SaturationSpread | None = None
    base_emitter_spread: _VoltageSpread | None = None
    gain_spread: _GainSpread | None = None
    common: CommonParts = ()
    matching: Annotated[float, Field(ge=0)] | None = None
    emitter_area: Area | None = None

    @property
    def log_saturation_spread(self) -> float | None:
        """One standard deviation of ``ln I_S`` [1], from whichever spread is given.

        At a given current ``dV_BE = -V_T d(ln I_S)``, V_T at the reference.
        """
        if self.base_emitter_spread is None:
            return self.saturation_current_spread
        return float(self.base_emitter_spread * elementary_charge / (Boltzmann * self.reference))

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


    @field_validator("matching", mode="before")
    @classmethod
    def _of_current_or_voltage(cls, value: Any, info: ValidationInfo) -> Any:
        if value is None or "reference" not in info.data:
            return None
        found = None
        for unit, per_metre in (
            ("m", 1.0),
            ("V m", elementary_charge / (Boltzmann * info.data["reference"])),
        ):
            with suppress(ValueError):
                found = parse(value, unit) * per_metre
                break
        if found is None or not 0 <= found < _COARSEST_MATCHING:
            raise refusal(shown(value), _PAIR_MATCHING_WORDS)
        return found

    @model_validator(mode="after")
    def _one_spread(self) -> Transistor:
        if self.saturation_current_spread is not None and self.base_emitter_spread is not None:
            raise refusal(
                "both",
                "either saturation_current_spread or base_emitter_spread",
                "base_emitter_spread",
            )
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
