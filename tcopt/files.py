"""Files read with care and written whole or not at all."""

from __future__ import annotations

import os
import stat
import tempfile
from contextlib import suppress
from pathlib import Path

from tcopt.errors import InputError

__all__ = ["LARGEST_INPUT", "read_text", "write_atomically"]

LARGEST_INPUT = 4 * 2**20
"""Largest input file [bytes]; a study is a few thousand."""


def read_text(path: Path) -> str:
    """Return the text of a UTF-8 file of at most `LARGEST_INPUT` bytes.

    Raises
    ------
    InputError : no such file, not a plain file, not readable, too large, not UTF-8
    """
    try:
        mode = path.stat().st_mode
        # A pipe or a device could block for ever or never end.
        if not stat.S_ISREG(mode):
            what = "a folder" if stat.S_ISDIR(mode) else "no plain file"
            raise InputError(f"{path}: found {what}; accepted: a text file")
        with path.open("rb") as file:
            content = file.read(LARGEST_INPUT + 1)
    except FileNotFoundError:
        raise InputError(f"{path}: found no such file; accepted: an existing text file") from None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or error
        raise InputError(
            f"{str(path)!r}: found a file that cannot be read ({reason}); accepted: a readable file"
        ) from None
    if len(content) > LARGEST_INPUT:
        raise InputError(
            f"{path}: found more than {LARGEST_INPUT} bytes; accepted: at most {LARGEST_INPUT}"
        )
    try:
        # Spreadsheets put a byte order mark first.
        return content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        raise InputError(
            f"{path}: found bytes that are not UTF-8 in line {line}; accepted: UTF-8 text"
        ) from None


def write_atomically(path: Path, content: str | bytes) -> None:
    """Write a file so that it is there whole or, after any failure, as it was before.

    Raises
    ------
    InputError : the file cannot be written there
    """
    data = content.encode() if isinstance(content, str) else content
    temporary: Path | None = None
    try:
        handle, name = tempfile.mkstemp(prefix=f".{path.name}.", dir=path.parent)
        temporary = Path(name)
        with os.fdopen(handle, "wb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        # mkstemp makes files for the owner alone; give what the umask would have given.
        umask = os.umask(0)
        os.umask(umask)
        temporary.chmod(0o666 & ~umask)
        temporary.replace(path)
        temporary = None
    except (OSError, ValueError) as error:
        reason = getattr(error, "strerror", None) or error
        raise InputError(
            f"{str(path)!r}: found a place that cannot be written ({reason}); "
            "accepted: a file name in an existing, writable folder"
        ) from None
    finally:
        if temporary is not None:
            with suppress(OSError):
                temporary.unlink()
