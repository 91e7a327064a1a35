"""The project's errors: each message says where, what was found, what is accepted."""

from __future__ import annotations

__all__ = ["InputError", "NoSolutionError", "TcoptError"]


class TcoptError(Exception):
    """Base of all errors that a user can mend; the command line prints it and exits with 2."""


class InputError(TcoptError):
    """Something that the user wrote cannot be used."""


class NoSolutionError(TcoptError):
    """The circuit has no solution somewhere in the range, or no mix meets what is needed."""
