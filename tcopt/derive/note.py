"""A derivation as a design note: sections of lines, still without a notation."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass

import sympy as sp

from tcopt.circuits import GIVEN, SELF, SUPPLY
from tcopt.circuits.closed_form import Kind
from tcopt.circuits.terms import Device
from tcopt.derive.chain import Chain, Equality
from tcopt.derive.derivation import Derivation
from tcopt.derive.names import coefficient, described, positive, quantity_of, sensitivity
from tcopt.derive.numbers import FLAT, PTAT, TARGET, Numbers, State
from tcopt.symbols import NOMENCLATURE, resistance_name

__all__ = ["Line", "Note", "Remark", "Row", "Section", "note_of"]

_FEEDS = {
    SELF: "",
    GIVEN: ", input: a given current",
    SUPPLY: ", input: a supply and a feed resistor",
}
_DEVICES = {
    Device.IDEAL: "Bipolar transistors are ideal",
    Device.BIPOLAR: "Bipolar transistors have gain, Early effect and leakage",
    Device.FOLLOWED: "Bipolar transistors have gain, Early effect and leakage; a follower feeds "
    "their bases",
    Device.MOS: "MOS transistors are in saturation, in any region of inversion",
}


@dataclass(frozen=True, slots=True)
class Line:
    """One equation, and its value as text where numbers are put in."""

    left: sp.Expr
    right: sp.Expr
    value: str = ""


@dataclass(frozen=True, slots=True)
class Remark:
    """Words between the lines of a section."""

    words: str


Items = list[Line | Remark]


@dataclass(frozen=True, slots=True)
class Section:
    """A heading, a sentence on what the formulas are for, and the formulas."""

    title: str
    purpose: str
    items: tuple[Line | Remark, ...]


@dataclass(frozen=True, slots=True)
class Row:
    """A symbol of the legend; 'TC1_slot' stands for those of all slots."""

    name: str
    unit: str
    meaning: str
    value: str = ""


@dataclass(frozen=True, slots=True)
class Note:
    """All that is said about a circuit."""

    title: str
    summary: str
    sections: tuple[Section, ...]
    legend: tuple[Row, ...]


def note_of(what: Derivation | Numbers) -> Note:
    """Arrange a derivation as a note, with numbers or without."""
    return _Scribe(what).note()


class _Scribe:
    """Writes the sections; puts a value beside a line where there are numbers."""

    def __init__(self, what: Derivation | Numbers) -> None:
        self.numbers = what if isinstance(what, Numbers) else None
        self.derivation = what.derivation if isinstance(what, Numbers) else what

    def note(self) -> Note:
        derivation = self.derivation
        shorts = "".join(f", {resistance_name(slot)} = 0" for slot in derivation.shorts)
        sections = [
            self.loops(),
            self.currents(),
            self.first_order(),
            self.sensitivities(),
            self.second_order(),
            *(self.resistor(slot) for slot in derivation.slots),
        ]
        if derivation.special_cases and self.numbers is None:
            sections.append(self.special_cases())
        at = "" if self.numbers is None else ", values at T_0"
        return Note(
            title=f"{derivation.circuit.topology}{_FEEDS[derivation.feed]}{shorts}{at}",
            summary=self.summary(),
            sections=tuple(sections),
            legend=self.legend(),
        )

    def summary(self) -> str:
        circuit = self.derivation.circuit
        words = f"{circuit.summary[0].upper()}{circuit.summary[1:]}."
        return f"{words} {_DEVICES[self.derivation.device]}." if circuit.devices else words

    def lines(
        self, chain: Iterable[Equality], shown: Iterable[Equality] = (), state: State | None = None
    ) -> Items:
        """Return a line for each equality that has not been shown."""
        before = set(shown)
        return [
            Line(e.symbol, e.expression, self.value(e.symbol, state, e.symbol.name))
            for e in chain
            if e not in before
        ]

    def value(self, expression: sp.Expr, state: State | None, unit_of: str) -> str:
        if self.numbers is None:
            return ""
        state = self.numbers.state if state is None else state
        return self.numbers.shown(expression, state, unit_of)

    def loops(self) -> Section:
        return Section(
            "Loops",
            "They hold at every temperature; all that follows comes from them.",
            tuple(Line(left, right) for left, right in self.derivation.loops),
        )

    def currents(self) -> Section:
        roots = self.derivation.roots
        if roots is None:
            return Section(
                "Currents",
                "These loops have no closed form: the currents are found numerically. What "
                "follows comes by implicit differentiation and holds all the same.",
                (),
            )
        kinds = {root.kind for root in roots}
        words = "In the order in which the loops fix them."
        if Kind.OMEGA in kinds:
            words += " W is Lambert's function, W exp(W) = argument."
        if Kind.LOWER in kinds:
            words += " W_-1 is the lower branch of Lambert's function, W exp(W) = argument, W < -1."
        chain = self.derivation.closed_form or ()
        return Section("Currents in closed form", words, tuple(self.lines(chain)))

    def first_order(self) -> Section:
        derivation = self.derivation
        materials = {coefficient(q) for q in derivation.fitted}
        laws = [law for law in derivation.laws if law.symbol not in materials]
        items = self.lines(derivation.first)
        if derivation.abbreviations:
            items += [Remark("with"), *self.lines((*derivation.abbreviations, *laws))]
        if self.numbers is None:
            items += _data_laws([law for law in derivation.laws if law.symbol in materials])
        words = (
            "The relative slope of each current at a temperature T, from the relative slopes of "
            "what the circuit is made of."
        )
        if any(line.together for line in derivation.first):
            words += " These are linear equations that hang together, to be solved at once."
        return Section("Temperature coefficient", words, tuple(items))

    def sensitivities(self) -> Section:
        items: Items = [
            Line(sensitivity(q), value, self.value(value, None, f"S_{q}"))
            for q, value in sorted(
                self.derivation.sensitivities.items(), key=lambda item: _place(item[0])
            )
        ]
        zeros = {z for value in self.derivation.sensitivities.values() for z in _zeros(value)}
        items += [
            Remark(f"at {x} = {zero} the output has an extremum and stands still")
            for x, zero in sorted(zeros)
        ]
        if not self.derivation.sensitivities:
            words = (
                "That to a quantity is TC(I_out) above, with 1 for the coefficient of this "
                "quantity, and 0 for all others and for 1/T."
            )
            return Section("Sensitivity", words, ())
        return Section(
            "Sensitivity",
            "Relative change of the output per relative change of each quantity: for supply, "
            "spread and mismatch.",
            tuple(items),
        )

    def second_order(self) -> Section:
        T, T_0 = positive("T"), positive("T_0")
        current = sp.Function("I_out")
        first, second = coefficient("I_out", 1), coefficient("I_out", 2)
        bends = self.lines(self.derivation.bends)
        if bends:
            bends.insert(0, Remark("with the bend that each resistance gives its drop"))
        series = 1 + first * (T - T_0) + second * (T - T_0) ** 2
        return Section(
            "Second order",
            "The bend that is left where the slope is matched; TC1 of a current is its "
            "temperature coefficient at T_0.",
            (Line(current(T) / current(T_0), series), *self.lines(self.derivation.second), *bends),
        )

    def resistor(self, slot: str) -> Section:
        derivation = self.derivation
        states = {} if self.numbers is None else self.numbers.pinned[slot]
        flat, ptat = states.get(FLAT), states.get(PTAT)
        needed = derivation.needed[slot]
        items: Items = []
        if needed is None:
            items.append(Remark("no closed form for the resistance; its temperature coefficients:"))
        else:
            items += self.lines(needed, derivation.closed_form or (), flat)
        for words, rules, state in (
            ("flat output", derivation.flat, flat),
            ("PTAT output", derivation.ptat, ptat),
        ):
            if slot in rules:
                items += [Remark(words), *self.lines(rules[slot], derivation.first, state)]
            else:
                items.append(Remark(f"{words}: out of reach of this resistor"))
        items += self.perfect(slot)
        (meaning,) = (s.meaning for s in derivation.circuit.slots if s.name == slot)
        return Section(
            f"Resistor {resistance_name(slot)}, {meaning}",
            "What it must be for the output that is wanted, with all else as it is.",
            tuple(items),
        )

    def perfect(self, slot: str) -> Items:
        derivation = self.derivation
        if slot not in derivation.perfect:
            return []
        shown = [*_at_reference(derivation.first), *derivation.bends, *derivation.second]
        general = derivation.perfect[slot]
        states = {} if self.numbers is None else self.numbers.pinned[slot]
        items: Items = []
        if self.numbers is None or TARGET in states:
            words = "perfect resistor, for an output of any TC1 and TC2"
            if self.numbers is not None:
                words = "perfect resistor, for the target"
            items += [Remark(words), *self.lines(general, shown, states.get(TARGET))]
            shown += general
        for name, perfect in ((FLAT, derivation.perfect_flat), (PTAT, derivation.perfect_ptat)):
            second = [e for e in perfect[slot] if not e.symbol.name.startswith("TC1_")]
            lines = self.lines(second, shown, states.get(name))
            ends = bool(lines) and second[-1] not in shown
            words = f"perfect resistor for a {name} output: TC1 by the rule above, "
            if not lines:
                items.append(Remark(words + "TC2 as for any output"))
            else:
                items += [Remark(words + ("and" if ends else "TC2 as above with")), *lines]
        return items

    def special_cases(self) -> Section:
        items: Items = []
        for case in self.derivation.special_cases:
            shorts = " and ".join(f"{resistance_name(slot)} = 0" for slot in case.shorts)
            items.append(Remark(shorts))
            items += self.lines(case.closed_form or (), self.derivation.closed_form or ())
            items += self.lines(case.first, self.derivation.first)
            for words, rules in (("flat", case.flat), ("PTAT", case.ptat)):
                before = (*self.derivation.first, *case.first)
                found = [self.lines(chain, before) for chain in rules.values()]
                # what takes more than one line follows from the rules above
                short = [lines[0] for lines in found if len(lines) == 1]
                items += [Remark(f"{shorts}, {words} output"), *short] if short else []
        return Section("Special cases", "Slots that may be left out are shorts.", tuple(items))

    def legend(self) -> tuple[Row, ...]:
        circuit = self.derivation.circuit
        if self.numbers is not None:
            rows = []
            for name, value in self.numbers.given.items():
                entry = described(name, circuit)
                rows.append(Row(name, entry.unit, entry.meaning, self.numbers.text(value, name)))
            return tuple(sorted(rows, key=lambda row: _place(row.name)))
        sides = [side for pair in self.derivation.loops for side in pair]
        sides += [side for e in self._definitions() for side in (e.symbol, e.expression)]
        names = {s.name for side in sides for s in side.free_symbols} | {"T", "T_0"}
        plain = sorted((n for n in names if quantity_of(n) is None), key=_place)
        rows = [Row(n, described(n, circuit).unit, described(n, circuit).meaning) for n in plain]
        return (*rows, *_families({p.prefix for p in map(quantity_of, names) if p}))

    def _definitions(self) -> Chain:
        derivation = self.derivation
        return (*derivation.abbreviations, *derivation.laws, *derivation.first, *derivation.bends)


def _data_laws(laws: Sequence[Equality]) -> Items:
    """Return the coefficients from TC1 and TC2; one line for the resistances, which are alike."""
    if not laws:
        return []
    resistances = [law for law in laws if not law.symbol.name.removeprefix("TC_")[0].isupper()]
    others = [law for law in laws if law not in resistances]
    words = "from the data's TC1 and TC2; at T_0 it is TC1"
    if len(resistances) > 1:
        name = resistances[0].symbol.name.removeprefix("TC_")
        swaps = {
            sp.Symbol(f"{prefix}_{name}", real=True): sp.Symbol(f"{prefix}_slot", real=True)
            for prefix in ("TC", "TC1", "TC2")
        }
        one = resistances[0]
        resistances = [Equality(one.symbol.xreplace(swaps), one.expression.xreplace(swaps))]
        words += ", for each slot"
    return [Remark(words), *(Line(e.symbol, e.expression) for e in (*resistances, *others))]


def _zeros(value: sp.Expr) -> list[tuple[str, str]]:
    """Return where a sensitivity vanishes because of a single drop."""
    found = []
    for factor in sp.Mul.make_args(sp.numer(value)):
        if isinstance(factor, sp.Add) and len(factor.free_symbols) == 1:
            (x,) = factor.free_symbols
            found += [(x.name, str(root)) for root in sp.solve(factor, x) if root.is_positive]
    return found


def _at_reference(chain: Chain) -> Chain:
    """Return a chain of local coefficients as it stands at T_0."""
    symbols = {s for e in chain for s in (*e.expression.free_symbols, e.symbol)}
    swaps = {
        s: sp.Symbol(s.name.replace("TC_", "TC1_", 1), real=True)
        for s in symbols
        if s.name.startswith("TC_")
    }
    swaps[positive("T")] = positive("T_0")
    return tuple(Equality(e.symbol.xreplace(swaps), e.expression.xreplace(swaps)) for e in chain)


def _place(name: str) -> tuple[int, int, str]:
    """Order the legend: nomenclature, other currents, resistances, coefficients."""
    order = {entry: k for k, entry in enumerate(NOMENCLATURE)}
    if name in order:
        return (0, order[name], name)
    parsed = quantity_of(name)
    return (2 if parsed else 1, 0, name if parsed is None else parsed.of + parsed.prefix)


def _families(prefixes: set[str]) -> list[Row]:
    rows = [
        ("TC(q)", "TC1", "temperature coefficient (dq/dT)/q at T; TC_slot is that of R_slot"),
        ("TC1(q)", "TC1", "first order, (dq/dT)/q at T_0"),
        ("TC2(q)", "TC2", "second order, (d2q/dT2)/(2 q) at T_0"),
    ]
    found = [Row(name, NOMENCLATURE[unit].unit, meaning) for name, unit, meaning in rows]
    if "x" in prefixes:
        found.append(Row("x", "1", "a voltage in units of V_T; x_slot is the drop over R_slot"))
    if "K" in prefixes:
        found.append(
            Row(
                "K",
                NOMENCLATURE["TC2"].unit,
                "second order of a drop in units of V_T at a current without second order",
            )
        )
    if "w" in prefixes:
        found.append(Row("w", "1", "share of a current in a sum"))
    return [*found, Row("S(q)", "1", "d ln I_out / d ln q")]
