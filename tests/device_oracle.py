"""The circuits with real transistors, from their drawings, solved in 40 digits.

Nothing of ``tcopt`` is used here. Every circuit is written once as nested equations in one
unknown each, by Kirchhoff's laws at its nodes. Inputs are the exact values of the floats handed
in, so a difference to ``tcopt`` is the error of ``tcopt``.
"""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

from tests.device_parts import Circuit, NoSolutionFoundError, Quantities, mp

__all__ = ["NoSolutionFoundError", "log_sensitivities", "mp", "solve"]


def _mirror(c: Circuit, feed: str) -> dict[str, Any]:
    q, b, share = c.q, c.per_beta, c.from_input

    def pair(J_in: Any, J_out: Any) -> tuple[Any, Any, Any]:
        """Base currents in all, base voltage and V_CE of the input transistor."""
        bases = c.base(J_in) + c.base(J_out) + c.others
        return (bases, *c.diode(J_in, bases, q["R_input"]))

    def inner(J_in: Any) -> Any:
        return c.inner_current("J_out", lambda J: pair(J_in, J)[1] - c.output(J, q["R_output"]))

    if feed == "given":

        def J_of(J_out: Any) -> Any:
            """What is left of the given current for the input transistor."""
            left = q["I_given"] - c.leakage - share * (c.base(J_out) + c.others)
            return left if c.mos else left / (1 + share * b)

        def loop(J_out: Any) -> Any:
            return pair(J_of(J_out), J_out)[1] - c.output(J_out, q["R_output"])

        J_out = c.current("J_out", loop)
        c.proved("J_out", loop)
        J_in = J_of(J_out)
    else:

        def supply(J_in: Any) -> Any:
            bases, V_B, _ = pair(J_in, inner(J_in))
            drawn = J_in + c.leakage + (0 if c.mos else share * bases)
            return q["V_CC"] - V_B - c.above(bases) - drawn * q["R_feed"]

        J_in = c.fed_current("J_in", supply)
        c.proved("J_in", supply)
        J_out = inner(J_in)
    return {
        "I_in": J_in + c.leakage,
        "I_out": J_out + c.q["N"] * c.leakage,
        "V_D": pair(J_in, J_out)[2],
    }


def _peaking(c: Circuit, feed: str) -> dict[str, Any]:
    """The resistor lies between the input transistor's base, which is fed, and its collector."""
    q = c.q

    def base_and_drop(J_in: Any, J_out: Any) -> tuple[Any, Any, Any]:
        """Base voltage of the input, drop from there to its collector, and V_CE = V_BE2."""
        across = c.output(J_out)
        drop = (J_in + c.leakage + c.base(J_out)) * q["R_drop"]
        return c.control(J_in, 1, 0, max(across, 0)), drop, across

    def loop(J_in: Any, J_out: Any) -> Any:
        V_B, drop, across = base_and_drop(J_in, J_out)
        return V_B - drop - across

    if feed == "given":

        def J_of(J_out: Any) -> Any:
            left = q["I_given"] - c.leakage - c.base(J_out)
            return left if c.mos else left / (1 + c.per_beta)

        def outer(J_out: Any) -> Any:
            return loop(J_of(J_out), J_out)

        J_out = c.current("J_out", outer)
        c.proved("J_out", outer)
        J_in = J_of(J_out)
    else:

        def inner(J_in: Any) -> Any:
            return c.inner_current("J_out", lambda J: loop(J_in, J))

        def supply(J_in: Any) -> Any:
            J_out = inner(J_in)
            drawn = c.emitter_current(J_in) + c.leakage + c.base(J_out)
            return q["V_CC"] - base_and_drop(J_in, J_out)[0] - drawn * q["R_feed"]

        J_in = c.fed_current("J_in", supply)
        c.proved("J_in", supply)
        J_out = inner(J_in)
    return {
        "I_in": J_in + c.leakage,
        "I_out": J_out + q["N"] * c.leakage,
        "V_D": base_and_drop(J_in, J_out)[2],
    }


def _core(c: Circuit) -> tuple[Any, Any, Any, Any]:
    """Core current, and current, control voltage and V_CE of the diode-connected transistor."""
    q = c.q

    def other(J: Any) -> tuple[Any, Any, Any]:
        """The mirror sends M times the core's current into the node of the diode."""
        sent = q["M"] * (J + q["N"] * c.leakage) - c.leakage
        sent = sent if c.mos else sent - c.from_input * c.base(J)
        J_1 = sent / (1 + (0 if c.mos else c.from_input * c.per_beta))
        return (J_1, *c.diode(J_1, c.base(J_1) + c.base(J)))

    def loop(J: Any) -> Any:
        return other(J)[1] - c.output(J, q["R_core"])

    J = c.current("J_core", loop)
    c.proved("J_core", loop)
    return (J + q["N"] * c.leakage, *other(J))


