"""Formulas against the outside: textbooks, hand calculation, and 50-digit differences."""

from __future__ import annotations

from math import e, log

import pytest
import sympy as sp

from tcopt.derive import FLAT, PTAT, TARGET, Derivation, derive, expected_names, with_numbers
from tcopt.derive.writers import Text
from tcopt.errors import NoSolutionError
from tests import oracle
from tests.derive_cases import CASES, derived, output_series, quantities_at
from tests.oracle import mp

cases = pytest.mark.parametrize("case", CASES, ids="-".join)
NO_COEFFICIENTS = {"TC1_output": 0.0, "TC2_output": 0.0, "TC1_I_given": 0.0, "TC2_I_given": 0.0}


def widlar() -> Derivation:
    special = derived(("degenerated mirror", "given")).special_cases
    return next(case for case in special if case.shorts == ("input",))


def written(expression: sp.Expr) -> str:
    return Text().write(expression)


# What a designer reads


def test_widlar_coefficient_reads_as_by_hand() -> None:
    """d/dT of x = ln(N I_in/I_out), x = I_out R/V_T (calc)."""
    expected = "(x_output (1/T - TC_output) + TC(I_in))/(1 + x_output)"
    assert written(widlar().first[-1].expression) == expected


def test_widlar_rules_read_as_by_hand() -> None:
    """Flat: TC_R = 1/T + TC(I_in)/x. PTAT: TC_R = (TC(I_in) - 1/T)/x (calc)."""
    assert written(widlar().flat["output"][-1].expression) == "1/T + TC(I_in)/x_output"
    assert written(widlar().ptat["output"][-1].expression) == "(TC(I_in) - 1/T)/x_output"


def test_ptat_core_needs_a_resistor_that_rises_as_the_temperature() -> None:
    """V_T ln(N M)/R is flat for 1/T, and PTAT with no coefficient at all (calc)."""
    core = derived(("ptat core", "self"))
    assert written(core.flat["core"][-1].expression) == "1/T"
    assert core.ptat["core"][-1].expression == 0


def test_resistor_coefficient_from_the_data() -> None:
    """(dR/dT)/R of the quadratic; at T_0 it is TC1 (calc)."""
    (law,) = (e for e in widlar().laws if e.symbol.name == "TC_output")
    assert written(law.expression) == (
        "(TC1_output + 2 TC2_output (T - T_0))/(1 + TC1_output (T - T_0) + TC2_output (T - T_0)^2)"
    )


def test_special_cases_of_the_mirror() -> None:
    """Without emitter resistors it is a plain mirror: N times the input, and its drift (calc)."""
    plain = derived(("degenerated mirror", "given")).special_cases[-1]
    assert plain.shorts == ("input", "output")
    assert [written(line.expression) for line in plain.closed_form or ()] == ["I_given", "N I_in"]
    assert written(plain.temperature_coefficient) == "TC(I_given)"


def test_loops_have_positive_terms_on_both_sides() -> None:
    loops = derived(("degenerated mirror", "supply")).loops
    assert [f"{written(left)} = {written(right)}" for left, right in loops] == [
        "V_CC = V_T ln(I_in/I_S) + I_in (R_feed + R_input)",
        "V_T ln(N I_in/I_out) + I_in R_input = I_out R_output",
    ]


# Published figures


def test_widlar_drift_at_a_ratio_of_200() -> None:
    """x/(1 + x)/T with x = ln 200: 2804 ppm/K at 300 K with a resistor without drift (calc)."""
    values = {"T_0": 300.0, "N": 1.0, "I_given": 1e-3, "R_input": 0.0, **NO_COEFFICIENTS}
    # the resistor of 27.39 kohm that makes 5 uA of 1 mA
    numbers = with_numbers(widlar_of_mirror(), {**values, "R_output": 27.39e3})
    assert numbers["I_out"] == pytest.approx(5e-6, rel=1e-3)
    assert numbers["TC_I_out"] == pytest.approx(2804e-6, abs=0.5e-6)


def widlar_of_mirror() -> Derivation:
    return derived(("degenerated mirror", "given"))


def test_widlar_supply_sensitivity() -> None:
    """1/(1 + I R/V_T), about 0.16: Gray, Hurst, Lewis, Meyer, 5th ed., (4.215)."""
    numbers = with_numbers(
        widlar_of_mirror(),
        {"T_0": 300.0, "V_T": 0.026, "N": 1.0, "I_given": 1e-3, "R_input": 0.0, "R_output": 27.4e3},
    )
    found = numbers.derivation.sensitivities["I_given"].subs(numbers.state)
    assert float(found) == pytest.approx(0.16, abs=0.005)


