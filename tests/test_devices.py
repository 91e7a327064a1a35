"""Circuits with real transistors against a 40-digit solution, and a fuzz of many more."""

from __future__ import annotations

from functools import lru_cache
from itertools import product
from pathlib import Path
from typing import Any, NamedTuple

import numpy as np
import pytest

from tcopt.circuits import CIRCUITS
from tcopt.circuits.terms import kinds_of
from tcopt.errors import InputError
from tcopt.reasons import reason
from tcopt.solve import currents, needed_resistance, numerics, sensitivities
from tcopt.study import load_study
from tcopt.symbols import resistance_name
from tests import device_oracle as oracle
from tests.device_samples import DEVICE_CASES, TEMPERATURES, drawn, row
from tests.fuzz import fuzz
from tests.gate import GONE, PROCESS, STUDY, changed, write

PROMISED = 1e-9
"""Relative error of any current."""
KEPT = 1e-11
"""What is kept in fact; worse than this is worth a look."""
DERIVATIVE = 1e-8
"""Error of a sensitivity, relative to the larger of itself and 1."""

every_case = pytest.mark.parametrize(("topology", "feed", "device"), DEVICE_CASES)


class Solved(NamedTuple):
    """A circuit, and its currents by the oracle; none where there is no solution."""

    quantities: dict[str, float]
    exact: dict[str, Any] | None


def with_options(q: dict[str, Any], device: str, k: int) -> dict[str, Any]:
    """Return one of all combinations of effects, and of wells: k counts through them."""
    gain, early, leakage, well = tuple(product((True, False), repeat=4))[k % 16]
    chosen = dict(q)
    if device == "bipolar" and not gain:
        chosen["inverse_beta"] = chosen["I_others"] = np.zeros_like(q["N"])
    if not early:
        chosen["inverse_V_A"] = np.zeros_like(q["N"])
    if not leakage:
        chosen["I_L"] = np.zeros_like(q["N"])
    if device == "mos":
        chosen["n_S"] = q["n"] if well else np.ones_like(q["n"])
    return chosen


def designs(feed: str) -> int:
    """Return how many: the oracle of a mirror from a supply takes its time."""
    return 16 if feed == "supply" else 24


@lru_cache
def solved(topology: str, feed: str, device: str) -> tuple[Solved, ...]:
    names = numerics(topology, feed, device).quantities
    count = designs(feed)
    every = drawn(topology, device, count, seed=5, all_effects=True)
    found = []
    for k in range(count):
        quantities = row(with_options(every, device, k), names, k)
        try:
            exact = oracle.solve(topology, feed, device, quantities)
        except oracle.NoSolutionFoundError:
            exact = None
        found.append(Solved(quantities, exact))
    return tuple(found)


def with_solution(topology: str, feed: str, device: str) -> list[Solved]:
    return [item for item in solved(topology, feed, device) if item.exact is not None]


def stacked(rows: list[Solved]) -> dict[str, Any]:
    names = rows[0].quantities
    return {name: np.array([item.quantities[name] for item in rows]) for name in names}


def test_every_topology_input_and_transistor_is_compared() -> None:
    stated = {
        (c.topology, feed, device.value)
        for c in CIRCUITS.values()
        for feed in c.feeds
        for device in kinds_of(c)
    }
    assert set(DEVICE_CASES) == {case for case in stated if case[2] != "ideal"}
    only_mos = {c.topology for c in CIRCUITS.values() if c.devices == ("mos",)}
    assert only_mos <= {topology for topology, _, _ in DEVICE_CASES}


@every_case
def test_currents(topology: str, feed: str, device: str) -> None:
    circuit = numerics(topology, feed, device)
    assert len(with_solution(topology, feed, device)) >= 0.75 * designs(feed)
    for quantities, exact in solved(topology, feed, device):
        found = currents(circuit, quantities)
        if exact is None:
            assert all(np.isnan(value) for value in found.values()), quantities
            continue
        assert tuple(found) == tuple(exact)
        for name, value in exact.items():
            error = abs(oracle.mp.mpf(float(found[name])) / value - 1)
            assert error <= min(KEPT, PROMISED), (name, float(error), quantities)


