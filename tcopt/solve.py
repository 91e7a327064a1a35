"""Circuit to numpy: currents, sensitivities and needed resistances, over arrays of any shape.

All take the *quantities* of a circuit by name: resistances [ohm], ``V_T`` [V],
``log_I_S`` (I_S in A), ``N``, ``M`` [1], ``V_CC``, ``V_ref`` [V], ``I_given``
[A] and what real transistors add (`tcopt.symbols`), each a number or an array;
the arrays are broadcast against each other.

Ideal bipolar transistors have closed forms. All others are solved by Newton's
method (`tcopt.newton`) in the logarithms of the currents.
"""

from __future__ import annotations

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import ArrayLike

from tcopt import newton
from tcopt.arrays import Array
from tcopt.numerics import IDEAL, Numerics, arguments_of, numerics
from tcopt.pinned import needed
from tcopt.real import log_currents, real_of, solution
from tcopt.symbols import resistance_name

__all__ = [
    "IDEAL", "Numerics", "currents", "needed_resistance", "numerics", "sensitivities", "unknowns",
]  # fmt: skip

Quantities = Mapping[str, ArrayLike]


def currents(circuit: Numerics, quantities: Quantities) -> dict[str, Array]:
    """Solve the loops for all currents [A].

    The closed form in Wright's omega works on the logarithm of the current, so
    that no size of drop over- or underflows. Where no current solves the loops
    the result is nan, or not positive.

    Parameters
    ----------
    circuit : from `numerics`
    quantities : those of ``circuit.quantities``
    """
    if circuit.closed_form is None:
        found = log_currents(circuit, arguments_of(circuit.quantities, quantities))
        with np.errstate(over="ignore"):
            return {
                name: np.asarray(np.exp(log))
                for name, log in zip(circuit.currents, found, strict=True)
            }
    # a short (R = 0) makes log(0) = -inf, for which omega(-inf) = 0 is the right answer
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        found = circuit.closed_form(**arguments_of(circuit.quantities, quantities))
    return dict(zip(circuit.currents, map(np.asarray, found), strict=True))


def _outputs(
    circuit: Numerics, quantities: Quantities, found: tuple[Array, ...]
) -> tuple[Any, Any, Any]:
    """Return the logarithms of the currents and their partials by unknown and by quantity."""
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        outputs: tuple[Any, Any, Any] = real_of(circuit).outputs(
            *found, **arguments_of(circuit.quantities, quantities)
        )
    return outputs


def sensitivities(
    circuit: Numerics,
    quantities: Quantities,
    of: str = "I_out",
) -> dict[str, Array]:
    """Return ``d ln I / d ln q`` for each quantity q (for ``log_I_S``: per unit of it).

    By the implicit function theorem on the loops F(x, q) = 0:
    ``dx/d ln q = -(dF/dx)^-1 dF/d ln q``.

    Parameters
    ----------
    circuit, quantities : as for `currents`
    of : the current whose sensitivities are wanted
    """
    arguments = arguments_of(circuit.quantities, quantities)
    index = circuit.currents.index(of)
    found = unknowns(circuit, quantities)
    if circuit.closed_form is None:
        _, by_unknown, by_quantity = _outputs(circuit, quantities, found)
        row, direct = by_unknown[index], by_quantity[index]
    else:
        row = tuple(float(k == index) for k in range(len(circuit.unknowns)))
        direct = (0.0,) * len(circuit.quantities)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        _, jacobian, right = circuit.partials(*found, **arguments)
    shape = newton.shape_of(jacobian, right, row, direct)
    change = -np.linalg.solve(newton.matrix(jacobian, shape), newton.matrix(right, shape))
    total = np.einsum("...i,...iq->...q", newton.vector(row, shape), change)
    total = total + newton.vector(direct, shape)
    return {
        name: np.asarray(total[..., k] * (arguments[name] if name.startswith("R_") else 1.0))
        for k, name in enumerate(circuit.quantities)
    }


def _log(current: ArrayLike) -> Array:
    """Return the logarithm of a current, nan where it is no solution: -inf is a singular matrix."""
    amperes = np.asarray(current, dtype=float)
    return np.log(np.where(amperes > 0, amperes, np.nan))


def unknowns(circuit: Numerics, quantities: Quantities) -> tuple[Array, ...]:
    """Return what the loops are solved for, in the order of ``circuit.unknowns``."""
    if circuit.closed_form is None:
        return solution(circuit, arguments_of(circuit.quantities, quantities))
    return tuple(_log(current) for current in currents(circuit, quantities).values())


def needed_resistance(
    circuit: Numerics, slot: str, output: ArrayLike, quantities: Quantities
) -> Array:
    """Return the resistance [ohm] that a slot needs for the output to be ``output`` [A].

    nan, or not positive, where no resistance brings it there.
    """
    own = resistance_name(slot)
    names = tuple(q for q in circuit.quantities if q != own)
    arguments = arguments_of(names, quantities)
    pinned = np.asarray(output, dtype=float)
    if circuit.closed_form is not None:
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            return np.asarray(circuit.needs[slot](pinned, **arguments), dtype=float)
    return needed(circuit, slot, pinned, arguments)
