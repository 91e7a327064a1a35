"""The sympy side of a circuit's statement: its symbols and its transistors.

The same loops are written for four kinds of transistor: ideal bipolar ones,
from which formulas are read; bipolar ones with current gain, Early effect and
leakage, their bases supplied by the input or through a follower; MOS ones.
"""

from __future__ import annotations

from dataclasses import dataclass
from enum import Enum

import sympy as sp

from tcopt.circuits.statement import Circuit, Loop
from tcopt.laws.bipolar import base_emitter_voltage
from tcopt.laws.mosfet import gate_voltage
from tcopt.symbols import NOMENCLATURE, resistance_name

__all__ = ["Device", "Terms", "Transistor", "kinds_of", "statement_of", "terms_of"]


class Device(Enum):
    """What the transistors of a loop are."""

    IDEAL = "ideal"
    BIPOLAR = "bipolar"
    FOLLOWED = "bipolar_followed"
    MOS = "mos"


@dataclass(frozen=True)
class Transistor:
    """One transistor of a loop.

    Attributes
    ----------
    base_current : [A]
    emitter_current : what leaves at emitter or source [A]
    control_voltage : of base or gate, to ground [V]
    over_emitter : base-emitter or gate-source voltage [V]
    foot : of emitter or source, to ground [V]
    density : junction current, without leakage, per unit of area [A]
    """

    base_current: sp.Expr
    emitter_current: sp.Expr
    control_voltage: sp.Expr
    over_emitter: sp.Expr
    foot: sp.Expr
    density: sp.Expr


