"""What is left of the loops at currents that are said to solve them: from the drawings, explicitly.

Every other voltage and current follows from these currents by Ohm's and Kirchhoff's laws, so
nothing has to be solved and nothing of ``tcopt`` is used.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from typing import Any

from tests.device_parts import Circuit, Quantities

__all__ = ["Left", "left"]


class Left:
    """What is left, and what has to be positive.

    ``volts``: of each loop of voltages; ``amperes``: of the input node, relative;
    ``positive``: junction currents and collector-emitter voltages.
    """

    def __init__(self, c: Circuit) -> None:
        self.c = c
        self.volts: list[Any] = []
        self.amperes: Any = 0.0
        self.positive: list[Any] = []

    def on(self, J: Any, across: Any) -> None:
        """Note a transistor whose current and voltage both have to be there."""
        self.positive += [J, across]

    def output(self, J: Any, emitter: Any, area: Any) -> Any:
        """Control voltage of the output transistor."""
        control = self.c.output_control(J, area, emitter)
        self.on(J, self.c.across_output if self.c.per_V_A > 0 else 1.0)
        return control


def _mirror(f: Left, feed: str, currents: Mapping[str, Any]) -> None:
    c, q = f.c, f.c.q
    J_in, J_out = currents["I_in"] - c.leakage, currents["I_out"] - q["N"] * c.leakage
    bases = c.base(J_in) + c.base(J_out) + c.others
    V_B = f.output(J_out, c.emitter_current(J_out) * q["R_output"], q["N"])
    emitter, node = c.emitter_current(J_in) * q["R_input"], V_B + c.above(bases)
    f.on(J_in, node - emitter)
    f.volts.append(c.control(J_in, 1, emitter, node - emitter) - V_B)
    drawn = currents["I_in"] + (0 if c.mos else c.from_input * bases)
    _input(f, feed, drawn, node)


def _input(f: Left, feed: str, drawn: Any, node: Any) -> None:
    if feed == "given":
        f.amperes = drawn / f.c.q["I_given"] - 1
    else:
        f.volts.append(f.c.q["V_CC"] - node - drawn * f.c.q["R_feed"])


def _peaking(f: Left, feed: str, currents: Mapping[str, Any]) -> None:
    c, q = f.c, f.c.q
    J_in, J_out = currents["I_in"] - c.leakage, currents["I_out"] - q["N"] * c.leakage
    collector = f.output(J_out, 0, q["N"])
    f.on(J_in, collector)
    V_B = c.control(J_in, 1, 0, collector)
    through = currents["I_in"] + c.base(J_out)
    f.volts.append(V_B - through * q["R_drop"] - collector)
    _input(f, feed, through + c.base(J_in), V_B)


def _core(f: Left, I_core: Any) -> Any:
    """Return the control voltage of the diode-connected transistor."""
    c, q = f.c, f.c.q
    J = I_core - q["N"] * c.leakage
    left = q["M"] * I_core - c.leakage - (0 if c.mos else c.from_input * c.base(J))
    J_1 = left / (1 + (0 if c.mos else c.from_input * c.per_beta))
    V_B = f.output(J, c.emitter_current(J) * q["R_core"], q["N"])
    across = V_B + c.above(c.base(J_1) + c.base(J))
    f.on(J_1, across)
    control = c.control(J_1, 1, 0, across)
    f.volts.append(control - V_B)
    return control


def _ptat_core(f: Left, feed: str, currents: Mapping[str, Any]) -> None:  # noqa: ARG001
    _core(f, currents["I_out"])


def _ptat_plus_vbe(f: Left, feed: str, currents: Mapping[str, Any]) -> None:  # noqa: ARG001
    control = _core(f, currents["I_core"])
    falling = currents["I_out"] - currents["I_core"]
    f.volts.append(control - falling * f.c.q["R_base"])


def _over_resistor(f: Left, feed: str, currents: Mapping[str, Any]) -> None:  # noqa: ARG001
    c = f.c
    J = currents["I_out"] - c.leakage
    J_1 = J - (0 if c.mos else c.from_input * c.base(J))
    resistance = c.q["R_gate" if c.mos else "R_base"]
    drop = (c.emitter_current(J) - c.base(J_1)) * resistance
    collector = f.output(J, drop, 1) + c.above(c.base(J))
    f.on(J_1, collector)
    f.volts.append(c.control(J_1, 1, 0, collector) - drop)


def _gate_voltage_bias(f: Left, feed: str, currents: Mapping[str, Any]) -> None:  # noqa: ARG001
    J = currents["I_out"] - f.c.q["N"] * f.c.leakage
    f.volts.append(f.c.q["V_ref"] - f.output(J, J * f.c.q["R_source"], f.c.q["N"]))


_CIRCUITS: dict[str, Callable[[Left, str, Mapping[str, Any]], None]] = {
    "degenerated mirror": _mirror,
    "peaking source": _peaking,
    "ptat core": _ptat_core,
    "constant transconductance bias": _ptat_core,
    "ptat plus vbe": _ptat_plus_vbe,
    "vbe reference": _over_resistor,
    "gate source reference": _over_resistor,
    "gate voltage bias": _gate_voltage_bias,
}


def left(
    topology: str, feed: str, device: str, quantities: Quantities, currents: Mapping[str, float]
) -> Left:
    """Return what is left of the loops at these currents [A]."""
    found = Left(Circuit(device, quantities, None))
    _CIRCUITS[topology](found, feed, currents)
    return found
