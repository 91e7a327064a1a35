"""The first study: commented files that run as they are."""

from __future__ import annotations

from importlib.resources import files
from pathlib import Path

from tcopt.errors import InputError
from tcopt.files import write_atomically

__all__ = ["write_first_study"]

_FILES = ("process.toml", "study.toml")


def write_first_study(folder: str | Path) -> list[Path]:
    """Write the first study into a folder, made if need be, and return the files' paths.

    Raises
    ------
    InputError : one of the files is there already, or the folder cannot be made or written
    """
    folder = Path(folder)
    paths = [folder / name for name in _FILES]
    for path in paths:
        if path.exists() or path.is_symlink():
            raise InputError(f"{path}: found a file; accepted: a folder without one of that name")
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or error
        raise InputError(
            f"{str(folder)!r}: found a folder that cannot be made ({reason}); "
            "accepted: a folder that can"
        ) from None
    for path in paths:
        write_atomically(path, (files("tcopt.study") / "first" / path.name).read_bytes())
    return paths
