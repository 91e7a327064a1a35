"""What all reports are put together from.

All marks are ASCII and nothing is told by colour alone.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING, Literal

from rich.box import Box
from rich.cells import cell_len
from rich.console import Console, ConsoleOptions, RenderResult
from rich.table import Table
from rich.text import Text

from tcopt.show.words import verdict_words

if TYPE_CHECKING:
    from tcopt.assess import Assessment

__all__ = ["PPM", "heading", "listed", "new_table", "ppm", "row", "verdict"]

PPM = 1e6
_GAP = 2
"""Characters between two columns."""
_TEXT_ROOM = 20
"""Characters that a column of text gets at least, if it has so many."""
_LINES = Box("    \n    \n -- \n    \n    \n -- \n    \n    \n", ascii=True)


class _Sheet(Table):
    """A table that, where it is too wide for its place, becomes one record a row.

    Numbers are never broken, and text keeps some room; squeezed further, a table of
    figures would mislead.
    """

    def __rich_console__(self, console: Console, options: ConsoleOptions) -> RenderResult:
        if self._least_width() <= options.max_width:
            yield from super().__rich_console__(console, options)
            return
        names = [" ".join(str(column.header).split("\n")) for column in self.columns]
        for first, *others in zip(*(column.cells for column in self.columns), strict=True):
            yield Text(f"{names[0]} {first}".strip(), style="bold")
            record = Table.grid(padding=(0, 1, 0, 0))
            for name, cell in zip(names[1:], others, strict=True):
                if str(cell):
                    record.add_row(Text(f"  {name}"), cell)
            yield record

    def _least_width(self) -> int:
        width = -_GAP
        for column in self.columns:
            lines = [
                line for cell in (column.header, *column.cells) for line in str(cell).split("\n")
            ]
            longest = max(map(cell_len, lines), default=0)
            width += _GAP + (longest if column.no_wrap else min(longest, _TEXT_ROOM))
        return width


def heading(words: str) -> Text:
    """Return a heading, set off from what stands above it."""
    return Text(f"\n{words}", style="bold")


def new_table(*columns: str, numbers: Sequence[int] = ()) -> Table:
    """Return a table with these headings; columns that hold numbers are set to the right."""
    table = _Sheet(box=_LINES, show_edge=False, padding=(0, 1, 0, 0), header_style="bold")
    for index, column in enumerate(columns):
        right = index in numbers
        # folded, since the mark of a cut-off cell is not ASCII
        justify: Literal["left", "right"] = "right" if right else "left"
        table.add_column(column, justify=justify, no_wrap=right, overflow="fold")
    return table


def row(table: Table, *cells: str) -> None:
    """Add a row of plain text."""
    table.add_row(*(Text(cell) for cell in cells))


def verdict(found: Assessment, by: str = "") -> Text:
    """Return whether the limit is met, in a sentence."""
    if found.limit is None:
        return Text("No limit is set.")
    style = "bold green" if found.limit.met else "bold red"
    return Text(f"{verdict_words(found.limit, by)}.", style=style)


def listed(lines: Iterable[str]) -> Table:
    """Return a list with a dash before each entry."""
    grid = Table.grid(padding=(0, 1, 0, 0))
    for line in lines:
        grid.add_row(Text("-"), Text(line))
    return grid


def ppm(slope: float, decimals: int = 1) -> str:
    """Return a slope in ppm to fixed decimals: columns that add up are read down their digits."""
    text = f"{PPM * slope:+.{decimals}f}"
    return text if any(digit in text for digit in "123456789") else text[1:]
