"""Small studies made in Python, for tests of what shows results; every figure is invented."""

from __future__ import annotations

from functools import cache
from pathlib import Path
from typing import Any

from tcopt.design import DesignResult
from tcopt.mix.search import design
from tcopt.study import (
    CircuitChoices,
    Material,
    OpenSlot,
    Process,
    Study,
    Target,
    TemperatureRange,
    load_study,
)

__all__ = ["FIRST", "first_design", "material", "mirror_study", "process", "reference_study"]

FIRST = Path(__file__).parents[1] / "tcopt" / "study" / "first"
"""Folder of the first study."""
T_REF = 300.15


def material(name: str, tc1: float, tc2: float = 0.0, **others: Any) -> Material:
    """Return a material from coefficients in ppm."""
    return Material(name=name, **{"reference": T_REF, **others}, tc1=tc1 * 1e-6, tc2=tc2 * 1e-6)


def process(*materials: Material, title: str = "Invented process") -> Process:
    """Return a process with the first study's transistor and file."""
    first = load_study(FIRST / "study.toml").process
    return Process(
        title=title,
        reference=T_REF,
        materials={each.name: each for each in materials},
        transistors=first.transistors,
        path=first.path,
    )


def _study(menu: Process, slot: str, circuit: dict[str, Any], **others: Any) -> Study:
    pieces, join = others.pop("pieces", 2), others.pop("join", "series")
    target = {"shape": "flat", "current": 1e-5, "limit": others.pop("limit", "100 ppm/K")}
    return Study(
        title=others.pop("title", "Invented study"),
        process=menu,
        range=TemperatureRange(
            low=others.pop("low", 233.15), high=others.pop("high", 423.15), reference=T_REF
        ),
        circuit=CircuitChoices(**circuit),
        target=Target(**{**target, **others}),
        resistors={
            slot: OpenSlot(materials=tuple(menu.materials.values()), pieces=pieces, join=join)
        },
    )


def mirror_study(menu: Process, **others: Any) -> Study:
    """Return 10 uA from 100 uA by a resistor in the output's emitter."""
    circuit = {"topology": "degenerated mirror", "transistor": menu.transistors["npn"]}
    return _study(menu, "output", {**circuit, "input_current": (1e-4,)}, **others)


def reference_study(menu: Process, **others: Any) -> Study:
    """Return a constant 1 V over a resistor: the current is 1 V over R, by hand."""
    circuit = {"topology": "reference over resistor", "reference_voltage": 1.0}
    return _study(menu, "sense", circuit, **others)


@cache
def first_design() -> DesignResult:
    """Return the design of the first study."""
    return design(load_study(FIRST / "study.toml"))
