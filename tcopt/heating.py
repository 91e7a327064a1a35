"""The temperature of a die that its own power heats: ``T = T_ambient + R P(T)``.

All junctions and resistors of the circuit share it. P is what the circuit takes
at its top (the supply times what its branches draw, or a given input times the
voltage of its node) and, where the output is not one of these branches, the
output current times the voltage of the output node.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING, Any

import numpy as np

from tcopt.arrays import Array
from tcopt.circuits import SELF, SUPPLY
from tcopt.errors import NoSolutionError
from tcopt.nodes import node_slopes, node_values
from tcopt.solve import currents, sensitivities

if TYPE_CHECKING:
    from tcopt.operation import Operation

__all__ = ["heated", "heated_in_steps", "power", "power_and_slope"]

_STEPS = 40
_CLOSE = 1e-8
"""A step [K] after which Newton's next one would be below rounding."""
_FIXED_STEPS = 200
_SETTLED = 1e-13
"""Change relative to the temperature at which the steps stop."""


def heated(
    ambient: Array, resistance: float, power: Callable[[Array], tuple[Array, Array]]
) -> Array:
    """Return the die's temperature [K] by Newton's method.

    Parameters
    ----------
    ambient : temperature of what the heat flows to [K]
    resistance : thermal resistance R from the junctions to there [K/W]
    power : takes die temperatures [K], returns the power [W] and its slope [W/K]

    Raises
    ------
    NoSolutionError
        If the power grows with temperature faster than the heat flows off, or if the
        search for the temperature comes to no end.
    """
    T = np.array(ambient, dtype=float)
    watts, slope = power(T)
    works = np.isfinite(watts)  # what has no solution without heat is not the heat's fault
    for _ in range(_STEPS):
        room = 1 - resistance * slope
        runs_away = works & ~(room > 0)
        if runs_away.any():
            raise NoSolutionError(
                f"range.thermal_resistance: found {resistance:.4g} K/W, with which the die runs "
                f"away at {_first(ambient, runs_away)}: its power grows faster with its "
                "temperature than the heat flows off; accepted: a lower thermal resistance"
            )
        step = (ambient + resistance * watts - T) / room
        T = T + step
        moving = np.abs(step) > _CLOSE
        if not moving.any():
            return np.asarray(T)
        watts, slope = power(T)
    raise NoSolutionError(
        f"range.thermal_resistance: found {resistance:.4g} K/W, with which the temperature of the "
        f"die at {_first(ambient, moving)} was not found in {_STEPS} steps of Newton's method, "
        "though its power does not run away; accepted: a lower thermal resistance"
    )


def _first(ambient: Array, where: np.ndarray[Any, np.dtype[np.bool_]]) -> str:
    """Return the first of the ambient temperatures that are marked, as text in degC."""
    return f"{float(np.broadcast_to(ambient, where.shape)[where].flat[0]) - 273.15:.4g} degC"


def heated_in_steps(ambient: Array, resistance: float, power: Callable[[Array], Array]) -> Array:
    """Return the same from the power alone, step by step; nan where it does not settle.

    Parameters
    ----------
    ambient, resistance : as for `heated`
    power : takes die temperatures [K], returns the power [W], nan where there is none
    """
    T = np.array(ambient, dtype=float)
    open_points = np.ones(T.shape, dtype=bool)
    for _ in range(_FIXED_STEPS):
        new = ambient + resistance * power(T)
        open_points = np.abs(new - T) > _SETTLED * T
        T = new
        if not open_points.any():
            return np.asarray(T)
    return np.asarray(np.where(open_points, np.nan, T))


def _terms(operation: Operation) -> tuple[tuple[float | str, str], ...]:
    """Return what the power is the sum of: a voltage, or the node that has it, and a current."""
    made = operation.study.circuit
    output = (made.output_voltage or 0.0, "I_out")
    if made.feed == SELF:
        return ((made.supply or 0.0, "I_top"),) if made.circuit.rests_at_zero else (output,)
    top = (made.supply or 0.0) if made.feed == SUPPLY else "V_in"
    return (top, "I_top"), output


def power(operation: Operation, die: Array, quantities: dict[str, Array] | None = None) -> Array:
    """Return the power [W] at die temperatures [K]; nan where the circuit has no solution.

    Parameters
    ----------
    operation : with a thermal resistance, so that the gate has asked for the voltages
    die : temperatures [K]
    quantities : of the circuit there, where they are not those of the operation
    """
    found = operation.quantities(die) if quantities is None else quantities
    values = currents(operation.circuit, found)
    if operation.nodes is not None:
        values = {**values, **node_values(operation.nodes, found)}
    total: Any = np.asarray(0.0)
    for voltage, current in _terms(operation):
        volts = values[voltage] if isinstance(voltage, str) else voltage
        total = total + volts * values[current]
    return np.broadcast_to(np.asarray(total), die.shape)


def power_and_slope(operation: Operation, die: Array) -> tuple[Array, Array]:
    """Return the power [W] and its slope [W/K] at die temperatures [K].

    Parameters
    ----------
    operation, die : as for `power`
    """
    found = operation.quantities(die)
    slopes = operation.quantity_slopes(die)
    values, moved = dict(currents(operation.circuit, found)), {}
    if any(current == "I_out" for _, current in _terms(operation)):
        by_quantity = sensitivities(operation.circuit, found)
        relative = sum(by_quantity[name] * slopes[name] for name in by_quantity if name in slopes)
        moved["I_out"] = values["I_out"] * relative
    if operation.nodes is not None:
        nodes, node_moves = node_slopes(operation.nodes, found, slopes)
        values |= nodes
        moved |= node_moves
    total: Any = np.asarray(0.0)
    slope: Any = np.asarray(0.0)
    for voltage, current in _terms(operation):
        I, I_moved = values[current], moved[current]
        if isinstance(voltage, str):
            total = total + values[voltage] * I
            slope = slope + moved[voltage] * I + values[voltage] * I_moved
        else:
            total = total + voltage * I
            slope = slope + voltage * I_moved
    return np.broadcast_to(total, die.shape), np.broadcast_to(slope, die.shape)
