"""How much parts vary, and how a study looks into it."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any, Literal

from pydantic import BeforeValidator, Field, field_validator

from tcopt.study.fields import Check, Name, quantity, refusal, whole, words
from tcopt.study.gate import Model, quoted
from tcopt.units import shown

__all__ = ["Area", "CommonPart", "CommonParts", "Spread", "deviation"]

_MOST_SAMPLES = 10**8
_LARGEST_SEED = 2**63 - 1
_LONGEST_LIST = 16

Area = Annotated[
    float,
    quantity("m^2", "an area such as '4 um^2', or a bare number in m^2", above=0, below=1),
]


def deviation(unit: str, example: str, *, below: float) -> Check:
    """Return the check of a spread: one standard deviation, or a limit and the sigma it stands for.

    ``"5 %"`` and ``{ limit = "15 %", sigma = 3 }`` are the same. What passes is the
    standard deviation, in SI.

    Parameters
    ----------
    unit : SI unit of the deviation
    example : such as '5 %'
    below : bound above which a deviation is no slip of the factory but of the pen
    """
    bound = f"{below:g}" if unit == "1" else f"{below:g} {unit}"
    accepted = (
        f"one standard deviation such as '{example}', at least 0 and below {bound}, or a limit "
        f"and the sigma it stands for, such as {{ limit = '{example}', sigma = 3 }}"
    )
    size = quantity(unit, accepted, at_least=0)
    multiple = quantity("1", "a pure number such as 3", above=0, below=10)

    def check(value: Any) -> float:
        divisor = 1.0
        number = value
        if isinstance(value, Mapping):
            for key in value:
                if key not in {"limit", "sigma"}:
                    raise refusal("an unknown key", "limit, sigma", quoted(str(key)))
            for key in ("limit", "sigma"):
                if key not in value:
                    raise refusal("nothing", accepted, key)
            divisor = multiple.at(value["sigma"], "sigma")
            number = value["limit"]
        key = "limit" if isinstance(value, Mapping) else ""
        found = float(size.at(number, key)) / divisor
        if not found < below:
            raise refusal(shown(number), accepted, key)
        return found

    return Check(check, accepted=accepted)


_SHARE_WORDS = "a share of the variance such as 0.6, above 0 and at most 1"


def _share(value: object) -> float:
    number = quantity("1", _SHARE_WORDS, above=0).at(value, "")
    if number > 1:
        raise refusal(shown(value), _SHARE_WORDS)
    return float(number)


class CommonPart(Model):
    """A step of the factory that entries share, and how much of an entry's variance is its doing.

    Two entries that name the same part with shares a and b move together with
    a correlation of ``sqrt(a b)``.
    """

    part: Name
    share: Annotated[float, Check(_share, accepted=_SHARE_WORDS)]


def _listed(value: Any) -> Any:
    if isinstance(value, (Mapping, CommonPart)):
        return (value,)
    if not isinstance(value, (list, tuple)) or len(value) > _LONGEST_LIST:
        raise refusal(
            shown(value), "a common part such as { part = 'poly_step', share = 0.6 }, or a list"
        )
    return value


def _within_the_whole(value: tuple[CommonPart, ...]) -> tuple[CommonPart, ...]:
    names = [common.part for common in value]
    for index, name in enumerate(names):
        if name in names[:index]:
            raise refusal(f"{name!r} twice", "each part once", f"[{index}].part")
    if (total := sum(common.share for common in value)) > 1 + 1e-12:
        raise refusal(f"shares that add up to {total:g}", "shares of at most 1 in all")
    return value


class _Commons:
    """Fields of an entry that shares steps with others."""

    before = BeforeValidator(_listed)


CommonParts = Annotated[tuple[CommonPart, ...], _Commons.before]
