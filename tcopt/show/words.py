"""The few phrases that tables and pictures share."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from tcopt.units import format_quantity

if TYPE_CHECKING:
    from tcopt.assess import Verdict
    from tcopt.operation import Mix
    from tcopt.study import Study

__all__ = [
    "DEFINITIONS", "circuit_words", "figure_words", "limit_words", "menu_words", "mix_words",
    "number", "range_words", "target_words", "verdict_words",
]  # fmt: skip

DEFINITIONS = {
    "deviation": ("ppm", "max |I/I_target - 1|"),
    "box": ("ppm/K", "(max - min)/(I(T_ref) (T_max - T_min))"),
    "endpoint": ("ppm/K", "(I(T_max) - I(T_min))/(I(T_ref) (T_max - T_min))"),
    "slope": ("ppm/K", "(dI/dT)/I at T_ref"),
}
"""Each figure of drift: its unit and its definition."""


def menu_words(study: Study) -> str:
    """Return what a bound is of: the mixes that the open slots may be joined to."""
    from tcopt.study import OpenSlot  # noqa: PLC0415  slow to import, and loaded by then

    joins = {slot.join for slot in study.resistors.values() if isinstance(slot, OpenSlot)}
    if len(joins) != 1:
        return "mix of this menu, joined as the study allows,"
    (join,) = joins
    return "series or parallel mix of this menu" if join == "either" else f"{join} mix of this menu"


def number(value: float, digits: int = 4, *, signed: bool = False) -> str:
    """Return a number for the eye: to so many digits and three decimals, no powers of ten.

    >>> number(26.8217), number(0.0123456), number(1234567.0), number(-3.0, signed=True)
    ('26.82', '0.012', '1235000', '-3.000')
    """
    if not math.isfinite(value):
        return str(value)
    if value == 0:
        return "0"
    rounded = float(f"{value:.{digits - 1}e}")
    if abs(rounded) < 5e-4:
        return "0.000"
    decimals = max(0, digits - 1 - math.floor(math.log10(abs(rounded))))
    return f"{rounded:{'+' if signed else ''}.{min(decimals, 3)}f}"


def figure_words(figure: str, value: float) -> str:
    """Return a figure of drift by its key, such as ``box_ppm_per_K``: '26.8 ppm/K (box)'."""
    name = figure.split("_", 1)[0]
    return f"{number(value)} {DEFINITIONS[name][0]} ({name})"


def limit_words(figure: str, bound: float) -> str:
    """Return a limit: '100 ppm/K (box)'."""
    name = figure.split("_", 1)[0]
    return f"{bound:.10g} {DEFINITIONS[name][0]} ({name})"


def verdict_words(limit: Verdict, by: str = "") -> str:
    """Return the verdict: 'Limit met: 26.8 ppm/K (box) against 100 ppm/K (box) allowed'."""
    word = "met" if limit.met else "not met"
    found, bound = figure_words(limit.figure, limit.value), limit_words(limit.figure, limit.bound)
    return f"Limit {word}{by}: {found} against {bound} allowed"


def range_words(study: Study) -> str:
    """Return range and reference: 'over -40 degC to 150 degC, T_ref = 27 degC'."""
    over = study.range
    low, high, reference = (format_quantity(t, "K") for t in (over.low, over.high, over.reference))
    return f"over {low} to {high}, T_ref = {reference}"


def mix_words(mix: Mix, digits: int = 4) -> str:
    """Return a mix: '5.671 kohm silicide + 264.1 ohm n_well', '||' for in parallel."""
    sign = " + " if mix.join == "series" else " || "
    return sign.join(
        f"{format_quantity(part.value, 'ohm', digits)} {part.material.name}" for part in mix.parts
    )


def circuit_words(study: Study, area: float, mirror: float, input_current: float | None) -> str:
    """Return the circuit with its settled choices: 'degenerated mirror, area ratio 4, ...'."""
    made = study.circuit
    words = [made.topology]
    if "area_ratio" in made.circuit.choices:
        words.append(f"area ratio {area:.6g}")
    if "mirror_ratio" in made.circuit.choices:
        words.append(f"mirror ratio {mirror:.6g}")
    if input_current is not None:
        words.append(f"input {format_quantity(input_current, 'A')}")
    if made.supply is not None:
        words.append(f"supply {format_quantity(made.supply, 'V')}")
    if made.reference_voltage is not None:
        words.append(f"reference {format_quantity(made.reference_voltage, 'V')}")
    if made.effects:
        words.append(f"with {' and '.join(made.effects)}")
    return ", ".join(words)


def target_words(study: Study) -> str:
    """Return what the output owes: 'flat, 10 uA at T_ref'."""
    target = study.target
    shape = {
        "flat": "flat",
        "ptat": "PTAT",
        "slope": f"slope {format_quantity(target.slope or 0.0, '1/K')}",
        "over material": f"over {target.material.name if target.material else ''}",
        "curve": f"curve of {target.file.name}" if target.file else "curve",
        "bipolar transconductance": "for constant g_m of a bipolar pair",
        "mos transconductance": "for constant g_m of a MOS pair at inversion coefficient "
        f"{target.inversion_coefficient or 0.0:g}",
        "slew into capacitor": "for constant slew rate at a capacitor",
    }[target.shape]
    return f"{shape}, {format_quantity(study.target_current, 'A')} at T_ref"
