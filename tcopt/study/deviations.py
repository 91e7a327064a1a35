"""How much a figure of the factory varies, and what it shares with others."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Annotated, Any

from pydantic import AfterValidator, BeforeValidator

from tcopt.study.fields import Check, Name, quantity, refusal
from tcopt.study.gate import Model, quoted
from tcopt.units import shown

__all__ = ["Area", "CommonPart", "CommonParts", "deviation"]

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
    example : what one looks like: '5 %'
    below : bound of the standard deviation; wide, but a law that is linear in the
        deviation must not reach zero within what a large sample holds
    """
    bound = f"{below:g}" if unit == "1" else f"{below:g} {unit}"
    accepted = (
        f"one standard deviation such as '{example}', at least 0 and below {bound}, or a limit "
        f"and the sigma it stands for, such as {{ limit = '{example}', sigma = 3 }}"
    )
    size = quantity(unit, accepted, at_least=0)
    multiple = quantity("1", "a pure number such as 3", above=0, below=10)

    def check(value: Any) -> float:
        if not isinstance(value, Mapping):
            found = size.at(value, "")
        else:
            for key in value:
                if key not in {"limit", "sigma"}:
                    raise refusal("an unknown key", "limit, sigma", quoted(str(key)))
            for key in ("limit", "sigma"):
                if key not in value:
                    raise refusal("nothing", accepted, key)
            found = size.at(value["limit"], "limit") / multiple.at(value["sigma"], "sigma")
        if not found < below:
            raise refusal(shown(value), accepted)
        return float(found)

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


CommonParts = Annotated[
    tuple[CommonPart, ...], BeforeValidator(_listed), AfterValidator(_within_the_whole)
]
