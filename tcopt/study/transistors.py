"""The transistors of a process: bipolar ones and MOS ones."""

from __future__ import annotations

import math
from contextlib import suppress
from typing import Annotated, Any, Literal

from pydantic import Discriminator, Field, Tag, ValidationInfo, field_validator, model_validator
from scipy.constants import Boltzmann, elementary_charge

from tcopt.study.deviations import Area, CommonParts, deviation
from tcopt.study.fields import (
    Current,
    Name,
    SaturationCurrent,
    Temperature,
    Voltage,
    quantity,
    refusal,
    words,
)
from tcopt.study.gate import INTERNAL, Model
from tcopt.units import parse, shown

__all__ = ["TRANSISTOR_TAGS", "AnyTransistor", "BaseEmitter", "MosTransistor", "Transistor"]

_COARSEST_MATCHING = 1e-4
_PAIR_MATCHING_WORDS = (
    "a matching coefficient of V_BE such as '0.5 mV um', or of the saturation current such as "
    "'2 % um', or a bare number in m, at least 0 and below 1e-4 m"
)
_SaturationSpread = Annotated[float, deviation("1", "20 %", below=1)]
_VoltageSpread = Annotated[float, deviation("V", "3 mV", below=0.1)]
_GainSpread = Annotated[float, deviation("1", "20 %", below=1)]
_Positive = Annotated[float, quantity("1", "a pure number", above=0)]
_Exponent = Annotated[float, quantity("1", "a pure number", at_least=-10, below=10)]
_Leakage = Annotated[float, quantity("A", "a current such as '1 pA'", at_least=0, below=1)]
_VoltPerKelvin = Annotated[
    float, quantity("V/K", "a slope such as '1 mV/K'", at_least=0, below=0.1)
]
_SlopeFactor = Annotated[float, quantity("1", "a pure number such as 1.3", at_least=1, below=5)]
_PerSquareVolt = Annotated[float, quantity("A/V^2", "such as '200 uA/V^2'", above=0, below=10)]
_ThresholdMatching = Annotated[
    float, quantity("V m", "a matching coefficient such as '4 mV um'", at_least=0, below=1e-6)
]


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
    varshni_coefficient, varshni_temperature : curvature of the bandgap voltage,
        ``V_G(T) = bandgap_voltage - coefficient T^2/(T + temperature)`` [V/K], [K];
        both or neither, with which it is a constant. 0.473 mV/K and 636 K are commonly used
        for silicon, after Thurmond (1975; figures and source from memory)
    leakage_current : of the collector junction, at the reference; doubles every 10 K [A]
    saturation_voltage : collector-emitter voltage below which it leaves the forward
        active region; 0.2 V is common practice [V]
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
    kind: Annotated[Literal["bipolar"], words("bipolar")] = "bipolar"
    reference: Temperature
    base_emitter: BaseEmitter | None = None
    saturation_current: SaturationCurrent = Field(default=None, validate_default=True)
    bandgap_voltage: Voltage
    temperature_exponent: _Exponent
    current_gain: _Positive | None = None
    current_gain_exponent: _Exponent = 0.0
    early_voltage: Voltage | None = None
    varshni_coefficient: _VoltPerKelvin | None = None
    varshni_temperature: Temperature | None = None
    leakage_current: _Leakage | None = None
    saturation_voltage: Voltage = 0.2
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

    @model_validator(mode="after")
    def _whole_curvature(self) -> Transistor:
        given = (self.varshni_coefficient is not None, self.varshni_temperature is not None)
        if given[0] != given[1]:
            missing, such = (
                ("varshni_temperature", "a temperature such as '636 K'")
                if given[0]
                else ("varshni_coefficient", "a slope such as '0.473 mV/K'")
            )
            raise refusal(
                "nothing",
                f"{such}, since varshni_coefficient and varshni_temperature go together",
                missing,
            )
        return self


class MosTransistor(Model):
    """A MOS transistor of unit width, as drawn, in saturation.

    Attributes
    ----------
    name : as the process calls it
    reference : temperature of all figures [K]
    threshold_voltage : magnitude, at the reference and no source voltage [V]
    threshold_slope : by how much it falls with temperature [V/K]
    slope_factor : n, the weight of bulk over gate [1]
    specific_current : of the unit device, ``2 n mu C_ox V_T^2 W/L`` [A]; given as it is ...
    transconductance_parameter, width_over_length : ... or by mu C_ox [A/V^2] and W/L [1]
    mobility_exponent : m of mu ~ T^-m; 1.5 is common practice [1]
    early_voltage : [V]
    leakage_current : of the drain junction, at the reference; doubles every 10 K [A]
    threshold_spread : one standard deviation, lot to lot [V]
    specific_current_spread : one standard deviation of its logarithm, lot to lot [1]
    common : steps of the factory that other entries share
    matching : of a pair, Pelgrom's coefficient of the threshold: sigma times the root of
        the gate area of either [V m]
    gate_area : of the unit transistor, as drawn [m^2]
    """

    name: Name = Field(validation_alias=f"{INTERNAL}name")
    kind: Annotated[Literal["mos"], words("mos")] = "mos"
    reference: Temperature
    threshold_voltage: Voltage
    threshold_slope: _VoltPerKelvin
    slope_factor: _SlopeFactor
    transconductance_parameter: _PerSquareVolt | None = None
    width_over_length: _Positive | None = None
    specific_current: Current = Field(default=None, validate_default=True)
    mobility_exponent: _Exponent = 1.5
    early_voltage: Voltage | None = None
    leakage_current: _Leakage | None = None
    threshold_spread: _VoltageSpread | None = None
    specific_current_spread: _SaturationSpread | None = None
    common: CommonParts = ()
    matching: _ThresholdMatching | None = None
    gate_area: Area | None = None

    @field_validator("specific_current", mode="before")
    @classmethod
    def _given_or_computed(cls, value: Any, info: ValidationInfo) -> Any:
        either = "either specific_current, or transconductance_parameter and width_over_length"
        needed = {"reference", "slope_factor", "transconductance_parameter", "width_over_length"}
        if not needed <= info.data.keys():
            return 1.0  # One of them was refused already; that is the message to give.
        process, ratio = (info.data[k] for k in ("transconductance_parameter", "width_over_length"))
        if (value is None) == (process is None) or (process is None) != (ratio is None):
            raise refusal("neither, or some of both" if value is None else "both", either)
        if value is not None:
            return value
        V_T = Boltzmann * info.data["reference"] / elementary_charge
        return 2 * info.data["slope_factor"] * process * ratio * V_T**2


def _which_kind(value: Any) -> str:
    kind = value.get("kind", "bipolar") if isinstance(value, dict) else getattr(value, "kind", "")
    return "<mos>" if kind == "mos" else "<bipolar>"


TRANSISTOR_TAGS = frozenset({"<bipolar>", "<mos>"})
AnyTransistor = Annotated[
    Annotated[Transistor, Tag("<bipolar>")] | Annotated[MosTransistor, Tag("<mos>")],
    Discriminator(_which_kind),
]
