"""A derivation as a Python module of its own, which needs numpy and scipy and not this project."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass

import sympy as sp
from sympy.printing.numpy import NumPyPrinter
from sympy.printing.precedence import precedence

from tcopt.circuits.closed_form import Kind, Root, need
from tcopt.derive.chain import Equality, groups
from tcopt.derive.derivation import Derivation
from tcopt.derive.names import coefficient, described, positive
from tcopt.derive.numbers import Numbers
from tcopt.derive.reading import plainly
from tcopt.derive.temperature import saturation_growth
from tcopt.derive.text import equation_of
from tcopt.laws import bipolar, resistor
from tcopt.symbols import resistance_name

__all__ = ["python_of"]


class _Printer(NumPyPrinter):  # type: ignore[misc]
    """Writes ``1/T`` for sympy's ``T**(-1.0)``."""

    def _print_Pow(self, expr: sp.Pow, rational: bool = False) -> str:
        if expr.exp == -1:
            return f"1/{self.parenthesize(expr.base, precedence(expr))}"
        return str(super()._print_Pow(expr, rational=rational))


_PRINTER = _Printer({"fully_qualified_modules": False, "precision": 17})
_LOG_I_S = sp.Symbol("log_I_S", real=True)
_T, _T_0, _I_S = positive("T"), positive("T_0"), positive("I_S")
_D = sp.Symbol("d", real=True)
_VOLT_PER_KELVIN = sp.Symbol("VOLT_PER_KELVIN", positive=True)
_NUMPY = ("exp", "log", "sqrt")
_INDENT = "    "


@dataclass(frozen=True)
class _Statement:
    """Assigns one or several names; ``needs``: names that must have been assigned before."""

    names: tuple[str, ...]
    needs: frozenset[str]
    lines: tuple[str, ...]


def python_of(what: Derivation | Numbers) -> str:
    """Return the source of a module: currents, output, its temperature coefficient, the needs.

    Without closed form it has the loops and the temperature coefficient as
    functions of the currents, which the caller finds.
    """
    derivation = what.derivation if isinstance(what, Numbers) else what
    if derivation.roots is None:
        return _Implicit(derivation).source()
    source = _Explicit(derivation).source()
    return source + _Explicit(derivation).design(what) if isinstance(what, Numbers) else source


class _Source:
    """What both kinds of module share: their head, and statements in the order of need."""

    def __init__(self, derivation: Derivation) -> None:
        self.derivation = derivation
        sides = [side for pair in derivation.loops for side in pair]
        found = {s.name for side in sides for s in side.free_symbols}
        self.quantities = sorted(found - {*derivation.solved_for, "V_T", "I_S"})
        self.has_junction = "I_S" in found

    def head(self, body: str) -> str:
        derivation = self.derivation
        feed = "" if derivation.feed == "self" else f", input: {derivation.feed}"
        shorts = "".join(f", {resistance_name(slot)} = 0" for slot in derivation.shorts)
        functions = [name for name in _NUMPY if f"{name}(" in body]
        imports = [f"from scipy.special import {name}" for name in _specials(body)]
        constants = ["from scipy.constants import e, k"] if "VOLT_PER_KELVIN" in body else []
        lines = [
            f'"""{derivation.circuit.topology}{feed}{shorts}.',
            "",
            f"{derivation.circuit.summary[0].upper()}{derivation.circuit.summary[1:]}.",
            "Derived from the loops",
            "",
            *(f"    {equation_of(left, right)}" for left, right in derivation.loops),
            "",
            "All quantities are in SI, temperatures in kelvin.",
            '"""',
            "",
            *(["from dataclasses import dataclass", ""] if "@dataclass" in body else []),
            *(["import numpy as np"] if "np." in body else []),
            *([f"from numpy import {', '.join(functions)}"] if functions else []),
            *constants,
            *imports,
            *(["", "VOLT_PER_KELVIN = k / e"] if constants else []),
        ]
        return "\n".join([*lines, "", "", ""])

    def described(self, name: str) -> str:
        entry = described(name, self.derivation.circuit)
        return f"{entry.meaning} [{entry.unit}]"


def _specials(body: str) -> list[str]:
    found = [name for name in ("lambertw", "wrightomega") if f"{name}(" in body]
    return [", ".join(found)] if found else []


def _text(expression: sp.Expr) -> str:
    return str(_PRINTER.doprint(expression))


def _needed(statements: Sequence[_Statement], wanted: Iterable[str]) -> list[str]:
    """Return the lines that lead to the wanted names, in order."""
    missing = set(wanted)
    kept = []
    for statement in reversed(statements):
        if missing & set(statement.names):
            missing = (missing - set(statement.names)) | statement.needs
            kept.append(statement)
    return [line for statement in reversed(kept) for line in statement.lines]


