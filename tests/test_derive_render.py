"""Notations: text that fits a page, LaTeX that parses, Python that gives the same numbers."""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any

import numpy as np
import pytest
import sympy as sp
from matplotlib import font_manager, mathtext

from tcopt.circuits import CIRCUITS
from tcopt.derive import Derivation, derive, render, with_numbers
from tcopt.solve import currents, needed_resistance, numerics
from tests.derive_cases import CASES, derived, quantities_at

cases = pytest.mark.parametrize("case", CASES, ids="-".join)
TEMPERATURES = np.linspace(218.15, 448.15, 24)


def every_derivation() -> Iterator[Derivation]:
    for topology, circuit in CIRCUITS.items():
        for feed in circuit.feeds:
            yield derived((topology, feed)) if (topology, feed) in CASES else derive(topology, feed)


@pytest.fixture(scope="module")
def texts() -> dict[str, str]:
    return {f"{d.circuit.topology}, {d.feed}": render(d, "text") for d in every_derivation()}


# Text


def test_every_circuit_has_a_note(texts: dict[str, str]) -> None:
    for text in texts.values():
        for heading in ("Loops", "Temperature coefficient", "Second order", "Symbols"):
            assert f"\n{heading}\n{'-' * len(heading)}\n" in text


def test_lines_fit_a_page(texts: dict[str, str]) -> None:
    for topology, feed in CASES:
        text = texts[f"{topology}, {feed}"]
        assert [line for line in text.splitlines() if len(line) > 96 or line != line.rstrip()] == []


def test_widlar_source_stands_in_the_note_of_the_mirror(texts: dict[str, str]) -> None:
    note = texts["degenerated mirror, given"]
    case = note[note.index("Special cases") :]
    assert "TC_output = 1/T + TC(I_in)/x_output\n" in case
    assert re.search(
        r"x_output \(1/T - TC_output\) \+ TC\(I_in\)\n    TC\(I_out\) = -+\n +1 \+ x_output\n", case
    )


def test_extremum_of_the_peaking_source_is_said(texts: dict[str, str]) -> None:
    assert "at x_drop = 1 the output has an extremum" in texts["peaking source, given"]


def test_legend_explains_every_symbol(texts: dict[str, str]) -> None:
    """What stands in a formula stands in the legend, or is defined by a formula."""
    for text in texts.values():
        body, legend = text.split("\nSymbols\n-------\n")
        explained = {line.split()[0] for line in legend.splitlines() if line.strip()}
        found = set(re.findall(r"\b[A-Z]_[A-Za-z0-9]+\b", body)) - {"K_slot"}
        defined = set(re.findall(r"^ +(\w+) += ", body, flags=re.MULTILINE))
        assert found <= explained | defined | {f"W_{branch}" for branch in (-1,)}


def test_values_stand_beside_the_formulas() -> None:
    """Widlar source at a ratio of 200, 300 K, no drift of the resistor: 2804 ppm/K (calc)."""
    none = {"TC1_output": 0.0, "TC2_output": 0.0, "TC1_I_given": 0.0, "TC2_I_given": 0.0}
    mirror = {"T_0": 300.0, "N": 1.0, "I_given": 1e-3, "R_input": 0.0, "R_output": 27.3943e3}
    text = render(with_numbers(derived(("degenerated mirror", "given")), mirror | none), "text")
    assert "R_input = 0" in text.splitlines()[0]
    assert re.search(r"TC\(I_out\) = -+ = 2804\.\d ppm/K\n", text)
    assert "x_output = I_out R_output/V_T = 5.2983\n" in text
    assert re.search(r"R_output +27\.394 kohm  resistance: in the emitter", text)


def test_open_slot_shows_what_it_needs() -> None:
    """V_T ln 8 = 53.8 mV at 300 K across 10 uA: 5.376 kohm; flat: 1/T = 3333.3 ppm/K (calc)."""
    values = {"T_0": 300.0, "N": 8.0, "M": 1.0, "I_target": 1e-5}
    text = render(with_numbers(derived(("ptat core", "self")), values), "text")
    assert "R_core = V_T ln(N M)/I_out = 5.3758 kohm\n" in text
    assert "  flat output\n    TC_core = 1/T = 3333.3 ppm/K\n" in text
    assert "TC(I_out) = 1/T - TC_core\n" in text  # its own drift is not known


# LaTeX


@pytest.mark.filterwarnings("ignore:Font family")
def test_latex_is_mathematics_that_parses() -> None:
    """Parsed by matplotlib, which knows plain math mode only."""
    parser = mathtext.MathTextParser("path")
    font = font_manager.FontProperties(size=10)
    found: set[str] = set()
    for derivation in every_derivation():
        latex = render(derivation, "latex")
        equations = re.findall(r"\\\[ (.*) \\\]", latex)
        symbols = re.findall(r"^\$(.*?)\$ &", latex, flags=re.MULTILINE)
        assert len(equations) > 8
        assert len(symbols) > 6
        found.update(equations, symbols)
    for formula in found:
        width = parser.parse(f"${formula}$", dpi=72, prop=font)[0]
        assert width > 0


