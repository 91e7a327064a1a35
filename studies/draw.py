"""Run every study again and renew its pictures: python studies/draw.py [FOLDER ...]."""

from __future__ import annotations

import json
import shutil
import sys
import tempfile
from pathlib import Path

from typer.testing import CliRunner

from tcopt.cli import app

STUDIES = Path(__file__).parent


def draw(folder: Path) -> None:
    """Renew the pictures that a folder's figures.json names."""
    record = json.loads((folder / "figures.json").read_text(encoding="utf-8"))
    for run in record["runs"]:
        pictures = run.get("pictures", {})
        if not pictures:
            continue
        command, study, *options = run["command"]
        with tempfile.TemporaryDirectory() as out:
            result = CliRunner().invoke(
                app, [command, str(folder / study), *options, "--out", str(Path(out) / "files")]
            )
            if result.exit_code != run.get("exit", 0):
                raise SystemExit(f"{folder.name}: {run['command']}: {result.output}")
            for name, source in pictures.items():
                shutil.copyfile(Path(out) / "files" / source, folder / name)
                print(f"{folder.name}/{name}")


if __name__ == "__main__":
    chosen = sys.argv[1:] or [path.parent.name for path in sorted(STUDIES.glob("*/figures.json"))]
    for name in chosen:
        draw(STUDIES / name)