def _chain_statements(
    lines: Iterable[Equality], own: Mapping[sp.Expr, sp.Symbol]
) -> list[_Statement]:
    found = []
    for group in groups(lines):
        if len(group) == 1:
            (line,) = group
            owned = line.expression.xreplace(own)
            needs = {s.name for s in (line.expression + owned).free_symbols}
            text = _text(owned)
            found.append(
                _Statement((line.symbol.name,), frozenset(needs), (f"{line.symbol.name} = {text}",))
            )
            continue
        symbols = [line.symbol for line in group]
        equations = [line.symbol - line.expression for line in group]
        matrix, right = sp.linear_eq_to_matrix(equations, symbols)
        names = tuple(symbol.name for symbol in symbols)
        needs = {s.name for e in equations for s in e.free_symbols} - set(names)
        rows = [", ".join(_text(item.xreplace(own)) for item in row) for row in matrix.tolist()]
        found.append(
            _Statement(
                names,
                frozenset(needs),
                (
                    f"{', '.join(names)} = np.linalg.solve(",
                    "    [",
                    *(f"        [{row}]," for row in rows),
                    "    ],",
                    f"    [{', '.join(_text(item.xreplace(own)) for item in right)}],",
                    ")",
                ),
            )
        )
    return found


def _function(signature: str, summary: str, body: Iterable[str]) -> str:
    lines = "\n".join(_INDENT + line for line in body)
    return f'def {signature}:\n{_INDENT}"""{summary}"""\n{lines}'


class _Explicit(_Source):
    """A module with closed forms."""

    @property
    def parameters(self) -> list[str]:
        """Names of all that the circuit is made of."""
        names = ["T_0", *self.quantities, *(["I_S", "eta", "V_G0"] if self.has_junction else [])]
        return names + [coefficient(q, k).name for q in self.derivation.given for k in (1, 2)]

    def source(self) -> str:
        derivation = self.derivation
        names = derivation.solved_for
        returned = names[0] + "," if len(names) == 1 else ", ".join(names)
        output = derivation.first[-1].symbol.name
        functions = [
            self.values(),
            _function(
                "currents(T, v)",
                f"Return {', '.join(names)} [A] at temperatures T [K], for `Values` v.",
                [*_needed([*self.at_T(), *self.solved()], names), f"return ({returned})"],
            ),
            _function(
                "output_current(T, v)",
                "Return the output current [A] at temperatures T [K], for `Values` v.",
                ["return currents(T, v)[-1]"],
            ),
            _function(
                "temperature_coefficient(T, v)",
                "Return (dI_out/dT)/I_out [1/K] at temperatures T [K], for `Values` v.",
                [*_needed([*self.at_T(), *self.rates()], [output]), f"return {output}"],
            ),
            *(self.need(slot) for slot in derivation.slots),
        ]
        body = "\n\n\n".join(functions) + "\n"
        return self.head(body) + body

    def values(self) -> str:
        """Return the class that holds what the circuit is made of."""
        lines = [
            "@dataclass(frozen=True)",
            "class Values:",
            '    """What the circuit is made of; resistances, currents and voltages at T_0."""',
            "",
        ]
        fields = [f"    {name}: float  # {self.described(name)}" for name in self.parameters]
        return "\n".join([*lines, *fields])

    def at_T(self) -> list[_Statement]:
        """Return statements for V_T, I_S and all quantities at the temperature T."""
        V_T = bipolar.thermal_voltage(_T, _VOLT_PER_KELVIN)
        growth = saturation_growth(_VOLT_PER_KELVIN).xreplace(self.own)
        found = [
            _Statement((_D.name,), frozenset(), (f"{_D} = T - v.T_0",)),
            _Statement(("V_T",), frozenset(), (f"V_T = {_text(V_T)}",)),
            _Statement(
                (_LOG_I_S.name,), frozenset(), (f"{_LOG_I_S} = log(v.I_S) + {_text(growth)}",)
            ),
        ]
        for name in self.quantities:
            text, needs = f"v.{name}", set()
            if name in self.derivation.fitted:
                ratio = resistor.ratio(_T_0 + _D, _T_0, coefficient(name, 1), coefficient(name, 2))
                text += f"*({_text(ratio.xreplace(self.own))})"
                needs = {_D.name}
            found.append(_Statement((name,), frozenset(needs), (f"{name} = {text}",)))
        return found

    @property
    def own(self) -> dict[sp.Expr, sp.Symbol]:
        """Parameters that are not quantities of the loops, as attributes of the values."""
        names = [name for name in self.parameters if name not in self.quantities]
        symbols = [s for name in names for s in (positive(name), sp.Symbol(name, real=True))]
        return {_T - _T_0: _D} | {symbol: sp.Symbol(f"v.{symbol.name}") for symbol in symbols}

    def solved(self) -> list[_Statement]:
        return [_root_statement(root) for root in self.derivation.roots or ()]

    def rates(self) -> list[_Statement]:
        """Return statements from the currents to their temperature coefficients."""
        derivation = self.derivation
        names = derivation.solved_for
        left = names[0] + "," if len(names) == 1 else ", ".join(names)
        found = [_Statement(names, frozenset(), (f"{left} = currents(T, v)",))]
        chain = (*derivation.abbreviations, *derivation.laws, *derivation.first)
        return found + _chain_statements(chain, self.own)

    def need(self, slot: str) -> str:
        found = need(self.derivation.circuit, self.derivation.feed, slot)
        signature = f"needed_resistance_{slot}(T, I_out, v)"
        summary = f"Return the {resistance_name(slot)} [ohm] that gives I_out [A] at T [K]."
        if found is None:
            return _function(
                signature,
                summary,
                [f'raise NotImplementedError("no closed form for {resistance_name(slot)}")'],
            )
        resistance = _in_log_I_S(found.resistance)
        names = {s.name for s in resistance.free_symbols}
        statements = [*self.at_T(), *map(_root_statement, found.roots)]
        returned = f"return {_text(sp.factor(resistance))}"
        return _function(signature, summary, [*_needed(statements, names), returned])

    def design(self, numbers: Numbers) -> str:
        """Return the values of a design as an instance, where they are complete."""
        if not set(self.parameters) <= numbers.given.keys():
            return ""
        fields = [f"    {name}={float(numbers.given[name])!r}," for name in self.parameters]
        return "\n".join(["", "", "DESIGN = Values(", *fields, ")", ""])


