"""One question, whole and consistent."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from pathlib import Path
from typing import Any

from pydantic import Field, ValidationInfo, field_validator, model_validator

from tcopt.study.choices import Choice, is_single, scaled
from tcopt.study.circuit import CircuitChoices
from tcopt.study.fields import Title, refusal
from tcopt.study.gate import INTERNAL, Model, quoted
from tcopt.study.layout import Layout
from tcopt.study.process import Material, Process
from tcopt.study.question import (
    FixedSlot,
    OpenSlot,
    ResistorSlot,
    Search,
    TemperatureRange,
)
from tcopt.study.spread import OUTPUT_MIRROR, Insertion, Spread, Trim
from tcopt.study.target import Target
from tcopt.units import format_quantity, shown

__all__ = ["Study"]


class Study(Model):
    """A circuit in a process, what its output owes, and which resistors are open.

    ``path`` is the file it was read from; it does not count in comparisons.
    """

    title: Title
    process: Process = Field(description="the path of the process's file, from this file's folder")
    range: TemperatureRange = Field(description="a table [range]")
    circuit: CircuitChoices = Field(description="a table [circuit]")
    target: Target = Field(description="a table [target]")
    resistors: dict[str, ResistorSlot] = Field(default_factory=dict)
    search: Search = Field(default_factory=Search)
    spread: Spread = Field(default_factory=Spread)
    trim: Trim | None = None
    layout: Layout | None = None
    path: Path | None = Field(default=None, validation_alias=f"{INTERNAL}path")

    @property
    def is_finished(self) -> bool:
        """Whether nothing is left to design: every slot has parts, every choice one value."""
        choices = (
            self.circuit.input_current,
            self.circuit.current_ratio,
            self.circuit.area_ratio,
            self.circuit.mirror_ratio,
        )
        fixed = all(isinstance(slot, FixedSlot) for slot in self.resistors.values())
        return fixed and all(is_single(choice) for choice in choices)

    @property
    def target_current(self) -> float:
        """The target at the study's reference [A]."""
        if self.target.current is not None:
            return self.target.current
        # A curve alone states none, and how it runs between its points is told in one place.
        import numpy as np  # noqa: PLC0415

        from tcopt.targets import target_current  # noqa: PLC0415

        reference = self.range.reference
        return float(target_current(self.target, reference).current(np.array([reference]))[0])

    @property
    def input_currents(self) -> Choice | None:
        """The given input current, or what may be chosen [A]; None where none is given."""
        if self.circuit.current_ratio is not None:
            return scaled(self.circuit.current_ratio, self.target_current)
        return self.circuit.input_current

    @field_validator("resistors")
    @classmethod
    def _menu_is_the_process(
        cls, value: dict[str, FixedSlot | OpenSlot], info: ValidationInfo
    ) -> dict[str, FixedSlot | OpenSlot]:
        if "process" not in info.data:
            return value
        everything = {"materials": tuple(info.data["process"].materials.values())}
        return {
            name: slot.model_copy(update=everything)
            if isinstance(slot, OpenSlot) and not slot.materials
            else slot
            for name, slot in value.items()
        }

    @model_validator(mode="after")
    def _slots_of_the_circuit(self) -> Study:
        slots = self.circuit.circuit.slots_for(self.circuit.feed)
        accepted = ", ".join(f"{slot.name} ({slot.meaning})" for slot in slots)
        for name in self.resistors:
            if name not in {slot.name for slot in slots}:
                raise refusal("an unknown slot", accepted, f"resistors.{quoted(name)}")
        for slot in slots:
            if not slot.optional and slot.name not in self.resistors:
                raise refusal(
                    "nothing",
                    f"a table with parts, or with materials to choose among: {slot.meaning}",
                    f"resistors.{slot.name}",
                )
        return self

    @model_validator(mode="after")
    def _layout_has_its_data(self) -> Study:
        layout = self.layout
        if layout is None or layout.standard is not None:
            return self
        wanted = {"sheet_resistance": "sizes are drawn", "min_width": "sizes are drawn"}
        if layout.mismatch is not None:
            wanted["matching"] = "layout.mismatch sets the area"
        for key, material in self._materials():
            if not key.startswith("resistors."):
                continue
            for field, why in wanted.items():
                if getattr(material, field) is None:
                    raise refusal(
                        f"{material.name!r}, which has no {field}",
                        f"materials with a {field}, since {why}",
                        key,
                    )
        return self

    @model_validator(mode="after")
    def _stays_positive(self) -> Study:
        given = self.circuit
        about = self.range.reference
        for key, tc1, tc2, reference in (
            *((key, m.tc1, m.tc2, m.reference) for key, m in self._materials()),
            ("circuit.input_tc1", given.input_tc1, given.input_tc2, about),
            ("circuit.reference_tc1", given.reference_tc1, given.reference_tc2, about),
            ("target.slope", self.target.slope or 0.0, 0.0, about),
            (
                "target.capacitor_tc1",
                self.target.capacitor_tc1 or 0.0,
                self.target.capacitor_tc2 or 0.0,
                about,
            ),
        ):
            worst = _where_smallest(tc1, tc2, reference, self.range)
            d = worst - reference
            factor = 1 + tc1 * d + tc2 * d * d
            if not 0 < factor < math.inf:
                raise refusal(
                    f"{factor:.3g} times its value at {format_quantity(reference, 'K')} when at "
                    f"{format_quantity(worst, 'K')}",
                    "what stays above zero over the whole range",
                    key,
                )
        return self

    @model_validator(mode="after")
    def _power_is_known(self) -> Study:
        if self.range.thermal_resistance is None:
            return self
        own = self.circuit.circuit.rests_at_zero
        key = "supply" if own else "output_voltage"
        if getattr(self.circuit, key) is None:
            what = "supply of its branches" if own else "voltage of the output node"
            raise refusal("nothing", f"the {what}, for the power that heats it", f"circuit.{key}")
        return self

    @model_validator(mode="after")
    def _trim_has_a_hold(self) -> Study:
        for name in ("first", "second"):
            insertion = getattr(self.trim, name, None)
            if insertion is not None:
                self._insertion_fits(insertion, f"trim.{name}")
        return self

    def _insertion_fits(self, insertion: Insertion, key: str) -> None:
        if not self.range.low <= insertion.temperature <= self.range.high:
            inside = " to ".join(format_quantity(t, "K") for t in (self.range.low, self.range.high))
            found = format_quantity(insertion.temperature, "K")
            raise refusal(found, f"inside the range, {inside}", f"{key}.temperature")
        if insertion.scales == OUTPUT_MIRROR:
            return
        if insertion.scales not in self.resistors:
            slots = ", ".join(repr(name) for name in (*self.resistors, OUTPUT_MIRROR))
            raise refusal(shown(insertion.scales), slots, f"{key}.scales")
        slot = self.resistors[insertion.scales]
        if isinstance(slot, FixedSlot):
            names = [part.material.name for part in slot.parts]
        else:
            names = [material.name for material in slot.materials]
        if insertion.material is not None and insertion.material not in names:
            accepted = f"a material of resistors.{insertion.scales}: {', '.join(names)}"
            raise refusal(shown(insertion.material), accepted, f"{key}.material")

    @model_validator(mode="after")
    def _curve_covers_the_range(self) -> Study:
        if self.target.curve is not None:
            temperatures = self.target.curve[0]
            if temperatures[0] > self.range.low or temperatures[-1] < self.range.high:
                low, high = (format_quantity(temperatures[i], "K") for i in (0, -1))
                wanted = [format_quantity(t, "K") for t in (self.range.low, self.range.high)]
                raise refusal(
                    f"a curve from {low} to {high}",
                    f"one that covers the range, {wanted[0]} to {wanted[1]}",
                    "target.file",
                )
        return self

    def _materials(self) -> Iterable[tuple[str, Material]]:
        """Yield every material in use with the key that names it."""
        if self.target.material is not None:
            yield "target.material", self.target.material
        for name, slot in self.resistors.items():
            if isinstance(slot, FixedSlot):
                for index, part in enumerate(slot.parts):
                    yield f"resistors.{name}.parts[{index}].material", part.material
            else:
                for index, material in enumerate(slot.materials):
                    yield f"resistors.{name}.materials[{index}]", material

    def __eq__(self, other: object) -> bool:
        return isinstance(other, Study) and _without_path(self) == _without_path(other)

    __hash__ = None  # type: ignore[assignment]


def _without_path(study: Study) -> Mapping[str, Any]:
    return {name: value for name, value in study if name != "path"}


def _where_smallest(tc1: float, tc2: float, reference: float, over: TemperatureRange) -> float:
    """Return the temperature [K] at which ``1 + tc1 d + tc2 d^2`` is smallest in the range."""
    candidates = [over.low, over.high]
    if tc2 > 0:
        bottom = reference - tc1 / (2 * tc2)
        candidates += [bottom] if over.low < bottom < over.high else []

    def factor(T: float) -> float:
        d = T - reference
        return 1 + tc1 * d + tc2 * d * d

    return min(candidates, key=factor)
