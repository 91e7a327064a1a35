"""What a design does across the range besides its current."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from tcopt.arrays import Array
from tcopt.circuits import SUPPLY
from tcopt.headroom import inversion
from tcopt.operation import Operation

__all__ = ["Sweep", "sweep"]


@dataclass(frozen=True)
class Sweep:
    """Against temperature, shape (n,) each; None where it does not apply.

    Attributes
    ----------
    inversion : coefficient of MOS transistors by place, 'input' and 'output' [1]
    output_resistance : ``dV_out/dI_out`` with the Early effect [ohm]
    supply_sensitivity : ``d ln I_out/d ln V_CC`` of a circuit fed from a supply [1]
    die_temperature : with self-heating [K]
    power : that heats it [W]
    """

    inversion: Mapping[str, Array]
    output_resistance: Array | None
    supply_sensitivity: Array | None
    die_temperature: Array | None
    power: Array | None


def sweep(operation: Operation, temperature: Array) -> Sweep:
    """Return what a design does at temperatures [K], shape (n,).

    The sensitivities are those with the die's temperature held.
    """
    study = operation.study
    made = study.circuit
    by_quantity = operation.sensitivities(temperature)
    resistance = None
    if "early effect" in made.effects and "V_out" in by_quantity and made.output_voltage:
        with np.errstate(divide="ignore"):
            relative = by_quantity["V_out"] / made.output_voltage
            resistance = 1 / (operation.output(temperature) * relative)
    die = power = None
    if study.range.thermal_resistance is not None:
        die = operation.die_temperature(temperature)
        power = operation.power(die)
    return Sweep(
        inversion=inversion(operation, temperature),
        output_resistance=resistance,
        supply_sensitivity=by_quantity["V_CC"] if made.feed == SUPPLY else None,
        die_temperature=die,
        power=power,
    )
