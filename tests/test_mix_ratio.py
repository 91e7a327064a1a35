"""Where mixes lie and how drift hangs on their ratio: against mpmath and by hand."""

from __future__ import annotations

from dataclasses import replace
from math import sqrt
from pathlib import Path

import mpmath
import numpy as np
import pytest

from tcopt.assess import Assessment, assess
from tcopt.check import check
from tcopt.finish import finished_study
from tcopt.mix.point import lever, mix_point
from tcopt.mix.ratio import ratio_sweep
from tcopt.operation import Choices, Mix, Operation
from tcopt.study import Part, Study, load_study, study_text
from tests.small import FIRST, T_REF, first_design, material, process, reference_study

A, B = material("rising", 1000.0), material("falling", -1000.0)
LOW, HIGH = 233.15 - T_REF, 423.15 - T_REF


def _mix(first: float, second: float, join: str = "series") -> Mix:
    return Mix((Part(material=A, value=first), Part(material=B, value=second)), join)


def _assessment(mix: Mix, **others: object) -> Assessment:
    study = reference_study(process(A, B), **others)
    return assess(Operation(study, Choices(), {"sense": mix}))


def test_the_lever_rule_in_series_is_the_average() -> None:
    assert lever([(1.0, 10.0), (3.0, -2.0)], (0.25, 0.75), "series") == (2.5, 1.0)


@pytest.mark.parametrize("join", ["series", "parallel"])
def test_the_point_of_a_mix_is_its_expansion(join: str) -> None:
    parts = (
        Part(material=material("a", 5600.0, 11.0), value=3e3),
        Part(material=material("b", -2400.0, 4.1, reference=298.15), value=8e3),
        Part(material=material("c", 120.0, 0.5), value=1.7e3),
    )

    def R(d: mpmath.mpf) -> mpmath.mpf:
        each = []
        for part in parts:
            m = part.material
            x = mpmath.mpf(T_REF) + d - mpmath.mpf(m.reference)
            each.append(part.value * (1 + mpmath.mpf(m.tc1) * x + mpmath.mpf(m.tc2) * x**2))
        return mpmath.fsum(each) if join == "series" else 1 / mpmath.fsum(1 / r for r in each)

    with mpmath.workdps(30):
        c0, c1, c2 = mpmath.taylor(R, 0, 2)
    found = mix_point(Mix(parts, join), T_REF)
    assert found.tc1 == pytest.approx(float(c1 / c0), rel=1e-12)
    assert found.tc2 == pytest.approx(float(c2 / c0), rel=1e-12)
    assert sum(found.shares) == pytest.approx(1, abs=1e-15)


def _share_at_limit(bound: float) -> float:
    """Return the share at which ``1/(1 + s d)`` just has this box figure, by hand.

    The ratio of 1 V to a resistance with slope s = (2 w - 1) a falls from one end to the other,
    so box = s/((1 + s low)(1 + s high)): a quadratic in s.
    """
    a, b, c = LOW * HIGH * bound, (LOW + HIGH) * bound - 1, bound
    s = (-b - sqrt(b * b - 4 * a * c)) / (2 * a)
    return (1 + s / 1e-3) / 2


def test_two_opposite_materials_cancel_at_equal_shares() -> None:
    sweep = ratio_sweep(_assessment(_mix(5.2e4, 4.8e4)), "sense")
    assert sweep.figure == "box_ppm_per_K"
    assert sweep.best == pytest.approx(0.5, abs=1e-6)
    assert sweep.best_drift == pytest.approx(0, abs=1e-3)
    assert sweep.chosen == pytest.approx(0.52)
    assert sweep.bound_is_limit
    assert sweep.bound == pytest.approx(100)
    edges = sorted(_share_at_limit(side * 1e-4) for side in (-1, 1))
    assert (sweep.low, sweep.high) == (
        pytest.approx(edges[0], abs=1e-6),
        pytest.approx(edges[1], abs=1e-6),
    )


def test_the_figure_of_the_chosen_ratio_is_that_of_the_design() -> None:
    found = _assessment(_mix(7e4, 3e4))
    assert ratio_sweep(found, "sense").chosen_drift == found.residual_drift.box_ppm_per_K


def test_in_parallel_the_conductance_is_kept() -> None:
    sweep = ratio_sweep(_assessment(_mix(2e5, 1.9e5, "parallel")), "sense")
    assert sweep.chosen == pytest.approx((1 / 2e5) / (1 / 2e5 + 1 / 1.9e5))
    # by hand: the current goes with w/(1 + a d) + (1 - w)/(1 - a d), which is 1 at d = 0
    d = np.linspace(LOW, HIGH, 200_001)
    for k in range(0, len(sweep.share), 7):
        w = sweep.share[k]
        G = w / (1 + 1e-3 * d) + (1 - w) / (1 - 1e-3 * d)
        box = 1e6 * (G.max() - G.min()) / (HIGH - LOW)
        assert sweep.drift[k] == pytest.approx(box, rel=1e-6)


def test_without_a_limit_that_can_be_met_the_tolerance_is_twice_the_optimum() -> None:
    bent = material("bent", 1000.0, 8.0)
    mix = Mix((Part(material=bent, value=5e4), Part(material=B, value=5e4)))
    study = reference_study(process(bent, B), limit="1 ppm/K")
    sweep = ratio_sweep(assess(Operation(study, Choices(), {"sense": mix})), "sense")
    assert not sweep.bound_is_limit
    assert sweep.bound == 2 * sweep.best_drift
    assert sweep.low < sweep.best < sweep.high


def test_a_limit_on_the_deviation_is_swept_as_such() -> None:
    sweep = ratio_sweep(_assessment(_mix(5e4, 5e4), limit="0.5 %"), "sense")
    assert sweep.figure == "deviation_ppm"
    # by hand: |1/(1 + s d) - 1| is largest where s d is most negative; 0.5 % there
    most = (1 - 1 / 1.005) / HIGH
    assert sweep.low == pytest.approx((1 - most / 1e-3) / 2, abs=1e-6)


def test_a_mix_of_one_part_has_no_ratio() -> None:
    found = _assessment(Mix((Part(material=A, value=1e5),)))
    with pytest.raises(ValueError, match="sense: found 1 parts; accepted: two"):
        ratio_sweep(found, "sense")


def test_a_design_written_and_read_again_checks_to_the_same_figures() -> None:
    winner = first_design().winner
    study = finished_study(winner.operation)
    assert study.is_finished
    result = check(study)
    assert result.assessment.drift == winner.drift
    assert result.assessment.residual_drift == winner.residual_drift


def test_the_finished_study_reads_back_from_its_file(tmp_path: Path) -> None:
    study = finished_study(first_design().winner.operation)
    file = tmp_path / "winner.toml"
    file.write_text(study_text(study, tmp_path), encoding="utf-8")
    assert load_study(file) == study


def test_the_finished_study_settles_a_current_ratio() -> None:
    study: Study = load_study(FIRST / "study.toml")
    circuit = study.circuit
    kept = {name: getattr(circuit, name) for name in circuit.model_fields_set}
    kept |= {"input_current": None, "current_ratio": (10.0,)}
    asked = study.model_copy(update={"circuit": type(circuit)(**kept)})
    operation = replace(first_design().winner.operation, study=asked)
    made = finished_study(operation).circuit
    assert (made.input_current, made.current_ratio) == ((1e-4,), None)
