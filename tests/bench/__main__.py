"""Measure all figures and print them as a table; exit 1 where one is not met.

``python -m tests.bench`` for all, ``python -m tests.bench solve`` for those of bench_solve.py.
"""

from __future__ import annotations

import sys
from importlib import import_module
from pathlib import Path

from tests.bench.figure import Figure, table


def main(wanted: list[str]) -> int:
    """Measure the figures of the named benches, or of all."""
    names = [
        p.stem.removeprefix("bench_") for p in sorted(Path(__file__).parent.glob("bench_*.py"))
    ]
    unknown = set(wanted) - set(names)
    if unknown:
        print(f"found {', '.join(sorted(unknown))}; accepted: {', '.join(names)}", file=sys.stderr)
        return 2
    figures: list[Figure] = []
    for name in wanted or names:
        figures += import_module(f"tests.bench.bench_{name}").figures()
    print(table(figures))
    return 0 if all(figure.met for figure in figures) else 1


if __name__ == "__main__":
    sys.exit(main(sys.argv[1:]))
