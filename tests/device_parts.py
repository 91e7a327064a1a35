"""The parts of circuits with real transistors, in floats to find and in 40 digits to prove.

Nothing of ``tcopt`` is used here. Equations in one unknown are bracketed in floats first,
which settles whether there is a solution at all; the secant then takes each root to 40 digits,
and a change of sign within 1e-30 proves it.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from types import SimpleNamespace
from typing import Any

import mpmath
from scipy.optimize import brentq, minimize_scalar

__all__ = ["NEVER", "Circuit", "NoSolutionFoundError", "Quantities", "mp"]

mp: Any = mpmath.MPContext()
mp.dps = 40

FLOATS: Any = SimpleNamespace(
    log=math.log, exp=math.exp, sqrt=math.sqrt, expm1=math.expm1, mpf=float
)
SMALLEST, LARGEST = -120.0, 8.0
"""Logarithms of currents [A] between which a solution is looked for."""
INNER = 300.0
"""How much further on either side the currents reach that follow from it."""
NEVER = 1e30
"""Stands for a voltage beyond all bounds."""
PROOF = mp.mpf("1e-30")
STILL = mp.mpf("1e-36")

Quantities = Mapping[str, Any]


class NoSolutionFoundError(Exception):
    """No current solves the loops with every junction switched on."""


class Circuit:
    """One circuit with one set of quantities, in floats or in 40 digits (``exact``)."""

    def __init__(
        self,
        device: str,
        quantities: Quantities,
        roots: dict[str, Any] | None,
        *,
        prove: bool = True,
    ) -> None:
        self.exact = roots is not None
        self.prove = prove
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
                raise NoSolutionFoundError(key)
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
        if self.exact and self.prove:
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