def _in_log_I_S(expression: sp.Expr) -> sp.Expr:
    """Write the logarithm of I_S as a symbol: I_S itself underflows when cold."""
    return sp.expand_log(expression, force=True).subs(sp.log(_I_S), _LOG_I_S)


def _root_statement(root: Root) -> _Statement:
    """Return the statement that finds one current; the forms are `closed_form.Root`'s."""
    A, B, C = (_in_log_I_S(part) for part in (root.A, root.B, root.C))
    name = root.unknown.name
    needs = frozenset(s.name for part in (A, B, C) for s in part.free_symbols)
    if root.kind is Kind.LINEAR:
        return _Statement((name,), needs, (f"{name} = {_text(sp.factor(-C / B))}",))
    free = sp.expand(-C / A)
    if root.kind is Kind.EXPONENTIAL:
        return _Statement((name,), needs, (f"{name} = exp({_text(free)})",))
    lines = [f"free = {_text(free)}"]
    if root.kind is Kind.OMEGA:
        lines += [
            f"share = {_text(sp.factor(B / A))}",
            'with np.errstate(divide="ignore"):  # log(0) of a short is -inf, wrightomega of it 0',
            f"    {name} = exp(free - wrightomega(log(share) + free))",
        ]
    else:
        lines += [
            f"share = {_text(sp.factor(-B / A))}",
            f"{name} = -lambertw(-exp(log(share) + free), -1).real / share",
        ]
    return _Statement((name,), needs, tuple(lines))


class _Implicit(_Source):
    """A module without closed forms: functions of the currents."""

    def source(self) -> str:
        derivation = self.derivation
        residuals = [plainly(left - right) for left, right in derivation.loops]
        chain = (*derivation.abbreviations, *derivation.laws, *derivation.first)
        own = {coefficient(q): coefficient(q) for q in derivation.fitted}
        chain = tuple(line for line in chain if line.symbol not in own)
        V_T = bipolar.thermal_voltage(_T, _VOLT_PER_KELVIN)
        at_T = _Statement(("V_T",), frozenset({"T"}), (f"V_T = {_text(V_T)}",))
        statements = [at_T, *_chain_statements(chain, {})]
        output = derivation.first[-1].symbol.name
        made = {name for statement in statements for name in statement.names}
        lines = _needed(statements, [output])
        used = {s.name for line in chain for s in line.expression.free_symbols} - made | {"T"}
        leaves = {s.name for r in residuals for s in r.free_symbols} - {"V_T"} | {"T"}
        functions = [
            self.of_all(
                "residuals",
                "Return the loops [V or A], which are zero where the currents are right.",
                leaves,
                [*at_T.lines, f"return ({', '.join(map(_text, residuals))},)"],
            ),
            self.of_all(
                "temperature_coefficient",
                "Return (dI_out/dT)/I_out [1/K] at the temperature T at which all else is taken.",
                used,
                [*lines, f"return {output}"],
            ),
        ]
        body = "\n\n\n".join(functions) + "\n"
        return self.head(body) + body

    def of_all(self, name: str, summary: str, arguments: set[str], body: list[str]) -> str:
        names = sorted(arguments)
        described = [f"{a} : {self.described(a)}" for a in names]
        doc = "\n".join([summary, "", *(_INDENT + line for line in described), _INDENT])
        return _function(f"{name}(*, {', '.join(names)})", doc, body)
