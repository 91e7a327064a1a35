"""The menu of materials: roles and figures against limiting cases by hand."""

from __future__ import annotations

import pytest

from tcopt.errors import InputError
from tcopt.menu import FALLS_SHORT, MATCHES, OVER_COMPENSATES, Menu, menu, menu_range
from tcopt.study import TemperatureRange
from tests.small import T_REF, material, process

RANGE = TemperatureRange(low=233.15, high=423.15, reference=T_REF)
INVERSE = 1e6 / T_REF
"""1/T at the reference [ppm/K]."""


def _menu(*coefficients: float, **others: float) -> Menu:
    made = [material(f"m{k}", tc1, **others) for k, tc1 in enumerate(coefficients)]
    return menu(process(*made), RANGE)


def test_a_resistance_proportional_to_temperature_cancels_a_thermal_voltage_exactly() -> None:
    # by hand: V_T/R is then k/q over a constant
    (entry,) = _menu(INVERSE).entries
    assert entry.role == MATCHES
    assert entry.left == pytest.approx(0, abs=1e-12)
    assert entry.drift is not None
    assert entry.drift.box_ppm_per_K == pytest.approx(0, abs=1e-6)


def test_without_coefficients_all_of_the_thermal_voltage_is_left() -> None:
    # by hand: V_T rises in proportion to T, so the box is 1/T_ref over any range
    (entry,) = _menu(0.0).entries
    assert entry.role == FALLS_SHORT
    assert entry.left == pytest.approx(1 / T_REF, rel=1e-12)
    assert entry.drift is not None
    for figure in ("box_ppm_per_K", "endpoint_ppm_per_K", "slope_ppm_per_K"):
        assert getattr(entry.drift, figure) == pytest.approx(INVERSE, rel=1e-10)
    assert entry.drift.deviation_ppm == pytest.approx(1e6 * (423.15 / T_REF - 1), rel=1e-10)


def test_roles_change_at_the_tolerance() -> None:
    found = _menu(*(INVERSE * f for f in (0.949, 0.951, 1.049, 1.051)))
    assert [entry.role for entry in found.entries] == [
        FALLS_SHORT,
        MATCHES,
        MATCHES,
        OVER_COMPENSATES,
    ]


def test_coefficients_are_about_the_reference_of_the_process() -> None:
    # platinum of IEC 60751 (A 3.9083e-3, B -5.775e-7 about 0 degC), moved to 25 degC: calculated
    platinum = material("platinum", 3908.3, -0.5775, reference=273.15)
    made = process(platinum).model_copy(update={"reference": 298.15})
    (entry,) = menu(made, RANGE).entries
    assert 1e6 * entry.tc1 == pytest.approx(3535.3, abs=0.05)
    assert 1e6 * entry.tc2 == pytest.approx(-0.526, abs=0.0005)


def test_no_drift_figure_where_the_resistance_would_vanish() -> None:
    (entry,) = _menu(-9000.0).entries
    assert entry.drift is None


def test_a_material_without_resistance_at_the_reference_is_refused() -> None:
    with pytest.raises(InputError, match=r"materials\.m0: found -0\.\d+ times its resistance at"):
        _menu(-9000.0, reference=150.0)


def test_the_range_is_industrial_unless_words_say_otherwise() -> None:
    assert menu_range(None, None, None).grade == "industrial"
    assert menu_range("automotive 0", None, None).high == pytest.approx(423.15)
    given = menu_range(None, "100 degC", "150 degC")
    assert (given.low, given.high) == (pytest.approx(373.15), pytest.approx(423.15))


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (("hot", None, None), r"^range: grade: found 'hot'; accepted: 'automotive 0', "),
        ((None, "-40 degC", None), r"^range: to: found nothing; accepted: either from and to"),
        ((None, "5 uA", "6 uA"), r"^range: from: found '5 uA'; accepted: a temperature"),
        ((None, "50 degC", "20 degC"), r"^range: to: found 20 degC, not above 50 degC"),
        (("industrial", "0 degC", "50 degC"), r"^range: from: found '0 degC' beside grade"),
    ],
)
def test_words_that_name_no_range_are_refused(
    words: tuple[str | None, str | None, str | None], message: str
) -> None:
    with pytest.raises(InputError, match=message):
        menu_range(*words)
