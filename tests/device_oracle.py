"""The circuits with real transistors, from their drawings, in floats to find and 40 digits to prove.

Nothing of ``tcopt`` is used here. Every circuit is written once as nested equations in one
unknown each, by Kirchhoff's laws at its nodes. The equations are bracketed in floats first,
which settles whether there is a solution at all; the secant then takes each root to 40 digits,
and a change of sign within 1e-30 proves the outermost one, which is monotonic. Inputs are the
exact values of the floats handed in, so a difference to ``tcopt`` is the error of ``tcopt``.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from types import SimpleNamespace
from typing import Any

import mpmath
from scipy.optimize import brentq, minimize_scalar

__all__ = ["NoSolution", "log_sensitivities", "mp", "solve"]

mp: Any = mpmath.MPContext()
mp.dps = 40

FLOATS: Any = SimpleNamespace(log=math.log, exp=math.exp, sqrt=math.sqrt, expm1=math.expm1, mpf=float)
SMALLEST, LARGEST = -120.0, 8.0
"""Logarithms of currents [A] between which a solution is looked for."""
INNER = 300.0
"""How much further on either side the currents reach that follow from it."""
NEVER = 1e30
"""Stands for a voltage beyond all bounds."""
PROOF = mp.mpf("1e-30")
STILL = mp.mpf("1e-36")

Quantities = Mapping[str, Any]


class NoSolution(Exception):
    """No current solves the loops with every junction switched on."""


class Circuit:
    """One circuit with one set of quantities, in floats or in 40 digits (``exact``)."""

    def __init__(self, device: str, quantities: Quantities, roots: dict[str, Any] | None) -> None:
        self.exact = roots is not None
        self.roots: dict[str, Any] = roots or {}
        self.m = mp if self.exact else FLOATS
        self.q = {name: self.m.mpf(value) for name, value in quantities.items()}
        self.mos = device == "mos"
        self.follower = device == "bipolar_followed"
        self.per_beta = self.q.get("inverse_beta", self.m.mpf(0))
        # a follower hands on one part in 1 + beta of the base currents
        handed_on = self.per_beta / (1 + self.per_beta)
        self.from_input = handed_on if self.follower else self.m.mpf(1)
        self.per_V_A = self.q["inverse_V_A"] if "inverse_V_A" in self.q else self.m.mpf(0)
        self.leakage = self.q.get("I_L", self.m.mpf(0))
        self.others = self.q.get("I_others", self.m.mpf(0))

    def root(self, key: str, f: Callable[[Any], Any], low: float, high: float) -> Any:
        """Where f crosses nothing: found in floats between low and high, then by the secant."""
        if not self.exact:
            ends = f(low), f(high)
            if not ends[0] * ends[1] < 0:
                raise NoSolution(key)
            self.roots[key] = brentq(f, low, high, xtol=1e-13, rtol=1e-14)
            f(self.roots[key])  # leaves the roots within at their last values
            return self.roots[key]
        x, before = mp.mpf(self.roots[key]), mp.mpf(self.roots[key]) + mp.mpf("1e-12")
        y, y_before = f(x), f(before)
        for _ in range(20):
            if y in {0, y_before} or abs(x - before) < STILL:
                break
            x, before = x - y * (x - before) / (y - y_before), x
            y, y_before = f(x), y
        else:
            raise AssertionError(f"{key}: the secant does not settle")
        self.roots[key] = x
        return x

    def current(
        self, key: str, f: Callable[[Any], Any], low: float = SMALLEST, high: float = LARGEST
    ) -> Any:
        """The current at which f, a voltage, is nothing."""
        return self.m.exp(self.root(key, lambda x: f(self.m.exp(x)), low, high))

    def fed_current(self, key: str, f: Callable[[Any], Any]) -> Any:
        """The same for a current that the supply drives, which is below that of a short."""
        high = float(mp.log(self.q["V_CC"] / self.q["R_feed"])) + 1
        return self.current(key, f, high=high)

    def inner_current(self, key: str, f: Callable[[Any], Any]) -> Any:
        """The same for a current that follows from another, of which f is a falling function.

        The other is tried where this one is beyond all reason, too; there it stays at an end.
        """
        low, high = SMALLEST - INNER, LARGEST + INNER
        if not self.exact:
            for end, beyond in ((low, f(math.exp(low)) <= 0), (high, f(math.exp(high)) >= 0)):
                if beyond:
                    return math.exp(end)
        return self.m.exp(self.root(key, lambda x: f(self.m.exp(x)), low, high))

    def upper_current(self, key: str, f: Callable[[Any], Any]) -> Any:
        """The larger of the two currents at which f, which has one maximum, is nothing."""
        if self.exact:
            return self.current(key, f)
        top = minimize_scalar(
            lambda x: -f(math.exp(x)), bounds=(-80.0, LARGEST), options={"xatol": 1e-9}
        )
        return self.current(key, f, top.x)

    def proved(self, key: str, f: Callable[[Any], Any]) -> None:
        """Insist on a change of sign close to the root."""
        if self.exact:
            x, within = self.roots[key], dict(self.roots)
            below, above = f(mp.exp(x - PROOF)), f(mp.exp(x + PROOF))
            self.roots.update(within)
            assert below * above < 0, f"{key}: not proved"

    def control(self, current: Any, area: Any, emitter: Any, across: Any) -> Any:
        """Base or gate voltage to ground of a transistor whose emitter or source is lifted.

        ``across``: collector to emitter, or drain to source. Below nothing the laws do not
        hold; to find that out they are followed there without Early effect.
        """
        factor = 1 + across * self.per_V_A
        q = self.q
        if current <= 0:
            return -NEVER
        if not self.mos:
            return emitter + q["V_T"] * (self.m.log(current / (area * factor)) - q["log_I_S"])
        root = self.m.sqrt(current / (area * q["I_spec"] * factor))
        # pinch-off above source, in thermal voltages, from I = I_spec ln^2(1 + exp(v/2))
        v = 2 * (root + self.m.log(-self.m.expm1(-root)))
        # V_P = (V_G - V_TH)/n to the bulk, which lies at ground (n_S = n) or at the source (1)
        return q["V_TH"] + q.get("n_S", 1) * emitter + q["n"] * q["V_T"] * v

    def emitter_current(self, current: Any) -> Any:
        """What leaves at the emitter: collector and base current, no leakage."""
        return current if self.mos else current * (1 + self.per_beta)

    def base(self, current: Any) -> Any:
        """Base current."""
        return self.m.mpf(0) if self.mos else current * self.per_beta

    def above(self, bases: Any) -> Any:
        """How far the follower's base lies above its emitter, which carries all base currents."""
        if not self.follower:
            return self.m.mpf(0)
        if bases <= 0:
            return -NEVER
        collector = bases / (1 + self.per_beta)
        return self.q["V_T"] * (self.m.log(collector) - self.q["log_I_S"])

    def diode(self, current: Any, bases: Any, resistor: Any = 0) -> tuple[Any, Any]:
        """Control voltage to ground, and V_CE, of a transistor whose collector drives the bases."""
        emitter = self.emitter_current(current) * resistor
        if current <= 0:
            return -NEVER, -NEVER
        lift = self.above(bases)

        def control(across: Any) -> Any:
            return self.control(current, 1, emitter, across)

        if self.per_V_A == 0:
            return control(0), control(0) - emitter + lift
        across = control(self.m.mpf(0)) - emitter + lift
        if across <= 0:
            return control(0), across
        small = STILL if self.exact else 1e-15
        h = self.m.mpf("1e-20") if self.exact else 1e-6
        for _ in range(60):
            f = across - control(across) + emitter - lift
            slope = 1 - (control(across + h) - control(across - h)) / (2 * h)
            step = f / slope
            across = across - step
            if abs(step) < small * (1 + abs(across)):
                break
        return control(across), across

    def output(self, current: Any, resistor: Any = 0) -> Any:
        """Control voltage to ground of the output transistor."""
        emitter = self.emitter_current(current) * resistor
        return self.output_control(current, self.q["N"], emitter)

    def output_control(self, current: Any, area: Any, emitter: Any) -> Any:
        """The same from the voltage of its emitter."""
        self.across_output = self.q["V_out"] - emitter
        return self.control(current, area, emitter, max(self.across_output, 0))


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
        if c.mos:
            J_1 = sent
        else:
            J_1 = (sent - c.from_input * c.base(J)) / (1 + c.from_input * c.per_beta)
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
        raise NoSolution(str(error)) from error
    if circuit.per_V_A > 0:
        found["V_CE"] = circuit.across_output
    if any(not value > 0 for value in found.values()):
        raise NoSolution(str(found))
    return circuit.roots


