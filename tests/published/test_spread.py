"""Spread against published figures, calculations by hand, and a general library."""

from __future__ import annotations

from math import log, sqrt

import numpy as np
import pytest
from uncertainties import ufloat, umath

from tcopt.laws.numbers import VOLT_PER_KELVIN
from tcopt.spread.figures import FIGURES
from tcopt.spread.pelgrom import device_deviation, pair_deviation
from tcopt.spread.plan import Plan
from tcopt.spread.sample import block_count, normals, points
from tcopt.spread.yields import clopper_pearson
from tests.spread_designs import (
    T_0,
    insertion,
    material,
    plan_of,
    ptat_core,
    ptat_plus_vbe,
    sensed,
    transistor,
)


def _figures(plan: Plan, samples: int = 16384) -> dict[str, np.ndarray]:
    count = len(plan.variation.variates)
    blocks = [
        plan.made(normals(points("sobol", 5, count, samples, block))).figures[0]
        for block in range(block_count(samples))
    ]
    return dict(zip(FIGURES, np.concatenate(blocks).T, strict=True))


def test_mix_of_two_materials() -> None:
    """sigma(TC) = w (1 - w) |dTC| sqrt(sa^2 + sb^2): 53 ppm/K for halves, 3000 ppm/K, 5 % each.

    By hand, to first order in the spreads; the absolute spread falls to 3.5 % meanwhile.
    """
    rising = material("rising", tc1=1500e-6, spread=0.05)
    falling = material("falling", tc1=-1500e-6, spread=0.05)
    found = _figures(plan_of(sensed((rising, 5e3), (falling, 5e3))))
    by_hand = 0.25 * 3000e-6 * sqrt(2) * 0.05
    assert by_hand == pytest.approx(53e-6, abs=0.1e-6)
    assert found["slope"].std() == pytest.approx(by_hand, rel=0.005)
    assert found["current"].std() / found["current"].mean() == pytest.approx(0.0354, rel=0.005)


def test_a_single_material_keeps_its_temperature_coefficient() -> None:
    """Sheet spread alone scales a current and leaves its shape, whatever the size (by hand)."""
    found = _figures(plan_of(sensed((material(tc1=1500e-6, spread=0.05), 1e4))), 4096)
    assert found["current"].std() / found["current"].mean() == pytest.approx(0.05, rel=0.02)
    assert np.ptp(found["slope"]) < 1e-12
    assert np.ptp(found["box"]) < 1e-12


def test_one_millivolt_on_a_ptat_core() -> None:
    """1 mV is 1.9 % of 53.8 mV, V_T ln 8 at 27 degC (calculation)."""
    assert VOLT_PER_KELVIN * T_0 * log(8) == pytest.approx(53.8e-3, abs=0.05e-3)
    # Pelgrom's coefficient over areas of 4 and 32 um^2 that makes one sigma of 1 mV
    area = 4e-12
    spread = 1e-3 / (VOLT_PER_KELVIN * T_0)
    matching = spread / sqrt((1 / area + 1 / (8 * area)) / 2)
    device = transistor(matching=matching, emitter_area=area)
    found = _figures(plan_of(ptat_core(material(), device=device)))
    assert found["current"].std() / found["current"].mean() == pytest.approx(1 / 53.8, rel=2e-3)


def test_spread_of_base_emitter_voltage_is_ptat() -> None:
    """A spread of I_S moves V_BE by V_T d(ln I_S): in proportion to T.

    Meijer, "Thermal sensors based on transistors", Sensors and Actuators 10 (1986), memory.
    So trimming V_BE at one temperature can set it right at all.
    """
    device = transistor(base_emitter_spread=5e-3)
    plan = plan_of(ptat_plus_vbe(material(), device=device))
    z = np.array([[0.0], [1.0]])
    T = np.array([250.0, T_0, 400.0])
    stated, moved = plan.variation.quantities(z, T)["log_I_S"]
    np.testing.assert_allclose(VOLT_PER_KELVIN * T * (moved - stated), 5e-3 * T / T_0, rtol=1e-12)


