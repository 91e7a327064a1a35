"""A note as LaTeX: a fragment of sections and displayed equations, in plain math mode."""

from __future__ import annotations

import re

from tcopt.derive.note import Line, Note, Section
from tcopt.derive.writers import Latex

__all__ = ["latex_of"]

_WRITER = Latex()
_SPECIAL = re.compile(r"([&%$#_{}])")
_UNITS = {
    "1": "1",
    "ohm": r"$\mathrm{\Omega}$",
    "1/K": r"$\mathrm{K}^{-1}$",
    "1/K^2": r"$\mathrm{K}^{-2}$",
}


def latex_of(note: Note) -> str:
    """Return the note as LaTeX, to be taken into a document with ``\\input``."""
    parts = [rf"\section*{{{_plain(note.title)}}}", _plain(note.summary)]
    for section in note.sections:
        parts += _section(section)
    parts += [r"\subsection*{Symbols}", r"\begin{tabular}{llll}"]
    for row in note.legend:
        cells = [f"${_name(row.name)}$", _plain(row.value), _unit(row.unit)]
        parts.append(" & ".join([*cells, _plain(row.meaning)]) + r" \\")
    return "\n".join([*parts, r"\end{tabular}"]) + "\n"


def _section(section: Section) -> list[str]:
    found = [rf"\subsection*{{{_plain(section.title)}}}", _plain(section.purpose)]
    for item in section.items:
        if isinstance(item, Line):
            value = rf" = \mathrm{{{_value(item.value)}}}" if item.value else ""
            equation = f"{_WRITER.write(item.left)} = {_WRITER.write(item.right)}{value}"
            found.append(rf"\[ {equation} \]")
        else:
            found.append(rf"\paragraph{{{_plain(item.words)}}}")
    return found


def _name(name: str) -> str:
    """Return a symbol of the legend; 'TC(q)' stands for a family."""
    family = re.fullmatch(r"(\w+)\((\w+)\)", name)
    return rf"\mathrm{{{family[1]}}}({family[2]})" if family else _WRITER.symbol(name)


def _plain(words: str) -> str:
    return _SPECIAL.sub(r"\\\1", words).replace("^", r"\^{}")


def _value(text: str) -> str:
    return _SPECIAL.sub(r"\\\1", text).replace(" ", r"\ ")


def _unit(unit: str) -> str:
    return _UNITS.get(unit, _plain(unit))