def test_samples_reach_what_is_promised() -> None:
    """-55..175 degC, currents of 1 nA to 10 mA, inversion coefficients of 1e-4 to 1e4."""
    volt_per_kelvin = 1.380649e-23 / 1.602176634e-19
    temperatures, amperes, inversions = [], [], []
    for case in DEVICE_CASES:
        for quantities, exact in with_solution(*case):
            temperatures.append(quantities["V_T"] / volt_per_kelvin)
            amperes += [float(current) for current in (exact or {}).values()]
            if "I_spec" in quantities and exact is not None and "I_in" in exact:
                inversions.append(float(exact["I_in"]) / quantities["I_spec"])
    np.testing.assert_allclose((min(temperatures), max(temperatures)), TEMPERATURES, rtol=1e-12)
    assert min(amperes) < 3e-9
    assert max(amperes) > 3e-3
    assert min(inversions) < 3e-4
    assert max(inversions) > 3e3


@every_case
def test_array_equals_scalar(topology: str, feed: str, device: str) -> None:
    circuit = numerics(topology, feed, device)
    rows = with_solution(topology, feed, device)[:12]
    quantities = stacked(rows)
    together = currents(circuit, quantities)
    folded = currents(circuit, {name: v.reshape(2, 3, 2) for name, v in quantities.items()})
    for name, values in together.items():
        alone = [float(currents(circuit, item.quantities)[name]) for item in rows]
        np.testing.assert_allclose(values, alone, rtol=1e-11)
        np.testing.assert_allclose(folded[name].ravel(), alone, rtol=1e-11)


@every_case
def test_sensitivities(topology: str, feed: str, device: str) -> None:
    circuit = numerics(topology, feed, device)
    for quantities, _ in with_solution(topology, feed, device)[::16]:
        exact = oracle.log_sensitivities(topology, feed, device, quantities)
        for of, by_quantity in exact.items():
            found = sensitivities(circuit, quantities, of)
            assert found.keys() == by_quantity.keys()
            for name, value in by_quantity.items():
                error = abs(float(found[name]) - float(value)) / max(1.0, abs(float(value)))
                assert error <= DERIVATIVE, (of, name, float(found[name]), float(value))


@pytest.mark.parametrize(
    ("topology", "feed", "device", "slot"),
    [(*case, slot.name) for case in DEVICE_CASES for slot in CIRCUITS[case[0]].slots_for(case[1])],
)
def test_needed_resistance_undoes_currents(
    topology: str, feed: str, device: str, slot: str
) -> None:
    circuit = numerics(topology, feed, device)
    own = resistance_name(slot)
    rows = with_solution(topology, feed, device)
    quantities = stacked(rows)
    output = np.array([float((item.exact or {})["I_out"]) for item in rows])
    largest = np.array([max(map(float, (item.exact or {}).values())) for item in rows])
    there = quantities.pop(own)
    needed = needed_resistance(circuit, slot, output, quantities)
    short = there == 0
    # a short comes back as what drops next to nothing, of either sign
    assert np.all(np.abs(needed * largest)[short] <= PROMISED * quantities["V_T"][short])
    influence = np.abs(sensitivities(circuit, {**quantities, own: there})[own])
    with np.errstate(divide="ignore", invalid="ignore"):
        same = ~short & (np.abs(needed / there - 1) * influence <= KEPT)
    if (topology, slot) == ("peaking source", "feed"):
        # the same output flows at two inputs; the one asked for lies past the peak
        assert np.all(same | (needed < there))
        past = ~same & (needed > 0)
        again = currents(circuit, {**quantities, own: np.where(past, needed, there)})["I_out"]
        solves = np.isfinite(again)
        assert np.all(np.abs(again / output - 1)[past & solves] <= 100 * KEPT)
        return
    assert np.all(same | short), (there[~(same | short)], needed[~(same | short)])