@pytest.mark.parametrize("T", [233.15, T_0, 398.15])
def test_linear_propagation_agrees_at_small_spreads(T: float) -> None:
    """The package ``uncertainties`` propagates linearly; samples of small spreads agree.

    Of the sum of a PTAT and a V_BE current, the law written out once more.
    """
    film = material(tc1=-300e-6, tc2=0.5e-6, spread=1e-3, tc1_spread=4e-6, tc2_spread=2e-8)
    device = transistor(saturation_current_spread=0.02, matching=4e-9, emitter_area=4e-12)
    plan = plan_of(ptat_plus_vbe(film, device=device))
    V_T, d = VOLT_PER_KELVIN * T, T - T_0
    sheet, tc1, tc2 = ufloat(1, 1e-3), ufloat(-300e-6, 4e-6), ufloat(0.5e-6, 2e-8)
    pair = ufloat(0, sqrt(4e-9**2 / 4e-12 * (1 + 1 / 8) / 2))
    growth = 3.6 * log(T / T_0) + 1.17 / VOLT_PER_KELVIN * (1 / T_0 - 1 / T)
    log_I_S = log(1.2e-16) + growth + ufloat(0, 0.02)
    ratio = sheet * (1 + tc1 * d + tc2 * d * d)
    I_core = V_T * (log(8) + pair) / (5.1e3 * ratio)
    expected = I_core + V_T * (umath.log(I_core) - log_I_S) / (65e3 * ratio)
    count = len(plan.variation.variates)
    z = normals(points("sobol", 2, count, 4096, 0))
    from tcopt.spread.trim import output_of

    found = output_of(plan.variation, z, np.array([T]))[:, 0]
    assert found.mean() == pytest.approx(expected.n, rel=1e-5)
    assert found.std() == pytest.approx(expected.s, rel=3e-3)


@pytest.mark.parametrize(
    ("passed", "drawn", "low", "high"),
    [
        (81, 263, 0.2527, 0.3676),
        (15, 148, 0.0578, 0.1617),
        (0, 20, 0, 0.1684),
        (1, 29, 0.0009, 0.1776),
    ],
)
def test_clopper_pearson(passed: int, drawn: int, low: float, high: float) -> None:
    """Newcombe, "Two-sided confidence intervals for the single proportion", Statistics in
    Medicine 17 (1998), table I, method 5 (memory).
    """
    assert clopper_pearson(passed, drawn) == pytest.approx((low, high), abs=5.1e-5)


def test_clopper_pearson_by_hand() -> None:
    """None of n: 1 - (a/2)^(1/n); all of n: its mirror image. (Calculation.)"""
    assert clopper_pearson(0, 50) == pytest.approx((0, 1 - 0.025 ** (1 / 50)))
    assert clopper_pearson(50, 50) == pytest.approx((0.025 ** (1 / 50), 1))


def test_pelgrom() -> None:
    """sigma = A/sqrt(W L) for a pair: 15 nm and 1 um x 10 um are 0.474 %.

    Pelgrom, Duinmaijer, Welbers, IEEE J. Solid-State Circuits 24 (1989); the coefficient is that
    of a poly resistor in the published tables of IHP SG13G2.
    """
    assert pair_deviation(15e-9, 1e-11, 1e-11) == pytest.approx(0.474e-2, rel=1e-3)
    assert device_deviation(15e-9, 1e-11) == pytest.approx(0.474e-2 / sqrt(2), rel=1e-3)
    # a pair of unlike areas is ruled by the smaller
    assert pair_deviation(15e-9, 1e-11, 1e-3) == pytest.approx(0.474e-2 / sqrt(2), rel=1e-3)


def test_limits_of_a_published_process() -> None:
    """IHP SG13G2, Rppd: 235, 260, 285 ohm per square, 170 ppm/K, 0.4 ppm/K^2 about 300 K.

    The limits taken as three sigma: that share of the parts (99.73 %) lies between them.
    """
    sheet = material(
        "Rppd", reference=300.0, sheet_resistance=260.0, tc1=170e-6, tc2=0.4e-6,
        spread={"limit": 25 / 260, "sigma": 3},
    )  # fmt: skip
    study = sensed((sheet, 260.0))
    found = _figures(plan_of(study), 65536)["current"]
    at_reference = 1 + 170e-6 * 0.15 + 0.4e-6 * 0.15**2
    ohms = np.sort(1 / found / at_reference)
    inside = np.mean((ohms > 235) & (ohms < 285))
    assert inside == pytest.approx(0.9973, abs=2e-4)


def test_trim_takes_what_spreads_alike() -> None:
    """After one exact trim two materials of one step have nothing left of the step (by hand).

    With all variance in the common step both halves move together, and 53 ppm/K become none.
    """
    step = {"part": "step", "share": 1.0}
    rising = material("rising", tc1=1500e-6, spread=0.05, common=step)
    falling = material("falling", tc1=-1500e-6, spread=0.05, common=step)
    plan = plan_of(sensed((rising, 5e3), (falling, 5e3), trim=(insertion(),)))
    z = normals(points("sobol", 5, len(plan.variation.variates), 1024, 0))
    figures = plan.made(z).figures
    slope = FIGURES.index("slope")
    assert figures[0, :, slope].std() < 1e-12
    assert figures[1, :, FIGURES.index("current")] == pytest.approx(1e-4, rel=1e-9)
