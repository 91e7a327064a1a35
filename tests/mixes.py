"""Invented menus and studies for the tests of the search, and a general optimiser beside it."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import replace
from typing import Any

import numpy as np

from tcopt.arrays import Array
from tcopt.drift import extreme_points
from tcopt.mix.band import Band
from tcopt.mix.offer import Offer
from tcopt.operation import Choices, Operation, fixed_mixes
from tcopt.solve import currents
from tcopt.study import (
    CircuitChoices,
    Material,
    OpenSlot,
    Search,
    Study,
    Target,
    TemperatureRange,
)
from tcopt.symbols import resistance_name
from tcopt.targets import target_current
from tests.small import T_REF, material, process

__all__ = ["CASES", "MENU", "band_of", "deviation_of", "evolved", "located_deviation", "study_of"]

MENU = (
    material("film", -40, 0.05),
    material("light_poly", -650, 1.1),
    material("dense_poly", 260, 0.6),
    material("resistive_poly", -2900, 5.2, reference=298.15),
    material("salicide", 3350, 0.7),
    material("deep_well", 6100, 13.0),
    material("base", 1600, 3.8, reference=293.15),
    material("emitter", 1250, 1.4),
)
"""Eight invented materials, two of them with data about another temperature than the rest."""

_MIRROR = {"topology": "degenerated mirror", "input_current": (1e-4,)}
_SUM = {"topology": "ptat plus vbe", "area_ratio": (8.0,)}
CASES: dict[str, tuple[str, dict[str, Any], dict[str, Any], dict[str, Any]]] = {
    "mirror, flat": ("output", _MIRROR, {}, {}),
    "mirror, ptat, drifting input": (
        "output",
        {**_MIRROR, "input_tc1": 400e-6, "area_ratio": (4.0,)},
        {"shape": "ptat"},
        {},
    ),
    "mirror, slope": ("output", _MIRROR, {"shape": "slope", "slope": -1e-3}, {}),
    "mirror, over material": (
        "output",
        _MIRROR,
        {"shape": "over material", "material": material("sensor", 3900, -0.6)},
        {},
    ),
    "mirror, curve": (
        "output",
        _MIRROR,
        {
            "shape": "curve",
            "current": None,
            "curve": ((230.0, 280.0, 330.0, 430.0), (9e-6, 10e-6, 10.6e-6, 11e-6)),
        },
        {},
    ),
    "input side": (
        "input",
        {**_MIRROR, "input_current": (1e-5,)},
        {},
        {"output": [("dense_poly", 1e4)]},
    ),
    "supply, output": (
        "output",
        {"topology": "degenerated mirror", "supply": 5.0},
        {},
        {"feed": [("film", 43e3)]},
    ),
    "supply, feed": (
        "feed",
        {"topology": "degenerated mirror", "supply": 5.0},
        {},
        {"output": [("dense_poly", 4e3)]},
    ),
    "core, flat": ("core", {"topology": "ptat core", "area_ratio": (8.0,)}, {}, {}),
    "core in a sum": ("core", _SUM, {}, {"base": [("dense_poly", 120e3)]}),
    "base in a sum": ("base", _SUM, {"shape": "ptat"}, {"core": [("film", 7e3)]}),
    "base-emitter voltage": ("base", {"topology": "vbe reference"}, {}, {}),
    "peaking source": ("drop", {"topology": "peaking source", "input_current": (1e-4,)}, {}, {}),
    "reference": (
        "sense",
        {"topology": "reference over resistor", "reference_voltage": 1.2, "reference_tc1": 3e-5},
        {"shape": "ptat"},
        {},
    ),
}
"""Name -> open slot, circuit, target (beside 10 uA, flat) and settled resistors."""


def study_of(
    name: str,
    menu: Sequence[Material] = MENU,
    *,
    pieces: int = 2,
    join: str = "series",
    **others: Any,
) -> Study:
    """Return the study of a case with one slot open."""
    slot, circuit, target, settled = CASES[name]
    return any_study(
        {**circuit, **others.pop("circuit", {})},
        {**target, **others.pop("target", {})},
        {slot: {"materials": tuple(menu), "pieces": pieces, "join": join}},
        settled=settled,
        **others,
    )


def any_study(
    circuit: Mapping[str, Any],
    target: Mapping[str, Any],
    open_slots: Mapping[str, Mapping[str, Any]],
    *,
    settled: Mapping[str, list[tuple[str, float]]] | None = None,
    low: float = 233.15,
    high: float = 423.15,
    search: Mapping[str, Any] | None = None,
) -> Study:
    """Return a study with the first study's transistor, where the circuit takes one."""
    factory = process(*MENU)
    resistors: dict[str, Any] = {
        name: OpenSlot(**{**slot, "materials": tuple(slot["materials"])})
        for name, slot in open_slots.items()
    }
    for name, parts in (settled or {}).items():
        entries = [{"material": factory.materials[m], "value": value} for m, value in parts]
        resistors[name] = {"parts": entries}
    made = dict(circuit)
    if made["topology"] != "reference over resistor":
        made["transistor"] = factory.transistors["npn"]
    return Study(
        title="Invented study",
        process=factory,
        range=TemperatureRange(low=low, high=high, reference=T_REF),
        circuit=CircuitChoices(**made),
        target=Target(**{"shape": "flat", "current": 1e-5, **target}),
        resistors=resistors,
        search=Search(**(search or {})),
    )