class Terms:
    """Hands out the symbols in which loops are written; each is positive.

    Attributes
    ----------
    currents : terminal currents [A] by name, in the unknowns
    unknowns : what the loops are solved for: a junction current for each named
        current, and voltages of diode-connected transistors where they matter
    extra : loops that the devices bring with them
    across : collector-emitter or drain-source voltages that have an Early effect
    observed : what else a solution is asked for, by its name in the nomenclature
    """

    log = staticmethod(sp.log)

    def __init__(self, device: Device = Device.IDEAL) -> None:
        self.device = device
        self.currents: dict[str, sp.Expr] = {}
        self.unknowns: dict[str, sp.Symbol] = {}
        self.extra: list[Loop] = []
        self.across: list[sp.Expr] = []
        self.observed: dict[str, sp.Expr] = {}

    def observe(
        self,
        V_in: sp.Expr | None = None,
        first: Transistor | None = None,
        output: Transistor | None = None,
        I_top: sp.Expr | None = None,
    ) -> None:
        """Name what headroom, inversion and power are read from.

        Parameters
        ----------
        V_in : of the node that the input, or the mirror on top, feeds
        first : the transistor on the input side
        output : the one whose collector takes, or makes, the output
        I_top : what the branches draw at their top; where the circuit makes its own
            current, all of them together, else the input alone
        """
        found = {
            "V_in": V_in,
            "V_foot": output and output.foot,
            "I_top": I_top,
        }
        if self.device is Device.MOS:
            found |= {"D_in": first and first.density, "D_out": output and output.density}
        self.observed |= {name: sp.sympify(e) for name, e in found.items() if e is not None}

    def collector(self, diode: Transistor, voltage: sp.Expr) -> sp.Expr:
        """Return a diode-connected transistor's collector voltage to ground [V], by its unknown.

        ``voltage``: the same in currents, where that unknown is not solved for.
        """
        if "V_D" not in self.unknowns:
            return voltage
        return self.unknowns["V_D"] + diode.foot

    def symbol(self, name: str) -> sp.Symbol:
        """Return the symbol of a quantity of the nomenclature."""
        return sp.Symbol(NOMENCLATURE[name].name, positive=True)

    def resistance(self, slot: str) -> sp.Symbol:
        """Return the resistance of a slot [ohm]."""
        return sp.Symbol(resistance_name(slot), positive=True)

    def current(self, name: str, area: sp.Expr | int = 0) -> sp.Expr:
        """Return a current that the loops are solved for [A].

        ``area``: of the transistor whose collector carries it, leakage of that
        collector included; 0 for a sum of currents.
        """
        if name not in self.currents:
            symbol = self.symbol(name)
            leaks = area != 0 and self.device is not Device.IDEAL
            if leaks:
                symbol = self.symbol(name.replace("I_", "J_"))
            self.unknowns[name] = symbol
            self.currents[name] = symbol + area * self.symbol("I_L") if leaks else symbol
        return self.currents[name]

    def transistor(
        self,
        current: sp.Expr,
        area: sp.Expr | int = 1,
        emitter_resistor: sp.Expr | int = 0,
        *,
        raised: sp.Expr | int = 0,
        to_output: bool = False,
    ) -> Transistor:
        """Return a transistor from what flows into its collector, leakage included [A].

        ``raised``: what lies between emitter and ground besides the resistor [V].
        ``to_output``: its collector is the output and sits at the voltage of the
        load; else it does not carry the Early effect of a voltage (see `diode`).
        """
        area = sp.sympify(area)
        leakage = 0 if self.device is Device.IDEAL else area * self.symbol("I_L")
        junction = sp.expand(current - leakage)
        emitter = junction + self._base(junction)
        lifted = emitter * emitter_resistor + raised
        factor: sp.Expr = sp.Integer(1)
        if to_output and self.device is not Device.IDEAL:
            across = self.symbol("V_out") - lifted
            self.across.append(across)
            factor = 1 + across / self.symbol("V_A")
        return self._made(junction, area, lifted, emitter, factor)

    def diode(
        self,
        total: sp.Expr,
        emitter_resistor: sp.Expr | int = 0,
        other_bases: sp.Expr | int = 0,
    ) -> Transistor:
        """Return a diode-connected transistor of unit area from all that its node takes [A].

        The node also feeds its own base and those of the others, as they are or
        through a follower: ``total = J + I_L + supplied(J/beta + other bases)``.
        """
        share = self._supplied_share()
        leakage = 0 if self.device is Device.IDEAL else self.symbol("I_L")
        junction = sp.expand(total - leakage - share * other_bases)
        if share != 0:
            junction = junction / (1 + share / self.symbol("beta"))
        return self._diode_of(junction, emitter_resistor, other_bases)

    def input_diode(
        self,
        current: sp.Expr,
        emitter_resistor: sp.Expr | int = 0,
        other_bases: sp.Expr | int = 0,
        collector: sp.Expr | None = None,
    ) -> Transistor:
        """Return a diode-connected transistor of unit area from its collector current [A].

        ``collector``: the voltage of its collector to ground [V], where that is not
        the node which drives its own base and the others.
        """
        leakage = 0 if self.device is Device.IDEAL else self.symbol("I_L")
        junction = sp.expand(current - leakage)
        return self._diode_of(junction, emitter_resistor, other_bases, collector)

    def _diode_of(
        self,
        junction: sp.Expr,
        emitter_resistor: sp.Expr | int,
        other_bases: sp.Expr | int,
        collector: sp.Expr | None = None,
    ) -> Transistor:
        emitter = junction + self._base(junction)
        lifted = emitter * emitter_resistor
        one = sp.Integer(1)
        if self.device is Device.IDEAL:
            return self._made(junction, one, lifted, emitter, one)
        V_D = self.symbol("V_D")
        made = self._made(junction, one, lifted, emitter, 1 + V_D / self.symbol("V_A"))
        if collector is None:
            collector = made.control_voltage + self.above_base(made.base_current + other_bases)
        across = collector - lifted
        if "V_D" not in self.unknowns:
            self.unknowns["V_D"] = V_D
            self.across.append(V_D)
            self.extra.append(Loop("V_D", V_D - across))
        return made

    def above_base(self, bases: sp.Expr) -> sp.Expr:
        """Return how far the node that drives the bases lies above them [V]: a follower's V_BE."""
        if self.device is not Device.FOLLOWED:
            return sp.Integer(0)
        beta = self.symbol("beta")
        return base_emitter_voltage(
            bases * beta / (1 + beta),
            sp.Integer(1),
            self.symbol("V_T"),
            self.symbol("I_S"),
            sp.Integer(1),
        )

    def other_outputs(self) -> sp.Expr:
        """Return the base currents of outputs that share the input with this one [A]."""
        if self.device in {Device.BIPOLAR, Device.FOLLOWED}:
            return self.symbol("I_others")
        return sp.Integer(0)

    def supplied(self, bases: sp.Expr) -> sp.Expr:
        """Return what the input has to give for these base currents [A]."""
        return self._supplied_share() * bases

    def _supplied_share(self) -> sp.Expr:
        if self.device is Device.BIPOLAR:
            return sp.Integer(1)
        if self.device is Device.FOLLOWED:
            return 1 / (1 + self.symbol("beta"))
        return sp.Integer(0)

    def _base(self, junction: sp.Expr) -> sp.Expr:
        gain = self.device in {Device.BIPOLAR, Device.FOLLOWED}
        return junction / self.symbol("beta") if gain else sp.Integer(0)

    def _made(
        self,
        junction: sp.Expr,
        area: sp.Expr,
        lifted: sp.Expr,
        emitter: sp.Expr,
        early_factor: sp.Expr,
    ) -> Transistor:
        if self.device is Device.MOS:
            control = gate_voltage(
                junction,
                area,
                lifted,
                self.symbol("V_T"),
                self.symbol("V_TH"),
                self.symbol("n"),
                self.symbol("n_S"),
                self.symbol("I_spec"),
                early_factor,
            )
            none = sp.Integer(0)
            return Transistor(none, emitter, control, control - lifted, lifted, junction / area)
        over = base_emitter_voltage(
            junction, area, self.symbol("V_T"), self.symbol("I_S"), early_factor
        )
        base = self._base(junction)
        return Transistor(base, emitter, over + lifted, over, lifted, junction / area)


def kinds_of(circuit: Circuit) -> tuple[Device, ...]:
    """Return the kinds of transistor for which the circuit is stated."""
    found: list[Device] = []
    if "bipolar" in circuit.devices:
        found += [Device.IDEAL, Device.BIPOLAR]
        found += [Device.FOLLOWED] if circuit.takes_follower else []
    if "mos" in circuit.devices:
        found.append(Device.MOS)
    return tuple(found) or (Device.IDEAL,)


def terms_of(
    circuit: Circuit, feed: str, device: Device = Device.IDEAL
) -> tuple[Terms, tuple[Loop, ...]]:
    """Return the circuit's loops for a kind of transistor, and the terms they are written in."""
    terms = Terms(device)
    loops = circuit.loops(terms, feed)
    if tuple(loop.unknown for loop in loops) != circuit.unknowns:
        raise AssertionError(f"{circuit.topology}: a loop each for {circuit.unknowns}, in order")
    return terms, (*loops, *terms.extra)


def statement_of(circuit: Circuit, feed: str, device: Device | None = None) -> tuple[Loop, ...]:
    """Return the circuit's loops in sympy, in the order in which they fix the unknowns.

    Without a device, for the first kind for which the circuit is stated.
    """
    return terms_of(circuit, feed, device or kinds_of(circuit)[0])[1]
