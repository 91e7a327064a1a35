"""What a field takes: its unit, its bounds, and the words that say so, each stated once."""

from __future__ import annotations

import math
import re
from collections.abc import Callable, Hashable
from dataclasses import dataclass
from typing import Annotated, Any, TypeVar

from pydantic import BeforeValidator
from pydantic_core import PydanticCustomError

from tcopt.units import accepted_quantity, parse, shown

__all__ = [
    "Check", "Current", "Curvature", "Name", "Resistance", "SaturationCurrent",
    "Slope", "Temperature",
    "Text", "Title", "Voltage", "quantity", "refusal", "whole", "without_repeats", "words",
]  # fmt: skip

T = TypeVar("T")
_NAME = re.compile(r"\w[\w .+-]*")
_LONGEST_NAME, _LONGEST_LINE = 60, 200


def refusal(found: str, accepted: str, key: str = "") -> PydanticCustomError:
    """Return the error that a validator raises; ``key`` is the path below the validated value."""
    context = {"found": found, "accepted": accepted, "key": key}
    return PydanticCustomError("refused", "found {found}; accepted: {accepted}", context)


@dataclass(frozen=True, slots=True)
class Check(BeforeValidator):
    """A check of the value as written, with the words for what it accepts."""

    accepted: str = ""

    def at(self, value: object, key: str) -> Any:
        """Return the checked value; a refusal names the key."""
        try:
            return self.func(value)  # type: ignore[call-arg]
        except PydanticCustomError as error:
            context = error.context or {}
            raise refusal(context["found"], context["accepted"], key) from None


def quantity(
    unit: str,
    accepted: str | None = None,
    *,
    above: float = -math.inf,
    at_least: float = -math.inf,
    below: float = math.inf,
) -> Check:
    """Return the check of a quantity: text with its unit, or a bare number in SI.

    The bounds are wide: they keep out slips of prefix, and figures for which
    the laws overflow.
    """
    words_for_it = accepted or accepted_quantity(unit)
    limits = [
        f"{word} {limit:g}{'' if unit == '1' else ' ' + unit}"
        for word, limit in (("above", above), ("at least", at_least), ("below", below))
        if math.isfinite(limit)
    ]
    words_for_it = ", ".join([words_for_it, *([" and ".join(limits)] if limits else [])])

    def check(value: object) -> float:
        try:
            number = parse(value, unit, words_for_it)
        except ValueError:
            raise refusal(shown(value), words_for_it) from None
        if not (above < number < below and number >= at_least):
            raise refusal(shown(value), words_for_it)
        return number

    return Check(check, accepted=words_for_it)


def whole(low: int, high: int) -> Check:
    """Return the check of a whole number from low to high."""
    accepted = f"a whole number from {low} to {high}"

    def check(value: object) -> int:
        if isinstance(value, bool) or not isinstance(value, int) or not low <= value <= high:
            raise refusal(shown(value), accepted)
        return value

    return Check(check, accepted=accepted)


def words(*choices: str) -> Check:
    """Return the check of one word of several."""
    accepted = ", ".join(repr(choice) for choice in choices)

    def check(value: object) -> str:
        if not isinstance(value, str) or value not in choices:
            raise refusal(shown(value), accepted)
        return value

    return Check(check, accepted=accepted)


def _text(pattern: re.Pattern[str] | None, longest: int, empty: bool, accepted: str) -> Check:
    def check(value: object) -> str:
        if (
            not isinstance(value, str)
            or len(value) > longest
            or not value.isprintable()
            or not (empty or value.strip())
            or (pattern is not None and not pattern.fullmatch(value))
        ):
            raise refusal(shown(value), accepted)
        return value

    return Check(check, accepted=accepted)


def without_repeats(items: tuple[T, ...], label: Callable[[T], Hashable] = repr) -> tuple[T, ...]:
    """Return the items; refuse an empty list and an item that stands there twice."""
    if not items:
        raise refusal("an empty list", "at least one entry")
    labels = [label(item) for item in items]
    for index, each in enumerate(labels):
        if each in labels[:index]:
            raise refusal(f"{each} twice", "each entry once", f"[{index}]")
    return items


_NAME_WORDS = f"a name of letters, digits and, inside, ' _.+-', at most {_LONGEST_NAME} characters"
_LINE_WORDS = f"one line of text, at most {_LONGEST_LINE} characters"

Current = Annotated[float, quantity("A", above=0, below=1e3)]
SaturationCurrent = Annotated[float, quantity("A", above=1e-100, below=1)]
Voltage = Annotated[float, quantity("V", above=0, below=1e4)]
Resistance = Annotated[float, quantity("ohm", above=0, below=1e15)]
Temperature = Annotated[float, quantity("K", at_least=1, below=1000)]
Slope = Annotated[float, quantity("1/K", above=-1, below=1)]
Curvature = Annotated[float, quantity("1/K^2", above=-1, below=1)]
Title = Annotated[str, _text(None, _LONGEST_LINE, False, _LINE_WORDS)]
Name = Annotated[str, _text(_NAME, _LONGEST_NAME, False, _NAME_WORDS)]
Text = Annotated[str, _text(None, _LONGEST_LINE, True, _LINE_WORDS)]