def band_of(study: Study, slot: str, span: tuple[float, float] | None = None) -> Band:
    """Return the band of a study's open slot with the first of every choice."""
    made = study.circuit
    inputs = study.input_currents
    current = None
    if span is not None:
        current = float(np.sqrt(span[0] * span[1]))
    elif isinstance(inputs, tuple):
        current = inputs[0]
    choices = Choices(made.area_ratio[0], made.mirror_ratio[0], current)
    operation = Operation(study, choices, fixed_mixes(study))
    return Band(operation, slot, target_current(study.target, study.range.reference), span)


def temperatures(study: Study, count: int) -> Array:
    """Return temperatures [K] all over a study's range."""
    return np.linspace(study.range.low, study.range.high, count)


def deviation_of(band: Band, offer: Offer, coefficients: Array, count: int = 129) -> Array:
    """Return ``max |I/I_target - 1|`` of many mixes at once, from the full solution.

    ``coefficients``: shape (parts, mixes).
    """
    T = temperatures(band.operation.study, count)
    quantities = band.operation.quantities(T)
    with np.errstate(divide="ignore"):
        resistance = offer.linear((offer.columns(T) @ coefficients).T)
    quantities[resistance_name(band.slot)] = resistance
    circuit = band.operation.circuit
    output = currents(circuit, quantities)[circuit.currents[-1]]
    off = np.abs(output / band.target.current(T) - 1).max(axis=-1)
    return np.where(np.isfinite(off), off, 1e3)


def located_deviation(band: Band, offer: Offer, coefficients: Array) -> float:
    """Return ``max |I/I_target - 1|`` of one mix with its extremes located, not sampled."""
    span = band.operation.study.range
    mix = offer.mix(np.where(coefficients > 1e-9 * coefficients.sum(), coefficients, 0))
    filled = replace(band.operation, mixes={**band.operation.mixes, band.slot: mix})

    def ratio(T: Array) -> Array:
        return filled.output(T) / band.target.current(T)

    where = extreme_points(ratio, span.low, span.high, band.target.knots)
    return float(np.abs(ratio(where) - 1).max())


def evolved(band: Band, offer: Offer, count: int = 129, **options: Any) -> tuple[float, Array]:
    """Return the least deviation that differential evolution finds, and the coefficients.

    The objective is that of the exact search, for a whole generation at once;
    every part may be as large as fits under twice the need by itself.
    """
    from scipy.optimize import differential_evolution

    T = temperatures(band.operation.study, count)
    most = 2 * (offer.linear(band.resistance(T, 0.0))[:, None] / offer.columns(T)).max(axis=0)

    def objective(x: Array) -> Array:
        return deviation_of(band, offer, x * most[:, None] if x.ndim > 1 else x * most, count)

    found = differential_evolution(
        objective,
        [(0.0, 1.0)] * len(most),
        **{"rng": 7, "vectorized": True, "updating": "deferred", "polish": False, **options},
    )
    return float(found.fun), found.x * most


def with_materials(study: Study, slot: str, menu: Sequence[Material], **others: Any) -> Study:
    """Return the study with another menu in its open slot."""
    opened = study.resistors[slot].model_copy(update={"materials": tuple(menu), **others})
    return study.model_copy(update={"resistors": {**study.resistors, slot: opened}})


def settled_input(band: Band, current: float) -> Band:
    """Return the band with another input current [A], which is not free."""
    choices = replace(band.operation.choices, input_current=current)
    return replace(band, operation=replace(band.operation, choices=choices), input_span=None)
