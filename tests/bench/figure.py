"""One measured figure beside what is required of it."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass
from typing import Literal

__all__ = ["Figure", "table"]


@dataclass(frozen=True)
class Figure:
    """A name, what was measured, and the bound it must keep; both in ``unit``.

    A ``module`` of this folder named ``bench_*.py`` offers ``figures() -> list[Figure]``.
    """

    name: str
    measured: float
    required: float
    sense: Literal["at most", "at least"]
    unit: str = ""

    @property
    def met(self) -> bool:
        """Whether the bound is kept."""
        if self.sense == "at most":
            return self.measured <= self.required
        return self.measured >= self.required


def table(figures: Iterable[Figure]) -> str:
    """Return the figures as lines of name, measured, required, met."""
    rows = [("figure", "measured", "required", "met")]
    for f in figures:
        unit = f" {f.unit}" if f.unit else ""
        required = f"{f.sense} {f.required:.3g}{unit}"
        rows.append((f.name, f"{f.measured:.3g}{unit}", required, "yes" if f.met else "NO"))
    widths = [max(len(row[k]) for row in rows) for k in range(4)]
    return "\n".join(
        "  ".join(cell.ljust(width) for cell, width in zip(row, widths, strict=True)).rstrip()
        for row in rows
    )