def test_base_emitter_reference() -> None:
    """100 uA, 1e-14 A, -2 mV/K, +1500 ppm/K: 598 mV and -4800 ppm/K; Gray et al., 4.4.2.3.

    The -2 mV/K are those of the running circuit; what the junction law then has to give at
    a constant current is 26 mV times the drift of the current less.
    """
    T_0, V_T, V_BE, eta = 300.0, 0.026, 0.598, 3.2
    at_constant_current = -2e-3 - V_T * -4800e-6
    V_G0 = V_BE - eta * V_T - T_0 * at_constant_current
    values = {"T_0": T_0, "V_T": V_T, "I_S": 1e-14, "V_G0": V_G0, "eta": eta}
    resistor = {"R_base": 5980.0, "TC1_base": 1500e-6, "TC2_base": 0.0}
    numbers = with_numbers(derived(("vbe reference", "self")), {**values, **resistor})
    assert numbers["I_out"] == pytest.approx(100e-6, rel=2e-3)
    assert numbers["TC_I_out"] == pytest.approx(-4800e-6, abs=50e-6)


def test_thermal_voltage_reference() -> None:
    """100 uA, ln 2, +1500 ppm/K: about 180 ohm and +1800 ppm/K; Gray et al., 4.4.2.3."""
    values = {"T_0": 300.0, "N": 2.0, "M": 1.0, "TC1_core": 1500e-6, "TC2_core": 0.0}
    numbers = with_numbers(derived(("ptat core", "self")), {**values, "I_target": 100e-6})
    assert numbers["R_core"] == pytest.approx(180.0, abs=1)
    numbers = with_numbers(derived(("ptat core", "self")), {**values, "R_core": 180.0})
    assert numbers["TC_I_out"] == pytest.approx(1800e-6, abs=50e-6)


def test_peaking_source_maximum() -> None:
    """The largest output is I_in/e, where I_in R = V_T (calc)."""
    peaking = derived(("peaking source", "given"))
    by_input = peaking.sensitivities["I_given"]
    (x,) = by_input.free_symbols
    assert sp.solve(by_input, x) == [1]
    values = {"T_0": 300.0, "V_T": 0.026, "N": 1.0, "I_given": 1e-4, "R_drop": 260.0}
    numbers = with_numbers(peaking, values)
    assert numbers["x_drop"] == pytest.approx(1, rel=1e-14)
    assert numbers["I_out"] == pytest.approx(1e-4 / e, rel=1e-14)


def test_peaking_source_resistor() -> None:
    """10 uA in, 100 nA out: about 12 kohm; Gray et al., 4.4.1.3."""
    values = {"T_0": 300.0, "V_T": 0.026, "N": 1.0, "I_given": 1e-5, "I_target": 1e-7}
    numbers = with_numbers(derived(("peaking source", "given")), values)
    assert numbers["R_drop"] == pytest.approx(12e3, abs=100)


@pytest.mark.parametrize(("TC1", "rises"), [(0.0, True), (4200e-6, False)])
def test_material_above_the_inverse_temperature_over_compensates(TC1: float, rises: bool) -> None:
    """Input 50 times the output: rises without drift of R, falls above 1/T (common practice)."""
    R_output = 0.02585 * log(50) / 2e-6
    values = {"T_0": 300.0, "N": 1.0, "I_given": 1e-4, "R_input": 0.0, "R_output": R_output}
    numbers = with_numbers(widlar_of_mirror(), {**values, **NO_COEFFICIENTS, "TC1_output": TC1})
    assert (numbers["TC_I_out"] > 0) is rises


# Every formula of every circuit against an independent solution


@cases
def test_output_and_both_orders(case: tuple[str, str]) -> None:
    numbers = with_numbers(derived(case), CASES[case])
    current, first, second = output_series(case, CASES[case])
    assert numbers["I_out"] == pytest.approx(float(current), rel=1e-14)
    assert numbers["TC_I_out"] == pytest.approx(float(first), rel=1e-12)
    assert numbers["TC2_I_out"] == pytest.approx(float(second), rel=1e-11)


@cases
def test_coefficient_at_another_temperature(case: tuple[str, str]) -> None:
    """The local form holds at any T, with everything taken there."""
    T, h, values = 380.0, mp.mpf("1e-12"), CASES[case]
    low, high = (
        oracle.solve(*case, quantities_at(mp.mpf(T) + k * h, values))["I_out"] for k in (-1, 1)
    )
    expected = mp.log(high / low) / (2 * h)
    local = at_temperature(derived(case), T, values)
    assert with_numbers(derived(case), local)["TC_I_out"] == pytest.approx(
        float(expected), rel=1e-11
    )


