"""Studies with real transistors for the tests of headroom, start-up and traps; all invented."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from tcopt.check import finished_operation
from tcopt.operation import Operation
from tcopt.study import Study, load_study
from tests.gate import PROCESS, STUDY, changed, write

__all__ = ["MENU", "T_0", "operation", "resistor", "study"]

T_0 = 300.15
MENU = changed(
    PROCESS,
    {
        "materials.diffused": {"tc1": "1500 ppm/K", "tc2": "0.9 ppm/K^2"},
        "materials.constant": {"tc1": 0},
        "transistors.npn.current_gain": 120,
        "transistors.npn.current_gain_exponent": 1.5,
        "transistors.npn.early_voltage": "60 V",
        "transistors.npn.leakage_current": "1 pA",
        "transistors.nmos": {
            "kind": "mos",
            "threshold_voltage": "0.5 V",
            "threshold_slope": "1 mV/K",
            "slope_factor": 1.3,
            "specific_current": "0.5 uA",
            "mobility_exponent": 1.5,
            "early_voltage": "20 V",
            "leakage_current": "1 pA",
        },
        "transistors.pmos": {
            "kind": "mos",
            "threshold_voltage": "0.6 V",
            "threshold_slope": "1.2 mV/K",
            "slope_factor": 1.35,
            "specific_current": "0.2 uA",
        },
    },
)


def resistor(value: str, material: str = "diffused") -> dict[str, Any]:
    """Return a settled slot of one part."""
    return {"parts": [{"material": material, "value": value}]}


def study(folder: Path, circuit: dict[str, Any], slots: dict[str, str], **more: Any) -> Study:
    """Return a study of this circuit from -40 to 125 degC; slots of diffused resistors."""
    changes = {
        "circuit": circuit,
        "resistors": {name: resistor(value) for name, value in slots.items()},
        "target": {"shape": "flat", "current": "10 uA"},
        **{key.replace("__", "."): value for key, value in more.items()},
    }
    return load_study(write(folder, MENU, changed(STUDY, changes)))


def operation(
    folder: Path, circuit: dict[str, Any], slots: dict[str, str], **more: Any
) -> Operation:
    """Return the finished design of such a study."""
    return finished_operation(study(folder, circuit, slots, **more))
