"""Text to SI numbers and back; inside the project every number is in SI, temperatures in kelvin.

Decimal arithmetic is used on the way in and out, so that "10 uA" is the same
float as ``1e-5`` and what is written reads back as the same float. Only text
that fits a strict grammar reaches pint; nothing is evaluated.
"""

from __future__ import annotations

import math
import re
import reprlib
from decimal import Context, Decimal, localcontext
from functools import lru_cache
from numbers import Real
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    import pint

__all__ = ["accepted_quantity", "exact", "format_quantity", "parse", "shown"]

_LONGEST_TEXT = 80
_CONTEXT = Context(prec=60)

_PREFIXES = {
    "q": -30, "r": -27, "y": -24, "z": -21, "a": -18, "f": -15, "p": -12, "n": -9, "u": -6,
    "m": -3, "c": -2, "d": -1, "da": 1, "h": 2, "k": 3, "M": 6, "G": 9, "T": 12, "P": 15,
    "E": 18, "Z": 21, "Y": 24, "R": 27, "Q": 30,
}  # fmt: skip
_UNITS = {
    "A": "[current]",
    "V": "[voltage]",
    "K": "[temperature]",
    "m": "[length]",
    "s": "[time]",
    "ohm": "V / A",
    "S": "A / V",
    "W": "V * A",
    "F": "A * s / V",
}
_PURE = {"percent": "0.01", "ppm": "1e-6"}
_ZERO_CELSIUS = "273.15"
_SPELLINGS = {
    "\N{MICRO SIGN}": "u",
    "\N{GREEK SMALL LETTER MU}": "u",
    "\N{OHM SIGN}": "ohm",
    "\N{GREEK CAPITAL LETTER OMEGA}": "ohm",
    "\N{DEGREE SIGN}C": "degC",
    "\N{MINUS SIGN}": "-",
    "%": "percent",
}
_ENGINEERING = {power: prefix for prefix, power in _PREFIXES.items() if power % 3 == 0} | {0: ""}
_TAKES_PREFIX = frozenset(_UNITS) - {"K"}
_SCALED = {"1/K": "ppm/K", "1/K^2": "ppm/K^2"}
_WRITTEN = {"K": ("degC",), "1": ("%", "ppm")} | {unit: (ppm,) for unit, ppm in _SCALED.items()}

_FACTOR = (
    rf"(?:1|percent|ppm|degC|(?:{'|'.join(sorted(_PREFIXES, key=len, reverse=True))})?"
    rf"(?:{'|'.join(_UNITS)}))(?:\^-?[1-9])?"
)
# All products stand before the first quotient: "V/m s" could be read two ways.
_UNIT = re.compile(rf"{_FACTOR}(?:(?: *\* *| +){_FACTOR})*(?: */ *{_FACTOR})*")
_QUANTITY = re.compile(r"([+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]{1,3})?) *(.*)")
# The letters of IEC 60062 (memory) and the small k of the trade.
_RKM = re.compile(r"([0-9]*)([LRKkMGT])([0-9]*)")
_RKM_POWERS = {"L": -3, "R": 0, "K": 3, "k": 3, "M": 6, "G": 9, "T": 12}

_KINDS = {
    "A": "a current such as '10 uA', or a bare number in A",
    "V": "a voltage such as '0.65 V', or a bare number in V",
    "ohm": "a resistance such as '4.7 kohm' or '4k7', or a bare number in ohm",
    "K": "a temperature such as '-40 degC', or a bare number in K",
    "1/K": "a temperature coefficient such as '-180 ppm/K', or a bare number in 1/K",
    "1/K^2": "a second-order coefficient such as '0.7 ppm/K^2', or a bare number in 1/K^2",
    "m": "a length such as '0.8 um', or a bare number in m",
    "1": "a pure number such as 0.05 or '5 %'",
}


@lru_cache(maxsize=1)
def _registry() -> pint.UnitRegistry[Any]:
    # Here and not above: pint loads slowly, and bare numbers do not need it.
    import pint  # noqa: PLC0415

    lines = [f"{prefix}- = 1e{power}" for prefix, power in _PREFIXES.items()]
    lines += [f"{name} = {meaning}" for name, meaning in {**_UNITS, **_PURE}.items()]
    lines.append(f"degC = K; offset: {_ZERO_CELSIUS}")
    registry: pint.UnitRegistry[Any] = pint.UnitRegistry(None, non_int_type=Decimal)
    registry.load_definitions(lines)
    return registry


def _spelt(text: str) -> str:
    for found, meant in _SPELLINGS.items():
        text = text.replace(found, meant)
    return text


@lru_cache(maxsize=512)
def _scale(unit_text: str, unit: str) -> tuple[Decimal, Decimal] | None:
    """Return factor and offset from a spelt unit to the SI unit; None where it is not one."""
    if not _UNIT.fullmatch(unit_text) or ("degC" in unit_text and unit_text != "degC"):
        return None
    registry = _registry()
    product, *divisors = unit_text.replace("*", " ").split("/")
    python = "/".join(["*".join(product.split()), *(d.strip() for d in divisors)])
    found, wanted = registry.parse_units(python), registry.parse_units(unit)
    if found.dimensionality != wanted.dimensionality:
        return None
    if unit_text == "degC":
        return Decimal(1), Decimal(_ZERO_CELSIUS)
    return Decimal(registry.Quantity(Decimal(1), found).to(wanted).magnitude), Decimal(0)


