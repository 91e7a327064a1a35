"""Traps that a design can be in without its figures showing it, said in plain words."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from typing import TYPE_CHECKING

import numpy as np

from tcopt.assess import Assessment
from tcopt.circuits import GIVEN, SUPPLY
from tcopt.device_traps import DEVICE_TRAPS
from tcopt.drift import extreme_points
from tcopt.operation import celsius

if TYPE_CHECKING:
    from tcopt.study import Part

__all__ = ["warnings_for"]

_FEW_SQUARES = 5.0
"""Squares below which the end resistance is a good part of the whole (common practice)."""
_PEAK = 0.2
"""Sensitivity of a peaking source's output to its input above which it sits on the flank."""


def warnings_for(found: Assessment) -> tuple[str, ...]:
    """Return every trap that the design is in; no sampling of spread is needed for these."""
    return tuple(text for trap in _TRAPS for text in trap(found))


def _parts(found: Assessment) -> Iterator[tuple[str, Part]]:
    for slot, mix in found.operation.mixes.items():
        for part in mix.parts:
            yield slot, part


def _one_temperature(found: Assessment) -> Iterator[str]:
    left = found.residual_drift
    span = found.operation.study.range.high - found.operation.study.range.low
    if left.box_ppm_per_K > 20 and abs(left.slope_ppm_per_K) < 0.2 * left.box_ppm_per_K:
        yield (
            f"the slope is matched at the reference only: there {left.slope_ppm_per_K:.1f} ppm/K "
            f"are left, but {left.box_ppm_per_K:.1f} ppm/K (box) over the {span:.0f} K of the "
            "range: what bends (TC2, a junction's curvature) rules"
        )


def _other_reference(found: Assessment) -> Iterator[str]:
    study = found.operation.study
    seen = {part.material.name: part.material.reference for _, part in _parts(found)}
    if study.circuit.transistor is not None:
        seen[study.circuit.transistor.name] = study.circuit.transistor.reference
    for name, reference in seen.items():
        if abs(reference - study.range.reference) > 1e-6:
            yield (
                f"the data of {name} refer to {celsius(reference)}, the study to "
                f"{celsius(study.range.reference)}: values are given at {celsius(reference)}, "
                "and the coefficients at the study's reference differ from the listed ones"
            )


def _beyond_validity(found: Assessment) -> Iterator[str]:
    span = found.operation.study.range
    for name, material in {p.material.name: p.material for _, p in _parts(found)}.items():
        if material.valid is None:
            continue
        low, high = material.valid
        if span.low < low - 1e-9 or span.high > high + 1e-9:
            yield (
                f"the range {celsius(span.low)} to {celsius(span.high)} is wider than the fit of "
                f"{name}, which holds from {celsius(low)} to {celsius(high)}"
            )


def _no_coefficients(found: Assessment) -> Iterator[str]:
    for name, material in {p.material.name: p.material for _, p in _parts(found)}.items():
        if material.tc1 == 0 and material.tc2 == 0:
            yield f"{name} has TC1 = TC2 = 0 exactly: is its data missing?"


def _few_squares(found: Assessment) -> Iterator[str]:
    for slot, part in _parts(found):
        squares = part.squares  # of one segment, where it is drawn
        if squares is not None and squares < _FEW_SQUARES:
            yield (
                f"{part.material.name} in {slot} is only {squares:.2g} squares: its end "
                "resistance, with a temperature coefficient of its own, counts"
            )


def _input_in_logarithm(found: Assessment) -> Iterator[str]:
    operation = found.operation
    study = operation.study
    if study.circuit.feed not in {GIVEN, SUPPLY}:
        return
    low, high = study.range.low, study.range.high
    points = extreme_points(lambda T: operation.currents(T)["I_in"], low, high)
    current = operation.currents(points)["I_in"]
    middle = float(operation.currents(np.array([study.range.reference]))["I_in"][0])
    box = 1e6 * float(current.max() - current.min()) / (middle * (high - low))
    if box > 100:
        share = _follows_input(found)
        yield (
            f"the input current drifts by {box:.0f} ppm/K (box) itself; at the reference 1 % of "
            f"it moves the output by {share:+.2f} %"
        )


def _follows_input(found: Assessment) -> float:
    """Return ``d ln I_out/d ln I_in`` at the reference [1], whatever drives the input."""
    operation = found.operation
    at = np.array([operation.study.range.reference])
    driver = "I_given" if operation.study.circuit.feed == GIVEN else "V_CC"
    output, fed = (operation.sensitivities(at, of)[driver] for of in ("I_out", "I_in"))
    return float((output / fed)[0])


def _flank(found: Assessment) -> Iterator[str]:
    operation = found.operation
    if operation.study.circuit.topology != "peaking source":
        return
    slope = _follows_input(found)
    if abs(slope) > _PEAK:
        side = "below" if slope > 0 else "beyond"
        yield (
            f"the output sits on the flank {side} its peak: 1 % more input current moves it by "
            f"{slope:+.2f} %; at the peak it does not move"
        )


def _box_hides_deviation(found: Assessment) -> Iterator[str]:
    left = found.residual_drift
    span = found.operation.study.range
    swing = left.box_ppm_per_K * (span.high - span.low)
    if left.deviation_ppm > 2 * swing and left.deviation_ppm > 1000:
        yield (
            f"the box figure is small ({left.box_ppm_per_K:.1f} ppm/K), but the current is off its "
            f"target by up to {left.deviation_ppm / 1e4:.2f} %: the value is wrong, not its drift"
        )
    if found.drift.box_ppm_per_K < 0.2 * left.box_ppm_per_K and left.box_ppm_per_K > 20:
        yield (
            f"the current itself drifts little ({found.drift.box_ppm_per_K:.1f} ppm/K), yet the "
            f"target does not: {left.box_ppm_per_K:.1f} ppm/K are left against it"
        )


_TRAPS: tuple[Callable[[Assessment], Iterator[str]], ...] = (
    _one_temperature,
    _box_hides_deviation,
    _input_in_logarithm,
    _flank,
    _other_reference,
    _beyond_validity,
    _no_coefficients,
    _few_squares,
    *DEVICE_TRAPS,
)
