"""What `check` says of transistors and headroom, as parts of its document."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

from tcopt.arrays import Array

if TYPE_CHECKING:
    from tcopt.check import CheckResult
    from tcopt.headroom import Headroom, Limit
    from tcopt.start_up import StartUp
    from tcopt.still_point import StillPoint
    from tcopt.sweep import Sweep

__all__ = ["devices_document"]


def devices_document(result: CheckResult) -> dict[str, Any]:
    """Return the keys for it; arrays stand against ``temperature_K`` of the document."""
    return {
        "across": _sweep(result.sweep),
        "headroom": result.headroom and _headroom(result.headroom),
        "start_up": result.start_up and _start_up(result.start_up),
        "zero_temperature_coefficient": result.still_point and _still_point(result.still_point),
    }


def _listed(values: Array | None) -> list[float] | None:
    return None if values is None else values.tolist()


def _sweep(found: Sweep) -> dict[str, Any]:
    return {
        "inversion_coefficient": {k: values.tolist() for k, values in found.inversion.items()},
        "output_resistance_ohm": _listed(found.output_resistance),
        "supply_sensitivity": _listed(found.supply_sensitivity),
        "die_temperature_K": _listed(found.die_temperature),
        "power_W": _listed(found.power),
    }


def _headroom(found: Headroom) -> dict[str, Any]:
    return {
        "lowest_output_V": found.lowest_output.tolist(),
        "output_limit": _limit(found.output_limit),
        "lowest_supply_V": _listed(found.lowest_supply),
        "supply_limit": found.supply_limit and _limit(found.supply_limit),
        "branches_V": {name: need.tolist() for name, need in found.branches.items()},
        "complete": found.complete,
    }


def _limit(found: Limit) -> dict[str, Any]:
    return {
        "voltage_V": found.voltage,
        "temperature_K": found.temperature,
        "set_by": found.set_by,
    }


def _start_up(found: StartUp) -> dict[str, Any]:
    return {
        "node": found.node,
        "temperature_K": found.temperature.tolist(),
        "loop_current_A": found.current.tolist(),
        "gain_at_a_millionth": found.gain.tolist(),
        "second_current_A": found.second_current.tolist(),
        "least_A": found.least.tolist(),
        "most_A": found.most,
    }


def _still_point(found: StillPoint) -> dict[str, Any]:
    return {
        "gate_voltage_V": found.gate_voltage,
        "current_A": found.current,
        "inversion_coefficient": found.inversion_coefficient,
        "box_ppm_per_K": found.box_ppm_per_K,
        "why_not": found.why_not,
    }