def _resistance_code(text: str) -> Decimal | None:
    match = _RKM.fullmatch(text)
    if not match or not (match[1] or match[3]):
        return None
    return Decimal(f"{match[1] or '0'}.{match[3] or '0'}").scaleb(_RKM_POWERS[match[2]])


def _read(text: str, unit: str) -> float | None:
    """Return the SI number in a text, None where there is none (or none of this dimension)."""
    if len(text) > _LONGEST_TEXT:
        return None
    text = _spelt(text.strip())
    with localcontext(_CONTEXT):
        exactly = _resistance_code(text) if unit == "ohm" else None
        if exactly is None:
            match = _QUANTITY.fullmatch(text)
            scale = _scale(match[2].rstrip() or "1", unit) if match else None
            if match is None or scale is None:
                return None
            exactly = Decimal(match[1]) * scale[0] + scale[1]
        number = float(exactly)
    # A number too small for a float would silently become zero.
    return None if number == 0 and exactly != 0 else number


class _Short(reprlib.Repr):
    def __init__(self) -> None:
        super().__init__()
        self.maxlevel, self.maxstring, self.maxother = 2, 60, 60

    def repr_int(self, x: int, level: int) -> str:  # noqa: ARG002
        # Python refuses to write out whole numbers of thousands of digits.
        return repr(x) if x.bit_length() < 100 else "a whole number of more than 30 digits"


_SHORT = _Short()


def shown(value: object) -> str:
    """Return what was found, short enough for a message."""
    return _SHORT.repr(value)


def accepted_quantity(unit: str) -> str:
    """Return the words that say what a quantity in this SI unit may look like."""
    return _KINDS.get(unit, f"a quantity in {unit}, or a bare number in {unit}")


def parse(value: object, unit: str, accepted: str | None = None) -> float:
    """Return a quantity in SI.

    Parameters
    ----------
    value : text with its unit ("10 uA", "-180 ppm/K", "4k7"), or a bare number in SI
    unit : the SI unit wanted, e.g. "A", "ohm", "1/K"; with "K" the text may be in degC
    accepted : words for the message; those of `accepted_quantity` by default

    Raises
    ------
    ValueError : the value is no such quantity, or not finite

    Examples
    --------
    >>> parse("4k7", "ohm"), parse("27 degC", "K"), parse("2 % um", "m")
    (4700.0, 300.15, 2e-08)
    """
    number: float | None = None
    if isinstance(value, str):
        number = _read(value, unit)
    elif isinstance(value, Real) and not isinstance(value, bool):
        try:
            number = float(value)
        except OverflowError:
            number = None
    if number is None or not math.isfinite(number):
        raise ValueError(f"found {shown(value)}; accepted: {accepted or accepted_quantity(unit)}")
    return number


def _plain(number: Decimal) -> str:
    text = format(number, "f")
    text = text.rstrip("0").rstrip(".") if "." in text else text
    return "0" if text in {"-0", ""} else text


def _with_prefix(number: Decimal, unit: str) -> str:
    power = 3 * (number.adjusted() // 3) if number else 0
    if unit not in _TAKES_PREFIX or power not in _ENGINEERING:
        mantissa = _plain(number) if -7 < number.adjusted() < 16 or not number else str(number)
        return mantissa if unit == "1" else f"{mantissa} {unit}"
    return f"{_plain(number.scaleb(-power))} {_ENGINEERING[power]}{unit}"


def _in_unit(number: Decimal, shown_unit: str, unit: str) -> Decimal:
    scale = _scale(_spelt(shown_unit), unit)
    if scale is None:
        raise AssertionError(f"{shown_unit} is not a unit of {unit}")
    return (number - scale[1]) / scale[0]


def format_quantity(value: float, unit: str, digits: int = 4) -> str:
    """Return a quantity for the eye: rounded, with an engineering prefix.

    Temperatures in degC, temperature coefficients in ppm.

    Examples
    --------
    >>> format_quantity(9306.1, "ohm"), format_quantity(1e-5, "A"), format_quantity(300.15, "K")
    ('9.306 kohm', '10 uA', '27 degC')
    """
    if not math.isfinite(value):
        return f"{value} {unit}"
    shown_unit = "degC" if unit == "K" else _SCALED.get(unit, unit)
    with localcontext(_CONTEXT):
        number = Decimal(repr(float(value)))
        if shown_unit != unit:
            number = _in_unit(number, shown_unit, unit)
        rounded = Context(prec=digits).create_decimal(number)
        return _with_prefix(rounded, shown_unit)


def exact(value: float, unit: str) -> str:
    """Return a short text that `parse` turns back into the very same float.

    Raises
    ------
    ValueError : the value is not finite

    Examples
    --------
    >>> exact(9306.1, "ohm"), exact(-1.8e-4, "1/K"), exact(233.15, "K"), exact(0.05, "1")
    ('9.3061 kohm', '-180 ppm/K', '-40 degC', '5 %')
    """
    if not math.isfinite(value):
        raise ValueError(f"found {value}; accepted: {accepted_quantity(unit)}")
    with localcontext(_CONTEXT):
        number = Decimal(repr(float(value)))
        texts = [
            _with_prefix(_in_unit(number, other, unit), other) for other in _WRITTEN.get(unit, ())
        ]
        texts.append(_with_prefix(number, unit))
    same = [text for text in texts if _read(text, unit) == value]
    return same[0] if unit in _SCALED else min(same, key=len)
