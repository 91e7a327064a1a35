"""Several outputs on one reference branch: what each has of its own, and what they share."""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from tcopt.errors import InputError
from tcopt.study.circuit import CircuitChoices
from tcopt.study.gate import INTERNAL, quoted
from tcopt.study.question import Search
from tcopt.study.spread import Spread
from tcopt.study.study import Study
from tcopt.units import shown

__all__ = ["CascadeStudy", "key_in_cascade", "single_studies"]

_TOPOLOGY = "degenerated mirror"
_SLOT = "output"
_OWN = {
    "area_ratio": "circuit.area_ratio",
    "output_voltage": "circuit.output_voltage",
    "target": "target",
    "resistor": f"resistors.{_SLOT}",
}
"""Keys of an output, and where a study of one output has them."""
_TOP = ("title", "process", "range", "circuit", "outputs", "resistors", "search")
_CIRCUIT = tuple(
    key
    for key in CircuitChoices.model_fields
    if f"circuit.{key}" not in _OWN.values()
    and key not in {"current_ratio", "mirror_ratio"}
    and not key.startswith("reference_")
)
_SINGLE_ONLY = {
    "target": "a table [outputs.NAME.target] for each output",
    "spread": "it in a study of one output",
    "trim": "it in a study of one output",
    "layout": "it in a study of one output",
}
_HEATED = (
    "range.thermal_resistance", "it with several outputs", "it in a study of one output",
)  # fmt: skip
_RATIO = (
    "circuit.current_ratio", "it with several outputs, which have a target each",
    "input_current or supply",
)  # fmt: skip
_TWO = "a table [outputs.NAME] for each of at least two outputs"
_NAME = re.compile(r"[\w-]{1,60}")


@dataclass(frozen=True)
class CascadeStudy:
    """One question about several outputs of one reference branch.

    Attributes
    ----------
    title : of the whole
    outputs : name -> the study of this output, as if there were no other; they differ in
        title, target, area ratio, output voltage and the resistor 'output' alone
    path : the file it was read from; it does not count in comparisons

    Raises
    ------
    InputError
        If there are fewer than two outputs, if they do not share the rest, or if they are
        no outputs of a degenerated mirror.
    """

    title: str
    outputs: Mapping[str, Study]
    path: Path | None = field(default=None, compare=False)

    def __post_init__(self) -> None:
        if len(self.outputs) < 2:
            raise InputError(f"outputs: found {len(self.outputs)}; accepted: {_TWO}")
        for name, study in self.outputs.items():
            made = study.circuit
            if made.topology != _TOPOLOGY:
                raise _other_topology(made.topology)
            if made.current_ratio is not None:
                raise _refuse(*_RATIO)
            if study.search.purpose != Search().purpose:
                found = f"{shown(study.search.purpose)} with several outputs"
                raise _refuse("search.for", found, repr(Search().purpose))
            if study.range.thermal_resistance is not None:
                raise _refuse(*_HEATED)
            for key, usual in (("spread", Spread()), ("trim", None), ("layout", None)):
                if getattr(study, key) != usual:
                    raise _refuse(key, "it with several outputs", _SINGLE_ONLY[key])
            for key, ours, theirs in _shared_parts(self.shared, study):
                if ours != theirs:
                    found = f"another {key} than in {quoted(next(iter(self.outputs)))}"
                    raise _refuse(f"outputs.{quoted(name)}", found, "outputs that share it")

    @property
    def shared(self) -> Study:
        """A study that has all that the outputs share: that of the first."""
        return next(iter(self.outputs.values()))

    @property
    def is_finished(self) -> bool:
        """Whether nothing is left to design in any output."""
        return all(study.is_finished for study in self.outputs.values())


def _shared_parts(one: Study, other: Study) -> Iterable[tuple[str, Any, Any]]:
    for key in ("process", "range", "search"):
        yield key, getattr(one, key), getattr(other, key)
    for key in _CIRCUIT:
        yield f"circuit.{key}", getattr(one.circuit, key), getattr(other.circuit, key)
    ours, theirs = (
        {name: slot for name, slot in study.resistors.items() if name != _SLOT}
        for study in (one, other)
    )
    yield "shared resistor", ours, theirs


