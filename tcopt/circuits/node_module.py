"""The generated file of what a solution is asked for besides its currents: node voltages and such.

A file of its own, since only headroom, inversion and self-heating read it.
"""

from __future__ import annotations

from tcopt.circuits.device_module import partials_source, quantity_names
from tcopt.circuits.emit import expand_logs, finite, module, tuple_text
from tcopt.circuits.statement import Circuit
from tcopt.circuits.terms import Device, terms_of

__all__ = ["node_module"]


def node_module(circuit: Circuit, feed: str, device: Device) -> str | None:
    """Return the source for one topology, kind of input and of transistor; None without nodes."""
    terms, loops = terms_of(circuit, feed, device)
    if not terms.observed:
        return None
    unknowns = [terms.unknowns[loop.unknown] for loop in loops]
    nodes = [expand_logs(finite(expression)) for expression in terms.observed.values()]
    quantities = quantity_names(nodes, set(unknowns))
    source = partials_source(
        nodes,
        unknowns,
        quantities,
        "nodes",
        "Return what is observed, its partials by unknown, and by quantity.",
    )
    constants = (
        f"\nNODES = {tuple_text([repr(name) for name in terms.observed])}"
        f"\nQUANTITIES = {tuple_text([repr(n) for n in quantities])}\n"
    )
    title = f"{circuit.topology}, {device.value.replace('_', ', ')} transistors, input: {feed}"
    return module(f"Nodes of {title}", source, constants)
