"""Figures from 61 temperatures are those of the continuous curve."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from tcopt.assess import assess
from tcopt.spread.figures import FIGURES, Frame, figures_of
from tcopt.spread.sample import normals, points
from tcopt.study import Part
from tests.spread_designs import T_0, material, plan_of, ptat_plus_vbe, transistor


def test_figures_agree_with_the_continuous_ones() -> None:
    """Parts that `check` can hold: each with materials and junction of its own.

    Worst found over 64 parts: 5e-9 of the current for deviation and height of the box, 2e-10/K
    for the slope.
    """
    film = material(tc1=2.4e-4, tc2=0.7e-6, spread=0.05, tc1_spread=1e-4, tc2_spread=1e-7)
    plan = plan_of(ptat_plus_vbe(film, device=transistor(saturation_current_spread=0.2)))
    z = normals(points("sobol", 9, len(plan.variation.variates), 64, 0))
    figures = plan.made(z).figures[0]
    span = plan.frame.high - plan.frame.low
    for part in range(64):
        row = z[part : part + 1]
        sheet, tc1, tc2 = (
            float(plan.variation.deviation((order, "film"), row)[0, 0])
            for order in ("sheet", "tc1", "tc2")
        )
        own = film.model_copy(update={"tc1": film.tc1 + tc1, "tc2": film.tc2 + tc2})
        shift = float(plan.variation.deviation(("saturation current",), row)[0, 0])
        made = plan.study.circuit
        device = made.transistor
        assert device is not None
        moved = device.model_copy(
            update={"saturation_current": device.saturation_current * np.exp(shift)}
        )
        study = plan.study.model_copy(
            update={"circuit": made.model_copy(update={"transistor": moved})}
        )
        mixes = {
            slot: replace(
                mix,
                parts=tuple(Part(material=own, value=p.value * (1 + sheet)) for p in mix.parts),
            )
            for slot, mix in plan.mixes.items()
        }
        found = assess(replace(plan.operation, study=study, mixes=mixes))
        current, box, residual_box, deviation, slope = figures[part]
        assert current == pytest.approx(
            float(found.operation.output(np.array([T_0]))[0]), rel=1e-13
        )
        assert box * span == pytest.approx(1e-6 * found.drift.box_ppm_per_K * span, abs=1e-8)
        assert residual_box * span == pytest.approx(
            1e-6 * found.residual_drift.box_ppm_per_K * span, abs=1e-8
        )
        assert deviation == pytest.approx(1e-6 * found.residual_drift.deviation_ppm, abs=1e-8)
        assert slope == pytest.approx(1e-6 * found.residual_drift.slope_ppm_per_K, abs=5e-10)


def _frame() -> Frame:
    target = np.full(61, 1e-5)
    return Frame(200.0, 320.0, 260.0, target, 1e-5, 0.0)


def test_figures_by_hand() -> None:
    """A parabola with its top between two points, and a straight line."""
    frame = _frame()
    T = frame.temperature
    top = 1e-5 * (1 - 1e-6 * (T - 251.0) ** 2)
    line = 1e-5 * (1.01 + 1e-4 * (T - 260.0))
    found = dict(zip(FIGURES, figures_of(frame, np.stack([top, line])).T, strict=True))
    at_reference = 1 - 81e-6
    assert found["current"] == pytest.approx([1e-5 * at_reference, 1.01e-5], rel=1e-14)
    assert found["box"] == pytest.approx(
        [69**2 * 1e-6 / (120 * at_reference), 1e-4 / 1.01], rel=1e-10
    )
    assert found["residual_box"] == pytest.approx(found["box"], rel=1e-12)
    assert found["deviation"] == pytest.approx([69**2 * 1e-6, 0.016], rel=1e-10)
    assert found["slope"] == pytest.approx([-18e-6 / at_reference, 1e-4 / 1.01], rel=1e-6)


@pytest.mark.parametrize("bad", [np.nan, np.inf, 0.0, -1e-6])
def test_a_part_without_a_current_has_no_figures(bad: float) -> None:
    frame = _frame()
    current = np.full((3, 64), 1e-5)
    current[1, 17] = bad
    found = figures_of(frame, current)
    assert np.isnan(found[1]).all()
    assert np.isfinite(found[[0, 2]]).all()


def test_a_flat_current_has_no_drift() -> None:
    found = figures_of(_frame(), np.full((1, 64), 1.002e-5))[0]
    assert found == pytest.approx([1.002e-5, 0, 0, 0.002, 0], abs=1e-15)
