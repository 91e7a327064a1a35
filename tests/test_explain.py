"""A study's numbers in the formulas: against the full solution, and by hand."""

from __future__ import annotations

import re
from pathlib import Path

import numpy as np
import pytest

from tcopt.check import check
from tcopt.derive import render
from tcopt.errors import InputError
from tcopt.explain import explain, values_of
from tcopt.finish import finished_study
from tcopt.study import Study, Target, load_study
from tests.small import FIRST, T_REF, first_design, material, mirror_study, process

STUDIES = Path(__file__).parent.parent / "studies"


def _finished() -> Study:
    return finished_study(first_design().winner.operation)


def test_a_finished_design_gives_every_value() -> None:
    found = values_of(_finished())
    assert found["T_0"] == 300.15
    assert (found["N"], found["R_input"]) == (1.0, 0.0)
    assert found["I_given"] == 1e-4
    assert (found["TC1_I_given"], found["TC2_I_given"]) == (0.0, 0.0)
    # by the lever rule from the parts' values: TC1 3200 and 5600, TC2 0.4 and 11
    parts = first_design().winner.operation.mixes["output"].parts
    total = sum(part.value for part in parts)
    assert found["R_output"] == pytest.approx(total, rel=1e-14)
    tc1 = (parts[0].value * 3200e-6 + parts[1].value * 5600e-6) / total
    tc2 = (parts[0].value * 0.4e-6 + parts[1].value * 11e-6) / total
    assert found["TC1_output"] == pytest.approx(tc1, rel=1e-11)
    assert found["TC2_output"] == pytest.approx(tc2, rel=1e-9)
    # the process states 0.65 V at 10 uA and 300.15 K, where V_T is 25.865 mV: calculated
    assert found["I_S"] == pytest.approx(1.2188e-16, rel=1e-4)


def test_what_is_open_is_left_out() -> None:
    found = values_of(load_study(FIRST / "study.toml"))
    assert not {"N", "R_output", "TC1_output"} & set(found)
    assert found["I_target"] == 1e-5


@pytest.mark.parametrize(
    ("asked", "tc1", "tc2"),
    [
        ({"shape": "flat"}, 0.0, 0.0),
        ({"shape": "ptat"}, 1 / T_REF, 0.0),
        ({"shape": "slope", "slope": -2e-3}, -2e-3, 0.0),
        # by hand: 1/(1 + a d + b d^2) = 1 - a d + (a^2 - b) d^2
        (
            {"shape": "over material", "material": material("m", 3000, 2)},
            -3e-3,
            9e-6 - 2e-6,
        ),
    ],
)
def test_the_target_has_its_coefficients(asked: dict[str, object], tc1: float, tc2: float) -> None:
    study = mirror_study(process(material("m", 3000, 2)))
    target = Target.model_validate({"current": 1e-5, **asked})
    found = values_of(study.model_copy(update={"target": target}))
    assert found["I_target"] == pytest.approx(1e-5)
    assert found["TC1_target"] == pytest.approx(tc1, rel=1e-10)
    assert found["TC2_target"] == pytest.approx(tc2, rel=1e-7)


def test_the_numbers_are_those_of_the_full_solution() -> None:
    text = render(explain("degenerated mirror", study=_finished()), "text")
    slope = first_design().winner.drift.slope_ppm_per_K
    assert re.search(rf"= {slope:.2f}\d* ppm/K", text)
    assert re.search(r"TC_output = 1/T \+ TC\(I_in\)/x_output = 3331\.7 ppm/K", text)
    needed = first_design().needed["output"].resistance
    assert f"= {needed / 1e3:.4f} kohm" in text


def test_the_feed_and_the_kind_of_transistor_may_be_named() -> None:
    assert "V_CC" in render(explain("degenerated mirror", "supply"), "text")
    assert "V_TH" in render(explain("degenerated mirror", transistor="mos"), "text")


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (("mirror",), r"^TOPOLOGY: found 'mirror'; accepted: .*degenerated mirror, "),
        (("ptat core", "supply"), r"^--input: found 'supply' for 'ptat core'; accepted: 'self'$"),
        (
            ("ptat core", None, "valve"),
            r"^--transistor: found 'valve' for 'ptat core'; accepted: 'ideal', ",
        ),
    ],
)
def test_words_that_are_none_are_refused(words: tuple[str, ...], message: str) -> None:
    with pytest.raises(InputError, match=message):
        explain(*words)


@pytest.mark.parametrize(
    ("words", "message"),
    [
        (("ptat core",), r"^TOPOLOGY: found 'ptat core' beside .*study\.toml; accepted: 'deg"),
        (
            ("degenerated mirror", "supply"),
            r"^--input: found 'supply' beside .*study\.toml; accepted: 'given'$",
        ),
        (
            ("degenerated mirror", None, "mos"),
            r"^--transistor: found 'mos' beside .*study\.toml; accepted: 'ideal'$",
        ),
    ],
)
def test_words_that_contradict_the_study_are_refused(words: tuple[str, ...], message: str) -> None:
    with pytest.raises(InputError, match=message):
        explain(*words, study=load_study(FIRST / "study.toml"))


def test_loops_without_a_closed_form_take_their_numbers_from_the_solution() -> None:
    finished = load_study(STUDIES / "mos_constant_transconductance" / "drawn.toml")
    found = values_of(finished)
    current = check(finished).assessment.operation.output(np.array([300.15]))[0]
    assert found["I_out"] == found["J_out"] == pytest.approx(current, rel=1e-9)
    # I R is the difference of the two gate voltages, each by the law in strong inversion's
    # and weak inversion's common form: V_GS - V_TH = 2 n V_T ln(exp(sqrt(I/I_spec)) - 1)
    n, V_T, I, I_spec = (found[name] for name in ("n", "V_T", "I_out", "I_spec"))
    up, down = (2 * n * V_T * np.log(np.expm1(np.sqrt(I / k / I_spec))) for k in (1, 4))
    assert found["n_S"] * I * found["R_core"] == pytest.approx(up - down, rel=1e-9)
    text = render(explain("constant transconductance bias", study=finished), "text")
    assert f"{1e6 * current:.3f} uA" in text


def test_a_slot_without_explicit_need_may_be_open() -> None:
    open_study = load_study(STUDIES / "mos_constant_transconductance" / "study.toml")
    assert not {"J_out", "R_core"} & set(values_of(open_study))
    text = render(explain("constant transconductance bias", study=open_study), "text")
    assert "no closed form for the resistance" in text
    assert "I_target          17.484 uA" in text
