"""The phrases and units that tables, documents and pictures of a spread share."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from tcopt.show.words import limit_words, number
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.spread.result import SpreadResult
    from tcopt.spread.variation import Variate
    from tcopt.study import Insertion

__all__ = [
    "FIGURE", "Shown", "corner_words", "insertion_words", "sample_words", "share_words",
    "verdict_sentence",
]  # fmt: skip


@dataclass(frozen=True, slots=True)
class Shown:
    """How a figure of a part is shown: name, key, unit, and the factor from SI to that unit."""

    words: str
    key: str
    unit: str
    factor: float


FIGURE = {
    "current": Shown("current at T_ref", "current_A", "A", 1.0),
    "box": Shown("box of I", "box_ppm_per_K", "ppm/K", 1e6),
    "residual_box": Shown("box of I/I_target", "residual_box_ppm_per_K", "ppm/K", 1e6),
    "deviation": Shown("deviation", "deviation_ppm", "ppm", 1e6),
    "slope": Shown("slope of I/I_target", "slope_ppm_per_K", "ppm/K", 1e6),
}
"""By the names of `tcopt.spread.figures.FIGURES`."""


def share_words(share: float) -> str:
    """Return a share as a percentage: '12.3 %'."""
    return f"{100 * share:.1f} %"


def sample_words(result: SpreadResult) -> str:
    """Return how the parts were drawn: '16384 parts, scrambled Sobol sequence, seed 1'."""
    spread = result.study.spread
    how = "scrambled Sobol sequence" if spread.sampling == "sobol" else "plain random numbers"
    of = f" of {result.sample.wanted} (partial)" if result.partial else ""
    return f"{result.sample.drawn}{of} parts, {how}, seed {spread.seed}"


def verdict_sentence(result: SpreadResult) -> str:
    """Return what the wanted share of parts stays within, and the verdict."""
    wanted = f"{100 * result.study.spread.wanted_yield:g} % of the parts"
    shown = FIGURE[result.judged]
    value = result.judged_quantile[-1] * shown.factor
    after = "" if len(result.stages) == 1 else f", {result.stages[-1].name}"
    if result.limit is None:
        return f"{wanted} stay within {number(value)} {shown.unit} ({shown.words}){after}"
    word = "met" if result.limit.met else "not met"
    bound = limit_words(result.limit.figure, result.limit.bound)
    found = f"{number(value)} {shown.unit}"
    return f"Limit {word}: {wanted} stay within {found}{after}; {bound} allowed"


def insertion_words(insertion: Insertion) -> str:
    """Return what an insertion scales and where: 'base at 125 degC, +-25 %'."""
    what = insertion.scales
    if insertion.material is not None:
        what = f"{insertion.material} in {what}"
    at = format_quantity(insertion.temperature, "K")
    return f"{what} at {at}, +-{100 * insertion.reach:g} %"


def corner_words(signs: tuple[tuple[Variate, int], ...], most: int = 1000) -> str:
    """Return which way a corner's variates go: '+ sheet resistance of n_well, - supply'."""
    words = [f"{'+' if sign > 0 else '-'} {variate.name}" for variate, sign in signs[:most]]
    rest = len(signs) - len(words)
    return ", ".join(words) + (f", and {rest} that matter less" if rest else "")
