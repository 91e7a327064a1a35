"""Traps of real transistors: headroom, start-up, effects left out, rules outside their region."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.assess import Assessment
from tcopt.circuits import SELF, SUPPLY
from tcopt.devices import device_quantities
from tcopt.errors import NoSolutionError
from tcopt.headroom import Headroom, headroom, inversion
from tcopt.laws import generated
from tcopt.operation import Operation, celsius
from tcopt.start_up import start_up
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.study import CircuitChoices

__all__ = ["DEVICE_TRAPS"]

_POINTS = 61
_WORTH_SAYING = 1e-3
"""Change of the output by an effect left out from which on it is said (common practice)."""
_SMALL_MARGIN = 0.1
"""Volts of supply left over below which it is said (common practice)."""
_WEAK = 0.1
"""Inversion coefficient below which a MOS transistor is in weak inversion (common practice)."""
_MOVES = 0.02
"""Change of a transconductance that is called constant from which on it is said."""


def _temperatures(found: Assessment) -> Array:
    span = found.operation.study.range
    return np.linspace(span.low, span.high, _POINTS)


def _headroom(found: Assessment) -> Iterator[str]:
    need = headroom(found.operation, _temperatures(found))
    if need is not None:
        made = found.operation.study.circuit
        yield from _saturated_output(made, need)
        yield from _low_supply(made, need)
        yield from _fed_dry(made, need)


def _saturated_output(made: CircuitChoices, need: Headroom) -> Iterator[str]:
    has = made.output_voltage
    if has is None or has >= need.output_limit.voltage:
        return
    short = need.temperature[need.lowest_output > has]
    limit = need.output_limit
    yield (
        f"the output transistor saturates{_where(short, limit.temperature)}: its node is at "
        f"{has:.4g} V and needs {limit.voltage:.3f} V at {celsius(limit.temperature)}; the "
        "current is then less than it is said to be here"
    )


def _where(short: Array, worst: float) -> str:
    if short.size < 2:
        return f" at {celsius(worst)}"
    return f" from {celsius(float(short[0]))} to {celsius(float(short[-1]))}"


def _low_supply(made: CircuitChoices, need: Headroom) -> Iterator[str]:
    if made.feed != SELF or made.supply is None or need.supply_limit is None:
        return
    limit, lowest = need.supply_limit, need.lowest_supply
    left = made.supply - limit.voltage
    on_top = "" if need.complete else ", without what the mirror on top takes"
    if left < 0 and lowest is not None:
        short = need.temperature[lowest > made.supply]
        yield (
            f"the supply of {made.supply:.4g} V is too low{_where(short, limit.temperature)}: "
            f"{limit.set_by} needs {limit.voltage:.3f} V at {celsius(limit.temperature)}{on_top}"
        )
    elif left < _SMALL_MARGIN:
        yield (
            f"only {left:.3f} V of the {made.supply:.4g} V supply are left over at "
            f"{celsius(limit.temperature)}, where {limit.set_by} needs {limit.voltage:.3f} V"
            f"{on_top}"
        )


def _fed_dry(made: CircuitChoices, need: Headroom) -> Iterator[str]:
    """Say where a supply that feeds the input has little left for its resistors."""
    if made.feed != SUPPLY or made.supply is None or need.supply_limit is None:
        return
    limit = need.supply_limit
    left = made.supply - limit.voltage
    if left < 2 * _SMALL_MARGIN:
        yield (
            f"at {celsius(limit.temperature)} only {left:.3f} V of the {made.supply:.3g} V supply "
            f"are left for the feed resistor: {limit.set_by} takes the rest, and more of it "
            "towards the cold"
        )


def _starting(found: Assessment) -> Iterator[str]:
    how = start_up(found.operation)
    if how is None:
        return
    topology = found.operation.study.circuit.topology
    least = float(how.least.max())
    hot = celsius(float(how.temperature[int(np.argmax(how.least))]))
    if least > 0:
        amount = f"more than {format_quantity(least, 'A', 3)} at {hot}"
    else:
        amount = "more than leaks away there, for which no data are given,"
    stays = (
        f"; one that stays on adds 0.1 % to the output at {format_quantity(how.most, 'A', 3)}"
        if np.isfinite(how.most)
        else ""
    )
    yield (
        f"the loop of a {topology} also rests at zero current: it needs a start-up of {amount} "
        f"into {how.node}{stays}; {_other_solution(how.second_current, how.gain, how.temperature)}"
    )


def _other_solution(second: Array, gain: Array, temperature: Array) -> str:
    if np.isfinite(second).any():
        worst = int(np.nanargmax(second))
        return (
            f"its second solution lies at {format_quantity(float(second[worst]), 'A', 3)} at "
            f"{celsius(float(temperature[worst]))}, and below it the current dies away"
        )
    if np.isfinite(gain).any():
        least = float(np.nanmin(gain))
        return (
            "zero is its only other solution, and no stable one here: of a millionth of its "
            f"current it makes {least:.3g} times that"
        )
    return "here more than a millionth of its current leaks through it, which starts it"


def _without(found: Assessment, effect: str) -> tuple[Operation, Operation] | None:
    """Return the design as it is and with one more effect, if the transistor has data for it."""
    operation = found.operation
    made = operation.study.circuit
    data = {"current gain": "current_gain", "leakage": "leakage_current"}[effect]
    if made.transistor is None or effect in made.effects:
        return None
    if not getattr(made.transistor, data, None):
        return None
    circuit = made.model_copy(update={"effects": (*made.effects, effect)})
    study = operation.study.model_copy(update={"circuit": circuit})
    return operation, replace(operation, study=study)


def _moved(pair: tuple[Operation, Operation], T: float) -> float | None:
    """Return how far an effect moves the output at a temperature [1]; None where it stops it."""
    at = np.array([T])
    try:
        return float((pair[1].output(at) / pair[0].output(at))[0]) - 1
    except NoSolutionError:
        return None


def _cold_base_current(found: Assessment) -> Iterator[str]:
    pair = _without(found, "current gain")
    if pair is None:
        return
    study = found.operation.study
    cold, reference = study.range.low, study.range.reference
    moved, before = _moved(pair, cold), _moved(pair, reference)
    beta = 1 / device_quantities(pair[1].study.circuit)["inverse_beta"].value(np.array([cold]))
    if moved is None or before is None:
        yield (
            f"base currents, which the study leaves out, stop the circuit at {celsius(cold)}: the "
            f"gain is {float(beta[0]):.3g} there; 'current gain' in circuit.effects counts them"
        )
    elif max(abs(moved), abs(before)) > _WORTH_SAYING:
        yield (
            f"base currents, which the study leaves out, would move the output by "
            f"{100 * moved:+.2f} % at {celsius(cold)}, where the gain is {float(beta[0]):.3g}, and "
            f"by {100 * before:+.2f} % at {celsius(reference)}: 'current gain' in circuit.effects "
            "counts them"
        )


def _hot_leakage(found: Assessment) -> Iterator[str]:
    pair = _without(found, "leakage")
    if pair is None:
        return
    hot = found.operation.study.range.high
    moved = _moved(pair, hot)
    leaks = format_quantity(_leakage_at(pair[1], hot), "A", 3)
    if moved is None:
        yield (
            f"leakage, which the study leaves out, is above the current at {celsius(hot)}: a unit "
            f"junction leaks {leaks} there; 'leakage' in circuit.effects counts it"
        )
    elif abs(moved) > _WORTH_SAYING:
        yield (
            f"leakage, which the study leaves out, would move the output by {100 * moved:+.2f} % "
            f"at {celsius(hot)}, where a unit junction leaks {leaks}: 'leakage' in "
            "circuit.effects counts it"
        )


def _leakage_at(operation: Operation, T: float) -> float:
    die = operation.die_temperature(np.array([T]))
    return float(operation.quantities(die)["I_L"][0])


def _leakage_rules(found: Assessment) -> Iterator[str]:
    operation = found.operation
    if "leakage" not in operation.study.circuit.effects:
        return
    hot = operation.study.range.high
    leaks = operation.choices.area_ratio * _leakage_at(operation, hot)
    share = leaks / float(operation.output(np.array([hot]))[0])
    if share > 0.5:
        yield (
            f"at {celsius(hot)} leakage makes {100 * share:.0f} % of the output current: no "
            "resistor rules it there any more"
        )


def _ptat_for_mos(found: Assessment) -> Iterator[str]:
    """Say where a rule of weak inversion is taken outside of it."""
    operation = found.operation
    study = operation.study
    coefficients = inversion(operation, _temperatures(found))
    if not coefficients:
        return
    largest = max(float(values.max()) for values in coefficients.values())
    if study.circuit.topology in {"ptat core", "ptat plus vbe"} and largest > _WEAK:
        yield (
            f"the rule V_T ln(N M)/R holds in weak inversion; the transistors of this core reach "
            f"an inversion coefficient of {largest:.3g}, where the current goes more and more like "
            "one over mobility"
        )
    if study.target.shape in {"ptat", "bipolar transconductance"} and largest > _WEAK:
        yield (
            "a current proportional to T keeps the transconductance of a bipolar pair, and of a "
            f"MOS pair in weak inversion alone; at inversion coefficients like {largest:.3g} here "
            "the target shape 'mos transconductance' is the one that does"
        )


def _moving_transconductance(found: Assessment) -> Iterator[str]:
    operation = found.operation
    if operation.study.circuit.topology != "constant transconductance bias":
        return
    span = operation.study.range
    T = np.array([span.low, span.reference, span.high])
    density = operation.node_values(T)["D_in"]
    s = np.sqrt(inversion(operation, T)["input"])
    quantities = operation.quantities(operation.die_temperature(T))
    per_volt = generated.transconductance_share(s) / (quantities["n"] * quantities["V_T"])
    product = density * per_volt * quantities["R_core"]
    moved = product / product[1] - 1
    if np.abs(moved).max() > _MOVES:
        yield (
            f"g_m R of the first transistor, {product[1]:.3g} at {celsius(span.reference)}, moves "
            f"by {100 * moved[0]:+.1f} % at {celsius(span.low)} and {100 * moved[2]:+.1f} % at "
            f"{celsius(span.high)}, since its inversion coefficient goes from {s[0] ** 2:.3g} to "
            f"{s[2] ** 2:.3g}: it stands still only where all transistors stay in one region"
        )


DEVICE_TRAPS: tuple[Callable[[Assessment], Iterator[str]], ...] = (
    _headroom,
    _cold_base_current,
    _hot_leakage,
    _leakage_rules,
    _ptat_for_mos,
    _moving_transconductance,
    _starting,
)