def at_temperature(derivation: Derivation, T: float, values: dict[str, float]) -> dict[str, float]:
    """Return values whose T_0 is T: what every quantity is there, and its local coefficient."""
    at_T = {k: float(v) for k, v in quantities_at(T, values).items() if k != "log_I_S"}
    moved = {**values, **at_T, "T_0": T}
    if "I_S" in values:
        moved["I_S"] = float(mp.exp(quantities_at(T, values)["log_I_S"]))
    for law in derivation.laws:
        if law.symbol.name != "TC_I_S":
            put = {s: T if s.name == "T" else values[s.name] for s in law.expression.free_symbols}
            moved[law.symbol.name.replace("TC_", "TC1_")] = float(law.expression.subs(put))
    return moved


@cases
def test_sensitivities(case: tuple[str, str]) -> None:
    values = CASES[case]
    numbers = with_numbers(derived(case), values)
    by_difference = oracle.log_sensitivities(*case, quantities_at(values["T_0"], values))["I_out"]
    found = numbers.derivation.sensitivities
    assert {q.replace("log_I_S", "I_S") for q in by_difference} - {"V_T"} >= set(found)
    for q, expression in found.items():
        expected = by_difference["log_I_S" if q == "I_S" else q]
        assert float(expression.subs(numbers.state)) == pytest.approx(float(expected), rel=1e-10)


@cases
def test_rules_and_perfect_resistors(case: tuple[str, str]) -> None:
    """With the perfect resistor put in, the output has the TC1 and TC2 that were wanted."""
    target = {"TC1_target": 7e-4, "TC2_target": -3e-7}
    numbers = with_numbers(derived(case), {**CASES[case], **target})
    T_0 = CASES[case]["T_0"]
    wanted = {FLAT: (0.0, 0.0), PTAT: (1 / T_0, 0.0), TARGET: tuple(target.values())}
    for slot in derived(case).slots:
        for name, (first, second) in wanted.items():
            perfect = numbers.perfect(slot, name)
            assert perfect is not None
            put_in = {f"TC1_{slot}": perfect[0], f"TC2_{slot}": perfect[1]}
            _, one, two = output_series(case, {**CASES[case], **put_in})
            assert float(one) == pytest.approx(first, abs=1e-14)
            assert float(two) == pytest.approx(second, abs=1e-15)
        rule = derived(case).flat[slot][-1].symbol
        assert float(numbers.pinned[slot][FLAT][rule]) == pytest.approx(
            (numbers.perfect(slot, FLAT) or (0,))[0], rel=1e-14
        )


@cases
def test_needed_resistance_gives_another_output(case: tuple[str, str]) -> None:
    """Pinned to another current: the resistance, and its coefficients for a flat output there."""
    output = output_series(case, CASES[case])[0] * mp.mpf("0.9")
    numbers = with_numbers(derived(case), {**CASES[case], "I_target": float(output)})
    for slot in derived(case).slots:
        state = {s.name: float(v) for s, v in numbers.pinned[slot][FLAT].items()}
        put_in = {name: state[name] for name in (f"R_{slot}", f"TC1_{slot}", f"TC2_{slot}")}
        current, one, two = output_series(case, {**CASES[case], **put_in})
        assert float(current) == pytest.approx(float(output), rel=1e-12)
        assert float(one) == pytest.approx(0, abs=1e-13)
        assert float(two) == pytest.approx(0, abs=1e-14)


# Refusals


def test_feed_that_a_circuit_has_not() -> None:
    with pytest.raises(ValueError, match=r"ptat core: found input 'supply'; accepted: .*self"):
        derive("ptat core", "supply")


def test_value_of_no_symbol() -> None:
    with pytest.raises(ValueError, match=r"found 'R_extra'; accepted: .*R_core"):
        with_numbers(derived(("ptat core", "self")), {"T_0": 300.0, "R_extra": 1.0})


def test_value_that_is_not_finite() -> None:
    with pytest.raises(ValueError, match="R_core: found nan; accepted: a finite number"):
        with_numbers(derived(("ptat core", "self")), {"T_0": 300.0, "R_core": float("nan")})


def test_no_reference_temperature() -> None:
    with pytest.raises(ValueError, match="found no 'T_0'; accepted: the reference temperature"):
        with_numbers(derived(("ptat core", "self")), {"R_core": 1e3})


def test_no_current_solves_the_loop() -> None:
    """The junction cannot drop V_T ln(V_T/(R I_S)) or less across such a resistor (calc)."""
    values = {**CASES["vbe reference", "self"], "R_base": 1e17}
    with pytest.raises(NoSolutionError, match="no I_out solves the loops"):
        with_numbers(derived(("vbe reference", "self")), values)


@cases
def test_expected_names_are_what_a_design_has(case: tuple[str, str]) -> None:
    assert set(CASES[case]) <= set(expected_names(derived(case)))
