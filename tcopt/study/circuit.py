"""Which circuit, what feeds it, and the ratios that may be chosen."""

from __future__ import annotations

from itertools import product
from typing import Annotated

from pydantic import Field, model_validator

from tcopt.circuits import CIRCUITS, GIVEN, SELF, SUPPLY, Circuit
from tcopt.study.choices import CurrentChoice, RatioChoice, Ratios, TransistorName
from tcopt.study.fields import Curvature, Slope, Voltage, refusal, words
from tcopt.study.gate import Model

__all__ = ["CircuitChoices"]


class CircuitChoices(Model):
    """The circuit of a study.

    Attributes
    ----------
    topology : one of `tcopt.circuits.CIRCUITS`
    transistor : of unit emitter area; None where the topology has none
    input_current : given input current at the study's reference [A]
    current_ratio : the same, as a multiple of the target current [1]
    input_tc1, input_tc2 : its coefficients about the study's reference [1/K], [1/K^2]
    supply : [V], where the input comes through a feed resistor
    area_ratio, mirror_ratio : one value, or those that may be chosen [1]
    reference_voltage, reference_tc1, reference_tc2 : likewise, where a reference is held [V]
    """

    topology: Annotated[str, words(*CIRCUITS)]
    transistor: TransistorName | None = None
    input_current: CurrentChoice | None = None
    current_ratio: RatioChoice | None = None
    input_tc1: Slope = 0.0
    input_tc2: Curvature = 0.0
    supply: Voltage | None = None
    area_ratio: Ratios = Field(default=(1.0,))
    mirror_ratio: Ratios = Field(default=(1.0,))
    reference_voltage: Voltage | None = None
    reference_tc1: Slope = 0.0
    reference_tc2: Curvature = 0.0

    @property
    def circuit(self) -> Circuit:
        """The topology's statement."""
        return CIRCUITS[self.topology]

    @property
    def feed(self) -> str:
        """Where the input current comes from: GIVEN, SUPPLY or SELF."""
        if SELF in self.circuit.feeds:
            return SELF
        return GIVEN if self.supply is None else SUPPLY

    def _gives(self, *keys: str) -> list[str]:
        return [
            key for key in keys if key in self.model_fields_set and getattr(self, key) is not None
        ]

    @model_validator(mode="after")
    def _fits_the_topology(self) -> CircuitChoices:
        circuit = self.circuit
        inputs = ("input_current", "current_ratio", "supply")
        coefficients = ("input_tc1", "input_tc2")
        reference = ("reference_voltage", "reference_tc1", "reference_tc2")
        foreign = self._gives(*({"area_ratio", "mirror_ratio"} - set(circuit.choices)))
        foreign += self._gives(*inputs, *coefficients) if SELF in circuit.feeds else []
        foreign += [] if circuit.needs_reference_voltage else self._gives(*reference)
        foreign += [] if circuit.needs_transistor else self._gives("transistor")
        if foreign:
            raise refusal(
                f"a key that {circuit.topology!r} does not have",
                ", ".join(self._takes()),
                foreign[0],
            )
        if circuit.needs_transistor and self.transistor is None:
            raise refusal("nothing", "the name of a transistor of the process", "transistor")
        if circuit.needs_reference_voltage and self.reference_voltage is None:
            raise refusal("nothing", "a voltage such as '1.2 V'", "reference_voltage")
        if SELF not in circuit.feeds:
            self._one_input(self._gives(*inputs), self._gives(*coefficients))
        if "mirror_ratio" in circuit.choices:
            self._some_voltage_across_the_core()
        return self

    def _takes(self) -> list[str]:
        circuit = self.circuit
        takes = ["topology", *(["transistor"] if circuit.needs_transistor else [])]
        if SELF not in circuit.feeds:
            takes += ["input_current or current_ratio or supply", "input_tc1", "input_tc2"]
        takes += circuit.choices
        if circuit.needs_reference_voltage:
            takes += ["reference_voltage", "reference_tc1", "reference_tc2"]
        return takes

    def _one_input(self, given: list[str], coefficients: list[str]) -> None:
        accepted = "exactly one of input_current, current_ratio, supply"
        if not given:
            raise refusal("no input", accepted)
        if len(given) > 1:
            raise refusal(" and ".join(given), accepted, given[1])
        if given == ["supply"] and coefficients:
            raise refusal(
                f"{coefficients[0]} with a supply",
                "it with input_current or current_ratio alone",
                coefficients[0],
            )

    def _some_voltage_across_the_core(self) -> None:
        for area, mirror in product(self.area_ratio, self.mirror_ratio):
            if area * mirror <= 1:
                raise refusal(
                    f"area_ratio {area:g} with mirror_ratio {mirror:g}",
                    "a product above 1, or there is no voltage across the core's resistor",
                    "area_ratio",
                )
