"""The gate voltage at which a MOS current does not move with temperature.

There the falling threshold, which raises the current, and the falling
mobility, which lowers it, cancel at the reference.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from tcopt.arrays import Array
from tcopt.drift import extreme_points
from tcopt.errors import NoSolutionError
from tcopt.headroom import inversion
from tcopt.operation import Operation
from tcopt.solve import sensitivities

__all__ = ["StillPoint", "still_point"]

_TOPOLOGY = "gate voltage bias"
_BELOW, _ABOVE = 12.0, 6.0
"""How far the search goes below the threshold [n V_T] and above it [V]."""
_POINTS, _ROUNDS = 65, 9


@dataclass(frozen=True, slots=True)
class StillPoint:
    """Where ``dI/dT = 0`` at the reference.

    Attributes
    ----------
    gate_voltage : at the reference [V]
    current : at the reference [A]; None without one
    inversion_coefficient : there [1]; None without a current
    box_ppm_per_K : drift over the range with that voltage, by the box method; None where the
        current does not exist all over the range
    why_not : why one of them is None, in words
    """

    gate_voltage: float
    current: float | None
    inversion_coefficient: float | None
    box_ppm_per_K: float | None
    why_not: str | None = None


def still_point(operation: Operation) -> StillPoint | None:
    """Return the point of a design at a fixed gate voltage; None without one.

    Its source resistor, its reference's coefficients and its effects count as they
    are. The die has the temperature of the reference there.

    Parameters
    ----------
    operation : a design with a mix in every slot that its study names
    """
    made = operation.study.circuit
    if made.topology != _TOPOLOGY:
        return None
    at = np.array([operation.study.range.reference])
    found = operation.quantities(at)
    slopes = operation.quantity_slopes(at)

    def slope(gate: Array) -> Array:
        by_quantity = sensitivities(operation.circuit, {**found, "V_ref": gate})
        return np.asarray(
            sum(by_quantity[name] * slopes[name] for name in by_quantity if name in slopes)
        )

    threshold = float(found["V_TH"][0])
    low = max(threshold - _BELOW * float((found["n"] * found["V_T"])[0]), 1e-3 * threshold)
    gate = _crossing(slope, low, threshold + _ABOVE)
    if gate is None:
        return None
    circuit = made.model_copy(update={"reference_voltage": gate})
    study = operation.study.model_copy(update={"circuit": circuit})
    there = replace(operation, study=study)
    try:
        current = float(there.output(at)[0])
        coefficient = float(inversion(there, at)["output"][0])
    except NoSolutionError as error:
        return StillPoint(gate, None, None, None, str(error))
    try:
        points = extreme_points(there.output, study.range.low, study.range.high)
        output = there.output(points)
    except NoSolutionError as error:
        return StillPoint(gate, current, coefficient, None, str(error))
    span = study.range.high - study.range.low
    box = 1e6 * float(np.ptp(output)) / (current * span)
    return StillPoint(gate, current, coefficient, box)


def _crossing(slope: Callable[[Array], Array], low: float, high: float) -> float | None:
    """Return where a slope falls through zero, narrowing the interval again and again."""
    for _ in range(_ROUNDS):
        grid = np.linspace(low, high, _POINTS)
        values = slope(grid)
        falls = np.flatnonzero((values[:-1] > 0) & (values[1:] <= 0))
        if falls.size == 0:
            return None
        low, high = float(grid[falls[0]]), float(grid[falls[0] + 1])
    return (low + high) / 2
