"""Several outputs of one reference branch: against the whole chain in 40 digits, and by hand."""

from __future__ import annotations

from dataclasses import replace
from itertools import product
from typing import Any

import numpy as np
import pytest

from tcopt.cascade import Cascade, bases_at_target
from tcopt.check import finished_operation
from tcopt.check_cascade import check_cascade
from tcopt.errors import InputError, NoSolutionError
from tcopt.operation import Operation
from tcopt.study import (
    CascadeStudy,
    CircuitChoices,
    FixedSlot,
    Limit,
    Material,
    MosTransistor,
    Part,
    Process,
    Study,
    Target,
    TemperatureRange,
    Transistor,
)
from tests import chain_oracle as oracle

T_0 = 300.15
OVER = TemperatureRange(low=233.15, high=423.15, reference=T_0)
PLACES = np.array([OVER.low, T_0, OVER.high])
ALL = ("current gain", "early effect", "leakage")

KEPT = 1e-12
"""Relative error of a current; 1e-9 is promised."""
SLOPE = 1e-9
"""Error of a slope, relative to 1/T, or of a sensitivity."""

RISING, FALLING = (1.5e-3, 9e-7), (-1.8e-3, 2.5e-6)
ONE = oracle.Chain(
    T_0=T_0,
    outputs=(
        oracle.Output(4.0, 60.0, RISING, 2.0, 2e-4),
        oracle.Output(1.0, 9e3, FALLING, 3.0, 8e-6),
        oracle.Output(2.0, 0.0, RISING, 0.9, 1.8e-4),
    ),
    I_S0=1.2e-16,
    junction=(3.6, 1.17),
    gain=(60.0, 1.4),
    early=40.0,
    leakage=2e-12,
    material=FALLING,
    R_input=150.0,
    follower=False,
    I_given=1e-4,
)
"""An invented chain: a large bias, a small one, and a plain one."""
SUPPLIED = {"I_given": None, "supply": 5.0, "R_feed": 4.2e4}
CHAINS = {
    f"{'follower' if follower else 'input'}-{feed}-gain-{gain:g}": replace(
        ONE, follower=follower, gain=(gain, 1.4), **(SUPPLIED if feed == "supply" else {})
    )
    for follower, feed, gain in product((False, True), ("given", "supply"), (60.0, 5.0))
}
every_chain = pytest.mark.parametrize("chain", CHAINS.values(), ids=CHAINS)


def material(coefficients: tuple[float, float]) -> Material:
    tc1, tc2 = coefficients
    name = "rising" if tc1 > 0 else "falling"
    return Material(name=name, reference=T_0, tc1=tc1, tc2=tc2)


def slot(value: float, coefficients: tuple[float, float]) -> FixedSlot:
    return FixedSlot(parts=(Part(material=material(coefficients), value=value),))


def study_of(chain: oracle.Chain, output: oracle.Output, effects: Any = ALL) -> Study:
    """Return the study of one output of a chain, as if there were no other."""
    npn = Transistor(
        name="npn",
        reference=T_0,
        saturation_current=chain.I_S0,
        bandgap_voltage=chain.junction[1],
        temperature_exponent=chain.junction[0],
        current_gain=chain.gain[0],
        current_gain_exponent=chain.gain[1],
        early_voltage=chain.early,
        leakage_current=chain.leakage,
    )
    resistors = {"input": slot(chain.R_input, chain.material)} if chain.R_input else {}
    if chain.R_feed:
        resistors["feed"] = slot(chain.R_feed, chain.material)
    if output.value:
        resistors["output"] = slot(output.value, output.material)
    fed = {"supply": chain.supply} if chain.supply else {"input_current": (chain.I_given,)}
    counted = {"effects": effects} if effects else {}
    return Study(
        title="Invented",
        process=Process(
            title="Invented",
            reference=T_0,
            materials={m.name: m for m in map(material, (RISING, FALLING))},
            transistors={"npn": npn},
        ),
        range=OVER,
        circuit=CircuitChoices(
            topology="degenerated mirror",
            transistor=npn,
            **counted,
            base_current="through follower" if chain.follower else "from input",
            area_ratio=(output.area,),
            output_voltage=output.voltage,
            **fed,
        ),
        target=Target(shape="flat", current=output.about, limit=Limit(kind="box", value=1e-3)),
        resistors=resistors,
    )


def cascade_study(chain: oracle.Chain, effects: Any = ALL) -> CascadeStudy:
    names = ("large", "small", "plain")
    outputs = {n: study_of(chain, o, effects) for n, o in zip(names, chain.outputs, strict=True)}
    return CascadeStudy("Invented", outputs)


def cascade(chain: oracle.Chain, effects: Any = ALL) -> Cascade:
    outputs = cascade_study(chain, effects).outputs
    return Cascade({name: finished_operation(study) for name, study in outputs.items()})


