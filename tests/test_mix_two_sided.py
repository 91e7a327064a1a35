"""A slot in which two resistances give one current: the feed of a peaking source."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

from tcopt.assess import assess
from tcopt.mix.search import design
from tcopt.operation import Choices, Mix, Operation, fixed_mixes
from tcopt.study import Part, load_study

STUDY = """
title = "Invented: a peaking source from 5 V"
process = "process.toml"
[range]
grade = "industrial"
[circuit]
topology = "peaking source"
transistor = "npn"
supply = "5 V"
[target]
shape = "flat"
current = "10 uA"
[resistors.feed]
materials = ["n_poly", "silicide"]
[resistors.drop]
parts = [{ material = "n_poly", value = "500 ohm" }]
"""
PROCESS = """
title = "Invented"
reference = "27 degC"
[materials.n_poly]
tc1 = "120 ppm/K"
tc2 = "0.5 ppm/K^2"
[materials.silicide]
tc1 = "3200 ppm/K"
tc2 = "0.4 ppm/K^2"
[transistors.npn]
base_emitter = { voltage = "0.65 V", current = "10 uA" }
bandgap_voltage = "1.17 V"
temperature_exponent = 3.6
"""


def test_both_sides_of_the_peak_are_searched(tmp_path: Path) -> None:
    (tmp_path / "process.toml").write_text(PROCESS, encoding="utf-8")
    (tmp_path / "study.toml").write_text(STUDY, encoding="utf-8")
    study = load_study(tmp_path / "study.toml")
    found = design(study)
    assert not found.bound.proven
    scanned = np.inf
    for material in study.process.materials.values():
        for value in np.geomspace(1e3, 1e7, 400):
            mixes = {"feed": Mix((Part(material=material, value=float(value)),))}
            operation = Operation(study, Choices(), {**fixed_mixes(study), **mixes})
            target = found.winner.target
            T = np.linspace(study.range.low, study.range.high, 41)
            scanned = min(scanned, float(np.abs(operation.output(T) / target.current(T) - 1).max()))
    reached = found.winner.residual_drift.deviation_ppm / 1e6
    assert reached <= scanned * (1 + 1e-6)  # a scan in steps of 2.3 % cannot do better
    # the needed resistance lies on the same side: with its value the current is on target
    needed = Part(material=study.process.materials["n_poly"], value=found.needed["feed"].resistance)
    there = Operation(study, Choices(), {**fixed_mixes(study), "feed": Mix((needed,))})
    at = np.array([needed.material.reference])
    assert study.range.reference == needed.material.reference
    assert float(there.output(at)[0]) == pytest.approx(10e-6, rel=1e-9)
    assert assess(there).limit is None
