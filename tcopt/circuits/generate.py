"""Write the numpy side of every circuit and law from its statement in sympy.

Run as ``python -m tcopt.circuits.generate``. The result is kept beside the
statements, so that commands which only compute need not load sympy; a test
derives it again and compares.
"""

from __future__ import annotations

from pathlib import Path

import sympy as sp

from tcopt.circuits import CIRCUITS, module_name
from tcopt.circuits.device_module import device_module
from tcopt.circuits.emit import LOG_I_S, function, module, text
from tcopt.circuits.ideal_module import ideal_module
from tcopt.circuits.node_module import node_module
from tcopt.circuits.terms import Device, kinds_of
from tcopt.laws import bipolar, mosfet, resistor

__all__ = ["laws_module", "modules", "write"]


def laws_module() -> str:
    """Return the source of the laws: values and slopes against temperature."""
    names = "T T_0 TC1 TC2 eta V_G0 varshni varshni_T k_q chi m V_TH0 a"
    T, T_0, TC1, TC2, eta, V_G0, varshni, varshni_T, k_q, chi, m, V_TH0, a = sp.symbols(
        names, positive=True
    )
    ratio = resistor.ratio(T, T_0, TC1, TC2)
    moved = resistor.about(T, T_0, TC1, TC2)
    growth = bipolar.log_saturation_growth(T, T_0, eta, V_G0, varshni, varshni_T, k_q)
    junction = "T T_0 eta V_G0 varshni varshni_T k_q"
    table: tuple[tuple[str, sp.Expr, str, str], ...] = (
        ("resistance_ratio", ratio, "T T_0 TC1 TC2", "Return R(T)/R(T_0)"),
        ("resistance_ratio_slope", sp.diff(ratio, T), "T T_0 TC1 TC2", "Return d(R/R_0)/dT [1/K]"),
        ("moved_tc1", moved[0], "T T_0 TC1 TC2", "Return TC1 with T as the reference [1/K]"),
        ("moved_tc2", moved[1], "T T_0 TC1 TC2", "Return TC2 with T as the reference [1/K^2]"),
        ("thermal_voltage", bipolar.thermal_voltage(T, k_q), "T k_q", "Return V_T [V]"),
        ("log_saturation_growth", growth, junction, "Return ln(I_S(T)/I_S(T_0))"),
        ("log_saturation_slope", sp.diff(growth, T), junction, "Return d(ln I_S)/dT [1/K]"),
        (
            "current_gain_ratio",
            bipolar.current_gain_ratio(T, T_0, chi),
            "T T_0 chi",
            "Return beta(T)/beta(T_0)",
        ),
        ("leakage_ratio", bipolar.leakage_ratio(T, T_0), "T T_0", "Return I_L(T)/I_L(T_0)"),
        (
            "specific_current_ratio",
            mosfet.specific_current_ratio(T, T_0, m),
            "T T_0 m",
            "Return I_spec(T)/I_spec(T_0)",
        ),
        (
            "threshold_voltage",
            mosfet.threshold_voltage(T, T_0, V_TH0, a),
            "T T_0 V_TH0 a",
            "Return V_TH [V]",
        ),
    )
    slopes = (
        ("current_gain_slope", bipolar.current_gain_ratio(T, T_0, chi), "T chi", "beta"),
        ("leakage_slope", bipolar.leakage_ratio(T, T_0), "", "I_L"),
        ("specific_current_slope", mosfet.specific_current_ratio(T, T_0, m), "T m", "I_spec"),
        (
            "threshold_slope",
            mosfet.threshold_voltage(T, T_0, V_TH0, a),
            "T T_0 V_TH0 a",
            "V_TH",
        ),
    )
    table += tuple(
        (name, sp.simplify(sp.diff(sp.log(law), T)), arguments, f"Return d(ln {symbol})/dT [1/K]")
        for name, law, arguments, symbol in slopes
    )
    current, area, V_T, I_S, V_TH, n, I_spec = sp.symbols(
        "current area V_T I_S V_TH n I_spec", positive=True
    )
    one, none = sp.Integer(1), sp.Integer(0)
    V_BE = bipolar.base_emitter_voltage(current, area, V_T, I_S, one)
    V_GS = mosfet.gate_voltage(current, area, none, V_T, V_TH, n, none, I_spec, one)
    table += (
        (
            "base_emitter_voltage",
            sp.expand_log(V_BE).subs(sp.log(I_S), LOG_I_S),
            "current area V_T log_I_S",
            "Return V_BE [V] without Early effect",
        ),
        (
            "gate_source_voltage",
            V_GS,
            "current area V_T V_TH n I_spec",
            "Return V_GS [V] without Early effect, source and bulk together",
        ),
    )
    IC, s = sp.symbols("inversion_coefficient s", positive=True)
    table += (
        (
            "saturation_voltage",
            mosfet.saturation_voltage(IC, V_T),
            "inversion_coefficient V_T",
            "Return V_DSsat [V]",
        ),
        (
            "transconductance_share",
            mosfet.transconductance_share(s),
            "s",
            "Return g_m n V_T/I_D for s, the root of the inversion coefficient",
        ),
    )
    functions = [
        function(name, f"{summary}.", arguments.split(), [f"return {text(expression)}"])
        for name, expression, arguments, summary in table
    ]
    return module("The laws of the parts", "".join(functions))


def modules() -> dict[Path, str]:
    """Return every generated file and its source."""
    here = Path(__file__).parent
    found = {here.parent / "laws" / "generated.py": laws_module()}
    found[here / "generated" / "__init__.py"] = '"""Numerics made from the statements."""\n'
    for circuit in CIRCUITS.values():
        for feed in circuit.feeds:
            for device in kinds_of(circuit):
                name = module_name(circuit.topology, feed, device.value)
                found[here / "generated" / f"{name}.py"] = (
                    ideal_module(circuit, feed)
                    if device is Device.IDEAL
                    else device_module(circuit, feed, device)
                )
                nodes = node_module(circuit, feed, device)
                if nodes is not None:
                    found[here / "generated" / f"{name}_nodes.py"] = nodes
    return found


def write() -> None:
    """Write all generated files, and remove what no statement gives any more."""
    made = modules()
    for stale in (Path(__file__).parent / "generated").glob("*.py"):
        if stale not in made:
            stale.unlink()
    for path, source in made.items():
        path.parent.mkdir(exist_ok=True)
        path.write_text(source, encoding="utf-8")


if __name__ == "__main__":
    write()
