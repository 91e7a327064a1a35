"""Which circuit, what feeds it, and the ratios that may be chosen."""

from __future__ import annotations

from itertools import product
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field, field_validator, model_validator

from tcopt.circuits import CIRCUITS, GIVEN, SELF, SUPPLY, Circuit
from tcopt.study.choices import CurrentChoice, RatioChoice, Ratios, TransistorName
from tcopt.study.fields import Curvature, Slope, Voltage, refusal, without_repeats, words
from tcopt.study.gate import Model
from tcopt.study.transistors import MosTransistor

__all__ = ["CircuitChoices"]

_DATA_OF_EFFECTS = {
    "current gain": "current_gain",
    "early effect": "early_voltage",
    "leakage": "leakage_current",
}
Effect = Annotated[Literal["current gain", "early effect", "leakage"], words(*_DATA_OF_EFFECTS)]


def _listed(value: Any) -> Any:
    return [value] if isinstance(value, str) else value


class CircuitChoices(Model):
    """The circuit of a study.

    Attributes
    ----------
    topology : one of `tcopt.circuits.CIRCUITS`
    transistor : of unit emitter area; None where the topology has none
    input_current : given input current at the study's reference [A]
    current_ratio : the same, as a multiple of the target current [1]
    input_tc1, input_tc2 : its coefficients about the study's reference [1/K], [1/K^2]
    supply : where the input comes through a feed resistor, or, for headroom and power
        alone, of a circuit that makes its own current [V]
    area_ratio, mirror_ratio : one value, or those that may be chosen [1]
    reference_voltage, reference_tc1, reference_tc2 : likewise, where a reference is held [V]
    effects : which of the transistor's data count: 'current gain', 'early effect',
        'leakage'; none: ideal transistors
    base_current : taken 'from input', or supplied 'through follower'
    output_voltage : of the node that takes the output current [V]
    mirror_drop : what a given input's source, or the mirror on top, needs between the
        supply and the circuit [V]
    mirror_transistor : or the transistor of that mirror, whose diode-connected side takes
        its base-emitter or gate-source voltage
    well : of MOS transistors whose source is lifted: 'common' bulk, or their 'own' well
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
    effects: Annotated[tuple[Effect, ...], BeforeValidator(_listed)] = ()
    base_current: Annotated[
        Literal["from input", "through follower"], words("from input", "through follower")
    ] = "from input"
    output_voltage: Voltage | None = None
    mirror_drop: Voltage | None = None
    mirror_transistor: TransistorName | None = None
    well: Annotated[Literal["common", "own"], words("common", "own")] = "common"

    @property
    def device(self) -> str:
        """The kind of transistor in the loops, as `tcopt.solve.numerics` names it."""
        if isinstance(self.transistor, MosTransistor):
            return "mos"
        if not self.effects:
            return "ideal"
        return "bipolar_followed" if self.base_current == "through follower" else "bipolar"

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

    @field_validator("effects")
    @classmethod
    def _each_once(cls, value: tuple[str, ...]) -> tuple[str, ...]:
        return without_repeats(value)

    @model_validator(mode="after")
    def _fits_the_topology(self) -> CircuitChoices:
        circuit = self.circuit
        inputs = ("input_current", "current_ratio", "supply")
        coefficients = ("input_tc1", "input_tc2")
        reference = ("reference_voltage", "reference_tc1", "reference_tc2")
        foreign = self._gives(*({"area_ratio", "mirror_ratio"} - set(circuit.choices)))
        if SELF in circuit.feeds:
            kept = {"supply"} if circuit.rests_at_zero else set()
            foreign += self._gives(*(key for key in inputs if key not in kept), *coefficients)
        foreign += self._gives(*self._headroom_keys(self.feed, taken=False))
        foreign += [] if circuit.needs_reference_voltage else self._gives(*reference)
        if not circuit.needs_transistor:
            foreign += self._gives("transistor", "effects", "base_current", "well")
        if foreign:
            raise refusal(
                f"a key that {circuit.topology!r} does not have",
                ", ".join(self._takes()),
                foreign[0],
            )
        if circuit.needs_transistor and self.transistor is None:
            raise refusal("nothing", "the name of a transistor of the process", "transistor")
        self._a_transistor_that_fits()
        if self.mirror_drop is not None and self.mirror_transistor is not None:
            raise refusal("both", "either mirror_drop or mirror_transistor", "mirror_transistor")
        if circuit.needs_reference_voltage and self.reference_voltage is None:
            raise refusal("nothing", "a voltage such as '1.2 V'", "reference_voltage")
        if SELF not in circuit.feeds:
            self._one_input(self._gives(*inputs), self._gives(*coefficients))
        if "mirror_ratio" in circuit.choices:
            self._some_voltage_across_the_core()
        return self

    def _a_transistor_that_fits(self) -> None:
        transistor = self.transistor
        if transistor is None:
            return
        if transistor.kind not in self.circuit.devices:
            kinds = " or ".join(self.circuit.devices)
            raise refusal(
                f"{transistor.name}, a {transistor.kind} transistor",
                f"a {kinds} transistor for {self.topology!r}",
                "transistor",
            )
        mos = isinstance(transistor, MosTransistor)
        for effect, data in _DATA_OF_EFFECTS.items():
            if effect in self.effects and getattr(transistor, data, None) is None:
                raise refusal(
                    f"{effect!r} without {data} in {transistor.name}",
                    "effects for which the transistor has data",
                    "effects",
                )
        if "early effect" in self.effects and self.output_voltage is None:
            raise refusal(
                "nothing", "the voltage of the output node, for the early effect", "output_voltage"
            )
        follower = self.base_current == "through follower"
        if follower and (mos or "current gain" not in self.effects):
            raise refusal(
                "'through follower' without base currents",
                "it with a bipolar transistor and the effect 'current gain'",
                "base_current",
            )
        if follower and not self.circuit.takes_follower:
            raise refusal(
                f"'through follower' for {self.topology!r}, whose bases hang on two nodes",
                "'from input'",
                "base_current",
            )
        if not mos and self.well != "common":
            raise refusal("'own' for a bipolar transistor", "it with MOS transistors alone", "well")

    def _headroom_keys(self, feed: str, *, taken: bool) -> list[str]:
        """Return which of the keys for what feeds the circuit it takes, or does not take."""
        has = {"mirror_drop": feed == GIVEN, "mirror_transistor": False}
        if self.circuit.rests_at_zero:
            has = dict.fromkeys(has, True)
        return [key for key, yes in has.items() if yes is taken]

    def _takes(self) -> list[str]:
        circuit = self.circuit
        takes = ["topology"]
        if circuit.needs_transistor:
            takes += ["transistor", "effects", "base_current", "well"]
        if SELF not in circuit.feeds:
            takes += ["input_current or current_ratio or supply", "input_tc1", "input_tc2"]
        elif circuit.rests_at_zero:
            takes.append("supply")
        takes += circuit.choices
        if circuit.needs_reference_voltage:
            takes += ["reference_voltage", "reference_tc1", "reference_tc2"]
        return [*takes, "output_voltage", *self._headroom_keys(self.feed, taken=True)]

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
