"""What the gate takes and refuses of spread, common parts, matching, and trim."""

from __future__ import annotations

import math
import re

import pytest

from tcopt.errors import InputError
from tcopt.study import CommonPart, Insertion, load_process, load_study, study_text

from .gate import PROCESS, STUDY, changed, write

FIXED = {"resistors": {"output": {"parts": [{"material": "poly", "value": "6k0"}]}}}
FIRST = {"temperature": "27 degC", "scales": "output", "range": "20 %", "bits": 6}
SECOND = {"temperature": "100 degC", "scales": "output mirror", "range": "5 %", "step": "0.1 %"}

PROCESS_REFUSALS = [
    ({"materials.poly.spread": "30 %"}, "materials.poly.spread: found '30 %'; accepted: one stand"),
    ({"materials.poly.spread": {"limit": "15 %"}}, "poly.spread.sigma: found nothing; accepted: o"),
    ({"materials.poly.spread": {"sigma": 3}}, "materials.poly.spread.limit: found nothing; accept"),
    (
        {"materials.poly.spread": {"limit": "15 %", "sigma": 0}},
        "materials.poly.spread.sigma: found 0; accepted: a pure number such as 3, above 0 and belo",
    ),
    (
        {"materials.poly.spread": {"limit": "-15 %", "sigma": 3}},
        "materials.poly.spread.limit: found '-15 %'; accepted: one standard deviation",
    ),
    (
        {"materials.poly.spread": {"limit": "80 %", "sigma": 3}},
        "materials.poly.spread: found {'limit': '80 %', 'sigma': 3}; accepted: one standard dev",
    ),
    (
        {"materials.poly.spread": {"limit": "15 %", "sigmas": 3}},
        "materials.poly.spread.sigmas: found an unknown key; accepted: limit, sigma",
    ),
    ({"materials.poly.spread": math.inf}, "materials.poly.spread: found inf; accepted: one standa"),
    ({"materials.poly.tc1_spread": "5 %"}, "poly.tc1_spread: found '5 %'; accepted: one standard "),
    ({"materials.poly.tc1_spread": "-9 ppm/K"}, "tc1_spread: found '-9 ppm/K'; accepted: one stan"),
    ({"materials.poly.tc2_spread": "1 ppm/K"}, "tc2_spread: found '1 ppm/K'; accepted: one standa"),
    (
        {"materials.poly.common": {"part": "step", "share": 1.2}},
        "materials.poly.common[0].share: found 1.2; accepted: a share of the variance such as 0.6,",
    ),
    (
        {"materials.poly.common": {"part": "step", "share": 0}},
        "materials.poly.common[0].share: found 0; accepted: a share of the variance such as 0.6",
    ),
    (
        {"materials.poly.common": [{"part": "a", "share": 0.6}, {"part": "b", "share": 0.5}]},
        "materials.poly.common: found shares that add up to 1.1; accepted: shares of at most 1 in",
    ),
    (
        {"materials.poly.common": [{"part": "a", "share": 0.6}, {"part": "a", "share": 0.3}]},
        "materials.poly.common[1].part: found 'a' twice; accepted: each part once",
    ),
    ({"materials.poly.common": "step"}, "poly.common: found 'step'; accepted: a common part such "),
    ({"materials.poly.common": {"part": "a"}}, "common[0].share: found nothing; accepted: a share"),
    (
        {f"transistors.npn.{key}_spread": 0 for key in ("saturation_current", "base_emitter")},
        "transistors.npn.base_emitter_spread: found both; accepted: either saturation_current_spr",
    ),
    ({"transistors.npn.base_emitter_spread": "0.2 V"}, "base_emitter_spread: found '0.2 V'; accep"),
    ({"transistors.npn.gain_spread": -0.1}, "transistors.npn.gain_spread: found -0.1; accepted: o"),
    ({"transistors.npn.matching": "1 mV"}, "npn.matching: found '1 mV'; accepted: a matching coef"),
    ({"transistors.npn.matching": "-1 % um"}, "npn.matching: found '-1 % um'; accepted: a matchin"),
    ({"transistors.npn.emitter_area": "4 um"}, "npn.emitter_area: found '4 um'; accepted: an area"),
    ({"transistors.npn.emitter_area": 0}, "npn.emitter_area: found 0; accepted: an area such as '"),
]


