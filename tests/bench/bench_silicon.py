"""The search for silicon on eight materials: its time, and its drift beside paper's optimum.

A sum of PTAT and VBE currents over -40..150 degC, both resistors open, every figure of the
factory invented. Without spread two pieces in each slot reach next to no drift, so the best
design on paper mixes what nothing holds together.
"""

from __future__ import annotations

from time import process_time

from tcopt.mix.search import design
from tests.bench.figure import Figure
from tests.bench.ratio import one_core
from tests.silicon_studies import mirror_study, sum_study

__all__ = ["figures"]


def figures() -> list[Figure]:
    """Measure the search over two slots, and that over one slot with eight area ratios."""
    with one_core():
        return _figures()


def _figures() -> list[Figure]:
    started = process_time()
    sums = design(sum_study(purpose="silicon", show=10, samples=8192)).silicon
    two_slots = process_time() - started
    started = process_time()
    ratios = (1.0, 2.0, 3.0, 4.0, 6.0, 8.0, 12.0, 16.0)
    mirror = mirror_study(3, "either", ratios, purpose="silicon", show=10, samples=8192)
    one_slot = design(mirror).silicon
    one_slot_time = process_time() - started
    if sums is None or sums.single is None or one_slot is None or one_slot.single is None:
        raise AssertionError("a search for silicon tells of silicon, and of single materials")
    best = sums.figures[0].box_ppm_per_K
    best_of_one = one_slot.figures[0].box_ppm_per_K
    alone_of_one = one_slot.single.silicon.box_ppm_per_K
    return [
        Figure("silicon: two slots, eight materials, of one core", two_slots, 20, "at most", "s"),
        Figure(
            "silicon: one slot, eight materials, 3 pieces, either join, 8 ratios, of one core",
            one_slot_time, 20, "at most", "s",
        ),
        Figure(
            "silicon: 99.7 % drift over that of paper's optimum",
            best / sums.paper.silicon.box_ppm_per_K, 0.2, "at most",
        ),
        Figure(
            "silicon: 99.7 % drift over that of the best single material",
            best / sums.single.silicon.box_ppm_per_K, 1, "at most",
        ),
        Figure("silicon: the same in one slot", best_of_one / alone_of_one, 1, "at most"),
    ]  # fmt: skip
