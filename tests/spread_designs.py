"""Small designs whose spread can be followed by hand; every figure is invented."""

from __future__ import annotations

from typing import Any

from tcopt.operation import Choices, Mix
from tcopt.spread.plan import Plan
from tcopt.study import (
    CircuitChoices,
    FixedSlot,
    Insertion,
    Material,
    Part,
    Process,
    Spread,
    Study,
    Target,
    TemperatureRange,
    Transistor,
    Trim,
)

__all__ = [
    "T_0", "insertion", "material", "plan_of", "ptat_core", "ptat_plus_vbe", "sensed", "slot_of",
    "study_of", "transistor",
]  # fmt: skip

T_0 = 300.15


def material(name: str = "film", **data: Any) -> Material:
    """Return a material whose data refer to T_0; without a coefficient it has none."""
    return Material(**{"name": name, "reference": T_0, "tc1": 0.0, **data})


def transistor(**data: Any) -> Transistor:
    """Return a transistor of 0.65 V at 10 uA, roughly."""
    given = {
        "name": "npn",
        "reference": T_0,
        "saturation_current": 1.2e-16,
        "bandgap_voltage": 1.17,
        "temperature_exponent": 3.6,
    }
    return Transistor(**{**given, **data})


def insertion(**data: Any) -> Insertion:
    """Return an insertion at T_0 that scales the output mirror by 30 % without steps."""
    return Insertion(**{"temperature": T_0, "scales": "output mirror", "reach": 0.3, **data})


def study_of(
    slots: dict[str, FixedSlot],
    circuit: dict[str, Any],
    *,
    current: float = 1e-5,
    limit: Any = None,
    trim: tuple[Insertion, ...] = (),
    device: Transistor | None = None,
    shape: str = "flat",
    **spread: Any,
) -> Study:
    """Return a finished study from -40 to 125 degC."""
    materials = {part.material.name: part.material for s in slots.values() for part in s.parts}
    return Study(
        title="Invented",
        process=Process(
            title="Invented",
            reference=T_0,
            materials=materials,
            transistors={device.name: device} if device else {},
        ),
        range=TemperatureRange(low=233.15, high=398.15, reference=T_0),
        circuit=CircuitChoices(**circuit, transistor=device),
        target=Target(shape=shape, current=current, limit=limit),
        resistors=slots,
        spread=Spread(**{"samples": 4096, **spread}),
        trim=Trim(**dict(zip(("first", "second"), trim, strict=False))) if trim else None,
    )


def plan_of(study: Study) -> Plan:
    """Return the plan of a finished study."""
    made = study.circuit
    mixes = {name: Mix(slot.parts, slot.join) for name, slot in study.resistors.items()}
    current = study.input_currents
    given = current[0] if isinstance(current, tuple) else None
    return Plan(study, Choices(made.area_ratio[0], made.mirror_ratio[0], given), mixes)


def slot_of(*parts: tuple[Material, float], join: str = "series", **data: Any) -> FixedSlot:
    """Return a settled slot."""
    return FixedSlot(
        parts=tuple(Part(material=m, value=value, **data) for m, value in parts), join=join
    )


def sensed(*parts: tuple[Material, float], **data: Any) -> Study:
    """Return a reference of 1 V over resistors in series: ``I = 1 V/R``, nothing else in it."""
    total = sum(value for _, value in parts)
    circuit = {"topology": "reference over resistor", "reference_voltage": 1.0}
    return study_of({"sense": slot_of(*parts)}, circuit, **{"current": 1 / total, **data})


def ptat_core(film: Material, **data: Any) -> Study:
    """Return a PTAT core of area ratio 8 over a resistor of 5.378 kohm, about 10 uA."""
    circuit = {"topology": "ptat core", "area_ratio": (8.0,)}
    device = data.pop("device", None) or transistor()
    slots = {"core": slot_of((film, 5378.0))}
    return study_of(slots, circuit, **{"shape": "ptat", "device": device, **data})


def ptat_plus_vbe(film: Material, **data: Any) -> Study:
    """Return the sum of a PTAT and a V_BE current, about 20 uA and about flat."""
    circuit = {"topology": "ptat plus vbe", "area_ratio": (8.0,)}
    slots = {"core": slot_of((film, 5.1e3)), "base": slot_of((film, 65e3))}
    device = data.pop("device", None) or transistor()
    return study_of(slots, circuit, **{"current": 2.0e-5, "device": device, **data})
