"""A finished design at its temperatures: from a study's data to currents, slopes and causes.

This is where the parts of a design (materials, ratios, input) become the
quantities of a circuit, so every figure that is reported passes through here.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from functools import cached_property
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import ArrayLike

from tcopt.arrays import Array
from tcopt.circuits import CIRCUITS, GIVEN, SUPPLY
from tcopt.devices import DeviceQuantity, device_quantities
from tcopt.errors import NoSolutionError
from tcopt.heating import heated, heated_in_steps, power, power_and_slope
from tcopt.laws.numbers import resistance_ratio, resistance_ratio_slope, thermal_voltage
from tcopt.nodes import Nodes, node_values, nodes_of
from tcopt.solve import Numerics, currents, needed_resistance, numerics, sensitivities
from tcopt.symbols import INVERSE, resistance_name

if TYPE_CHECKING:
    from tcopt.study import Part, Study

__all__ = ["Choices", "Mix", "Operation", "celsius", "fixed_mixes"]


_REMEMBERED = 32
"""Sets of temperatures whose die temperatures are kept."""


def celsius(temperature: float) -> str:
    """Return a temperature [K] as text in degC, for messages."""
    return f"{temperature - 273.15:.4g} degC"


@dataclass(frozen=True)
class Mix:
    """Resistors in one slot: parts joined in series or in parallel."""

    parts: tuple[Part, ...]
    join: str = "series"

    def resistance(self, temperature: ArrayLike) -> Array:
        """Return the resistance [ohm] at temperatures [K]."""
        each = [part.value * resistance_ratio(part.material, temperature) for part in self.parts]
        if self.join == "series":
            return np.asarray(sum(each))
        return np.asarray(1 / sum(1 / R for R in each))

    def slopes(self, temperature: Array) -> dict[tuple[str, str], Array]:
        """Return ``d ln R/dT`` [1/K], split by material and by 'TC1' and 'TC2'.

        A part weighs by its share: of the resistance in series, of the
        conductance in parallel.
        """
        total = self.resistance(temperature)
        found: dict[tuple[str, str], Array] = {}
        for part in self.parts:
            material = part.material
            R = part.value * resistance_ratio(material, temperature)
            share = R / total if self.join == "series" else total / R
            first = material.tc1 * part.value / R * share
            both = resistance_ratio_slope(material, temperature) * part.value / R * share
            for name, slope in (("TC1", first), ("TC2", both - first)):
                key = (material.name, name)
                found[key] = found.get(key, 0) + slope
        return found

    @property
    def total_value(self) -> float:
        """Return what has to be drawn or ordered in all: the sum of the parts' values [ohm]."""
        return sum(part.value for part in self.parts)


@dataclass(frozen=True)
class Choices:
    """One value for everything that a circuit lets choose, besides its resistors."""

    area_ratio: float = 1.0
    mirror_ratio: float = 1.0
    input_current: float | None = None