def _ptat_core(c: Circuit, feed: str) -> dict[str, Any]:  # noqa: ARG001
    I_core, _, _, across = _core(c)
    return {"I_out": I_core, "V_D": across}


def _ptat_plus_vbe(c: Circuit, feed: str) -> dict[str, Any]:  # noqa: ARG001
    I_core, _, V_BE, across = _core(c)
    return {"I_core": I_core, "I_out": I_core + V_BE / c.q["R_base"], "V_D": across}


def _over_resistor(c: Circuit, slot: str) -> dict[str, Any]:
    """The first transistor's control voltage lies over the resistor in the second's emitter.

    Of two solutions the one that conducts: below where the control voltage less the drop is
    largest, the loop holds once more, at next to no current.
    """
    q = c.q

    def voltages(J: Any) -> tuple[Any, Any, Any]:
        """Control voltage, V_CE of the first transistor, and the drop."""
        J_1 = J - (0 if c.mos else c.from_input * c.base(J))
        drop = (c.emitter_current(J) - c.base(J_1)) * q[slot]
        across = c.output_control(J, 1, drop) + c.above(c.base(J))
        return c.control(J_1, 1, 0, max(across, 0)), across, drop

    def loop(J: Any) -> Any:
        control, _, drop = voltages(J)
        return control - drop

    J = c.upper_current("J_out", loop)
    c.proved("J_out", loop)
    return {"I_out": J + c.leakage, "V_D": voltages(J)[1]}


def _vbe_reference(c: Circuit, feed: str) -> dict[str, Any]:  # noqa: ARG001
    return _over_resistor(c, "R_base")


def _gate_source_reference(c: Circuit, feed: str) -> dict[str, Any]:  # noqa: ARG001
    return _over_resistor(c, "R_gate")


def _gate_voltage_bias(c: Circuit, feed: str) -> dict[str, Any]:  # noqa: ARG001
    def loop(J: Any) -> Any:
        return c.q["V_ref"] - c.output(J, c.q["R_source"])

    J = c.current("J_out", loop)
    c.proved("J_out", loop)
    return {"I_out": J + c.q["N"] * c.leakage}


_CIRCUITS: dict[str, Callable[[Circuit, str], dict[str, Any]]] = {
    "degenerated mirror": _mirror,
    "peaking source": _peaking,
    "ptat core": _ptat_core,
    "constant transconductance bias": _ptat_core,
    "ptat plus vbe": _ptat_plus_vbe,
    "vbe reference": _vbe_reference,
    "gate source reference": _gate_source_reference,
    "gate voltage bias": _gate_voltage_bias,
}


def _roots(topology: str, feed: str, device: str, quantities: Quantities) -> dict[str, Any]:
    """Find the solution in floats, or say that there is none."""
    circuit = Circuit(device, quantities, None)
    try:
        found = _CIRCUITS[topology](circuit, feed)
    except OverflowError as error:
        raise NoSolutionFoundError(str(error)) from error
    if circuit.per_V_A > 0:
        found["V_CE"] = circuit.across_output
    if any(not value > 0 for value in found.values()):
        raise NoSolutionFoundError(str(found))
    return circuit.roots


def _exactly(
    topology: str,
    feed: str,
    device: str,
    quantities: Quantities,
    roots: dict[str, Any],
    *,
    prove: bool,
) -> dict[str, Any]:
    circuit = Circuit(device, quantities, dict(roots), prove=prove)
    found = _CIRCUITS[topology](circuit, feed)
    found.pop("V_D", None)
    return found


def solve(topology: str, feed: str, device: str, quantities: Quantities) -> dict[str, Any]:
    """Return all currents [A], the output last, from the exact values of the quantities."""
    roots = _roots(topology, feed, device, quantities)
    return _exactly(topology, feed, device, quantities, roots, prove=True)


def log_sensitivities(
    topology: str, feed: str, device: str, quantities: Quantities
) -> dict[str, dict[str, Any]]:
    """Return d ln I / d ln q of each current by each quantity (log_I_S: per unit).

    Next to a solution that is there, so that nothing has to be proved again. By central
    differences; a step of 1e-12 in 40 digits leaves more than 20 of them right.
    """
    h = mp.mpf("1e-12")
    roots = _roots(topology, feed, device, quantities)
    found: dict[str, dict[str, Any]] = {}
    for name, given in quantities.items():
        value, additive = mp.mpf(given), name == "log_I_S"
        ends = (value - h, value + h) if additive else (value * (1 - h), value * (1 + h))
        low, high = (
            _exactly(topology, feed, device, {**quantities, name: end}, roots, prove=False)
            for end in ends
        )
        span = 2 * h if additive else mp.log((1 + h) / (1 - h))
        for current in low:
            found.setdefault(current, {})[name] = mp.log(high[current] / low[current]) / span
    return found