@pytest.mark.parametrize(("changes", "message"), PROCESS_REFUSALS)
def test_process_refused(changes, message, tmp_path):
    write(tmp_path, changed(PROCESS, changes), None)
    with pytest.raises(InputError, match=re.escape(message)):
        load_process(tmp_path / "process.toml")


STUDY_REFUSALS = [
    ({"spread.samples": 0}, "spread.samples: found 0; accepted: a whole number from 1 to 10000000"),
    ({"spread.samples": -5}, "spread.samples: found -5; accepted: a whole number from 1 to"),
    ({"spread.seed": -1}, "spread.seed: found -1; accepted: a whole number from 0 to"),
    ({"spread.sampling": "halton"}, "spread.sampling: found 'halton'; accepted: 'sobol', 'plain'"),
    ({"spread.sigma": 0}, "spread.sigma: found 0; accepted: a pure number such as 3, above 0"),
    ({"spread.yield": "100 %"}, "spread.yield: found '100 %'; accepted: a share of the parts such"),
    ({"spread.supply": "-5 %"}, "spread.supply: found '-5 %'; accepted: one standard deviation su"),
    ({"spread.sample": 5}, "spread.sample: found an unknown key; accepted: samples, seed, samplin"),
    ({"trim": {}}, "trim.first: found nothing; accepted: a table [trim.first]"),
    ({"trim.first": {**FIRST, "range": 0}}, "trim.first.range: found 0; accepted: how far the sca"),
    ({"trim.first": {**FIRST, "bits": 0}}, "trim.first.bits: found 0; accepted: a whole number fr"),
    ({"trim.first": {**FIRST, "step": "1 %"}}, "trim.first.bits: found both; accepted: either ste"),
    (
        {"trim.first": {**SECOND, "step": "6 %"}},
        "trim.first.step: found a step of 6 % with a range of 5 %; accepted: a step within the ran",
    ),
    (
        {"trim.first": {**FIRST, "temperature": "126 degC"}},
        "trim.first.temperature: found 126 degC; accepted: inside the range, -40 degC to 125 degC",
    ),
    (
        {"trim.first": {**FIRST, "scales": "core"}},
        "trim.first.scales: found 'core'; accepted: 'output', 'output mirror'",
    ),
    (
        {"trim.first": {**FIRST, "material": "well"}},
        "trim.first.material: found 'well'; accepted: a material of resistors.output: poly",
    ),
    (
        {"trim.first": {**SECOND, "material": "poly"}},
        "trim.first.material: found a material beside 'output mirror'; accepted: it with a resist",
    ),
    (
        {"trim.first": {**FIRST, "measurement_error": "-1 %"}},
        "trim.first.measurement_error: found '-1 %'; accepted: one standard deviation such as '0.2",
    ),
    (
        {"trim.first": {**FIRST, "temperature_error": "2 degC"}},
        "trim.first.temperature_error: found '2 degC'; accepted: one standard deviation such as '2",
    ),
    (
        {"trim": {"first": FIRST, "second": {**SECOND, "temperature": "27.5 degC"}}},
        "trim.second.temperature: found 27.5 degC, where the first is; accepted: another temperat",
    ),
    (
        {"trim": {"first": FIRST, "second": {**SECOND, "scales": "output"}}},
        "trim.second.scales: found 'output', which the first scales already; accepted: another slo",
    ),
    (
        {"resistors.output": {"parts": [{"material": "poly", "value": 1, "width": "0 um"}]}},
        "resistors.output.parts[0].width: found '0 um'; accepted: a length such as '0.8 um'",
    ),
]


