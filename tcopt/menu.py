"""A process's materials side by side, each with what it does to a PTAT voltage across it.

``I = V_T/R`` has the local temperature coefficient ``1/T - TC_R``: a material
whose TC1 falls short of 1/T leaves a current that rises with temperature, one
that over-compensates it a current that falls.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.drift import Drift, drift_of, extreme_points
from tcopt.errors import InputError
from tcopt.laws.numbers import moved_coefficients, resistance_ratio, thermal_voltage

if TYPE_CHECKING:
    from tcopt.study import Material, Process, TemperatureRange

__all__ = [
    "FALLS_SHORT", "MATCHES", "OVER_COMPENSATES", "TOLERANCE", "Menu", "MenuEntry", "menu",
    "menu_range",
]  # fmt: skip

FALLS_SHORT, MATCHES, OVER_COMPENSATES = "falls short of", "matches", "over-compensates"
TOLERANCE = 0.05
"""How far TC1 may be off 1/T_ref, relative to it, and still match."""


@dataclass(frozen=True, slots=True)
class MenuEntry:
    """One material.

    Attributes
    ----------
    material : as in the process
    tc1, tc2 : about the process's reference, wherever its data refer to [1/K], [1/K^2]
    role : FALLS_SHORT, MATCHES or OVER_COMPENSATES, of 1/T at the process's reference
    left : ``1/T - TC1`` at the process's reference: the slope that V_T/R is left with [1/K]
    drift : of V_T/R over the range; None where the material's law leaves no resistance in it
    """

    material: Material
    tc1: float
    tc2: float
    role: str
    left: float
    drift: Drift | None


@dataclass(frozen=True, slots=True)
class Menu:
    """All materials of a process; range of the drift figures [K], T_ref that of the process."""

    process: Process
    low: float
    high: float
    entries: tuple[MenuEntry, ...]


def menu(process: Process, over: TemperatureRange) -> Menu:
    """Return the materials of a process and the role that each plays for a PTAT voltage.

    Parameters
    ----------
    process : its reference is where coefficients and roles are stated
    over : range of the drift figures; its own reference does not count

    Raises
    ------
    InputError
        If a material's law leaves no resistance at the process's reference.
    """
    for name, material in process.materials.items():
        if (there := float(resistance_ratio(material, process.reference))) <= 0:
            raise InputError(
                f"{process.path}: materials.{name}: found {there:.3g} times its resistance at the "
                "process's reference; accepted: what stays above zero there"
            )
    entries = tuple(
        _entry(material, process.reference, over.low, over.high)
        for material in process.materials.values()
    )
    return Menu(process, over.low, over.high, entries)


def _entry(material: Material, reference: float, low: float, high: float) -> MenuEntry:
    tc1, tc2 = moved_coefficients(material, reference)
    if abs(tc1 * reference - 1) <= TOLERANCE:
        role = MATCHES
    else:
        role = FALLS_SHORT if tc1 * reference < 1 else OVER_COMPENSATES
    left = 1 / reference - tc1
    return MenuEntry(material, tc1, tc2, role, left, _drift(material, left, reference, low, high))


def _drift(
    material: Material, left: float, reference: float, low: float, high: float
) -> Drift | None:
    ends = extreme_points(lambda T: resistance_ratio(material, T), low, high)
    if resistance_ratio(material, ends).min() <= 0:
        return None

    def current(T: Array) -> Array:
        return thermal_voltage(T) / resistance_ratio(material, T)

    at_reference = float(current(np.array([reference]))[0])
    points = extreme_points(current, low, high)
    deviation = float(np.abs(current(points) / at_reference - 1).max())
    return drift_of(current, left, deviation, low, high, reference)


def menu_range(grade: str | None, low: str | None, high: str | None) -> TemperatureRange:
    """Return the range that these words name, the industrial one without any.

    Parameters
    ----------
    grade : such as 'automotive 0', or None
    low, high : temperatures with their unit, or None

    Raises
    ------
    InputError
        If they name no range, or two.
    """
    from pydantic import ValidationError  # noqa: PLC0415

    from tcopt.study import TemperatureRange  # noqa: PLC0415  the gate is slow to import
    from tcopt.study.choices import FromFile  # noqa: PLC0415
    from tcopt.study.gate import refused_input  # noqa: PLC0415

    words = {"grade": grade, "from": low, "to": high}
    given = {name: word for name, word in words.items() if word is not None}
    if not given:
        given = {"grade": "industrial"}
    if low is not None:
        given["reference"] = low  # it plays no part here; it only has to lie inside
    try:
        return TemperatureRange.model_validate(
            given, by_alias=True, by_name=False, context=FromFile()
        )
    except ValidationError as error:
        raise refused_input("range", error) from None