@dataclass(frozen=True)
class Operation:
    """A study's circuit with one choice of ratios and input, and a mix in each slot.

    With a thermal resistance in the study the circuit is warmer than the range: its
    *die* temperature. What takes a die temperature says so; all else is a temperature
    of the range.

    ``mixes`` may leave out slots that are still open; then only `needed` and
    `quantities` of the others are to be had. ``other_bases``: base currents [A] of
    further outputs that share the input; without it there are none.
    """

    study: Study
    choices: Choices
    mixes: Mapping[str, Mix] = field(default_factory=dict)
    other_bases: DeviceQuantity | None = None

    @cached_property
    def circuit(self) -> Numerics:
        """The numerics of the study's circuit."""
        made = self.study.circuit
        return numerics(made.topology, made.feed, made.device)

    @cached_property
    def _device(self) -> dict[str, DeviceQuantity]:
        return device_quantities(self.study.circuit)

    @cached_property
    def nodes(self) -> Nodes | None:
        """The circuit's nodes (`tcopt.nodes`); None if it has none to speak of."""
        made = self.study.circuit
        return nodes_of(made.topology, made.feed, made.device)

    @cached_property
    def _dies(self) -> dict[tuple[tuple[int, ...], bytes], Array]:
        return {}

    def die_temperature(self, temperature: ArrayLike) -> Array:
        """Return the circuit's temperatures [K] where those of the range are these.

        Raises
        ------
        NoSolutionError
            Where its power runs away.
        """
        T = np.asarray(temperature, dtype=float)
        resistance = self.study.range.thermal_resistance
        if resistance is None:
            return T
        key = (T.shape, T.tobytes())
        if key not in self._dies:
            for old in list(self._dies)[: -_REMEMBERED + 1]:
                del self._dies[old]
            self._dies[key] = heated(T, resistance, lambda die: power_and_slope(self, die))
        return self._dies[key]

    def pinned_die_temperature(self, slot: str, output: ArrayLike, temperature: ArrayLike) -> Array:
        """Return the same with the output [A] held by the resistance of a slot; nan without one."""
        T = np.asarray(temperature, dtype=float)
        resistance = self.study.range.thermal_resistance
        if resistance is None:
            return T

        def watts(die: Array) -> Array:
            found = self.quantities(die)
            held = needed_resistance(self.circuit, slot, output, found)
            found[resistance_name(slot)] = np.where(held > 0, held, np.nan)
            return power(self, die, found)

        return heated_in_steps(T, resistance, watts)

    def power(self, die: Array) -> Array:
        """Return what heats the circuit [W] at die temperatures [K]."""
        return power(self, die)

    def node_values(self, temperature: ArrayLike) -> dict[str, Array]:
        """Return node voltages [V] and densities [A] by symbol (`tcopt.symbols`)."""
        if self.nodes is None:
            return {}
        die = self.die_temperature(temperature)
        found = node_values(self.nodes, self.quantities(die))
        return {name: np.broadcast_to(value, die.shape) for name, value in found.items()}

    def quantities(self, temperature: ArrayLike) -> dict[str, Array]:
        """Return the circuit's quantities at die temperatures [K], shorts included."""
        T = np.asarray(temperature, dtype=float)
        made = self.study.circuit
        found: dict[str, Array] = {
            "V_T": thermal_voltage(T),
            "N": np.asarray(self.choices.area_ratio),
            "M": np.asarray(self.choices.mirror_ratio),
        }
        found |= {name: quantity.value(T) for name, quantity in self._device.items()}
        others = self.other_bases
        found["I_others"] = np.asarray(0.0) if others is None else others.value(T)
        d = T - self.study.range.reference
        if self.choices.input_current is not None and made.feed == GIVEN:
            ratio = 1 + made.input_tc1 * d + made.input_tc2 * d**2
            found["I_given"] = self.choices.input_current * ratio
        if made.feed == SUPPLY and made.supply is not None:
            found["V_CC"] = np.asarray(made.supply)
        if made.reference_voltage is not None:
            ratio = 1 + made.reference_tc1 * d + made.reference_tc2 * d**2
            found["V_ref"] = made.reference_voltage * ratio
        for slot in CIRCUITS[made.topology].slots_for(made.feed):
            if slot.name in self.mixes:
                found[resistance_name(slot.name)] = self.mixes[slot.name].resistance(T)
            elif slot.name not in self.study.resistors:
                found[resistance_name(slot.name)] = np.asarray(0.0)
        return found

    def currents(self, temperature: ArrayLike) -> dict[str, Array]:
        """Return all currents [A] at temperatures [K].

        Raises
        ------
        NoSolutionError
            Where the circuit has none, with the temperature.
        """
        T = np.asarray(temperature, dtype=float)
        quantities = self.quantities(self.die_temperature(T))
        found = currents(self.circuit, quantities)
        for current in found.values():
            bad = np.broadcast_to(~((current > 0) & np.isfinite(current)), T.shape)
            if bad.any():
                at = np.flatnonzero(bad)[0]
                there = {n: np.broadcast_to(q, T.shape).flat[at] for n, q in quantities.items()}
                raise self._no_solution(float(T.flat[at]), there)
        return {name: np.broadcast_to(I, T.shape) for name, I in found.items()}

    def _no_solution(self, temperature: float, there: Mapping[str, float]) -> NoSolutionError:
        from tcopt.reasons import reason  # noqa: PLC0415  only where there is something to explain

        return NoSolutionError(
            f"{self.study.circuit.topology}: no solution at {celsius(temperature)} "
            f"({reason(self.circuit, there)}); accepted: a design in which every current is "
            "positive and every transistor on over the whole range"
        )

    def output(self, temperature: ArrayLike) -> Array:
        """Return the output current [A] at temperatures [K]."""
        return self.currents(temperature)[self.circuit.currents[-1]]

    def needed(self, slot: str, output: ArrayLike, temperature: ArrayLike) -> Array:
        """Return the resistance [ohm] a slot needs for this output [A] at die temperatures [K]."""
        return needed_resistance(self.circuit, slot, output, self.quantities(temperature))

    def sensitivities(self, temperature: ArrayLike, of: str = "I_out") -> dict[str, Array]:
        """Return ``d ln I/d ln q`` at temperatures [K] (`tcopt.solve.sensitivities`).

        With the die's temperature held.
        """
        die = self.die_temperature(temperature)
        return sensitivities(self.circuit, self.quantities(die), of)

    def causes(self, temperature: ArrayLike) -> dict[str, Array]:
        """Return the output's local temperature coefficient [1/K], split into its causes.

        Each cause is a sensitivity times the slope of its quantity; the sum is
        ``(dI_out/dT)/I_out`` exactly, by the chain rule. What the Early effect adds is
        the difference to the same circuit without it, whose causes the others are: it
        has no slope of its own, but acts on all. What self-heating adds is all of this
        times ``dT_die/dT - 1``.
        """
        T = np.atleast_1d(np.asarray(temperature, dtype=float))
        die = self.die_temperature(T)
        causes = self._causes_at(die, early=False)
        if "early effect" in self.study.circuit.effects:
            causes["Early effect"] = _total(self._causes_at(die, early=True)) - _total(causes)
        resistance = self.study.range.thermal_resistance
        if resistance is not None:
            excess = 1 / (1 - resistance * power_and_slope(self, die)[1]) - 1
            causes["self-heating"] = excess * _total(causes)
        return causes

    def _causes_at(self, die: Array, *, early: bool) -> dict[str, Array]:
        """Return the causes at die temperatures [K], with the Early effect or without it."""
        found = self.quantities(die)
        if not early and INVERSE["V_A"] in found:
            found[INVERSE["V_A"]] = np.asarray(0.0)
        by_quantity = sensitivities(self.circuit, found)
        return {
            cause: np.broadcast_to(by_quantity[symbol] * slope, die.shape)
            for (symbol, cause), slope in self._slopes(die).items()
            if symbol in by_quantity
        }

    def quantity_slopes(self, die: Array) -> dict[str, Array]:
        """Return ``d ln q/dT`` [1/K] of each quantity that moves (of ``log_I_S`` its slope)."""
        total: dict[str, Array] = {}
        for (symbol, _), slope in self._slopes(die).items():
            total[symbol] = total[symbol] + slope if symbol in total else slope
        return total

    def _slopes(self, T: Array) -> dict[tuple[str, str], Array]:
        """Return the slopes at die temperatures [K] by symbol and cause."""
        made = self.study.circuit
        d = T - self.study.range.reference
        slopes: dict[tuple[str, str], Array] = {("V_T", "thermal voltage"): 1 / T}
        for name, quantity in self._device.items():
            if quantity.cause:
                slopes[name, quantity.cause] = quantity.slope(T)
        if self.other_bases is not None and self.other_bases.cause:
            slopes["I_others", self.other_bases.cause] = self.other_bases.slope(T)
        for symbol, cause, tc1, tc2 in (
            ("I_given", "input current", made.input_tc1, made.input_tc2),
            ("V_ref", "reference voltage", made.reference_tc1, made.reference_tc2),
        ):
            slopes[symbol, cause] = (tc1 + 2 * tc2 * d) / (1 + tc1 * d + tc2 * d**2)
        for slot, mix in self.mixes.items():
            for (material, order), slope in mix.slopes(T).items():
                slopes[resistance_name(slot), f"{order} of {material} in {slot}"] = slope
        return slopes


def _total(causes: Mapping[str, Array]) -> Array:
    return np.asarray(np.sum(list(causes.values()), axis=0))


def fixed_mixes(study: Study) -> dict[str, Mix]:
    """Return the mix of every slot that the study leaves no choice in."""
    from tcopt.study import FixedSlot  # noqa: PLC0415  this layer lies below the gate

    return {
        name: Mix(slot.parts, slot.join)
        for name, slot in study.resistors.items()
        if isinstance(slot, FixedSlot)
    }
