"""A table that begins and ends just where the range does, as everybody writes it."""

from __future__ import annotations

from pathlib import Path

import pytest

from tcopt.mix.search import design
from tcopt.study import load_study, write_first_study


@pytest.mark.parametrize(("low", "high"), [(-20, 60), (-40, 85), (0, 70), (-55, 125)])
@pytest.mark.parametrize("reference", ["low", "middle"])
def test_a_constant_table_over_the_range_is_a_flat_target(
    low: int, high: int, reference: str, tmp_path: Path
) -> None:
    """A table of one value is the target 'flat', worked by hand: the same mix, the same figures."""
    write_first_study(tmp_path)
    about = low if reference == "low" else 25
    first = (tmp_path / "study.toml").read_text(encoding="utf-8")
    flat = first.replace(
        'grade = "automotive 0" ', f'from = "{low} degC"\nto = "{high} degC" #'
    ).replace('reference = "27 degC"', f'reference = "{about} degC"')
    assert flat.count(f'"{low} degC"') >= 1
    head, tail = flat.split("[target]")
    rest = tail[tail.index("[resistors.output]") :]
    table = f"temperature [degC],current [uA]\n{low},10\n{about + 1},10\n{high},10\n"
    (tmp_path / "flat.csv").write_text(table, encoding="utf-8")
    found = []
    for name, target in (
        ("one.toml", 'shape = "flat"\ncurrent = "10 uA"\n'),
        ("other.toml", 'shape = "curve"\nfile = "flat.csv"\n'),
    ):
        text = f"{head}[target]\n{target}{rest}".replace("[1, 2, 4, 8]", "1")
        (tmp_path / name).write_text(text.replace("pieces = 2", "pieces = 1"), encoding="utf-8")
        found.append(design(load_study(tmp_path / name)))
    one, other = (result.winner.residual_drift for result in found)
    assert other.deviation_ppm == pytest.approx(one.deviation_ppm, rel=1e-6)
    points = [result.needed["output"] for result in found]
    assert points[1].tc1 == pytest.approx(points[0].tc1, abs=1e-9)
