"""Headroom: the lowest supply and the lowest output voltage at which a design still works.

The loops hold for transistors in their active region. They stay there as long
as the output node has the voltage that the output transistor stands on and its
saturation voltage on top, and as long as the supply spans what every branch
stacks up. A bipolar transistor takes ``saturation_voltage``; a MOS transistor
``V_T (2 sqrt(IC + 1/4) + 3)`` (Enz, Krummenacher, Vittoz 1995).
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from functools import partial
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.circuits import GIVEN, SELF
from tcopt.devices import device_quantities, diode_voltage
from tcopt.drift import extreme_points
from tcopt.laws import generated
from tcopt.laws.numbers import thermal_voltage
from tcopt.operation import Operation

if TYPE_CHECKING:
    from tcopt.study import CircuitChoices

__all__ = ["Headroom", "Limit", "headroom", "inversion"]

_OUTPUT = "the output transistor"


@dataclass(frozen=True, slots=True)
class Limit:
    """The largest need over the range.

    Attributes
    ----------
    voltage : [V]
    temperature : of the range, where it is so large [K]
    set_by : the branch or part that needs it, in words
    """

    voltage: float
    temperature: float
    set_by: str


@dataclass(frozen=True)
class Headroom:
    """What a design needs against temperature.

    Attributes
    ----------
    temperature : [K], shape (n,)
    lowest_output : of the output node [V], shape (n,)
    output_limit : where it is largest
    branches : the supply that each branch needs by name [V], shape (n,); empty where the
        circuit has no supply of its own
    supply_limit : where the largest of them is largest, or None
    complete : whether what stands between supply and circuit is in the branches
    """

    temperature: Array
    lowest_output: Array
    output_limit: Limit
    branches: Mapping[str, Array]
    supply_limit: Limit | None
    complete: bool

    @property
    def lowest_supply(self) -> Array | None:
        """The lowest supply [V], shape (n,): the largest need of all branches."""
        if not self.branches:
            return None
        return np.asarray(np.max(list(self.branches.values()), axis=0))


def inversion(operation: Operation, temperature: Array) -> dict[str, Array]:
    """Return the inversion coefficient of MOS transistors [1] by their place in the circuit.

    'input' and 'output', as far as the circuit has them; empty for bipolar ones.
    """
    if operation.study.circuit.device != "mos":
        return {}
    values = operation.node_values(temperature)
    I_spec = operation.quantities(operation.die_temperature(temperature))["I_spec"]
    names = {"D_in": "input", "D_out": "output"}
    return {place: values[name] / I_spec for name, place in names.items() if name in values}


def headroom(operation: Operation, temperature: Array) -> Headroom | None:
    """Return what a design needs at temperatures [K]; None for a circuit without transistors.

    Parameters
    ----------
    operation : a design with a mix in every slot that its study names
    temperature : of the range [K], shape (n,)
    """
    study = operation.study
    if study.circuit.transistor is None:
        return None
    needs = _Needs(operation)
    branches = dict(needs.at(temperature))
    lowest_output = branches.pop(_OUTPUT)
    limits = [_limit(operation, name, partial(needs.of, name)) for name in branches]
    return Headroom(
        temperature=temperature,
        lowest_output=lowest_output,
        output_limit=_limit(operation, _OUTPUT, partial(needs.of, _OUTPUT)),
        branches=branches,
        supply_limit=max(limits, key=lambda limit: limit.voltage) if limits else None,
        complete=study.circuit.feed not in {GIVEN, SELF} or _has_mirror(study.circuit),
    )


@dataclass(frozen=True)
class _Needs:
    """All voltages that a design needs, each set of temperatures solved once."""

    operation: Operation
    _known: dict[bytes, dict[str, Array]] = field(default_factory=dict)

    def at(self, temperature: Array) -> dict[str, Array]:
        key = temperature.tobytes()
        if key not in self._known:
            output = _lowest_output(self.operation, temperature)
            branches = _branches(self.operation, temperature, output)
            self._known[key] = {_OUTPUT: output, **branches}
        return self._known[key]

    def of(self, name: str, temperature: Array) -> Array:
        return self.at(temperature)[name]


def _has_mirror(made: CircuitChoices) -> bool:
    return made.mirror_drop is not None or made.mirror_transistor is not None


def _limit(operation: Operation, name: str, need: Callable[[Array], Array]) -> Limit:
    span = operation.study.range
    points = extreme_points(need, span.low, span.high)
    values = need(points)
    worst = int(np.argmax(values))
    return Limit(float(values[worst]), float(points[worst]), name)


def _saturation(
    made: CircuitChoices, density: Array | float, I_spec: Array | float, die: Array
) -> Array:
    """Return the voltage [V] that a transistor needs across it; density in A per unit of area."""
    transistor = made.transistor
    if transistor is None:
        raise AssertionError("a circuit without transistors saturates nowhere")
    if transistor.kind == "bipolar":
        return np.full(die.shape, transistor.saturation_voltage)
    coefficient = np.asarray(density) / I_spec
    return np.asarray(generated.saturation_voltage(coefficient, thermal_voltage(die)))


def _lowest_output(operation: Operation, temperature: Array) -> Array:
    values = operation.node_values(temperature)
    die = operation.die_temperature(temperature)
    I_spec = operation.quantities(die).get("I_spec", np.asarray(np.nan))
    across = _saturation(operation.study.circuit, values.get("D_out", np.nan), I_spec, die)
    return np.asarray(values["V_foot"] + across)


def _branches(operation: Operation, temperature: Array, lowest_output: Array) -> dict[str, Array]:
    """Return the supply that each branch needs [V], with what stands on top of it."""
    made = operation.study.circuit
    values = operation.node_values(temperature)
    if "V_in" not in values:
        return {}
    if made.feed != SELF:
        return {"the input branch": values["V_in"] + (made.mirror_drop or 0.0)}
    across, diode = _mirror(operation, temperature)
    return {
        "the branch of the first transistor": values["V_in"] + across,
        "the branch of the second transistor": lowest_output + diode,
    }


def _mirror(operation: Operation, temperature: Array) -> tuple[Array, Array]:
    """Return what the mirror on top takes [V] at its output side and at its diode's side.

    Its diode-connected side, of unit area, carries the current of the second transistor; its
    output side has the mirror ratio for its area, so both have the same inversion.
    """
    made = operation.study.circuit
    if made.mirror_transistor is None:
        drop = np.full(temperature.shape, made.mirror_drop or 0.0)
        return drop, drop
    own = made.model_copy(
        update={"transistor": made.mirror_transistor, "effects": (), "well": "common"}
    )
    currents = operation.currents(temperature)
    current = currents.get("I_core", currents["I_out"])
    die = operation.die_temperature(temperature)
    quantity = device_quantities(own).get("I_spec")
    I_spec = np.asarray(np.nan) if quantity is None else quantity.value(die)
    return _saturation(own, current, I_spec, die), diode_voltage(own, current, 1.0, die)