def test_no_resistance_makes_less_than_the_leakage() -> None:
    circuit = numerics("degenerated mirror", "given", "bipolar")
    q = solved("degenerated mirror", "given", "bipolar")[0].quantities
    others = {name: value for name, value in q.items() if name != "R_output"}
    assert np.isnan(needed_resistance(circuit, "output", 0.9 * q["N"] * q["I_L"], others))


def test_fuzz() -> None:
    """Every circuit converges, or has a reason for which the oracle finds no solution either."""
    converged, reasons = fuzz(2000 // len(DEVICE_CASES) + 1, seed=1, most_proved=105)
    assert converged > 1800
    assert reasons
    assert all(reasons)


EFFECTS = {
    "transistors.npn.current_gain": 120,
    "transistors.npn.early_voltage": "90 V",
    "transistors.npn.leakage_current": "1 pA",
}
FIXED = {"resistors": {"output": {"parts": [{"material": "poly", "value": "12 kohm"}]}}}


def message(folder: Path, process: dict[str, Any], study: dict[str, Any]) -> str:
    """Return what `Operation.currents` says of a study without a solution at 125 degC."""
    from tcopt.errors import NoSolutionError
    from tcopt.operation import Choices, Operation, fixed_mixes

    made = load_study(write(folder, changed(PROCESS, process), changed({**STUDY, **FIXED}, study)))
    choices = Choices(made.circuit.area_ratio[0], made.circuit.mirror_ratio[0], 1e-6)
    operation = Operation(made, choices, fixed_mixes(made))
    with pytest.raises(NoSolutionError, match="no solution at 125 degC") as caught:
        operation.currents(np.array([300.15, 398.15]))
    return str(caught.value)


@pytest.mark.parametrize(
    ("process", "study", "words"),
    [
        (
            {"transistors.npn.leakage_current": "2 nA"},
            {"circuit.effects": ["leakage"]},
            "a unit transistor's leakage of 1.78e-06 A is above the input's 1e-06 A",
        ),
        (
            {"transistors.npn.saturation_current": "20 pA", "transistors.npn.base_emitter": GONE},
            {"circuit.effects": ["leakage"]},
            "the voltage across the input transistor would be -0.",
        ),
        (
            {},
            {"circuit.effects": ["early effect"], "circuit.output_voltage": "22 mV"},
            "the output voltage of 0.022 V is not above the output transistor's emitter or source",
        ),
    ],
)
def test_reason_names_temperature_and_cause(
    tmp_path: Path, process: dict[str, Any], study: dict[str, Any], words: str
) -> None:
    circuit = {"circuit.area_ratio": 4, **study}
    assert words in message(tmp_path, {**EFFECTS, **process}, circuit)


def test_reason_is_the_base_currents() -> None:
    circuit = numerics("ptat core", "self", "bipolar")
    q = {
        "M": 0.1, "N": 20.0, "R_core": 1e3, "V_T": 0.026, "log_I_S": -36.0, "inverse_beta": 0.08,
        "inverse_V_A": 0.0, "V_out": 2.0, "I_L": 0.0,
    }  # fmt: skip
    # by hand: with 12.5 the input has (0.1 - 0.08)/1.08 of the output, 20 times that is below 1
    assert np.isnan(currents(circuit, q)["I_out"])
    assert reason(circuit, q) == "there would be one without the base currents at a gain of 12.5"


def test_no_follower_where_bases_hang_on_two_nodes(tmp_path: Path) -> None:
    study = changed(
        {**STUDY, "resistors": {"drop": {"materials": ["poly"]}}},
        {
            "circuit.topology": "peaking source",
            "circuit.effects": "current gain",
            "circuit.base_current": "through follower",
        },
    )
    found = "'through follower' for 'peaking source', whose bases hang on two nodes"
    with pytest.raises(InputError, match=found):
        load_study(write(tmp_path, changed(PROCESS, EFFECTS), study))
