"""Files read with care and written whole or not at all."""

from __future__ import annotations

import os
import secrets
import stat
from contextlib import suppress
from pathlib import Path

from tcopt.errors import InputError

__all__ = ["LARGEST_INPUT", "read_text", "write_atomically"]

LARGEST_INPUT = 4 * 2**20
"""Largest input file [bytes]; a study is a few thousand."""


def _said(path: Path) -> str:
    return str(path) if str(path).isprintable() else repr(str(path))


def _reason(error: OSError | ValueError) -> str:
    return getattr(error, "strerror", None) or str(error)


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
            raise InputError(f"{_said(path)}: found {what}; accepted: a text file")
        with path.open("rb") as file:
            content = file.read(LARGEST_INPUT + 1)
    except FileNotFoundError:
        raise InputError(
            f"{_said(path)}: found no such file; accepted: an existing text file"
        ) from None
    except (OSError, ValueError) as error:
        raise InputError(
            f"{_said(path)}: found a file that cannot be read ({_reason(error)}); "
            "accepted: a readable file"
        ) from None
    if len(content) > LARGEST_INPUT:
        raise InputError(
            f"{_said(path)}: found a file of more than {LARGEST_INPUT} bytes; "
            f"accepted: at most {LARGEST_INPUT}"
        )
    try:
        # Spreadsheets put a byte order mark first.
        return content.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = content[: error.start].count(b"\n") + 1
        raise InputError(
            f"{_said(path)}: found bytes that are not UTF-8 in line {line}; accepted: UTF-8 text"
        ) from None


def write_atomically(path: Path, content: str | bytes) -> None:
    """Write a file so that it is there whole or, after any failure, as it was before.

    Raises
    ------
    InputError : the file cannot be written there
    """
    data = content.encode() if isinstance(content, str) else content
    # Not the tempfile module: its files are for the owner alone, whatever the umask says.
    temporary = path.parent / f".tcopt-{secrets.token_hex(8)}"
    try:
        with temporary.open("xb") as file:
            file.write(data)
            file.flush()
            os.fsync(file.fileno())
        temporary.replace(path)
    except (OSError, ValueError) as error:
        raise InputError(
            f"{_said(path)}: found a place that cannot be written ({_reason(error)}); "
            "accepted: a file name in an existing, writable folder"
        ) from None
    finally:
        with suppress(OSError, ValueError):
            temporary.unlink()
