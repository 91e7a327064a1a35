"""What the output current owes: its shape and size over temperature, the limit on its drift."""

from __future__ import annotations

from pathlib import Path
from typing import Annotated, Any, Literal

from pydantic import Field, field_validator, model_validator

from tcopt.study.choices import MaterialName, TransistorName
from tcopt.study.curve import Curve, first_problem
from tcopt.study.fields import Current, Curvature, Slope, quantity, refusal, words
from tcopt.study.gate import INTERNAL, Model
from tcopt.units import parse, shown

__all__ = ["SHAPES", "Limit", "Target"]

SHAPES = (
    "flat", "ptat", "slope", "over material", "curve", "bipolar transconductance",
    "mos transconductance", "slew into capacitor",
)  # fmt: skip

_NEEDS = {
    "slope": ("slope",),
    "over material": ("material",),
    "curve": ("file",),
    "mos transconductance": ("transistor", "inversion_coefficient"),
}
"""Keys that a shape cannot be without."""
_SIZES = {
    "bipolar transconductance": ("transconductance",),
    "mos transconductance": ("transconductance",),
    "slew into capacitor": ("slew_rate", "capacitance"),
}
"""Keys that may stand for ``current``, all of them together."""
_TAKES = {"slew into capacitor": ("capacitor_tc1", "capacitor_tc2")}
_Transconductance = Annotated[
    float, quantity("S", "a transconductance such as '400 uS'", above=0, below=1e3)
]
_SlewRate = Annotated[float, quantity("V/s", "a slew rate such as '10 V/us'", above=0, below=1e15)]
_Capacitance = Annotated[float, quantity("F", "a capacitance such as '5 pF'", above=0, below=1)]
_Inversion = Annotated[float, quantity("1", "a pure number such as 0.5", at_least=1e-6, below=1e6)]


class Limit(Model):
    """What the drift must not exceed: 'box' [1/K], or 'deviation' from the target [1]."""

    kind: Literal["box", "deviation"]
    value: float = Field(gt=0, allow_inf_nan=False)


def _limit(value: Any) -> Any:
    accepted = (
        "a box drift such as '100 ppm/K', or a deviation such as '0.5 %', above 0 and below 1"
    )
    if value is None or isinstance(value, Limit):
        return value
    kind: Literal["box", "deviation"] = "deviation"
    try:
        number = parse(value, "1")
    except ValueError:
        kind = "box"
        try:
            number = parse(value, "1/K")
        except ValueError:
            raise refusal(shown(value), accepted) from None
    if not 0 < number < 1:
        raise refusal(shown(value), accepted)
    return Limit(kind=kind, value=number)


class Target(Model):
    """What the output current should do.

    Attributes
    ----------
    shape : 'flat'; 'ptat': ``I_0 T/T_0``; 'slope': ``I_0 (1 + slope (T - T_0))``;
        'over material': ``I_0 / m(T)``; 'curve': a table; 'bipolar transconductance' and
        'mos transconductance': what keeps g_m of a transistor that carries the current;
        'slew into capacitor': ``I_0 c(T)``, what keeps the slew rate at a capacitor
    current : I_0, at the study's reference T_0 [A]; None with a curve, which has its own, or
        where other keys say it
    limit : what the drift must not exceed
    slope : [1/K], with shape 'slope' alone
    material : with shape 'over material' alone
    curve, file : temperatures [K] and currents [A], and where they were read, with 'curve' alone
    transistor : the MOS transistor whose mobility it is, with 'mos transconductance' alone
    inversion_coefficient : ``I_D/(W I_spec)`` of each transistor of the pair at T_0 [1]
    transconductance : of a transistor that carries all of the current, instead of ``current``;
        a pair fed at its tail has half of the current, and so half of it, on each side [S]
    slew_rate, capacitance : together instead of ``current`` [V/s], [F]
    capacitor_tc1, capacitor_tc2 : of the capacitor, about T_0 [1/K], [1/K^2]
    """

    shape: Annotated[
        Literal[
            "flat", "ptat", "slope", "over material", "curve", "bipolar transconductance",
            "mos transconductance", "slew into capacitor",
        ],
        words(*SHAPES),
    ]  # fmt: skip
    current: Current | None = None
    limit: Limit | None = None
    slope: Slope | None = None
    material: MaterialName | None = None
    curve: Curve | None = Field(default=None, validation_alias=f"{INTERNAL}curve")
    file: Path | None = None
    transistor: TransistorName | None = None
    inversion_coefficient: _Inversion | None = None
    transconductance: _Transconductance | None = None
    slew_rate: _SlewRate | None = None
    capacitance: _Capacitance | None = None
    capacitor_tc1: Slope | None = None
    capacitor_tc2: Curvature | None = None

    @field_validator("limit", mode="before")
    @classmethod
    def _limit_of_either_kind(cls, value: Any) -> Any:
        return _limit(value)

    @field_validator("curve")
    @classmethod
    def _curve_can_be_followed(cls, value: Curve | None) -> Curve | None:
        problem = first_problem(value) if value is not None else None
        if problem is not None:
            raise refusal(problem.found, problem.accepted, f"[{problem.index}]")
        return value

    def _has(self, key: str) -> bool:
        return getattr(self, "curve" if key == "file" else key) is not None

    @model_validator(mode="after")
    def _what_the_shape_takes(self) -> Target:
        belongs: dict[str, list[str]] = {}
        for table in (_NEEDS, _SIZES, _TAKES):
            for shape, keys in table.items():
                for key in keys:
                    belongs.setdefault(key, []).append(shape)
        for key, shapes in belongs.items():
            if self._has(key) and self.shape not in shapes:
                alone = " or ".join(repr(shape) for shape in shapes)
                raise refusal(
                    f"a {key} with shape {self.shape!r}", f"{key} with shape {alone} alone", key
                )
        for key in _NEEDS.get(self.shape, ()):
            if not self._has(key):
                raise refusal("nothing", f"the {key} that shape {self.shape!r} needs", key)
        self._one_size()
        if self.transistor is not None and self.transistor.kind != "mos":
            found = f"{self.transistor.name}, a {self.transistor.kind} transistor"
            raise refusal(found, "a mos transistor", "transistor")
        return self

    def _one_size(self) -> None:
        if self.shape == "curve":
            if self.current is not None:
                raise refusal(
                    "a current beside a curve", "the curve alone, which states it", "current"
                )
            return
        instead = _SIZES.get(self.shape, ())
        given = [key for key in instead if self._has(key)]
        words_for_it = " and ".join(instead)
        either = f"either current, or {words_for_it}"
        if self.current is not None and given:
            raise refusal(f"{given[0]} beside a current", either, given[0])
        if self.current is None and not given:
            accepted = "a current such as '10 uA'"
            accepted += f", or {words_for_it}" if instead else ""
            raise refusal("nothing", accepted, "current")
        if given and len(given) < len(instead):
            missing = next(key for key in instead if key not in given)
            raise refusal("nothing", either, missing)