def key_in_cascade(name: str, key: str) -> str:
    """Return the key of a study of one output as it stands in the file of several.

    >>> key_in_cascade("small", "circuit.area_ratio[1]"), key_in_cascade("small", "range.to")
    ('outputs.small.area_ratio[1]', 'range.to')
    """
    for own, single in _OWN.items():
        rest = key.removeprefix(single)
        if rest != key and rest[:1] in {"", ".", "["}:
            return f"outputs.{quoted(name)}.{own}{rest}"
    return key


def _refuse(key: str, found: str, accepted: str) -> InputError:
    return InputError(f"{key}: found {found}; accepted: {accepted}")


def _other_topology(topology: object) -> InputError:
    found = f"{shown(topology)} with several outputs"
    return _refuse("circuit.topology", found, repr(_TOPOLOGY))


def _only(table: Mapping[str, Any], keys: Iterable[str], where: str = "") -> None:
    for key in table:
        if key not in keys:
            raise _refuse(f"{where}{quoted(key)}", "an unknown key", ", ".join(keys))


def single_studies(data: Mapping[str, Any]) -> dict[str, dict[str, Any]]:
    """Return the tables of one study per output, from those of a study of several.

    Parameters
    ----------
    data : the tables of a file that has 'outputs'

    Raises
    ------
    InputError
        If a key is in the wrong place, unknown, or missing.
    """
    for key, accepted in _SINGLE_ONLY.items():
        if key in data:
            raise _refuse(key, "it beside [outputs]", accepted)
    _only({key: data[key] for key in data if not key.startswith(INTERNAL)}, _TOP)
    outputs = data["outputs"]
    if not isinstance(outputs, Mapping):
        raise _refuse("outputs", shown(outputs), _TWO)
    if len(outputs) < 2:
        only = f"only {quoted(next(iter(outputs)))}" if outputs else "an empty table"
        raise _refuse("outputs", only, _TWO)
    _well_named(outputs)
    circuit, resistors = data.get("circuit", {}), data.get("resistors", {})
    if isinstance(data.get("range"), Mapping) and "thermal_resistance" in data["range"]:
        raise _refuse(*_HEATED)  # before it asks for voltages
    if isinstance(circuit, Mapping):
        _shared_circuit(circuit)
    if isinstance(resistors, Mapping) and _SLOT in resistors:
        accepted = "a table [outputs.NAME.resistor] for each output"
        raise _refuse(f"resistors.{_SLOT}", "it beside [outputs]", accepted)
    found: dict[str, dict[str, Any]] = {}
    for name, own in outputs.items():
        where = f"outputs.{quoted(name)}"
        if not isinstance(own, Mapping):
            raise _refuse(where, shown(own), f"a table with the keys {', '.join(_OWN)}")
        _only(own, _OWN, f"{where}.")
        if "target" not in own:
            raise _refuse(f"{where}.target", "nothing", f"a table [{where}.target]")
        found[name] = _single(data, own)
        if isinstance(data.get("title"), str):
            found[name]["title"] = f"{data['title']}: {name}"
    return found


def _well_named(outputs: Mapping[str, Any]) -> None:
    seen: dict[str, str] = {}
    for name in outputs:
        # the names become parts of file names, and not every file system tells case
        if not _NAME.fullmatch(name):
            accepted = "a name of letters, digits, '_' and '-', at most 60 characters"
            raise _refuse("outputs", f"an output {shown(name)}", accepted)
        twin = seen.setdefault(name.casefold(), name)
        if twin != name:
            raise _refuse(
                "outputs", f"{twin} and {name}", "names that differ in more than upper case"
            )


def _shared_circuit(circuit: Mapping[str, Any]) -> None:
    for key in ("area_ratio", "output_voltage"):
        if key in circuit:
            accepted = f"{key} in each of the tables [outputs.NAME]"
            raise _refuse(f"circuit.{key}", "it beside [outputs]", accepted)
    if circuit.get("topology", _TOPOLOGY) != _TOPOLOGY:
        raise _other_topology(circuit["topology"])
    if "current_ratio" in circuit:
        raise _refuse(*_RATIO)
    _only(circuit, _CIRCUIT, "circuit.")


def _single(data: Mapping[str, Any], own: Mapping[str, Any]) -> dict[str, Any]:
    """Return the tables of one output's study: what is shared, and its own."""
    made = {key: value for key, value in data.items() if key != "outputs"}
    for key, place in _OWN.items():
        if key not in own:
            continue
        table, _, inner = place.partition(".")
        if not inner:
            made[table] = own[key]
        elif isinstance(made.get(table, {}), Mapping):
            made[table] = {**made.get(table, {}), inner: own[key]}
    return made