def test_latex_writes_symbols_as_the_trade_does() -> None:
    latex = render(derived(("ptat core", "self")), "latex")
    assert r"\[ V_{T} \ln\left(N M\right) = I_{\mathrm{out}} R_{\mathrm{core}} \]" in latex
    expected = r"\[ \mathrm{TC}(I_{\mathrm{out}}) = \frac{1}{T} - \mathrm{TC}_{\mathrm{core}} \]"
    assert expected in latex


def test_latex_leaves_no_special_character_in_words() -> None:
    for derivation in every_derivation():
        for line in render(derivation, "latex").splitlines():
            if not line.startswith((r"\[", "$", r"\begin")):
                assert not re.search(r"(?<!\\)[_%&#^]", line)


# Python


def module_of(derivation: Derivation) -> dict[str, Any]:
    return ran(render(derivation, "python"))


def ran(source: str) -> dict[str, Any]:
    module: dict[str, Any] = {}
    exec(compile(source, "derived", "exec", dont_inherit=True), module)
    return module


def arrays(case: tuple[str, str]) -> dict[str, Any]:
    """Return the quantities at all temperatures, from the oracle's laws."""
    each = [quantities_at(T, CASES[case]) for T in TEMPERATURES]
    found = {name: np.array([float(q[name]) for q in each]) for name in each[0]}
    return {**found, "log_I_S": found.get("log_I_S", np.zeros(len(TEMPERATURES)))}


@cases
def test_python_agrees_with_the_solver(case: tuple[str, str]) -> None:
    module, solver = module_of(derived(case)), numerics(*case)
    values = module["Values"](**CASES[case])
    expected = currents(solver, arrays(case))
    found = module["currents"](TEMPERATURES, values)
    for name, current in zip(derived(case).solved_for, found, strict=True):
        np.testing.assert_allclose(current, expected[name], rtol=1e-9)
    output = module["output_current"](TEMPERATURES, values)
    np.testing.assert_allclose(output, expected["I_out"], rtol=1e-9)
    for slot in derived(case).slots:
        needed = module[f"needed_resistance_{slot}"](TEMPERATURES, output, values)
        by_solver = needed_resistance(solver, slot, output, arrays(case))
        np.testing.assert_allclose(needed, by_solver, rtol=1e-9)
        np.testing.assert_allclose(needed, arrays(case)[f"R_{slot}"], rtol=1e-9)


@cases
def test_python_slope_is_the_slope_of_the_current(case: tuple[str, str]) -> None:
    module = module_of(derived(case))
    values = module["Values"](**CASES[case])
    h = 1e-2
    low, high = (module["output_current"](TEMPERATURES + k * h, values) for k in (-1, 1))
    slope = module["temperature_coefficient"](TEMPERATURES, values)
    np.testing.assert_allclose(slope, np.log(high / low) / (2 * h), rtol=0, atol=1e-10)


def test_python_takes_numbers_and_shorts() -> None:
    case = ("degenerated mirror", "supply")
    module = module_of(derived(case))
    short = CASES[case] | {"R_input": 0.0, "R_output": 0.0}
    with np.errstate(all="raise"):
        I_in, I_out = module["currents"](300.15, module["Values"](**short))
    # a plain mirror multiplies by the area ratio (calc)
    assert I_out == pytest.approx(4 * I_in, rel=1e-14)


def test_python_does_not_overflow() -> None:
    """At 30 V and 218 K, V_CC/V_T is 1600: exp of it is no float."""
    case = ("degenerated mirror", "supply")
    module = module_of(derived(case))
    values = module["Values"](**{**CASES[case], "V_CC": 30.0})
    with np.errstate(over="raise", invalid="raise"):
        I_in, _ = module["currents"](218.15, values)
        assert module["needed_resistance_feed"](218.15, 1e-5, values) > 0
    assert 0 < I_in < 30 / 40e3


def test_python_with_numbers_holds_the_design() -> None:
    case = ("degenerated mirror", "given")
    numbers = with_numbers(derived(case), CASES[case])
    module = ran(render(numbers, "python"))
    output = module["output_current"](CASES[case]["T_0"], module["DESIGN"])
    assert output == pytest.approx(numbers["I_out"], rel=1e-13)


@cases
def test_python_needs_nothing_of_this_project(case: tuple[str, str]) -> None:
    source = render(derived(case), "python")
    assert "tcopt" not in source
    assert all(len(line) <= 120 for line in source.splitlines())
    compile(source, "derived", "exec")


def test_temperature_coefficient_is_one_expression() -> None:
    """The chain put into one: d ln(V_ref/R)/dT (calc)."""
    found = derived(("reference over resistor", "self")).temperature_coefficient
    TC_V_ref, TC_sense = sp.symbols("TC_V_ref TC_sense", real=True)
    assert found == TC_V_ref - TC_sense
