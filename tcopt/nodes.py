"""What a solution says besides its currents: node voltages, densities, the current at the top.

From the same statement as the currents; `tcopt.symbols` tells what each stands for.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import lru_cache
from importlib import import_module
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from tcopt import newton
from tcopt.arrays import Array
from tcopt.circuits import module_name
from tcopt.solve import Numerics, numerics, unknowns

__all__ = ["Nodes", "node_slopes", "node_values", "nodes_of"]

Quantities = Mapping[str, ArrayLike]


@dataclass(frozen=True)
class Nodes:
    """The numpy function of a circuit's nodes.

    Attributes
    ----------
    circuit : whose solution it takes
    names : what it returns, symbols of `tcopt.symbols`
    quantities : what it takes besides the unknowns
    function : values, and their partials by unknown and by quantity
    """

    circuit: Numerics
    names: tuple[str, ...]
    quantities: tuple[str, ...]
    function: Callable[..., Any]


@lru_cache
def nodes_of(topology: str, feed: str, device: str) -> Nodes | None:
    """Return the nodes of a topology with one kind of input and of transistor; None if it has none.

    ``device``: as for `tcopt.solve.numerics`.
    """
    name = f"tcopt.circuits.generated.{module_name(topology, feed, device)}_nodes"
    try:
        made = import_module(name)
    except ModuleNotFoundError:
        return None
    return Nodes(numerics(topology, feed, device), made.NODES, made.QUANTITIES, made.nodes)


def _evaluated(nodes: Nodes, quantities: Quantities) -> tuple[tuple[Array, ...], tuple[Any, ...]]:
    """Return the solution, and values and partials of the nodes there."""
    solution = unknowns(nodes.circuit, quantities)
    own = {name: np.asarray(quantities[name], dtype=float) for name in nodes.quantities}
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        return solution, nodes.function(*solution, **own)


def node_values(nodes: Nodes, quantities: Quantities) -> dict[str, Array]:
    """Return voltages [V] and currents [A] by name; nan where the circuit has no solution.

    Parameters
    ----------
    nodes : from `nodes_of`
    quantities : those of the circuit and of the nodes
    """
    _, (values, _, _) = _evaluated(nodes, quantities)
    return dict(zip(nodes.names, map(np.asarray, values), strict=True))


def node_slopes(
    nodes: Nodes, quantities: Quantities, slopes: Mapping[str, ArrayLike]
) -> tuple[dict[str, Array], dict[str, Array]]:
    """Return the values of the nodes and their slopes against temperature, [V/K] and [A/K].

    ``dx/dT = -(dF/dx)^-1 dF/dT`` on the loops F(x, q) = 0, then the chain rule.

    Parameters
    ----------
    nodes, quantities : as for `node_values`
    slopes : ``d ln q/dT`` [1/K] of each quantity that moves; of ``log_I_S`` its own slope
    """
    solution, (values, by_unknown, by_quantity) = _evaluated(nodes, quantities)
    circuit = nodes.circuit
    arguments = {name: np.asarray(quantities[name], dtype=float) for name in circuit.quantities}
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        _, jacobian, loops = circuit.partials(*solution, **arguments)
    moved = [_along(row, circuit.quantities, quantities, slopes) for row in loops]
    shape = newton.shape_of(jacobian, tuple(moved), values)
    right = newton.vector(moved, shape)[..., None]
    change = -np.linalg.solve(newton.matrix(jacobian, shape), right)[..., 0]
    found = {}
    for name, row, direct in zip(nodes.names, by_unknown, by_quantity, strict=True):
        through = np.einsum("...i,...i->...", newton.vector(row, shape), change)
        found[name] = through + _along(direct, nodes.quantities, quantities, slopes)
    return dict(zip(nodes.names, map(np.asarray, values), strict=True)), found


def _along(
    partials: tuple[Any, ...],
    names: tuple[str, ...],
    quantities: Quantities,
    slopes: Mapping[str, ArrayLike],
) -> Array:
    """Return the change per kelvin from partials by each resistance, or logarithm of another."""
    total: Any = np.asarray(0.0)
    for partial, name in zip(partials, names, strict=True):
        if name in slopes:
            per = np.asarray(quantities[name]) if name.startswith("R_") else 1.0
            total = total + partial * per * np.asarray(slopes[name])
    return np.asarray(total)
