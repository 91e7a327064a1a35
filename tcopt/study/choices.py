"""Values that may be chosen: one, a list of them, or a span; and names that stand for entries."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Annotated, Any

from pydantic import BeforeValidator, PlainValidator, ValidationInfo

from tcopt.study.fields import Check, quantity, refusal
from tcopt.study.gate import quoted
from tcopt.study.process import Material, Process
from tcopt.study.transistors import AnyTransistor
from tcopt.units import shown

__all__ = [
    "Choice", "CurrentChoice", "FromFile", "MaterialName", "RatioChoice", "Ratios", "Span",
    "TransistorName", "is_single", "scaled",
]  # fmt: skip

_MOST_CHOICES = 256


@dataclass(frozen=True, slots=True)
class FromFile:
    """Validation context: keys are those of a file, and names are looked up in this process."""

    process: Process | None = None


@dataclass(frozen=True, slots=True)
class Span:
    """Any value from low to high [the field's unit]; low lies below high."""

    low: float
    high: float


Choice = tuple[float, ...] | Span
"""One value or several to choose among, or any value of a span."""


def is_single(choice: Choice | None) -> bool:
    """Say whether nothing is left to choose."""
    return choice is None or (isinstance(choice, tuple) and len(choice) == 1)


def scaled(choice: Choice, factor: float) -> Choice:
    """Return the choice with every value times a positive factor."""
    if isinstance(choice, Span):
        return Span(choice.low * factor, choice.high * factor)
    return tuple(value * factor for value in choice)


def _choice(check: Check, *, spans: bool) -> Callable[[Any], Choice]:

    def span(value: Mapping[Any, Any]) -> Span:
        for key in value:
            if key not in {"from", "to"}:
                raise refusal("an unknown key", "from, to", quoted(str(key)))
        for key in ("from", "to"):
            if key not in value:
                raise refusal("nothing", check.accepted, key)
        low, high = check.at(value["from"], "from"), check.at(value["to"], "to")
        if not low < high:
            raise refusal(f"{shown(value['to'])}, not above 'from'", "a range that rises", "to")
        return Span(low, high)

    def validate(value: Any) -> Choice:
        if spans and isinstance(value, Span):
            return span({"from": value.low, "to": value.high})
        if spans and isinstance(value, Mapping):
            return span(value)
        if not isinstance(value, (list, tuple)):
            return (check.at(value, ""),)
        if not 0 < len(value) <= _MOST_CHOICES:
            found = f"a list of {len(value)}" if value else "an empty list"
            raise refusal(found, f"one to {_MOST_CHOICES} entries")
        numbers = tuple(check.at(each, f"[{index}]") for index, each in enumerate(value))
        for index, number in enumerate(numbers):
            if number in numbers[:index]:
                raise refusal(f"{shown(value[index])} twice", "each value once", f"[{index}]")
        return numbers

    return validate


_CURRENT = quantity("A", above=0, below=1e3)
_MULTIPLE = quantity("1", "a pure number such as 10", above=0, below=1e9)
_RATIO = quantity("1", "a pure number such as 8", above=0, below=1e6)
CurrentChoice = Annotated[Choice, PlainValidator(_choice(_CURRENT, spans=True))]
RatioChoice = Annotated[Choice, PlainValidator(_choice(_MULTIPLE, spans=True))]
Ratios = Annotated[tuple[float, ...], PlainValidator(_choice(_RATIO, spans=False))]


def _looked_up(kind: str) -> BeforeValidator:
    def look_up(value: Any, info: ValidationInfo) -> Any:
        context: FromFile | None = info.context
        if context is None or context.process is None:
            return value
        entries: dict[str, Any] = getattr(context.process, kind)
        if not isinstance(value, str) or value not in entries:
            accepted = ", ".join(entries) or f"one of the process's {kind}, which has none"
            raise refusal(shown(value), accepted)
        return entries[value]

    return BeforeValidator(look_up)


MaterialName = Annotated[Material, _looked_up("materials")]
TransistorName = Annotated[AnyTransistor, _looked_up("transistors")]
