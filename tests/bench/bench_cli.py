"""The command line beside the import of ``scipy.optimize``, each in a process of its own."""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
from pathlib import Path

from tests.bench.figure import Figure
from tests.bench.ratio import time_beside

__all__ = ["figures"]

_IMPORT = [sys.executable, "-c", "import scipy.optimize"]
_TCOPT = [sys.executable, "-m", "tcopt"]
_ROOT = Path(__file__).parents[2]


def _run(command: list[str]) -> None:
    environment = {**os.environ, "OMP_NUM_THREADS": "1", "PYTHONPATH": str(_ROOT)}
    subprocess.run(command, check=True, stdout=subprocess.DEVNULL, env=environment)


def _finished_study(folder: Path) -> Path:
    """Return a finished design: the first study with a resistor of the right size put in."""
    from tcopt.finish import finished_study
    from tcopt.operation import Choices, Mix, Operation
    from tcopt.study import Part, load_study, study_text, write_first_study

    study = load_study(write_first_study(folder)[1])
    mix = Mix((Part(material=study.process.materials["silicide"], value=5.9e3),))
    made = Operation(study, Choices(area_ratio=1.0, input_current=1e-4), {"output": mix})
    path = folder / "finished.toml"
    path.write_text(study_text(finished_study(made), folder), encoding="utf-8")
    return path


def figures() -> list[Figure]:
    """Measure ``tcopt --help`` and ``tcopt check`` against one import of ``scipy.optimize``."""
    with tempfile.TemporaryDirectory() as folder:
        study = str(_finished_study(Path(folder)))
        shown = time_beside(lambda: _run([*_TCOPT, "--help"]), lambda: _run(_IMPORT))
        checked = time_beside(lambda: _run([*_TCOPT, "check", study]), lambda: _run(_IMPORT))
    return [
        Figure(
            "tcopt --help: time over that of import scipy.optimize", shown.ratio, 1.0, "at most"
        ),
        Figure(
            "tcopt check: time over that of import scipy.optimize", checked.ratio, 3.0, "at most"
        ),
    ]
