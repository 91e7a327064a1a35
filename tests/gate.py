"""A process and a study as the gate's tests write them; every figure is invented."""

from __future__ import annotations

import copy
from pathlib import Path
from typing import Any

import tomlkit

PROCESS: dict[str, Any] = {
    "title": "Invented process",
    "reference": "27 degC",
    "materials": {
        "poly": {"sheet_resistance": "320 ohm", "tc1": "-180 ppm/K", "tc2": "0.7 ppm/K^2"},
        "well": {"tc1": "5600 ppm/K", "tc2": "11 ppm/K^2", "reference": "25 degC"},
        "diving": {"tc1": "-9000 ppm/K"},
    },
    "transistors": {
        "npn": {
            "base_emitter": {"voltage": "0.65 V", "current": "10 uA"},
            "bandgap_voltage": "1.17 V",
            "temperature_exponent": 3.6,
        },
        "big": {
            "saturation_current": "2e-17 A",
            "bandgap_voltage": "1.17 V",
            "temperature_exponent": 3.6,
            "reference": "25 degC",
        },
    },
}

STUDY: dict[str, Any] = {
    "title": "Invented study",
    "process": "process.toml",
    "range": {"from": "-40 degC", "to": "125 degC", "reference": "27 degC"},
    "circuit": {
        "topology": "degenerated mirror",
        "transistor": "npn",
        "input_current": "100 uA",
        "area_ratio": [1, 2, 4, 8],
    },
    "target": {"shape": "flat", "current": "10 uA", "limit": "100 ppm/K"},
    "resistors": {"output": {"materials": ["poly", "well"], "pieces": 2}},
}

GONE = object()
"""In a change: take the key away."""


def changed(table: dict[str, Any], changes: dict[str, Any]) -> dict[str, Any]:
    """Return a copy with the values at dotted keys replaced, added, or taken away."""
    table = copy.deepcopy(table)
    for path, value in changes.items():
        *folders, last = path.split(".")
        place = table
        for folder in folders:
            place = place.setdefault(folder, {})
        if value is GONE:
            place.pop(last, None)
        else:
            place[last] = value
    return table


def write(folder: Path, process: dict[str, Any] | None, study: dict[str, Any] | None) -> Path:
    """Write both files and return the study's path; None leaves one out."""
    for name, table in (("process.toml", process), ("study.toml", study)):
        if table is not None:
            (folder / name).write_text(tomlkit.dumps(table), encoding="utf-8")
    return folder / "study.toml"