@pytest.mark.parametrize(("changes", "message"), STUDY_REFUSALS)
def test_study_refused(changes, message, tmp_path):
    path = write(tmp_path, PROCESS, changed(STUDY, {**FIXED, **changes}))
    with pytest.raises(InputError, match=re.escape(message)):
        load_study(path)


def test_limits_stand_for_their_sigma(tmp_path):
    """What is typed as a limit is the standard deviation times sigma."""
    changes = {
        "materials.poly.spread": {"limit": "15 %", "sigma": 3},
        "materials.poly.tc1_spread": "50 ppm/K",
        "materials.poly.tc2_spread": {"limit": "0.3 ppm/K^2", "sigma": 2},
        "materials.poly.common": {"part": "poly_step", "share": 0.6},
        "materials.well.common": [{"part": "poly_step", "share": "30 %"}],
        "transistors.npn.base_emitter_spread": {"limit": "9 mV", "sigma": 3},
        "transistors.npn.gain_spread": "25 %",
        "transistors.npn.matching": "0.5 mV um",
        "transistors.npn.emitter_area": "4 um^2",
        "transistors.big.saturation_current_spread": 0.12,
        "transistors.big.matching": "2 % um",
    }
    write(tmp_path, changed(PROCESS, changes), None)
    process = load_process(tmp_path / "process.toml")
    poly, well = process.materials["poly"], process.materials["well"]
    npn, big = process.transistors["npn"], process.transistors["big"]
    deviations = (poly.spread, poly.tc1_spread, poly.tc2_spread)
    assert deviations == pytest.approx((0.05, 50e-6, 0.15e-6))
    assert poly.common == (CommonPart(part="poly_step", share=0.6),)
    assert well.common == (CommonPart(part="poly_step", share=0.3),)
    # V_T at 300.15 K is 25.865 mV (CODATA k and e)
    assert npn.log_saturation_spread == pytest.approx(3 / 25.8648, rel=1e-5)
    assert npn.matching == pytest.approx(0.5 / 25.8648 * 1e-6, rel=1e-5)
    assert (npn.gain_spread, npn.emitter_area) == (0.25, 4e-12)
    assert (big.log_saturation_spread, big.matching) == (0.12, 2e-8)


def test_area_is_squares_times_width_squared(tmp_path):
    parts = [
        {"material": "poly", "value": "6k4", "width": "2 um"},
        {"material": "well", "value": "1k", "width": "2 um"},
    ]
    changes = {**FIXED, "resistors.output.parts": parts}
    slot = load_study(write(tmp_path, PROCESS, changed(STUDY, changes))).resistors["output"]
    assert slot.parts[0].area == pytest.approx(20 * 4e-12)  # 6.4 kohm of 320 ohm per square
    assert slot.parts[1].area is None  # no sheet resistance in the process


@pytest.mark.parametrize(
    ("insertion", "increment", "codes"),
    [
        ({"bits": 3}, 0.05, (-4, 3)),
        ({"step": 0.1}, 0.1, (-2, 2)),
        ({"step": 0.03}, 0.03, (-6, 6)),
        ({}, None, None),
    ],
)
def test_codes_of_a_trim(insertion, increment, codes):
    made = Insertion(temperature=300, scales="output", reach=0.2, **insertion)
    assert made.increment == pytest.approx(increment)
    assert made.codes == codes


def test_a_written_study_reads_back_equal(tmp_path):
    errors = {"measurement_error": "0.2 %", "temperature_error": {"limit": "5 K", "sigma": 3}}
    changes = {
        **FIXED,
        "circuit.area_ratio": 4,
        "spread": {"samples": 1000, "seed": 7, "sampling": "plain", "yield": "95 %"},
        "trim": {"first": {**FIRST, **errors, "material": "poly"}, "second": SECOND},
    }
    study = load_study(write(tmp_path, PROCESS, changed(STUDY, changes)))
    assert study.spread.wanted_yield == 0.95
    assert study.trim.first.temperature_error == pytest.approx(5 / 3)
    copy = tmp_path / "copy.toml"
    copy.write_text(study_text(study, tmp_path), encoding="utf-8")
    assert load_study(copy) == study
