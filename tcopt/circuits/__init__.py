"""One topology a file; this page only collects them.

Every module of this package that holds a ``CIRCUIT`` is a topology, so adding
one is adding its file (and running ``python -m tcopt.circuits.generate``).
"""

from __future__ import annotations

from importlib import import_module
from pathlib import Path
from types import MappingProxyType

from tcopt.circuits.statement import GIVEN, SELF, SUPPLY, Circuit, Loop, Slot

__all__ = ["CIRCUITS", "GIVEN", "SELF", "SUPPLY", "Circuit", "Loop", "Slot", "module_name"]

_NOT_TOPOLOGIES = {
    "__init__", "closed_form", "device_module", "emit", "generate", "ideal_module", "node_module",
    "statement", "terms",
}  # fmt: skip


def module_name(topology: str, feed: str, device: str) -> str:
    """Return the name under which a topology's numerics are kept: ptat_core_self_ideal."""
    return f"{topology.replace(' ', '_')}_{feed}_{device}"


def _collect() -> dict[str, Circuit]:
    names = sorted(p.stem for p in Path(__file__).parent.glob("*.py"))
    found = (import_module(f"{__name__}.{n}").CIRCUIT for n in names if n not in _NOT_TOPOLOGIES)
    return {circuit.topology: circuit for circuit in found}


CIRCUITS: MappingProxyType[str, Circuit] = MappingProxyType(_collect())
"""All topologies by the words that users type."""
