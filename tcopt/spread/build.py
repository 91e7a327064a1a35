"""What varies in a finished design, from the data of its process and study."""

from __future__ import annotations

from collections import Counter
from collections.abc import Iterable
from dataclasses import dataclass, field
from math import sqrt
from typing import TYPE_CHECKING

from tcopt.operation import Operation
from tcopt.spread.pelgrom import device_deviation, pair_deviation
from tcopt.spread.variation import (
    FROM_OUTSIDE,
    LOT,
    MISMATCH,
    TEST,
    Figure,
    Variate,
    Variation,
)
from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.study import CommonPart, Material, MosTransistor, Part, Transistor

__all__ = ["variation_of"]


def variation_of(operation: Operation) -> Variation:
    """Return what varies in a finished design, and what is left out for want of data.

    A figure that shares steps with others moves by
    ``sigma (sum sqrt(share) z_step + sqrt(1 - sum share) z_own)``. A step has one
    variate for values (sheet resistance, saturation current, gain), one for TC1, one
    for TC2, one each for a threshold and a specific current.

    Parameters
    ----------
    operation : with a mix in every slot that its study names
    """
    builder = _Builder(operation)
    for material in builder.materials():
        builder.add_material(material)
    for slot, mix in operation.mixes.items():
        for index, part in enumerate(mix.parts):
            builder.add_matching(slot, index, part)
    transistor = operation.study.circuit.transistor
    if transistor is None:
        pass
    elif transistor.kind == "mos":
        builder.add_mos(transistor)
    else:
        builder.add_bipolar(transistor)
    builder.add_outside()
    builder.add_tests()
    return builder.made()


