"""A study as the TOML text that reads back as an equal study."""

from __future__ import annotations

import os
from pathlib import Path
from typing import Any

import tomlkit

from tcopt.errors import InputError
from tcopt.study.cascade import CascadeStudy
from tcopt.study.choices import Choice, Span
from tcopt.study.layout import Layout
from tcopt.study.question import FixedSlot, OpenSlot, Search
from tcopt.study.spread import Insertion, Spread, Trim
from tcopt.study.study import Study
from tcopt.study.target import Limit
from tcopt.units import exact

__all__ = ["study_text"]

_WIDEST = 80


def _from(folder: Path, path: Path) -> str:
    path = path.resolve()
    try:
        return Path(os.path.relpath(path, folder.resolve())).as_posix()
    except ValueError:  # another drive
        return path.as_posix()


def _number(value: float) -> int | float:
    return int(value) if value.is_integer() and abs(value) < 1e15 else value


def _choice(choice: Choice, unit: str) -> Any:
    def written(value: float) -> Any:
        return _number(value) if unit == "1" else exact(value, unit)

    if isinstance(choice, Span):
        ends = tomlkit.inline_table()
        ends.update({"from": written(choice.low), "to": written(choice.high)})
        return ends
    return written(choice[0]) if len(choice) == 1 else [written(value) for value in choice]


def _range(study: Study) -> dict[str, Any]:
    over = study.range
    ends = (
        {"grade": over.grade}
        if over.grade
        else {"from": exact(over.low, "K"), "to": exact(over.high, "K")}
    )
    table: dict[str, Any] = {**ends, "reference": exact(over.reference, "K")}
    if over.thermal_resistance is not None:
        table["thermal_resistance"] = exact(over.thermal_resistance, "K/W")
    return table


def _circuit(study: Study) -> dict[str, Any]:
    given = study.circuit
    table: dict[str, Any] = {"topology": given.topology}
    if given.transistor is not None:
        table["transistor"] = given.transistor.name
    for key, unit in (("input_current", "A"), ("current_ratio", "1")):
        choice: Choice | None = getattr(given, key)
        if choice is not None:
            table[key] = _choice(choice, unit)
    for key, unit in (
        ("supply", "V"), ("reference_voltage", "V"), ("input_tc1", "1/K"), ("input_tc2", "1/K^2"),
        ("reference_tc1", "1/K"), ("reference_tc2", "1/K^2"), ("mirror_drop", "V"),
    ):  # fmt: skip
        value: float | None = getattr(given, key)
        if value:
            table[key] = exact(value, unit)
    if given.effects:
        table["effects"] = list(given.effects)
    if given.output_voltage is not None:
        table["output_voltage"] = exact(given.output_voltage, "V")
    if given.mirror_transistor is not None:
        table["mirror_transistor"] = given.mirror_transistor.name
    for key, usual in (("base_current", "from input"), ("well", "common")):
        if getattr(given, key) != usual:
            table[key] = getattr(given, key)
    for key in given.circuit.choices:
        table[key] = _choice(getattr(given, key), "1")
    return table


def _limit(limit: Limit) -> str:
    return exact(limit.value, "1/K" if limit.kind == "box" else "1")


def _target(study: Study, folder: Path) -> dict[str, Any]:
    target = study.target
    table: dict[str, Any] = {"shape": target.shape}
    if target.curve is not None:
        if target.file is None:
            raise InputError("target.file: found nothing; accepted: a curve read from a file")
        table["file"] = _from(folder, target.file)
    for key, unit in (
        ("current", "A"), ("slope", "1/K"), ("inversion_coefficient", "1"),
        ("transconductance", "S"), ("slew_rate", "V/s"), ("capacitance", "F"),
        ("capacitor_tc1", "1/K"), ("capacitor_tc2", "1/K^2"),
    ):  # fmt: skip
        value: float | None = getattr(target, key)
        if value is not None:
            table[key] = _number(value) if unit == "1" else exact(value, unit)
    for key in ("material", "transistor"):
        entry = getattr(target, key)
        if entry is not None:
            table[key] = entry.name
    if target.limit is not None:
        table["limit"] = _limit(target.limit)
    return table


def _slot(slot: FixedSlot | OpenSlot) -> dict[str, Any]:
    if isinstance(slot, FixedSlot):
        parts = tomlkit.array()
        for part in slot.parts:
            entry = tomlkit.inline_table()
            entry.update({"material": part.material.name, "value": exact(part.value, "ohm")})
            for key in ("width", "length"):
                if (size := getattr(part, key)) is not None:
                    entry[key] = exact(size, "m")
            for key in ("series", "parallel"):
                if (count := getattr(part, key)) != 1:
                    entry[key] = count
            parts.append(entry)
        return {"parts": parts.multiline(len(slot.parts) > 1), "join": slot.join}
    names = tomlkit.array()
    names.extend(material.name for material in slot.materials)
    names.multiline(len(names.as_string()) > _WIDEST)
    return {"materials": names, "pieces": slot.pieces, "join": slot.join}


