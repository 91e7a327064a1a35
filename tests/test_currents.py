"""Currents, sensitivities and needed resistances against a 50-digit solution of the loops."""

from __future__ import annotations

from functools import lru_cache
from typing import Any, NamedTuple

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from tcopt.circuits import CIRCUITS
from tcopt.laws import generated as laws
from tcopt.laws.numbers import VOLT_PER_KELVIN
from tcopt.solve import currents, needed_resistance, numerics, sensitivities
from tcopt.symbols import resistance_name
from tests import junction, oracle
from tests.samples import CASES, LARGEST, SMALLEST, T_0, Design, corners, drawn

PROMISED = 1e-9
"""Relative error of any current."""
KEPT = 1e-10
"""What is kept in fact, at supplies up to 100 V; worse than this is worth a look."""
DERIVATIVE = 1e-9
"""Error of a sensitivity, relative to the larger of itself and 1."""

every_case = pytest.mark.parametrize(("topology", "feed"), CASES)


class Solved(NamedTuple):
    """A design, the floats that tcopt makes of it, and its currents by the oracle."""

    design: Design
    floats: dict[str, float]
    exact: dict[str, Any]


def floats_of(design: Design, names: tuple[str, ...]) -> dict[str, float]:
    """Return a design's quantities by tcopt's own laws, in floats."""
    growth = junction.log_saturation_growth(design.T, T_0, *design.junction)
    ratio = laws.resistance_ratio(design.T, T_0, *design.material)
    found = {
        "V_T": laws.thermal_voltage(design.T, VOLT_PER_KELVIN),
        "log_I_S": np.log(design.I_S0) + growth,
        **design.others,
        **{name: R_0 * ratio for name, R_0 in design.resistors.items()},
    }
    return {name: float(found[name]) for name in names}


@lru_cache
def solved(topology: str, feed: str) -> tuple[Solved, ...]:
    names = numerics(topology, feed).quantities
    designs = [*drawn(topology, feed, 128, seed=20), *corners(topology, feed)]
    return tuple(
        Solved(d, floats_of(d, names), oracle.solve(topology, feed, d.exact(names)))
        for d in designs
    )


def stacked(rows: tuple[Solved, ...]) -> dict[str, Any]:
    return {name: np.array([row.floats[name] for row in rows]) for name in rows[0].floats}


def test_every_topology_and_input_is_compared() -> None:
    closed = [c for c in CIRCUITS.values() if c.devices != ("mos",)]
    assert set(CASES) == {(c.topology, feed) for c in closed for feed in c.feeds}


@every_case
def test_currents(topology: str, feed: str) -> None:
    circuit = numerics(topology, feed)
    outputs = []
    for row in solved(topology, feed):
        found = currents(circuit, row.floats)
        assert tuple(found) == tuple(row.exact)
        for name, exact in row.exact.items():
            error = abs(oracle.mp.mpf(float(found[name])) / exact - 1)
            assert error <= min(KEPT, PROMISED), (name, float(error), row)
        outputs.append(float(row.exact["I_out"]))
    assert min(outputs) < 1.001 * SMALLEST
    assert max(outputs) > 0.999 * LARGEST


@every_case
def test_array_equals_scalar(topology: str, feed: str) -> None:
    circuit = numerics(topology, feed)
    rows = solved(topology, feed)
    together = currents(circuit, stacked(rows))
    folded = currents(circuit, {n: v[:128].reshape(2, 16, 4) for n, v in stacked(rows).items()})
    for name, values in together.items():
        alone = [float(currents(circuit, row.floats)[name]) for row in rows]
        np.testing.assert_allclose(values, alone, rtol=1e-11)
        np.testing.assert_allclose(folded[name].ravel(), alone[:128], rtol=1e-11)


def test_arrays_of_different_shape_are_broadcast() -> None:
    circuit = numerics("degenerated mirror", "given")
    R = np.array([[1e3], [2e3], [4e3]])
    N = np.array([1.0, 8.0])
    found = currents(
        circuit, {"I_given": 1e-3, "N": N, "R_input": 0.0, "R_output": R, "V_T": 0.026}
    )["I_out"]
    assert found.shape == (3, 2)
    one = {"I_given": 1e-3, "N": 8.0, "R_input": 0.0, "R_output": 4e3, "V_T": 0.026}
    assert found[2, 1] == pytest.approx(float(currents(circuit, one)["I_out"]), rel=1e-12)


