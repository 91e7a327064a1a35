"""Studies for silicon and for sizes; every figure of the factory is invented."""

from __future__ import annotations

from typing import Any

from tcopt.study import (
    CircuitChoices,
    CommonPart,
    Layout,
    Material,
    OpenSlot,
    Process,
    Search,
    Spread,
    Study,
    Target,
    TemperatureRange,
    Transistor,
    Trim,
)

__all__ = ["MENU", "T_0", "mirror_study", "study_of", "sum_study", "transistor"]

T_0 = 300.15
_PPM, _UM = 1e-6, 1e-6

# name: ohm per square, TC1, TC2 [ppm/K, ppm/K^2], spreads of sheet [%], TC1, TC2, matching
# [% um], least width [um], ends [ohm um], step that is shared
_ROWS: dict[str, tuple[float, float, float, float, float, float, float, float, float, str]] = {
    "p_poly": (320, -180, 0.7, 8, 30, 0.03, 2.0, 0.8, 150, "poly"),
    "n_poly": (210, 120, 0.5, 8, 30, 0.03, 2.2, 0.8, 100, "poly"),
    "high_poly": (1900, -2400, 4.1, 15, 120, 0.1, 5.0, 1.0, 900, "poly"),
    "silicide": (6.5, 3200, 0.4, 10, 100, 0.03, 1.5, 0.5, 3, ""),
    "n_well": (1100, 5600, 11.0, 15, 150, 0.2, 4.0, 2.0, 300, ""),
    "p_base": (640, 1750, 4.6, 12, 60, 0.1, 2.5, 1.2, 200, ""),
    "n_diffusion": (75, 1450, 0.9, 10, 60, 0.05, 1.8, 0.8, 30, ""),
    "thin_film": (980, -60, 0.1, 9, 15, 0.02, 1.2, 2.0, 400, ""),
}


def _material(name: str) -> Material:
    sheet, tc1, tc2, spread, tc1_spread, tc2_spread, matching, width, ends, step = _ROWS[name]
    return Material(
        name=name,
        reference=T_0,
        sheet_resistance=sheet,
        tc1=tc1 * _PPM,
        tc2=tc2 * _PPM,
        spread=spread / 100,
        tc1_spread=tc1_spread * _PPM,
        tc2_spread=tc2_spread * _PPM,
        matching=matching / 100 * _UM,
        min_width=width * _UM,
        end_resistance=ends * _UM,
        common=(CommonPart(part=step, share=0.5),) if step else (),
    )


MENU = {name: _material(name) for name in _ROWS}


def transistor() -> Transistor:
    """Return a transistor of 0.65 V at 10 uA, roughly."""
    return Transistor(
        name="npn",
        reference=T_0,
        saturation_current=1.2e-16,
        bandgap_voltage=1.17,
        temperature_exponent=3.6,
    )


def study_of(
    circuit: dict[str, Any],
    slots: dict[str, Any],
    materials: dict[str, Material] = MENU,
    *,
    current: float = 2e-5,
    limit: Any = None,
    purpose: str = "paper",
    sigma: float = 3.0,
    show: int = 5,
    samples: int = 4096,
    trim: Trim | None = None,
    layout: Layout | None = None,
) -> Study:
    """Return a study from -40 to 150 degC, flat, of one circuit."""
    npn = transistor()
    needs = circuit.pop("transistor", True)
    return Study(
        title="Invented",
        process=Process(
            title="Invented", reference=T_0, materials=materials, transistors={"npn": npn}
        ),
        range=TemperatureRange(low=233.15, high=423.15, reference=T_0),
        circuit=CircuitChoices(**({"transistor": npn} if needs else {}), **circuit),
        target=Target(shape="flat", current=current, limit=limit),
        resistors=slots,
        search=Search(purpose=purpose, sigma=sigma, show=show),
        spread=Spread(samples=samples),
        trim=trim,
        layout=layout,
    )


def sum_study(pieces: int = 2, area_ratio: tuple[float, ...] = (8.0,), **given: Any) -> Study:
    """Return a sum of PTAT and VBE currents with both resistors open, over all materials."""
    return study_of(
        {"topology": "ptat plus vbe", "area_ratio": area_ratio},
        {"core": OpenSlot(pieces=pieces), "base": OpenSlot(pieces=pieces)},
        **given,
    )


def mirror_study(
    pieces: int = 2, join: str = "series", area_ratio: tuple[float, ...] = (1.0,), **given: Any
) -> Study:
    """Return a mirror from 100 uA to 10 uA, its output's resistor open over all materials."""
    return study_of(
        {"topology": "degenerated mirror", "input_current": (1e-4,), "area_ratio": area_ratio},
        {"output": OpenSlot(pieces=pieces, join=join)},
        **{"current": 1e-5, **given},
    )