def _search(search: Search) -> dict[str, Any]:
    table: dict[str, Any] = {"digits": search.digits, "show": search.show}
    usual = Search()
    if search.purpose != usual.purpose:
        table["for"] = search.purpose
    if search.sigma != usual.sigma:
        table["sigma"] = _number(search.sigma)
    return table


_LAYOUT_UNITS = {
    "standard": None, "tolerance": "1", "grid": "m", "unit": None, "segment": "m", "longest": "m",
    "least_squares": "1", "most_segments": None, "spacing": "m", "mismatch": "1",
    "area_limit": "m^2", "front": None,
}  # fmt: skip


def _layout(layout: Layout) -> dict[str, Any]:
    given = {
        key: value for key, value in layout if value is not None and key in layout.model_fields_set
    }
    table: dict[str, Any] = {}
    for key, value in given.items():
        unit = _LAYOUT_UNITS[key]
        if key == "least_squares":
            table[key] = _number(value)
        else:
            table[key] = value if unit is None else exact(value, unit)
    return table


_SPREAD_RATIOS = ("supply", "input_current", "reference_voltage", "mirror_ratio")


def _spread(spread: Spread) -> dict[str, Any]:
    table: dict[str, Any] = {
        "samples": spread.samples,
        "seed": spread.seed,
        "sampling": spread.sampling,
        "sigma": _number(spread.sigma),
        "yield": exact(spread.wanted_yield, "1"),
    }
    given = ((name, getattr(spread, name)) for name in _SPREAD_RATIOS)
    return table | {name: exact(value, "1") for name, value in given if value is not None}


def _insertion(insertion: Insertion) -> dict[str, Any]:
    table: dict[str, Any] = {
        "temperature": exact(insertion.temperature, "K"),
        "scales": insertion.scales,
    }
    if insertion.material is not None:
        table["material"] = insertion.material
    table["range"] = exact(insertion.reach, "1")
    if insertion.bits is not None:
        table["bits"] = insertion.bits
    for key in ("step", "measurement_error"):
        if (value := getattr(insertion, key)) is not None:
            table[key] = exact(value, "1")
    if insertion.temperature_error is not None:
        table["temperature_error"] = f"{insertion.temperature_error!r} K"
    return table


def _trim(trim: Trim) -> dict[str, Any]:
    tables = {"first": _insertion(trim.first)}
    return tables if trim.second is None else {**tables, "second": _insertion(trim.second)}


def _output(study: Study, folder: Path) -> dict[str, Any]:
    """Return what an output has of its own among several."""
    made = study.circuit
    table: dict[str, Any] = {"area_ratio": _choice(made.area_ratio, "1")}
    if made.output_voltage is not None:
        table["output_voltage"] = exact(made.output_voltage, "V")
    table["target"] = _target(study, folder)
    if "output" in study.resistors:
        table["resistor"] = _slot(study.resistors["output"])
    return table


def _cascade(question: CascadeStudy, folder: Path) -> dict[str, Any]:
    shared = question.shared
    circuit = _circuit(shared)
    for key in ("area_ratio", "output_voltage"):
        circuit.pop(key, None)
    slots = {name: _slot(slot) for name, slot in shared.resistors.items() if name != "output"}
    return {
        "circuit": circuit,
        "outputs": {name: _output(study, folder) for name, study in question.outputs.items()},
        **({"resistors": slots} if slots else {}),
        "search": _search(shared.search),
    }


def _single(study: Study, folder: Path) -> dict[str, Any]:
    return {
        "circuit": _circuit(study),
        "target": _target(study, folder),
        "resistors": {name: _slot(slot) for name, slot in study.resistors.items()},
        "search": _search(study.search),
        **({"spread": _spread(study.spread)} if study.spread != Spread() else {}),
        **({"trim": _trim(study.trim)} if study.trim is not None else {}),
        **({"layout": _layout(study.layout)} if study.layout is not None else {}),
    }


def study_text(study: Study | CascadeStudy, folder: str | Path) -> str:
    """Return the TOML text of a study; read from a file in ``folder`` it gives an equal study.

    Parameters
    ----------
    study : a study whose process (and curve, if any) came from a file; of one output or of
        several
    folder : where the text will stand; the process's path is written relative to it

    Raises
    ------
    InputError : the process or the curve came from no file, so that no path can name it
    """
    shared = study.shared if isinstance(study, CascadeStudy) else study
    if shared.process.path is None:
        raise InputError("process: found no file; accepted: a process read from a file")
    folder = Path(folder)
    parts = _cascade(study, folder) if isinstance(study, CascadeStudy) else _single(study, folder)
    return tomlkit.dumps(
        {
            "title": study.title,
            "process": _from(folder, shared.process.path),
            "range": _range(shared),
            **parts,
        }
    )
