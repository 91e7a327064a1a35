"""A finished design against its target: the figures of drift and the verdict on the limit."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from tcopt.arrays import Array
from tcopt.circuits import SUPPLY
from tcopt.devices import diode_voltage
from tcopt.drift import Drift, drift_of, extreme_points
from tcopt.errors import NoSolutionError
from tcopt.operation import Operation, celsius
from tcopt.targets import TargetCurrent, target_current

if TYPE_CHECKING:
    from tcopt.study import Study

__all__ = ["Assessment", "Verdict", "assess", "require_supply"]


@dataclass(frozen=True, slots=True)
class Verdict:
    """The limit against what it is compared with; both in the unit of the figure's name.

    Attributes
    ----------
    met : whether the figure is within the bound
    figure : name of the figure of ``residual_drift`` that the limit is on
    value, bound : figure and limit
    """

    met: bool
    figure: str
    value: float
    bound: float


@dataclass(frozen=True)
class Assessment:
    """The figures of one design.

    Attributes
    ----------
    operation : the design at its temperatures
    target : what the current should be
    drift : of the current itself
    residual_drift : of current over target
    limit : verdict, or None without a limit
    """

    operation: Operation
    target: TargetCurrent
    drift: Drift
    residual_drift: Drift
    limit: Verdict | None

    def residual(self, temperature: Array) -> Array:
        """Return ``I/I_target - 1`` [1] at temperatures [K]."""
        return self.operation.output(temperature) / self.target.current(temperature) - 1


def require_supply(study: Study, area_ratio: float) -> None:
    """Refuse a supply below the junction or gate voltage that the target current takes.

    The loops then still have a solution, but one in which the junction, not the
    resistor, sets the current.
    """
    made = study.circuit
    if made.feed != SUPPLY or made.transistor is None or made.supply is None:
        return
    T = np.linspace(study.range.low, study.range.high, 61)
    current = target_current(study.target, study.range.reference).current(T)
    V_BE = diode_voltage(made, current, area_ratio, T)
    worst = int(np.argmax(V_BE))
    kind = "gate-source" if made.device == "mos" else "base-emitter"
    if made.supply <= V_BE[worst]:
        raise NoSolutionError(
            f"circuit.supply: found {made.supply:.4g} V, below the {kind} voltage of "
            f"{V_BE[worst]:.3f} V that the target current takes at {celsius(float(T[worst]))}; "
            "accepted: a supply above it over the whole range"
        )


def assess(operation: Operation) -> Assessment:
    """Return the figures of a finished design, from the full nonlinear solution.

    Raises
    ------
    NoSolutionError
        Where the circuit has no solution in the range.
    """
    study = operation.study
    low, high, reference = study.range.low, study.range.high, study.range.reference
    require_supply(study, operation.choices.area_ratio)
    target = target_current(study.target, reference)

    def residual(T: Array) -> Array:
        return operation.output(T) / target.current(T)

    points = extreme_points(residual, low, high, target.knots)
    deviation = float(np.abs(residual(points) - 1).max())
    at_reference = np.array([reference])
    slope = float(np.sum(list(operation.causes(at_reference).values())))
    spent = float(target.log_slope(at_reference)[0])
    drift = drift_of(operation.output, slope, deviation, low, high, reference, target.knots)
    left = drift_of(residual, slope - spent, deviation, low, high, reference, target.knots)
    return Assessment(operation, target, drift, left, _verdict(study, left))


def _verdict(study: Study, residual: Drift) -> Verdict | None:
    limit = study.target.limit
    if limit is None:
        return None
    if limit.kind == "box":
        name, value = "box_ppm_per_K", residual.box_ppm_per_K
    else:
        name, value = "deviation_ppm", residual.deviation_ppm
    bound = limit.value * 1e6
    return Verdict(met=value <= bound, figure=name, value=value, bound=bound)