@dataclass
class _Builder:
    operation: Operation
    variates: list[Variate] = field(default_factory=list)
    loads: dict[Figure, tuple[tuple[int, float], ...]] = field(default_factory=dict)
    missing: list[str] = field(default_factory=list)
    steps: dict[tuple[str, str], int] = field(default_factory=dict)

    def materials(self) -> list[Material]:
        """Return every material in use, each once."""
        mixes = self.operation.mixes.values()
        return list({p.material.name: p.material for mix in mixes for p in mix.parts}.values())

    def _new(self, name: str, kind: str) -> int:
        self.variates.append(Variate(name, kind))
        return len(self.variates) - 1

    def _load(
        self,
        figure: Figure,
        sigma: float | None,
        name: str,
        kind: str,
        *,
        common: Iterable[CommonPart] = (),
        order: str = "",
        lacking: str = "no spread is given",
    ) -> None:
        """Let a figure vary, or say that it does not."""
        if sigma is None:
            self.missing.append(f"{name}: {lacking}")
        if not sigma:
            return
        own = 1.0
        loads = []
        for step in common:
            key = (step.part, order)
            if key not in self.steps:
                self.steps[key] = self._new(f"step {step.part}{order and f', {order}'}", LOT)
            loads.append((self.steps[key], sigma * sqrt(step.share)))
            own -= step.share
        if own > 1e-9:
            loads.append((self._new(name, kind), sigma * sqrt(own)))
        self.loads[figure] = tuple(loads)

    def add_material(self, material: Material) -> None:
        """Add sheet resistance, TC1 and TC2 of a material."""
        name, common = material.name, material.common
        self._load(
            ("sheet", name), material.spread, f"sheet resistance of {name}", LOT, common=common
        )
        for key, sigma in (("tc1", material.tc1_spread), ("tc2", material.tc2_spread)):
            order = key.upper()
            self._load((key, name), sigma, f"{order} of {name}", LOT, common=common, order=order)

    def add_matching(self, slot: str, index: int, part: Part) -> None:
        """Add what one resistor departs from its neighbours of the same material.

        Of an ordered part that is its tolerance: no tester says where in it a part lies.
        """
        material = part.material
        layout = self.operation.study.layout
        if layout is not None and layout.made_tolerance is not None:
            name = f"tolerance of {material.name} in {slot}"
            self._load(("tolerance", slot, str(index)), layout.made_tolerance, name, MISMATCH)
            return
        name = f"mismatch of {material.name} in {slot}"
        sigma, lacking = None, "no matching coefficient is given"
        if material.matching is not None:
            area, lacking = self._area(part, name)
            sigma = area and device_deviation(material.matching, area)
        self._load(("matching", slot, str(index)), sigma, name, MISMATCH, lacking=lacking)

    def _area(self, part: Part, name: str) -> tuple[float | None, str]:
        material = part.material
        if part.area is not None:
            return part.area, ""
        if material.sheet_resistance is None:
            return None, "no sheet resistance is given, so its area is not known"
        if material.min_width is None:
            return None, "neither width nor min_width is given, so its area is not known"
        width = format_quantity(material.min_width, "m")
        self.missing.append(f"{name}: no width is given; taken at the narrowest, {width}")
        return part.value / material.sheet_resistance * material.min_width**2, ""

    def add_bipolar(self, transistor: Transistor) -> None:
        """Add saturation current, current gain, and the mismatch of the pair."""
        name, common = transistor.name, transistor.common
        if "log_I_S" in self.operation.circuit.quantities:
            sigma = transistor.log_saturation_spread
            text = f"saturation current of {name}"
            self._load(("saturation current",), sigma, text, LOT, common=common)
        if "current gain" in self.operation.study.circuit.effects:
            text = f"current gain of {name}"
            self._load(("gain",), transistor.gain_spread, text, LOT, common=common)
        self._add_pair("pair", name, transistor.matching, "emitter_area", transistor.emitter_area)

    def add_mos(self, transistor: MosTransistor) -> None:
        """Add threshold, specific current, and the mismatch of the pair's thresholds."""
        name, common = transistor.name, transistor.common
        for figure, sigma in (
            ("threshold", transistor.threshold_spread),
            ("specific current", transistor.specific_current_spread),
        ):
            self._load((figure,), sigma, f"{figure} of {name}", LOT, common=common, order=figure)
        figure = "threshold of the pair"
        self._add_pair(figure, name, transistor.matching, "gate_area", transistor.gate_area)

    def _add_pair(
        self, figure: str, name: str, matching: float | None, key: str, area: float | None
    ) -> None:
        circuit = self.operation.study.circuit.circuit
        if "area_ratio" not in circuit.choices or not (
            circuit.is_mirror or "mirror_ratio" in circuit.choices
        ):
            return
        sigma, lacking = None, "no matching coefficient is given"
        if matching is not None:
            lacking = f"no {key} is given"
            if area is not None:
                sigma = pair_deviation(matching, area, area * self.operation.choices.area_ratio)
        self._load((figure,), sigma, f"mismatch of the {name} pair", MISMATCH, lacking=lacking)

    def add_outside(self) -> None:
        """Add supply, given input, reference voltage and the ratio of the mirror on top."""
        takes = self.operation.circuit.quantities
        spread = self.operation.study.spread
        for symbol, figure, sigma in (
            ("V_CC", "supply", spread.supply),
            ("I_given", "input", spread.input_current),
            ("V_ref", "reference voltage", spread.reference_voltage),
            ("M", "mirror ratio", spread.mirror_ratio),
        ):
            if symbol in takes:
                name = "input current" if figure == "input" else figure
                self._load((figure,), sigma, name, FROM_OUTSIDE)

    def add_tests(self) -> None:
        """Add the errors of the insertions of a trim."""
        trim = self.operation.study.trim
        for index, insertion in enumerate(trim.insertions if trim else ()):
            at = f"trim at {format_quantity(insertion.temperature, 'K')}"
            for figure, error, name in (
                ("measured", insertion.measurement_error, f"{at}: measurement"),
                ("believed", insertion.temperature_error, f"{at}: temperature"),
            ):
                lacking = "no error is given"
                self._load((figure, str(index)), error, name, TEST, lacking=lacking)

    def made(self) -> Variation:
        """Return what has been added up."""
        users = Counter(
            step.part
            for entry in (*self.materials(), self.operation.study.circuit.transistor)
            for step in (entry.common if entry is not None else ())
        )
        alone = [
            f"step {part}: one entry in use names it, so nothing moves with it"
            for part, count in users.items()
            if count == 1
        ]
        return Variation(self.operation, tuple(self.variates), self.loads, (*self.missing, *alone))
