"""From a circuit's statement to the formulas that a designer reads.

The order of reading: ``orders`` (the loops to first and second order in
temperature), ``chain`` (linear equations, solved and tidied), ``pinned`` (what a
slot's resistor must be), ``derivation`` (all of it for one circuit), ``numbers``
(values put in), ``note`` (sections), and a module for each notation.
"""

from __future__ import annotations

from typing import Literal, assert_never

from tcopt.derive.derivation import Derivation, derive
from tcopt.derive.latex import latex_of
from tcopt.derive.note import note_of
from tcopt.derive.numbers import FLAT, PTAT, TARGET, Numbers, expected_names, with_numbers
from tcopt.derive.python_source import python_of
from tcopt.derive.text import text_of

__all__ = [
    "FLAT",
    "PTAT",
    "TARGET",
    "Derivation",
    "Numbers",
    "Style",
    "derive",
    "expected_names",
    "render",
    "with_numbers",
]

Style = Literal["text", "latex", "python"]


def render(what: Derivation | Numbers, style: Style) -> str:
    """Return a derivation, with numbers or without, in one of the notations.

    Parameters
    ----------
    style : 'text': a design note; 'latex': the same as a fragment to take in with ``\\\\input``;
        'python': the source of a module that needs numpy and scipy only
    """
    match style:
        case "text":
            return text_of(note_of(what))
        case "latex":
            return latex_of(note_of(what))
        case "python":
            return python_of(what)
        case _:
            assert_never(style)
