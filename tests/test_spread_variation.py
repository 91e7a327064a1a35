"""What varies, what moves together, and what is said to be missing."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from tcopt.solve import currents
from tcopt.spread.plan import Plan
from tcopt.spread.sample import normals, points
from tcopt.spread.trim import output_of
from tcopt.study import CircuitChoices, Layout, MosTransistor
from tests.spread_designs import (
    T_0,
    insertion,
    material,
    plan_of,
    ptat_core,
    ptat_plus_vbe,
    sensed,
    slot_of,
    study_of,
    transistor,
)


def _drawn(plan: Plan, count: int = 16384) -> np.ndarray:
    variates = len(plan.variation.variates)
    return np.vstack(
        [normals(points("sobol", 3, variates, count, block)) for block in range(count // 4096)]
    )


@pytest.mark.parametrize(("first", "second"), [(0.6, 0.4), (1.0, 1.0), (0.25, 1.0)])
def test_common_step_makes_a_correlation_of_the_root_of_the_shares(
    first: float, second: float
) -> None:
    """z = sqrt(s) common + sqrt(1 - s) own for each: correlation sqrt(s t), by hand."""
    a = material("a", spread=0.05, tc1_spread=1e-5, common={"part": "step", "share": first})
    b = material("b", spread=0.08, tc1_spread=2e-5, common={"part": "step", "share": second})
    plan = plan_of(sensed((a, 5e3), (b, 5e3)))
    z = _drawn(plan)
    for order, sigma in (("sheet", (0.05, 0.08)), ("tc1", (1e-5, 2e-5))):
        one, two = (plan.variation.deviation((order, name), z)[:, 0] for name in "ab")
        assert (one.std(), two.std()) == pytest.approx(sigma, rel=2e-3)
        assert np.corrcoef(one, two)[0, 1] == pytest.approx(np.sqrt(first * second), abs=2e-3)
    # values and coefficients have a variate each of the step
    sheet, tc1 = (plan.variation.deviation((order, "a"), z)[:, 0] for order in ("sheet", "tc1"))
    assert np.corrcoef(sheet, tc1)[0, 1] == pytest.approx(0, abs=5e-3)


def test_transistor_and_resistor_of_one_step_move_together() -> None:
    step = {"part": "base implant", "share": 1.0}
    film = material(spread=0.1, common=step)
    device = transistor(saturation_current_spread=0.2, common=step)
    plan = plan_of(ptat_plus_vbe(film, device=device))
    assert [variate.name for variate in plan.variation.variates] == ["step base implant"]
    z = np.array([[1.0]])
    assert plan.variation.deviation(("sheet", "film"), z) == pytest.approx(0.1)
    assert plan.variation.deviation(("saturation current",), z) == pytest.approx(0.2)


def test_quantities_of_a_part_by_hand() -> None:
    film = material(
        tc1=1e-3, tc2=1e-6, spread=0.05, tc1_spread=1e-4, tc2_spread=1e-7,
        matching=2e-8, sheet_resistance=100.0,
    )  # fmt: skip
    circuit = {"topology": "reference over resistor", "reference_voltage": 1.0}
    # 100 squares of 1 um: 100 um^2, sigma 2 % um/sqrt(200 um^2) = 0.1414 %
    slots = {"sense": slot_of((film, 1e4), width=1e-6)}
    plan = plan_of(study_of(slots, circuit, current=1e-4, reference_voltage=0.01))
    names = [variate.name for variate in plan.variation.variates]
    z = np.zeros((2, len(names)))
    for name, value in {
        "sheet resistance of film": 2.0,
        "TC1 of film": -1.0,
        "TC2 of film": 3.0,
        "mismatch of film in sense": 1.0,
        "reference voltage": -2.0,
    }.items():
        z[1, names.index(name)] = value
    T = np.array([T_0 - 60, T_0, T_0 + 100])
    found = plan.variation.quantities(z, T)
    d = T - T_0
    by_hand = 1e4 * 1.1 * 1.001414214 * (1 + 0.9e-3 * d + 1.3e-6 * d**2)
    np.testing.assert_allclose(found["R_sense"][0], 1e4 * (1 + 1e-3 * d + 1e-6 * d**2), rtol=1e-14)
    np.testing.assert_allclose(found["R_sense"][1], by_hand, rtol=1e-9)
    np.testing.assert_allclose(found["V_ref"], [[1.0] * 3, [0.98] * 3], rtol=1e-14)


def test_parallel_parts_add_conductances() -> None:
    a, b = material("a", spread=0.05), material("b", tc1=2e-3, spread=0.1)
    circuit = {"topology": "reference over resistor", "reference_voltage": 1.0}
    slots = {"sense": slot_of((a, 3e3), (b, 6e3), join="parallel")}
    plan = plan_of(study_of(slots, circuit, current=5e-4))
    found = plan.variation.quantities(np.array([[1.0, -1.0]]), np.array([T_0 + 50]))
    R = 1 / (1 / (3e3 * 1.05) + 1 / (6e3 * 0.9 * 1.1))
    assert found["R_sense"] == pytest.approx(R, rel=1e-13)


def test_an_ordered_part_lies_anywhere_in_its_tolerance() -> None:
    """Uniform: the quartiles lie at half the tolerance, none beyond it."""
    study = sensed((material(matching=1e-8), 1e4)).model_copy(
        update={"layout": Layout(standard="E24")}
    )
    plan = plan_of(study)
    assert [variate.name for variate in plan.variation.variates] == ["tolerance of film in sense"]
    R = plan.variation.quantities(_drawn(plan), np.array([T_0]))["R_sense"][:, 0]
    ends = np.quantile(R / 1e4 - 1, [0, 0.25, 0.5, 0.75, 1])
    assert ends == pytest.approx([-0.05, -0.025, 0, 0.025, 0.05], abs=1e-5)


def test_the_design_as_stated_is_that_of_no_deviation() -> None:
    film = material(tc1=-2e-4, spread=0.05, tc1_spread=1e-4)
    device = transistor(base_emitter_spread=5e-3, matching=2e-8, emitter_area=4e-12)
    plan = plan_of(ptat_plus_vbe(film, device=device))
    T = np.linspace(233.15, 398.15, 7)
    z = np.zeros((1, len(plan.variation.variates)))
    found = output_of(plan.variation, z, T)[0]
    np.testing.assert_allclose(found, plan.operation.output(T), rtol=1e-15)


def test_many_parts_are_as_each_by_itself() -> None:
    film = material(tc1=-2e-4, spread=0.05, tc1_spread=1e-4)
    plan = plan_of(ptat_plus_vbe(film, device=transistor(base_emitter_spread=5e-3)))
    z = _drawn(plan, 4096)[:5]
    T = np.linspace(233.15, 398.15, 7)
    together = output_of(plan.variation, z, T)
    for part in range(5):
        alone = output_of(plan.variation, z[part : part + 1], T)
        np.testing.assert_allclose(together[part], alone[0], rtol=1e-15)
    # a temperature for each part
    diagonal = output_of(plan.variation, z, T[:5, None])
    np.testing.assert_allclose(diagonal[:, 0], np.diag(together[:, :5]), rtol=1e-14)


def _with_gain(**data: Any) -> Plan:
    device = transistor(current_gain=100.0, **data)
    study = ptat_core(material(), device=device)
    made = CircuitChoices(
        topology="ptat core", transistor=device, area_ratio=(8.0,), effects=("current gain",)
    )
    return plan_of(study.model_copy(update={"circuit": made}))


def test_gain_varies_where_it_counts() -> None:
    plan = _with_gain(gain_spread=0.2)
    assert [variate.name for variate in plan.variation.variates] == ["current gain of npn"]
    found = plan.variation.quantities(np.array([[0.0], [1.0]]), np.array([T_0]))["inverse_beta"]
    np.testing.assert_allclose(found, [[0.01], [0.01 * np.exp(-0.2)]], rtol=1e-14)
    assert "current gain of npn: no spread is given" in _with_gain().variation.missing
    ideal = plan_of(ptat_core(material(), device=transistor(gain_spread=0.2)))
    assert ideal.variation.variates == ()


def test_a_part_with_another_gain_is_the_circuit_with_another_gain() -> None:
    device = transistor(current_gain=50.0, gain_spread=0.3)
    study = ptat_plus_vbe(material(), device=device)
    effects = study.circuit.model_copy(update={"effects": ("current gain",)})
    plan = plan_of(study.model_copy(update={"circuit": effects}))
    T = np.linspace(233.15, 398.15, 5)
    found = output_of(plan.variation, np.array([[-1.0], [2.0]]), T)
    for row, z in zip(found, (-1.0, 2.0), strict=True):
        other = device.model_copy(update={"current_gain": 50.0 * np.exp(0.3 * z)})
        moved = effects.model_copy(update={"transistor": other})
        by_itself = plan_of(study.model_copy(update={"circuit": moved})).operation.output(T)
        np.testing.assert_allclose(row, by_itself, rtol=1e-12)


def test_each_part_warms_itself() -> None:
    """With 200 K/mW from 10 V, some 40 K: as the design of that part alone, warmed."""
    film = material(tc1=1e-3, spread=0.1)
    study = ptat_core(film)
    warm = study.range.model_copy(update={"thermal_resistance": 2e5})
    biased = study.circuit.model_copy(update={"supply": 10.0, "output_voltage": 5.0})
    study = study.model_copy(update={"range": warm, "circuit": biased})
    plan = plan_of(study)
    T = np.linspace(233.15, 398.15, 5)
    found = output_of(plan.variation, np.array([[0.0], [-2.0]]), T)
    np.testing.assert_allclose(found[0], plan.operation.output(T), rtol=1e-10)
    small = slot_of((film, 0.8 * 5378.0))
    moved = plan_of(study.model_copy(update={"resistors": {"core": small}}))
    np.testing.assert_allclose(found[1], moved.operation.output(T), rtol=1e-10)
    cold = plan_of(study.model_copy(update={"range": plan_of(ptat_core(film)).study.range}))
    assert np.all(found[0] > cold.operation.output(T) * 1.001)


def _mos_core(**data: Any) -> Plan:
    device = MosTransistor(
        name="nmos", reference=T_0, threshold_voltage=0.5, threshold_slope=1e-3,
        slope_factor=1.3, specific_current=data.pop("specific_current", 1e-7), **data,
    )  # fmt: skip
    circuit = {"topology": "constant transconductance bias", "area_ratio": (4.0,)}
    slots = {"core": slot_of((material(), 1e4))}
    study = study_of(slots, circuit, device=device, shape="ptat", current=1e-6)
    return plan_of(study)


@pytest.mark.parametrize("specific_current", [1e-3, 1e-6, 1e-9])
def test_offset_between_thresholds_is_as_the_loop_has_it(specific_current: float) -> None:
    """From weak to strong inversion, against the loop solved with the offset in it.

    ``V_GS1 = V_GS2 + I R + offset`` by bisection, V_GS in all regions of inversion.
    """
    plan = _mos_core(specific_current=specific_current, matching=2e-9, gate_area=1e-11)
    sigma = plan.variation.loads["threshold of the pair",][0][1]
    assert sigma == pytest.approx(2e-9 / np.sqrt(1e-11) * np.sqrt((1 + 1 / 4) / 2))
    T = np.array([T_0])
    q = plan.operation.quantities(T)
    V_T, n, I_spec, R = (float(np.squeeze(q[k])) for k in ("V_T", "n", "I_spec", "R_core"))

    def overdrive(I: float, width: float) -> float:
        root = np.sqrt(I / (width * I_spec))
        return float(2 * n * V_T * (root + np.log(-np.expm1(-root))))

    lift = float(np.squeeze(q["n_S"]))

    def solved(offset: float) -> float:
        low, high = 1e-12, 1e-2
        for _ in range(200):
            middle = np.sqrt(low * high)
            left = overdrive(middle, 1.0) - overdrive(middle, 4.0) + offset - lift * middle * R
            low, high = (middle, high) if left > 0 else (low, middle)
        return float(middle)

    tiny = 0.01
    found = output_of(plan.variation, np.array([[-tiny], [0.0], [tiny]]), T)[:, 0]
    assert found[1] == pytest.approx(solved(0.0), rel=1e-9)
    slope = (found[2] - found[0]) / (2 * tiny * sigma)
    by_loop = (solved(tiny * sigma) - solved(-tiny * sigma)) / (2 * tiny * sigma)
    assert slope == pytest.approx(by_loop, rel=1e-4)


def test_offset_between_thresholds_of_a_warm_die() -> None:
    """The same part where the range is as warm as the die: the heat counts once."""
    cold = _mos_core(matching=2e-9, gate_area=1e-11)
    study = cold.study
    warmed = study.range.model_copy(update={"thermal_resistance": 5e4})
    biased = study.circuit.model_copy(update={"supply": 5.0, "output_voltage": 5.0})
    hot = plan_of(study.model_copy(update={"range": warmed, "circuit": biased}))
    die = hot.operation.die_temperature(np.array([T_0]))
    assert die[0] > T_0 + 10
    z = np.array([[-1.0], [1.0]])
    moved, by_hand = (
        np.log(found["N"][1] / found["N"][0])
        for found in (hot.variation.quantities(z, die), cold.variation.quantities(z, die))
    )
    np.testing.assert_allclose(moved, by_hand, rtol=1e-12)
    at_rest = output_of(hot.variation, np.array([[0.0]]), np.array([T_0]))
    np.testing.assert_allclose(at_rest, hot.operation.output(np.array([[T_0]])), rtol=1e-10)


def test_threshold_and_specific_current_vary() -> None:
    plan = _mos_core(threshold_spread=0.02, specific_current_spread=0.1)
    found = plan.variation.quantities(np.array([[1.0, -1.0]]), np.array([T_0]))
    assert found["V_TH"] == pytest.approx(0.52)
    assert found["I_spec"] == pytest.approx(1e-7 * np.exp(-0.1))


def test_what_is_missing_is_said() -> None:
    film = material(matching=2e-8, min_width=1e-6, sheet_resistance=100.0)
    plan = plan_of(ptat_plus_vbe(film, trim=(insertion(),)))
    assert plan.variation.missing == (
        "sheet resistance of film: no spread is given",
        "TC1 of film: no spread is given",
        "TC2 of film: no spread is given",
        "mismatch of film in core: no width is given; taken at the narrowest, 1 um",
        "mismatch of film in base: no width is given; taken at the narrowest, 1 um",
        "saturation current of npn: no spread is given",
        "mismatch of the npn pair: no matching coefficient is given",
        "mirror ratio: no spread is given",
        "trim at 27 degC: measurement: no error is given",
        "trim at 27 degC: temperature: no error is given",
    )
    lonely = material(spread=0.1, matching=2e-8, common={"part": "typo", "share": 0.5})
    missing = plan_of(sensed((lonely, 1e4))).variation.missing
    area = "no sheet resistance is given, so its area is not known"
    assert f"mismatch of film in sense: {area}" in missing
    assert "step typo: one entry in use names it, so nothing moves with it" in missing
    device = transistor(matching=1e-8)
    missing = plan_of(ptat_core(material(), device=device)).variation.missing
    assert "mismatch of the npn pair: no emitter_area is given" in missing


def test_a_spread_of_zero_is_no_variate_and_not_missing() -> None:
    film = material(spread=0.0, tc1_spread=0.0, tc2_spread=0.0, matching=0.0)
    variation = plan_of(sensed((film, 1e4))).variation
    assert variation.variates == ()
    assert not any("film: no spread" in text for text in variation.missing)


def test_no_current_is_nan_and_not_an_error() -> None:
    """Where a coefficient spreads so far that no resistance is left, by hand: 1 - 1.08 < 0."""
    film = material(tc1=-5e-3, tc1_spread=2e-3)
    plan = plan_of(sensed((film, 1e4)))
    T = np.array([398.15])
    found = output_of(plan.variation, np.array([[0.0], [-3.0]]), T)[:, 0]
    assert found[0] > 0
    assert not found[1] > 0
    solution = currents(plan.operation.circuit, plan.variation.quantities(np.zeros((1, 1)), T))
    assert solution["I_out"][0, 0] == found[0]
