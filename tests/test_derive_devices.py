"""Real transistors: no closed form, and formulas that hold all the same.

The loops are solved anew, by mpmath in 50 digits, at temperatures around T_0, and the output
differentiated numerically.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Any

import mpmath
import pytest
import sympy as sp

from tcopt.circuits.terms import Device, terms_of
from tcopt.derive import FLAT, Derivation, derive, expected_names, render, with_numbers
from tcopt.derive.reading import plainly
from tests import oracle

mp: Any = mpmath.mp

T_0 = 300.15
BIPOLAR = {
    "I_S": 2e-17,
    "eta": 3.6,
    "V_G0": 1.17,
    "beta": 80.0,
    "TC1_beta": 5e-3,
    "TC2_beta": 4e-6,
    "V_A": 60.0,
    "I_L": 2e-9,
    "TC1_I_L": 0.07,
    "TC2_I_L": 2e-3,
    "V_out": 1.5,
}
MOS = {
    "V_TH": 0.5,
    "TC1_V_TH": -2e-3,
    "TC2_V_TH": 1e-7,
    "n": 1.3,
    "n_S": 1.3,
    "I_spec": 2e-6,
    "TC1_I_spec": 2e-3,
    "TC2_I_spec": -1e-6,
    "V_A": 20.0,
    "I_L": 1e-10,
    "TC1_I_L": 0.07,
    "TC2_I_L": 2e-3,
    "V_out": 1.0,
}
CORE = {"T_0": T_0, "N": 8.0, "M": 1.0, "R_core": 5e3, "TC1_core": -3e-4, "TC2_core": 9e-7}
MIRROR = {
    "T_0": T_0,
    "N": 4.0,
    "I_given": 1e-4,
    "TC1_I_given": 3e-4,
    "TC2_I_given": -4e-7,
    "R_input": 300.0,
    "TC1_input": 9e-4,
    "TC2_input": 8e-7,
    "R_output": 6e3,
    "TC1_output": 1.6e-3,
    "TC2_output": 3e-7,
    "I_others": 1e-6,
    "TC1_I_others": 1e-3,
    "TC2_I_others": 1e-6,
}
GATE = {"T_0": T_0, "R_gate": 5e4, "TC1_gate": 4e-4, "TC2_gate": -6e-7}
CASES = {
    ("ptat core", Device.BIPOLAR): (CORE | BIPOLAR, {"J_out": 1e-5, "V_D": 0.7}),
    ("degenerated mirror", Device.BIPOLAR): (
        MIRROR | BIPOLAR,
        {"J_in": 1e-4, "J_out": 2e-5, "V_D": 0.75},
    ),
    ("gate source reference", Device.MOS): (GATE | MOS, {"J_out": 1.1e-5, "V_D": 0.55}),
    ("constant transconductance bias", Device.MOS): (CORE | MOS, {"J_out": 1e-5, "V_D": 0.6}),
}
"""Invented designs, and where to look for what the loops are solved for."""
cases = pytest.mark.parametrize(
    ("topology", "device"), CASES, ids=lambda item: getattr(item, "value", item)
)


@pytest.fixture(autouse=True)
def _digits() -> Iterator[None]:
    with mp.workdps(50):
        yield


def at(T: Any, values: Mapping[str, float]) -> dict[str, Any]:
    """Return every quantity of the loops at a temperature."""
    d, found = T - mp.mpf(values["T_0"]), {"V_T": mp.mpf(oracle.thermal_voltage(T))}
    for name, value in values.items():
        own = name.removeprefix("R_")
        one, two = (mp.mpf(values.get(f"TC{order}_{own}", 0.0)) for order in (1, 2))
        found[name] = mp.mpf(value) * (1 + one * d + two * d * d)
    if "I_S" in values:
        junction = [values["I_S"], values["T_0"], values["eta"], values["V_G0"]]
        found["I_S"] = mp.exp(mp.mpf(oracle.log_saturation_current(T, *junction)))
    return found


def solved(derivation: Derivation, T: Any, values: Mapping[str, float]) -> dict[str, Any]:
    """Solve the loops as stated at a temperature, in the logarithms of their unknowns."""
    terms, loops = terms_of(derivation.circuit, derivation.feed, derivation.device)
    unknowns = list(terms.unknowns.values())
    quantities = at(T, values)
    wanted = [plainly(loop.residual) for loop in loops] + [terms.currents["I_out"]]
    given = sorted({s for e in wanted for s in e.free_symbols} - set(unknowns), key=str)
    f = sp.lambdify([*unknowns, *given], wanted, "mpmath")
    fixed = [quantities[s.name] for s in given]

    def residuals(*logs: Any) -> Any:
        return f(*map(mp.exp, logs), *fixed)[:-1]

    logs = mp.findroot(residuals, [mp.log(values[u.name]) for u in unknowns], tol=1e-60)
    found = [mp.exp(x) for x in logs]
    return {
        **{u.name: x for u, x in zip(unknowns, found, strict=True)},
        "I_out": f(*found, *fixed)[-1],
    }


def output_series(derivation: Derivation, values: Mapping[str, float]) -> tuple[Any, Any]:
    """Return TC1 [1/K] and TC2 [1/K^2] of the output at T_0."""
    h = mp.mpf("1e-9")
    below, here, above = (
        solved(derivation, mp.mpf(T_0) + k * h, values)["I_out"] for k in (-1, 0, 1)
    )
    return (above - below) / (2 * h * here), (above - 2 * here + below) / (2 * h * h * here)


def case_of(topology: str, device: Device) -> tuple[Derivation, dict[str, float]]:
    """Return the derivation, and the values with the unknowns as they solve the loops."""
    values, start = CASES[topology, device]
    derivation = derive(topology, device=device)
    kept = {name: value for name, value in values.items() if name in expected_names(derivation)}
    found = solved(derivation, mp.mpf(T_0), {**kept, **start})
    return derivation, {**kept, **{k: float(found[k]) for k in derivation.solved_for}}


@cases
def test_no_closed_form_is_said(topology: str, device: Device) -> None:
    derivation = derive(topology, device=device)
    assert derivation.closed_form is None
    assert "These loops have no closed form" in render(derivation, "text")


@cases
def test_output_and_both_orders(topology: str, device: Device) -> None:
    derivation, values = case_of(topology, device)
    numbers = with_numbers(derivation, values)
    first, second = output_series(derivation, values)
    assert numbers["TC_I_out"] == pytest.approx(float(first), rel=1e-9)
    assert numbers["TC2_I_out"] == pytest.approx(float(second), rel=1e-8)


@cases
def test_perfect_resistor(topology: str, device: Device) -> None:
    """With its coefficients put in, the output stands still to second order."""
    derivation, values = case_of(topology, device)
    numbers = with_numbers(derivation, values)
    for slot in derivation.slots:
        perfect = numbers.perfect(slot, FLAT)
        assert perfect is not None
        put_in = {f"TC1_{slot}": perfect[0], f"TC2_{slot}": perfect[1]}
        first, second = output_series(derivation, {**values, **put_in})
        assert float(first) == pytest.approx(0, abs=1e-12)
        assert float(second) == pytest.approx(0, abs=1e-14)


@cases
def test_python_source(topology: str, device: Device) -> None:
    """The loops are met by the independent solution, and the slope is its slope."""
    derivation, values = case_of(topology, device)
    module: dict[str, Any] = {}
    exec(compile(render(derivation, "python"), "derived", "exec", dont_inherit=True), module)
    numbers = {**values, "T": T_0, **{f"TC_{k[4:]}": v for k, v in values.items() if "TC1_" in k}}

    def call(name: str) -> Any:
        code = module[name].__code__
        names = code.co_varnames[: code.co_kwonlyargcount]
        return module[name](**{k: numbers[k] for k in names})

    for residual in call("residuals"):
        assert residual == pytest.approx(0, abs=1e-14)
    first, _ = output_series(derivation, values)
    assert call("temperature_coefficient") == pytest.approx(float(first), rel=1e-9)
