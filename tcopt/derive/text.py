"""A note as plain text: headings, aligned equations, fractions over a rule where they are long."""

from __future__ import annotations

from collections.abc import Iterable
from textwrap import wrap

import sympy as sp

from tcopt.derive.note import Line, Note, Row, Section
from tcopt.derive.writers import Text, fraction_of, is_negative, ordered, without_sign

__all__ = ["equation_of", "text_of"]

_WIDTH = 96
_SHORT = 44
_LONGEST_LEFT = 56
_FEW = 2
_INDENT = "    "
_WRITER = Text()


def text_of(note: Note) -> str:
    """Return the note as plain text."""
    parts = [note.title, "=" * len(note.title), *wrap(note.summary, _WIDTH)]
    for section in note.sections:
        parts += ["", *_section(section)]
    return "\n".join([*parts, "", *_legend(note.legend)]) + "\n"


def equation_of(left: sp.Expr, right: sp.Expr) -> str:
    """Return an equation on one line."""
    return f"{_WRITER.write(left)} = {_WRITER.write(right)}"


def _section(section: Section) -> list[str]:
    found = [section.title, "-" * len(section.title), *wrap(section.purpose, _WIDTH)]
    block: list[Line] = []
    for item in section.items:
        if isinstance(item, Line):
            block.append(item)
            continue
        found += [*_block(block), f"  {item.words}"]
        block = []
    return found + _block(block)


def _block(lines: Iterable[Line]) -> list[str]:
    lines = list(lines)
    lefts = [_WRITER.write(line.left) for line in lines]
    width = max((len(left) for left in lefts if len(left) <= 16), default=0)
    found: list[str] = []
    for left, line in zip(lefts, lines, strict=True):
        if len(left) > _LONGEST_LEFT:
            found += [f"{_INDENT}{left}", *_equation("", line)]
            continue
        equation = _equation(left.ljust(width), line)
        if found and len(equation) > 1:
            found.append("")
        found += equation
    return found


def _equation(left: str, line: Line) -> list[str]:
    head = f"{_INDENT}{left} = "
    inline = _WRITER.write(line.right)
    value = f" = {line.value}" if line.value and inline != line.value else ""
    above, below = fraction_of(line.right)
    if below != 1 and (above.is_Add or below.is_Add) and len(inline) > _SHORT:
        return _stacked(head, "", line.right, "", value)
    if len(head + inline + value) <= _WIDTH:
        return [head + inline + value]
    found = _broken(line.right, _WIDTH - len(head))
    if len(found) <= _FEW and all(len(head + text) <= _WIDTH for text in found):
        blank = " " * len(head)
        return _closed([head + found[0], *(blank + more for more in found[1:])], value, len(head))
    terms = ordered(line.right)
    at = max(range(len(terms)), key=lambda k: _length_of_quotient(terms[k]))
    if _length_of_quotient(terms[at]) > _SHORT:
        before = "".join(_WRITER.term(t, first=k == 0) for k, t in enumerate(terms[:at]))
        after = "".join(_WRITER.term(t, first=False) for t in terms[at + 1 :])
        negative = is_negative(terms[at])
        sign = "-" if negative else "+" if before else ""
        before = f"{before} {sign} " if before else sign
        quotient = without_sign(terms[at]) if negative else terms[at]
        return _stacked(head, before, quotient, after, value)
    blank = " " * len(head)
    return _closed([head + found[0], *(blank + more for more in found[1:])], value, len(head))


def _length_of_quotient(term: sp.Expr) -> int:
    """Return how long a quotient with a sum above is when written; 0 for any other term."""
    above, below = fraction_of(term)
    return len(_WRITER.write(term)) if above.has(sp.Add) and not below.is_number else 0


def _closed(lines: list[str], value: str, indent: int) -> list[str]:
    """Put the value behind the last line, or below it."""
    if not value or len(lines[-1] + value) <= _WIDTH:
        return [*lines[:-1], lines[-1] + value]
    return [*lines, " " * (indent - 3) + value]


def _stacked(head: str, before: str, quotient: sp.Expr, after: str, value: str) -> list[str]:
    """Write a fraction over a rule, with what stands before and after it beside the rule."""
    above, denominator = fraction_of(quotient)
    below = _WRITER.write(denominator)
    numerator = _broken(above, _WIDTH - len(head + before + after))
    width = max(*(len(line) for line in numerator), len(below))
    blank = " " * len(head + before)
    # one line is centred over the rule, several are read from the left
    shown = [line.center(width) if len(numerator) == 1 else line for line in numerator]
    return [
        *((blank + line).rstrip() for line in shown),
        head + before + "-" * width + after + value,
        (blank + below.center(width)).rstrip(),
    ]


def _broken(expression: sp.Expr, width: int) -> list[str]:
    """Break a sum between its terms."""
    if not expression.is_Add:
        return [_WRITER.write(expression)]
    found = [""]
    for k, term in enumerate(ordered(expression)):
        text = _WRITER.term(term, first=k == 0)
        if found[-1] and len(found[-1] + text) > width:
            found.append(text.lstrip())
        else:
            found[-1] += text
    return found


def _legend(rows: Iterable[Row]) -> list[str]:
    table = [(_WRITER.symbol(r.name), r.value, r.unit, r.meaning) for r in rows]
    wide = [max(len(row[k]) for row in table) for k in range(3)]
    found = ["Symbols", "-------"]
    for name, value, unit, meaning in table:
        start = f"{_INDENT}{name.ljust(wide[0])}  "
        middle = value.rjust(wide[1]) if value else unit.ljust(wide[2])
        found.append(f"{start}{middle}  {meaning}")
    return found