# --- against the whole chain ---


@every_chain
def test_currents(chain: oracle.Chain) -> None:
    found = [each.output(PLACES) for each in cascade(chain).together().values()]
    for place, T in enumerate(PLACES):
        for k, exact in enumerate(oracle.solve(chain, T)):
            assert abs(float(oracle.mp.mpf(float(found[k][place])) / exact - 1)) < KEPT, (T, k)


@pytest.mark.parametrize("name", ["input-given-gain-5", "follower-supply-gain-60"])
def test_shares_of_the_causes_add_up_to_the_slope(name: str) -> None:
    chain = CHAINS[name]
    for place, T in enumerate(PLACES):
        slopes = oracle.log_slope(chain, float(T), "T")
        for k, each in enumerate(cascade(chain).together().values()):
            causes = each.causes(PLACES)
            assert "base current of the other outputs" in causes
            total = sum(share[place] for share in causes.values())
            assert abs(total - float(slopes[k])) * T < SLOPE, (T, k)


@pytest.mark.parametrize(
    ("name", "by", "key"),
    [
        ("input-given-gain-5", "I_given", "input_sensitivity"),
        ("input-supply-gain-5", "supply", "supply_sensitivity"),
    ],
)
def test_sensitivities_take_in_how_the_others_follow(name: str, by: str, key: str) -> None:
    outputs = check_cascade(cascade_study(CHAINS[name])).outputs
    for place, T in enumerate(PLACES):
        exact = oracle.log_slope(CHAINS[name], float(T), by)
        for k, result in enumerate(outputs.values()):
            assert getattr(result, key)[place] == pytest.approx(float(exact[k]), abs=SLOPE)
            if by == "supply":
                for swept in (result.sweep, result.sweep_at_places):
                    assert swept.supply_sensitivity is not None
                    ends = swept.supply_sensitivity[[0, -1]][place // 2]
                    assert place == 1 or ends == pytest.approx(float(exact[k]), abs=SLOPE)


def test_others_held_is_another_sensitivity() -> None:
    # else the test above could not tell whether the others follow
    chain = CHAINS["input-given-gain-5"]
    held = [each.sensitivities(PLACES)["I_given"] for each in cascade(chain).together().values()]
    exact = oracle.log_slope(chain, float(PLACES[0]), "I_given")
    assert abs(float(held[2][0]) - float(exact[2])) > 0.05


# --- by hand ---


def plain(areas: tuple[float, ...], gain: float, *, follower: bool = False) -> Cascade:
    outputs = tuple(oracle.Output(area, 0.0, RISING, 2.0, 1e-4) for area in areas)
    chain = replace(ONE, outputs=outputs, gain=(gain, 0.0), R_input=0.0, follower=follower)
    return Cascade(
        {
            str(k): finished_operation(study_of(chain, output, ("current gain",)))
            for k, output in enumerate(outputs)
        }
    )


@pytest.mark.parametrize("gain", [2.0, 100.0])
@pytest.mark.parametrize("areas", [(1.0, 1.0), (1.0, 2.0, 4.0), (50.0, 50.0), (1e-3, 300.0)])
def test_plain_outputs_share_the_input(areas: tuple[float, ...], gain: float) -> None:
    # I_k = N_k I_in/(1 + (1 + sum N)/beta): Kirchhoff's current law at the input, from memory
    # also Gray, Hurst, Lewis, Meyer, Analysis and Design of Analog Integrated Circuits
    wanted = 1e-4 / (1 + (1 + sum(areas)) / gain)
    for area, each in zip(areas, plain(areas, gain).together().values(), strict=True):
        np.testing.assert_allclose(each.output(PLACES), area * wanted, rtol=1e-12)


def test_a_follower_takes_a_part_in_one_plus_gain_of_the_bases() -> None:
    # I_k = N_k I_in/(1 + (1 + sum N)/(beta (beta + 1))): the mirror with beta helper, memory
    areas, gain = (1.0, 2.0, 4.0), 20.0
    wanted = 1e-4 / (1 + 8 / (gain * (gain + 1)))
    for area, each in zip(
        areas, plain(areas, gain, follower=True).together().values(), strict=True
    ):
        np.testing.assert_allclose(each.output(PLACES), area * wanted, rtol=1e-12)


@pytest.mark.parametrize("effects", [(), ("early effect", "leakage")])
def test_without_base_currents_outputs_do_not_feel_each_other(effects: tuple[str, ...]) -> None:
    made = cascade(ONE, effects)
    assert not made.is_coupled
    assert made.together() == dict(made.alone)


def test_mos_outputs_do_not_feel_each_other() -> None:
    nmos = MosTransistor(
        name="nmos", reference=T_0, threshold_voltage=0.5, threshold_slope=1e-3,
        slope_factor=1.3, specific_current=1e-6, early_voltage=20.0,
    )  # fmt: skip
    first = study_of(ONE, ONE.outputs[0], ())
    circuit = CircuitChoices(
        topology="degenerated mirror", transistor=nmos, input_current=(1e-4,),
        effects=("early effect",), output_voltage=2.0,
    )  # fmt: skip
    study = first.model_copy(update={"circuit": circuit})
    made = Cascade({"a": finished_operation(study), "b": finished_operation(study)})
    assert not made.is_coupled
    assert bases_at_target(made.alone, "a") is None


def test_an_input_that_cannot_supply_the_bases_is_named() -> None:
    # the leakage alone, 1e-7 A that double every 10 K, is above the input of 100 uA when hot
    chain = replace(ONE, leakage=1e-7)
    with pytest.raises(
        NoSolutionError, match=r"outputs\.large: degenerated mirror: no solution at 1"
    ):
        check_cascade(cascade_study(chain))


# --- at the target ---


def test_base_currents_at_the_target() -> None:
    # by hand: b = (I_target - N I_L)/beta, its slope by differences
    made = cascade(ONE)
    load = bases_at_target(made.alone, "small")
    assert load is not None
    T = np.array([250.0, 400.0])
    beta = 60.0 * (T / T_0) ** 1.4
    leak = 2e-12 * 2 ** ((T - T_0) / 10)
    np.testing.assert_allclose(load.value(T), (2e-4 + 1.8e-4 - 6 * leak) / beta, rtol=1e-13)
    h = 1e-3
    slope = np.log(load.value(T + h) / load.value(T - h)) / (2 * h)
    np.testing.assert_allclose(load.slope(T), slope, rtol=1e-7)


def test_a_target_below_the_leakage_is_refused() -> None:
    made = cascade(replace(ONE, leakage=1e-8))
    load = bases_at_target(made.alone, "large")
    assert load is not None
    with pytest.raises(InputError, match=r"outputs\.small: found a target below the leakage of .*"):
        load.value(PLACES)


def test_a_target_that_is_met_loads_the_others_as_if_at_the_target() -> None:
    chain = CHAINS["input-given-gain-60"]
    made = cascade(chain)
    operations: dict[str, Operation] = {}
    reached = {name: each.output(PLACES) for name, each in made.together().items()}
    for name, each in made.alone.items():
        at_reference = float(reached[name][1])
        target = each.study.target.model_copy(update={"current": at_reference})
        operations[name] = replace(each, study=each.study.model_copy(update={"target": target}))
    for name, each in made.together().items():
        load, real = bases_at_target(operations, name), each.other_bases
        assert load is not None
        assert real is not None
        np.testing.assert_allclose(load.value(PLACES[1:2]), real.value(PLACES[1:2]), rtol=1e-12)


# --- what check says ---


def test_check_of_several_outputs() -> None:
    found = check_cascade(cascade_study(ONE))
    assert found.limit is not None
    worst = found.outputs[found.limit.worst].assessment.limit
    assert worst is not None
    assert found.limit.relative == worst.value / worst.bound
    assert found.limit.relative == max(
        each.assessment.limit.value / each.assessment.limit.bound
        for each in found.outputs.values()
        if each.assessment.limit is not None
    )
    assert found.limit.met is (found.limit.relative <= 1)
    for each in found.outputs.values():
        for row in each.budget:
            assert sum(row.shares.values()) == pytest.approx(row.total, rel=1e-12)


def test_the_share_of_the_input_that_bases_take() -> None:
    # by hand: of one part into the first collector, (1 + sum N)/beta go into all the bases
    made = plain((1.0, 3.0), 20.0)
    studies = {name: each.study for name, each in made.alone.items()}
    found = check_cascade(CascadeStudy("Invented", studies))
    assert found.base_share == pytest.approx([4 / 20 / (1 + 5 / 20)] * 3, rel=1e-12)
    (said,) = found.warnings
    # 1 % more in output 1 takes 0.15 % of the first collector's current more from the input,
    # which, shared by it, its base and that of output 0, costs output 0: 0.15 / (1 + 2/20) %
    assert said == (
        "the bases of the outputs take 16 % of the input at -40 degC and 16 % at 150 degC, so "
        "the outputs are coupled: at -40 degC, 1 % more in 1 changes 0 by -0.14 %"
    )


def test_base_currents_that_are_left_out_are_said() -> None:
    found = check_cascade(cascade_study(ONE, ("early effect", "leakage")))
    assert found.base_share is None
    (said,) = found.warnings
    assert said.startswith(
        "the base currents are left out: by the current gain of npn the outputs'"
    )
    assert said.endswith("effects = ['current gain'] counts them")
