"""The formulas of a circuit, and with a study the study's numbers put into them."""

from __future__ import annotations

from collections.abc import Callable
from typing import TYPE_CHECKING

import numpy as np
from numpy.polynomial import Chebyshev

from tcopt.arrays import Array
from tcopt.circuits import CIRCUITS, GIVEN
from tcopt.circuits.terms import Device, kinds_of
from tcopt.derive import Derivation, Numbers, derive, expected_names, with_numbers
from tcopt.errors import InputError
from tcopt.operation import Choices, Operation, fixed_mixes
from tcopt.solve import unknowns
from tcopt.symbols import INVERSE, resistance_name
from tcopt.targets import target_current

if TYPE_CHECKING:
    from tcopt.study import Study

__all__ = ["explain", "values_of"]

_REACH = 5.0
"""Half-width [K] of the expansion about the reference."""
_DEGREE = 8
_ROUNDING = 1e-12
"""Relative change over the reach that is none: what interpolation leaves of a constant."""


def explain(
    topology: str,
    feed: str | None = None,
    transistor: str | None = None,
    study: Study | None = None,
) -> Derivation | Numbers:
    """Return the derivation of a topology, with a study's numbers if there is one.

    Parameters
    ----------
    topology : one of `tcopt.circuits.CIRCUITS`
    feed : kind of input; that of the study, or the first that the topology has, by default
    transistor : kind of transistor, a value of `tcopt.circuits.terms.Device`; likewise
    study : of the same topology

    Raises
    ------
    InputError
        For a word that is none of these, or that contradicts the study.
    """
    if topology not in CIRCUITS:
        raise InputError(f"TOPOLOGY: found {topology!r}; accepted: {', '.join(CIRCUITS)}")
    circuit = CIRCUITS[topology]
    kinds = {kind.value: kind for kind in kinds_of(circuit)}
    feeds = circuit.feeds
    if study is not None:
        made = study.circuit
        where = f" beside {study.path}"
        _one_of("TOPOLOGY", topology, (made.topology,), where)
        feeds = (made.feed,)
        kinds = {made.device: Device(made.device)}
    else:
        where = f" for {topology!r}"
    feed = feeds[0] if feed is None else _one_of("--input", feed, feeds, where)
    kind = _one_of("--transistor", transistor or next(iter(kinds)), tuple(kinds), where)
    derivation = derive(circuit, feed, kinds[kind])
    if study is None:
        return derivation
    accepted = expected_names(derivation)
    given = {name: value for name, value in values_of(study).items() if name in accepted}
    return with_numbers(derivation, given)


def _one_of(key: str, word: str, accepted: tuple[str, ...], where: str) -> str:
    if word not in accepted:
        raise InputError(
            f"{key}: found {word!r}{where}; accepted: {', '.join(map(repr, accepted))}"
        )
    return word


def values_of(study: Study) -> dict[str, float]:
    """Return what a study settles, by the names that a derivation understands, in SI.

    Choices that are still open, and resistors that are still to be designed, are left
    out; so is what is infinite because it is not in effect.
    """
    made, reference = study.circuit, study.range.reference
    inputs = study.input_currents if made.feed == GIVEN else None
    settled = inputs[0] if isinstance(inputs, tuple) and len(inputs) == 1 else None
    choices = Choices(made.area_ratio[0], made.mirror_ratio[0], settled)
    operation = Operation(study, choices, fixed_mixes(study))
    open_ratios = {
        symbol
        for symbol, ratios in (("N", made.area_ratio), ("M", made.mirror_ratio))
        if len(ratios) > 1
    }
    slots = {resistance_name(slot.name): slot.name for slot in made.circuit.slots}
    plain = {inverse: symbol for symbol, inverse in INVERSE.items()}
    found = {"T_0": reference}
    for name in operation.quantities(reference):
        if name in open_ratios:
            continue

        def quantity(T: Array, name: str = name) -> Array:
            return np.broadcast_to(operation.quantities(T)[name], T.shape)

        value, tc1, tc2 = _expansion(quantity, reference, reference - _REACH, reference + _REACH)
        if name == "log_I_S":
            found["I_S"] = float(np.exp(value))
            continue
        if name in plain:
            if value == 0:
                continue
            # of 1/q = v (1 + a d + b d^2), q = (1 - a d + (a^2 - b) d^2)/v
            name, value, tc1, tc2 = plain[name], 1 / value, -tc1, tc1**2 - tc2  # noqa: PLW2901
        found[name] = value
        if np.isfinite([tc1, tc2]).all():
            found |= {f"TC1_{slots.get(name, name)}": tc1, f"TC2_{slots.get(name, name)}": tc2}
    if made.transistor is not None and made.transistor.kind == "bipolar":
        found |= {"V_G0": made.transistor.bandgap_voltage}
        found |= {"eta": made.transistor.temperature_exponent}
    if study.is_finished and operation.circuit.closed_form is None:
        found |= _solution(operation, reference)
    target = target_current(study.target, reference)
    low, high = max(study.range.low, reference - _REACH), min(study.range.high, reference + _REACH)
    value, tc1, tc2 = _expansion(target.current, reference, low, high)
    return found | {"I_target": value, "TC1_target": tc1, "TC2_target": tc2}


def _solution(operation: Operation, reference: float) -> dict[str, float]:
    """Return what loops without a closed form are solved for, at the reference, by name, in SI."""
    quantities = operation.quantities(operation.die_temperature(reference))
    found = {name: float(current) for name, current in operation.currents(reference).items()}
    for name, value in zip(
        operation.circuit.unknowns, unknowns(operation.circuit, quantities), strict=True
    ):
        if name.startswith("log_"):
            found[name.removeprefix("log_")] = float(np.exp(value))
        else:
            found[name] = float(value)
    return found


def _expansion(
    quantity: Callable[[Array], Array], reference: float, low: float, high: float
) -> tuple[float, float, float]:
    """Return value, TC1 [1/K] and TC2 [1/K^2] at the reference; nan for those of a zero.

    They are the derivatives of the Chebyshev interpolant over a few kelvin, to rounding for
    what is smooth.
    """
    proxy = Chebyshev.interpolate(quantity, _DEGREE, domain=[low, high])
    value = float(quantity(np.array([reference]))[0])
    if value == 0:
        return 0.0, np.nan, np.nan
    found = [float(proxy.deriv(k)(reference)) / value / k for k in (1, 2)]
    tc1, tc2 = (0.0 if abs(c) * _REACH**k < _ROUNDING else c for k, c in enumerate(found, 1))
    return value, tc1, tc2
