"""Circuit to numpy: currents, sensitivities and needed resistances, over arrays of any shape.

All take the *quantities* of a circuit by name: resistances [ohm], ``V_T`` [V],
``log_I_S`` (I_S in A), ``N``, ``M`` [1], ``V_CC``, ``V_ref`` [V], ``I_given``
[A], each a number or an array; the arrays are broadcast against each other.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from functools import lru_cache
from importlib import import_module
from types import MappingProxyType
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from tcopt.arrays import Array
from tcopt.circuits import CIRCUITS, module_name
from tcopt.symbols import resistance_name

__all__ = ["Numerics", "currents", "needed_resistance", "numerics", "sensitivities"]

Quantities = Mapping[str, ArrayLike]


@dataclass(frozen=True)
class Numerics:
    """The numpy functions that were made from one circuit with one kind of input."""

    unknowns: tuple[str, ...]
    quantities: tuple[str, ...]
    closed_form: Callable[..., Any]
    partials: Callable[..., Any]
    needs: Mapping[str, Callable[..., Any]]


@lru_cache
def numerics(topology: str, feed: str) -> Numerics:
    """Return the numerics of a topology (`tcopt.circuits.CIRCUITS`) with one kind of input."""
    name = module_name(CIRCUITS[topology].topology, feed)
    made = import_module(f"tcopt.circuits.generated.{name}")
    return Numerics(
        made.UNKNOWNS,
        made.QUANTITIES,
        made.closed_form,
        made.partials,
        MappingProxyType(made.NEEDS),
    )


def _arguments(names: tuple[str, ...], quantities: Quantities) -> dict[str, Any]:
    return {name: np.asarray(quantities[name], dtype=float) for name in names}


def currents(circuit: Numerics, quantities: Quantities) -> dict[str, Array]:
    """Solve the loops for all currents [A].

    The closed form in Wright's omega works on the logarithm of the current, so
    that no size of drop over- or underflows. Where no current solves the loops
    the result is nan, or not positive; where it is beyond what a float holds, inf.

    Parameters
    ----------
    circuit : from `numerics`
    quantities : those of ``circuit.quantities``
    """
    # a short (R = 0) makes log(0) = -inf, for which omega(-inf) = 0 is the right answer
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        found = circuit.closed_form(**_arguments(circuit.quantities, quantities))
    return dict(zip(circuit.unknowns, map(np.asarray, found), strict=True))


def sensitivities(
    circuit: Numerics,
    quantities: Quantities,
    solution: Mapping[str, ArrayLike],
    of: str = "I_out",
) -> dict[str, Array]:
    """Return ``d ln I / d ln q`` for each quantity q (for ``log_I_S``: per unit of it).

    By the implicit function theorem on the loops F(x, q) = 0 in x = ln I:
    ``dx/d ln q = -(dF/dx)^-1 dF/d ln q``. nan where there is no solution.

    Parameters
    ----------
    circuit, quantities : as for `currents`
    solution : what `currents` returned
    of : the current whose sensitivities are wanted
    """
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        logs = [_log(solution[name]) for name in circuit.unknowns]
        _, by_current, by_quantity = circuit.partials(
            *logs, **_arguments(circuit.quantities, quantities)
        )
    shape = np.broadcast_shapes(*(np.shape(item) for row in by_current for item in row))
    shape = np.broadcast_shapes(shape, *(np.shape(item) for row in by_quantity for item in row))
    jacobian = _matrix(by_current, shape)
    right = _matrix(by_quantity, shape)
    answer = -np.linalg.solve(jacobian, right)[..., circuit.unknowns.index(of), :]
    return {
        name: np.asarray(answer[..., k], dtype=float) for k, name in enumerate(circuit.quantities)
    }


def _log(current: ArrayLike) -> Array:
    """Return the logarithm of a current, nan where it is no solution: -inf is a singular matrix."""
    amperes = np.asarray(current, dtype=float)
    return np.asarray(np.log(np.where(amperes > 0, amperes, np.nan)))


def _matrix(rows: Any, shape: tuple[int, ...]) -> Array:
    return np.stack(
        [np.stack([np.broadcast_to(item, shape) for item in row], axis=-1) for row in rows], axis=-2
    ).astype(float)


def needed_resistance(
    circuit: Numerics, slot: str, output: ArrayLike, quantities: Quantities
) -> Array:
    """Return the resistance [ohm] that a slot needs for the output to be ``output`` [A].

    nan, or not positive, where no resistance brings it there.
    """
    names = tuple(q for q in circuit.quantities if q != resistance_name(slot))
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        return np.asarray(
            circuit.needs[slot](np.asarray(output, dtype=float), **_arguments(names, quantities)),
            dtype=float,
        )