@every_case
def test_sensitivities(topology: str, feed: str) -> None:
    circuit = numerics(topology, feed)
    for row in solved(topology, feed)[::22]:
        for of, exact in oracle.log_sensitivities(topology, feed, row.floats).items():
            found = sensitivities(circuit, row.floats, of)
            assert found.keys() == exact.keys()
            for name, value in exact.items():
                error = abs(float(found[name]) - float(value)) / max(1.0, abs(float(value)))
                assert error <= DERIVATIVE, (of, name, float(found[name]), float(value), row)


@every_case
def test_sensitivities_of_an_array(topology: str, feed: str) -> None:
    circuit = numerics(topology, feed)
    rows = solved(topology, feed)[:24]
    quantities = stacked(rows)
    together = sensitivities(circuit, quantities)
    for k, row in enumerate(rows):
        alone = sensitivities(circuit, row.floats)
        for name, value in alone.items():
            assert together[name][k] == pytest.approx(float(value), rel=1e-9, abs=1e-12)


@pytest.mark.parametrize(
    ("topology", "feed", "slot"),
    [(t, f, slot.name) for t, f in CASES for slot in CIRCUITS[t].slots_for(f)],
)
def test_needed_resistance_undoes_currents(topology: str, feed: str, slot: str) -> None:
    circuit = numerics(topology, feed)
    symbol = resistance_name(slot)
    for row in solved(topology, feed)[::3]:
        solution = {name: float(value) for name, value in row.exact.items()}
        output = solution["I_out"]
        others = {name: value for name, value in row.floats.items() if name != symbol}
        needed = float(needed_resistance(circuit, slot, output, others))
        there = row.floats[symbol]
        if there == 0:
            # a short comes back as what drops next to nothing, of either sign
            assert abs(needed) * max(solution.values()) <= PROMISED * row.floats["V_T"]
            continue
        if (topology, slot) == ("peaking source", "feed"):
            drop = solution["I_in"] * row.floats["R_drop"] / row.floats["V_T"]
            if drop < 1:
                # the same output flows at two inputs; the one asked for lies past the peak
                assert needed < there
                if needed <= 0:
                    continue
                there = needed
        influence = float(sensitivities(circuit, {**others, symbol: there})[symbol])
        assert abs(needed / there - 1) * abs(influence) <= KEPT, row
        found = oracle.solve(topology, feed, {**others, symbol: needed})["I_out"]
        assert abs(found / output - 1) <= KEPT, row


MIRROR = {"I_given": 1e-3, "N": 2.0, "R_input": 100.0, "R_output": 1e3, "V_T": 0.025}
FED = {"V_CC": 5.0, "N": 2.0, "R_input": 100.0, "R_output": 1e3, "R_feed": 4e3, "V_T": 0.025}
FED["log_I_S"] = -36.0
CORE = {"N": 8.0, "M": 1.0, "R_core": 1e3, "V_T": 0.025}
SUM = {**CORE, "R_base": 1e4, "log_I_S": -36.0}
BASE = {"R_base": 6e3, "V_T": 0.025, "log_I_S": -36.0}
PEAK = {"I_given": 1e-5, "N": 1.0, "R_drop": 2.5e3, "V_T": 0.025}
FED_PEAK = {"V_CC": 5.0, "N": 1.0, "R_drop": 2.5e3, "R_feed": 1e5, "V_T": 0.025}
FED_PEAK["log_I_S"] = -36.0


