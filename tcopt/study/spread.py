"""The tables [spread] and [trim]: how parts are drawn, and how they are set right again."""

from __future__ import annotations

from typing import Annotated, Literal

from pydantic import Field, model_validator

from tcopt.study.deviations import deviation
from tcopt.study.fields import Name, Temperature, quantity, refusal, whole, words
from tcopt.study.gate import Model
from tcopt.units import format_quantity

__all__ = ["OUTPUT_MIRROR", "Insertion", "Spread", "Trim"]

OUTPUT_MIRROR = "output mirror"
"""What a trim scales when it acts behind the circuit: the ratio of a mirror on its output."""

_Ratio = Annotated[float, deviation("1", "5 %", below=0.2)]
_MEASUREMENT = deviation("1", "0.2 %", below=0.2)
_TEMPERATURE = deviation("K", "2 K", below=50)
_RANGE = quantity("1", "how far the scale reaches to either side, such as '20 %'", above=0, below=1)
_STEP = quantity("1", "the step of the scale, such as '0.5 %'", above=0, below=1)


class Spread(Model):
    """How samples of a finished design are drawn, and what must be reached.

    Attributes
    ----------
    samples : parts drawn; powers of two serve 'sobol' best
    seed : the same seed gives the same parts
    sampling : 'sobol', scrambled; or 'plain', independent random numbers
    sigma : how many standard deviations out the corners lie [1]
    wanted_yield : share of the parts that must meet the target's limit [1]
    supply, input_current, reference_voltage, mirror_ratio : one standard deviation of
        what the study states, relative to it [1]
    """

    samples: Annotated[int, whole(1, 10**7)] = 16384
    seed: Annotated[int, whole(0, 2**63 - 1)] = 1
    sampling: Annotated[Literal["sobol", "plain"], words("sobol", "plain")] = "sobol"
    sigma: Annotated[float, quantity("1", "a pure number such as 3", above=0, below=10)] = 3.0
    wanted_yield: Annotated[
        float, quantity("1", "a share of the parts such as '99.7 %'", above=0, below=1)
    ] = Field(default=0.997, validation_alias="yield")
    supply: _Ratio | None = None
    input_current: _Ratio | None = None
    reference_voltage: _Ratio | None = None
    mirror_ratio: _Ratio | None = None


class Insertion(Model):
    """One visit to the tester: the current is measured at a temperature, and a scale set by it.

    Attributes
    ----------
    temperature : at which the part is believed to be [K]
    scales : the resistor slot whose value is scaled, or `OUTPUT_MIRROR`
    material : in that slot, the material whose parts alone are scaled; None for all
    reach : the scale goes from 1 - reach to 1 + reach [1]
    step : of the scale [1]
    bits : instead of a step: the reach is cut into 2^bits codes
    measurement_error : one standard deviation of the measured current, relative to it [1]
    temperature_error : one standard deviation of the part's temperature [K]
    """

    temperature: Temperature
    scales: Name
    material: Name | None = None
    reach: Annotated[float, _RANGE] = Field(validation_alias="range")
    step: Annotated[float, _STEP] | None = None
    bits: Annotated[int, whole(1, 16)] | None = None
    measurement_error: Annotated[float, _MEASUREMENT] | None = None
    temperature_error: Annotated[float, _TEMPERATURE] | None = None

    @property
    def increment(self) -> float | None:
        """The step of the scale [1]; None where it is continuous."""
        return 2 * self.reach / 2**self.bits if self.bits is not None else self.step

    @property
    def codes(self) -> tuple[int, int] | None:
        """Lowest and highest code, 0 leaving the part as it is; None where it is continuous."""
        if self.bits is not None:
            return -(2 ** (self.bits - 1)), 2 ** (self.bits - 1) - 1
        if self.step is None:
            return None
        most = int(self.reach / self.step * (1 + 1e-12))
        return -most, most

    @model_validator(mode="after")
    def _one_kind_of_step(self) -> Insertion:
        if self.step is not None and self.bits is not None:
            raise refusal("both", "either step or bits, or neither for a continuous trim", "bits")
        if self.step is not None and self.step > self.reach:
            raise refusal(
                f"a step of {100 * self.step:g} % with a range of {100 * self.reach:g} %",
                "a step within the range, or there is no code but the one in the middle",
                "step",
            )
        if self.material is not None and self.scales == OUTPUT_MIRROR:
            raise refusal(
                f"a material beside {OUTPUT_MIRROR!r}", "it with a resistor slot alone", "material"
            )
        return self


class Trim(Model):
    """One insertion, or two at different temperatures, the second for the slope."""

    first: Insertion = Field(description="a table [trim.first]")
    second: Insertion | None = None

    @property
    def insertions(self) -> tuple[Insertion, ...]:
        """The insertions, first to last."""
        return (self.first,) if self.second is None else (self.first, self.second)

    @model_validator(mode="after")
    def _two_that_differ(self) -> Trim:
        if self.second is None:
            return self
        if abs(self.first.temperature - self.second.temperature) < 1:
            raise refusal(
                f"{format_quantity(self.second.temperature, 'K')}, where the first is",
                "another temperature by at least 1 K: the slope shows between two",
                "second.temperature",
            )
        knobs = [(each.scales, each.material) for each in self.insertions]
        if knobs[0] == knobs[1]:
            raise refusal(
                f"{self.second.scales!r}, which the first scales already",
                "another slot, another material of it, or the output mirror",
                "second.scales",
            )
        return self
