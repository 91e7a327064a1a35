"""Resistor materials and standards: the law of resistance, and a reference that moves."""

from __future__ import annotations

import numpy as np
import pytest

from tcopt.drift import drift_of
from tcopt.laws import generated as laws
from tests.published.worked import slope

IEC_60751 = (273.15, 3.9083e-3, -5.775e-7)
"""Platinum from 0 degC up, T_0 [K], A [1/K], B [1/K^2]; C matters below 0 degC only."""
ANNEALED_COPPER = (293.15, 3930e-6, 0.0)
"""IEC 60028."""
WELL_EXPONENT = 2.2
"""A well resistor goes with (T/T_0)^2.2: Carusone, Johns, Martin (7.54), after Michejda 1984."""


@pytest.mark.parametrize(
    ("celsius", "ohms"), [(-40, 84.27), (0, 100.00), (100, 138.51), (150, 157.33)]
)
def test_platinum_table(celsius: float, ohms: float) -> None:
    """IEC 60751, table of the Pt100.

    At -40 degC the standard's third coefficient is 4 mohm, less than the table shows.
    """
    found = 100 * laws.resistance_ratio(273.15 + celsius, *IEC_60751)
    assert found == pytest.approx(ohms, abs=0.005)


@pytest.mark.parametrize(("celsius", "ohms"), [(25, 109.735), (85, 132.803), (125, 147.951)])
def test_platinum_formula(celsius: float, ohms: float) -> None:
    """IEC 60751 (calc)."""
    found = 100 * laws.resistance_ratio(273.15 + celsius, *IEC_60751)
    assert found == pytest.approx(ohms, abs=0.0005)


def test_platinum_about_25_degrees() -> None:
    """From 0 to 25 degC: TC1 3535.3 ppm/K, TC2 -0.526 ppm/K^2 (calc from IEC 60751)."""
    assert laws.moved_tc1(298.15, *IEC_60751) * 1e6 == pytest.approx(3535.3, abs=0.05)
    assert laws.moved_tc2(298.15, *IEC_60751) * 1e6 == pytest.approx(-0.526, abs=0.0005)


def test_copper_about_25_degrees() -> None:
    """3930 ppm/K at 20 degC (IEC 60028) is 3854 at 25 degC (calc)."""
    assert laws.moved_tc1(298.15, *ANNEALED_COPPER) * 1e6 == pytest.approx(3854, abs=0.5)
    assert laws.moved_tc2(298.15, *ANNEALED_COPPER) == 0


def test_well_resistor() -> None:
    """At 300 K: TC1 7333 ppm/K, TC2 14.7 ppm/K^2 (calc from the power law).

    The parabola of these two touches the power law to second order; what is left grows with
    the third power of the step, with 2.2 x 1.2 x 0.2/6 as its factor.
    """
    first = WELL_EXPONENT / 300
    second = first * (WELL_EXPONENT - 1) / 2 / 300
    assert first * 1e6 == pytest.approx(7333, abs=0.5)
    assert second * 1e6 == pytest.approx(14.7, abs=0.05)
    third = second * (WELL_EXPONENT - 2) / 3 / 300
    for d in (-20.0, -5.0, 5.0, 20.0):
        power = (1 + d / 300) ** WELL_EXPONENT
        found = laws.resistance_ratio(300 + d, 300.0, first, second)
        assert found == pytest.approx(power, abs=1.1 * third * abs(d) ** 3)
        about = laws.moved_tc1(300 + d, 300.0, first, second)
        assert about == pytest.approx(WELL_EXPONENT / (300 + d), rel=0.002)


def test_temperature_coefficient_of_resistance_by_two_points() -> None:
    """MIL-STD-202 method 304: (R2 - R1)/(R1 (T2 - T1)), R1 at 25 degC, to -55 and to 125 degC.

    For platinum by IEC 60751, R(25) 109.735, R(125) 147.951 (calc): 38.216/109.735/100 K.
    """

    def resistance(T: np.ndarray) -> np.ndarray:
        return np.asarray(100 * laws.resistance_ratio(T, *IEC_60751))

    hot = drift_of(resistance, 0.0, 0.0, 298.15, 398.15, 298.15)
    assert hot.endpoint_ppm_per_K == pytest.approx(38.216 / 109.735 / 100 * 1e6, abs=0.1)
    # a parabola's chord has the slope of its middle: TC1 + TC2 d about 25 degC
    cold = drift_of(resistance, 0.0, 0.0, 218.15, 298.15, 298.15)
    assert cold.endpoint_ppm_per_K == pytest.approx(3535.3 - 0.526 * -80, abs=0.1)


@pytest.mark.parametrize(
    ("layer", "tc1", "tc2", "role"),
    [
        ("Rsil", 3100e-6, 0.3e-6, "falls short"),
        ("Rppd", 170e-6, 0.4e-6, "falls short"),
        ("Rhigh", -2300e-6, 2.1e-6, "falls short"),
        ("thin metal", 3400e-6, 0.0, "over-compensates"),
        ("top metal", 3700e-6, 0.0, "over-compensates"),
    ],
)
def test_layers_of_an_open_process_under_a_ptat_voltage(
    layer: str, tc1: float, tc2: float, role: str
) -> None:
    """IHP SG13G2 open process specification, T_0 300 K: coefficients against 1/T = 3333 ppm/K.

    A PTAT voltage over the layer rises where its coefficient is below 1/T, else it falls.
    """
    moving = {"V_T": 1 / 300, "R_core": laws.resistance_ratio_slope(300.0, 300.0, tc1, tc2)}
    core = {"N": 8.0, "M": 1.0, "R_core": 1e3, "V_T": 0.025852}
    found = slope("ptat core", "self", core, moving)
    assert found * 1e6 == pytest.approx(3333.3 - tc1 * 1e6, abs=0.1), layer
    assert (found > 0) == (role == "falls short")
