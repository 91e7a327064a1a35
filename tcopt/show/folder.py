"""The files of `--out`: made whole in memory, then put into the folder together."""

from __future__ import annotations

import os
import shutil
import tempfile
from collections.abc import Callable, Mapping
from functools import partial
from pathlib import Path
from typing import TYPE_CHECKING

from tcopt.errors import InputError
from tcopt.files import write_atomically
from tcopt.show.csv import designs_csv, front_csv, menu_csv, sweep_csv
from tcopt.show.json import check_document, design_document, json_text, menu_document

if TYPE_CHECKING:
    from matplotlib.figure import Figure

    from tcopt.assess import Assessment
    from tcopt.check import CheckResult
    from tcopt.design import DesignResult
    from tcopt.menu import Menu
    from tcopt.spread.result import SpreadResult

__all__ = ["Files", "check_files", "design_files", "menu_files", "spread_files", "write_folder"]

Files = dict[str, str | bytes]
"""Content by file name."""


def check_files(result: CheckResult) -> Files:
    """Return the document, the temperature sweep and the pictures of `check`."""
    from tcopt.show.plots import headroom_picture  # noqa: PLC0415  matplotlib is slow to import

    pictures = _design_pictures(result.assessment)
    if result.headroom is not None:
        pictures["headroom"] = partial(headroom_picture, result, result.headroom)
    return {
        "check.json": json_text(check_document(result)),
        "sweep.csv": sweep_csv(result),
        **_encoded(pictures),
    }


def design_files(result: DesignResult, folder: Path) -> Files:
    """Return the document, the ranked table, the winner's study and the pictures of `design`.

    ``folder`` is where they will stand: the winner names its process from there.
    """
    from tcopt.finish import finished_study  # noqa: PLC0415  only where files are wanted
    from tcopt.show.plots import (  # noqa: PLC0415  matplotlib is slow to import
        front_picture,
        resistor_map,
    )
    from tcopt.study import study_text  # noqa: PLC0415

    maps = {f"map_{slot}": partial(resistor_map, result, slot) for slot in result.needed}
    front: Files = {}
    if result.front:
        front["front.csv"] = front_csv(result)
        maps["front"] = partial(front_picture, result)
    return {
        "design.json": json_text(design_document(result)),
        "designs.csv": designs_csv(result),
        **front,
        "winner.toml": study_text(finished_study(result.winner.operation), folder),
        **_encoded({**maps, **_design_pictures(result.winner)}),
    }


def menu_files(found: Menu) -> Files:
    """Return the document, the table and the map of a process's materials."""
    from tcopt.show.plots import menu_map  # noqa: PLC0415  matplotlib is slow to import

    return {
        "materials.json": json_text(menu_document(found)),
        "materials.csv": menu_csv(found),
        **_encoded({"materials": lambda: menu_map(found)}),
    }


def spread_files(result: SpreadResult) -> Files:
    """Return the document, the tables and the pictures of `spread`."""
    from tcopt.show import plots, spread_csv  # noqa: PLC0415  matplotlib is slow to import
    from tcopt.show.spread_json import spread_document  # noqa: PLC0415

    pictures = {
        "fan": partial(plots.fan_picture, result),
        "histograms": partial(plots.histogram_picture, result),
    }
    if result.stages[-1].causes:
        pictures["causes"] = partial(plots.spread_causes_picture, result)
    if result.stages[-1].trim:
        pictures["codes"] = partial(plots.codes_picture, result)
    return {
        "spread.json": json_text(spread_document(result)),
        "quantiles.csv": spread_csv.quantiles_csv(result),
        "causes.csv": spread_csv.causes_csv(result),
        "corners.csv": spread_csv.corners_csv(result),
        "fan.csv": spread_csv.fan_csv(result),
        "parts.csv": spread_csv.parts_csv(result),
        **_encoded(pictures),
    }


def _design_pictures(found: Assessment) -> dict[str, partial[Figure]]:
    from tcopt.show.plots import (  # noqa: PLC0415  matplotlib is slow to import
        causes_picture,
        current_picture,
        residual_picture,
    )

    pictures = {
        "current": partial(current_picture, found),
        "residual": partial(residual_picture, found),
        "causes": partial(causes_picture, found),
    }
    for slot, mix in found.operation.mixes.items():
        if len({part.material.name for part in mix.parts}) == len(mix.parts) == 2:
            pictures[f"ratio_{slot}"] = partial(_ratio, found, slot)
    return pictures


def _ratio(found: Assessment, slot: str) -> Figure:
    from tcopt.mix.ratio import ratio_sweep  # noqa: PLC0415  only where files are wanted
    from tcopt.show.plots import ratio_picture  # noqa: PLC0415  matplotlib is slow to import

    return ratio_picture(ratio_sweep(found, slot), found)


def _encoded(pictures: Mapping[str, Callable[[], Figure]]) -> Files:
    from tcopt.show.plots import encoded  # noqa: PLC0415  matplotlib is slow to import

    return {
        f"{name}.{kind}": content
        for name, draw in pictures.items()
        for kind, content in encoded(draw()).items()
    }


def write_folder(folder: Path, files: Mapping[str, str | bytes], read: Path | None = None) -> None:
    """Put files into a folder, made if need be; all of them or, after a failure, none.

    Files of the same names are replaced, others are left alone.

    Parameters
    ----------
    folder : where to
    files : content by name
    read : the file that the content was made from; it is never written over

    Raises
    ------
    InputError
        If the folder cannot be made or written, or `read` would be written over.
    """
    taken = next((folder / name for name in files if (folder / name).is_dir()), None)
    if taken is not None:
        raise InputError(f"{taken}: found a folder; accepted: a place for a file of that name")
    for name in files:
        if read is not None and (folder / name).exists() and (folder / name).samefile(read):
            raise InputError(
                f"{folder / name}: found the very file that was read; accepted: another folder"
            )
    stage: Path | None = None
    try:
        folder.parent.mkdir(parents=True, exist_ok=True)
        stage = Path(tempfile.mkdtemp(prefix=".tcopt.", dir=folder.parent))
        for name, content in files.items():
            write_atomically(stage / name, content)
        if folder.exists() or folder.is_symlink():
            for name in files:
                (stage / name).replace(folder / name)
        else:
            stage.chmod(0o777 & ~_umask())
            stage.replace(folder)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or error
        raise InputError(
            f"{str(folder)!r}: found a folder that cannot be made or written ({reason}); "
            "accepted: a folder that can"
        ) from None
    finally:
        if stage is not None:
            shutil.rmtree(stage, ignore_errors=True)


def _umask() -> int:
    mask = os.umask(0)
    os.umask(mask)
    return mask