@pytest.mark.parametrize(
    ("topology", "feed", "quantities"),
    [
        ("ptat core", "self", {**CORE, "N": 0.5}),
        ("ptat core", "self", {**CORE, "N": 0.25, "M": 4.0}),
        ("ptat plus vbe", "self", {**SUM, "N": 0.5}),
        ("ptat plus vbe", "self", {**SUM, "N": 1.0}),
        # V_T ln(I/I_S) < I R for every I once R > V_T/(e I_S)
        ("vbe reference", "self", {**BASE, "R_base": 0.025 * np.exp(36.0 - 1) * (1 + 1e-9)}),
    ],
)
def test_no_current_where_no_current_solves_the_loops(
    topology: str, feed: str, quantities: dict[str, float]
) -> None:
    with pytest.raises(ValueError, match="no change of sign"):
        oracle.solve(topology, feed, quantities)
    circuit = numerics(topology, feed)
    found = currents(circuit, quantities)
    assert not all(value > 0 for value in found.values())
    assert all(np.isnan(value) for value in sensitivities(circuit, quantities).values())


@pytest.mark.parametrize(
    ("topology", "feed", "slot", "output", "quantities"),
    [
        # more than the area ratio and the drop at the input allow: N I_in exp(I_in R/V_T)
        ("degenerated mirror", "given", "output", 2e-3 * np.exp(4.0) * (1 + 1e-9), MIRROR),
        # less than a bare input transistor would give already
        ("degenerated mirror", "given", "input", 1e-4, {**MIRROR, "R_output": 10.0}),
        # more than the supply drives into the input even without a feed resistor
        ("degenerated mirror", "supply", "feed", 1.0, FED),
        ("degenerated mirror", "supply", "input", 2e-9, FED),
        ("degenerated mirror", "supply", "input", 1.0, FED),
        ("degenerated mirror", "supply", "output", 1.0, FED),
        ("ptat core", "self", "core", 1e-5, {**CORE, "N": 0.5}),
        ("ptat plus vbe", "self", "core", 1e-5, {**SUM, "N": 0.5}),
        # below the PTAT part alone: V_T ln 8/R_core = 52 uA
        ("ptat plus vbe", "self", "base", 5e-5, SUM),
        ("vbe reference", "self", "base", np.exp(-36.0) * (1 - 1e-9), BASE),
        ("peaking source", "given", "drop", 1e-5 * (1 + 1e-9), PEAK),
        # above the peak: V_T/(e R_drop)
        ("peaking source", "supply", "feed", 1e-5 / np.e * (1 + 1e-9), FED_PEAK),
    ],
)
def test_no_resistance_where_none_gives_the_output(
    topology: str, feed: str, slot: str, output: float, quantities: dict[str, float]
) -> None:
    others = {name: q for name, q in quantities.items() if name != resistance_name(slot)}
    assert not needed_resistance(numerics(topology, feed), slot, output, others) > 0


def test_where_nothing_solves_only_that_place_is_nan() -> None:
    circuit = numerics("ptat core", "self")
    quantities: dict[str, Any] = {**CORE, "N": np.array([0.5, 1.0, 8.0])}
    found = currents(circuit, quantities)
    slopes = sensitivities(circuit, quantities)
    assert found["I_out"][0] < 0
    assert found["I_out"][1] == 0
    np.testing.assert_array_equal(np.isnan(slopes["V_T"]), [True, True, False])
    assert slopes["V_T"][2] == pytest.approx(1)


def test_a_current_beyond_floats_is_infinite_and_no_warning() -> None:
    circuit = numerics("degenerated mirror", "given")
    found = currents(circuit, {**MIRROR, "R_input": 1e5, "R_output": 0.0})
    assert found["I_out"] == np.inf


@given(
    margin=st.floats(1e-9, 1e-3),
    log_I_S=st.floats(-90.0, -10.0),
    V_T=st.floats(0.018, 0.04),
)
def test_vbe_reference_up_to_the_last_resistance_that_has_a_solution(
    margin: float, log_I_S: float, V_T: float
) -> None:
    circuit = numerics("vbe reference", "self")
    last = V_T * np.exp(-log_I_S - 1)
    below, above = (
        currents(circuit, {"R_base": last * (1 + side * margin), "V_T": V_T, "log_I_S": log_I_S})
        for side in (-1, 1)
    )
    # at the last one the drop is one V_T; from there it opens with a square root
    assert below["I_out"] * last / V_T == pytest.approx(
        1 + np.sqrt(2 * margin) + 5 / 3 * margin, abs=2 * margin**1.5 + 1e-9
    )
    assert np.isnan(above["I_out"])