def _exactly(
    topology: str, feed: str, device: str, quantities: Quantities, roots: dict[str, Any]
) -> dict[str, Any]:
    found = _CIRCUITS[topology](Circuit(device, quantities, dict(roots)), feed)
    found.pop("V_D", None)
    return found


def solve(topology: str, feed: str, device: str, quantities: Quantities) -> dict[str, Any]:
    """Return all currents [A], the output last, from the exact values of the quantities."""
    roots = _roots(topology, feed, device, quantities)
    return _exactly(topology, feed, device, quantities, roots)


def log_sensitivities(
    topology: str, feed: str, device: str, quantities: Quantities
) -> dict[str, dict[str, Any]]:
    """Return d ln I / d ln q of each current by each quantity (log_I_S: per unit).

    By central differences; a step of 1e-12 in 40 digits leaves more than 20 of them right.
    """
    h = mp.mpf("1e-12")
    roots = _roots(topology, feed, device, quantities)
    found: dict[str, dict[str, Any]] = {}
    for name, given in quantities.items():
        value, additive = mp.mpf(given), name == "log_I_S"
        ends = (value - h, value + h) if additive else (value * (1 - h), value * (1 + h))
        low, high = (
            _exactly(topology, feed, device, {**quantities, name: end}, roots) for end in ends
        )
        span = 2 * h if additive else mp.log((1 + h) / (1 - h))
        for current in low:
            found.setdefault(current, {})[name] = mp.log(high[current] / low[current]) / span
    return found
