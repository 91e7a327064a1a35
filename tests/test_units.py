"""Text to SI numbers and back. Expected values are powers of ten worked by hand."""

from __future__ import annotations

import math
import re
import subprocess
import sys

import pytest
from hypothesis import example, given
from hypothesis import strategies as st

from tcopt.units import exact, format_quantity, parse, shown

UNITS = ("A", "V", "ohm", "K", "1/K", "1/K^2", "m", "1", "W", "F", "S", "K/W")


@pytest.mark.parametrize(
    ("text", "unit", "value"),
    [
        ("10 uA", "A", 1e-5),
        ("10uA", "A", 1e-5),
        ("10 \N{MICRO SIGN}A", "A", 1e-5),
        ("10 \N{GREEK SMALL LETTER MU}A", "A", 1e-5),
        ("1e-5 A", "A", 1e-5),
        ("1E-2 mA", "A", 1e-5),
        ("  .5 nA ", "A", 5e-10),
        ("3 kA", "A", 3e3),
        ("1 daA", "A", 10.0),
        ("650 mV", "V", 0.65),
        ("4.7 kohm", "ohm", 4700.0),
        ("4.7 k\N{OHM SIGN}", "ohm", 4700.0),
        ("4.7 k\N{GREEK CAPITAL LETTER OMEGA}", "ohm", 4700.0),
        ("2 V/A", "ohm", 2.0),
        ("300 K", "K", 300.0),
        ("27 degC", "K", 300.15),
        ("27 \N{DEGREE SIGN}C", "K", 300.15),
        ("-40 degC", "K", 233.15),
        ("\N{MINUS SIGN}40 degC", "K", 233.15),
        ("-180 ppm/K", "1/K", -1.8e-4),
        ("0.1 %/K", "1/K", 1e-3),
        ("+3.4e-3 1/K", "1/K", 3.4e-3),
        ("2e-3 K^-1", "1/K", 2e-3),
        ("-0.7 ppm/K^2", "1/K^2", -7e-7),
        ("-0.7 ppm/K/K", "1/K^2", -7e-7),
        ("0.8 um", "m", 8e-7),
        ("2 % um", "m", 2e-8),
        ("2 % * um", "m", 2e-8),
        ("15 nm", "m", 1.5e-8),
        ("5 %", "1", 0.05),
        ("300 ppm", "1", 3e-4),
        ("8", "1", 8.0),
        ("20 um^2", "m^2", 2e-11),
        ("3 V/us", "V/s", 3e6),
        ("40 K/W", "K/W", 40.0),
        ("2 pF", "F", 2e-12),
        ("4 mS", "S", 4e-3),
        ("1 mA V", "W", 1e-3),
        (3, "A", 3.0),
        (2.5e-6, "A", 2.5e-6),
    ],
)
def test_accepted(text, unit, value):
    assert parse(text, unit) == value


@pytest.mark.parametrize(
    ("text", "value"),
    # IEC 60062, the letter in place of the decimal mark (memory)
    [
        ("R47", 0.47), ("4R7", 4.7), ("47R", 47.0), ("100R", 100.0), ("4K7", 4700.0),
        ("4k7", 4700.0), ("47k", 47e3), ("1M0", 1e6), ("3M32", 3.32e6), ("1G0", 1e9),
        ("1T0", 1e12), ("L47", 0.47e-3), ("4L7", 4.7e-3),
    ],
)  # fmt: skip
def test_resistance_code(text, value):
    assert parse(text, "ohm") == value


@pytest.mark.parametrize("text", ["4k7", "R47", "47k"])
def test_resistance_code_is_for_resistances(text):
    with pytest.raises(ValueError, match="a current such as '10 uA'"):
        parse(text, "A")


@pytest.mark.parametrize(
    ("found", "unit"),
    [
        ("5 volt", "A"), ("5 V", "A"), ("10", "A"), ("10 UA", "A"), ("10 uAs", "A"), ("uA", "A"),
        ("", "A"), (" ", "A"), ("nan A", "A"), ("inf A", "A"), ("1e999 A", "A"), ("1e-999 A", "A"),
        ("1e9999 A", "A"), ("1_0 A", "A"), ("0x10 A", "A"), ("1,5 A", "A"), ("1.2.3 A", "A"),
        ("\N{ARABIC-INDIC DIGIT ONE} A", "A"), ("5 A; 5 A", "A"), ("5 A^99", "A"), ("5 A^0 A", "A"),
        ("5 (A)", "A"), ("5 A**2/A", "A"), ("5 A A^-1 A V/V A", "A"), ("2*3 A", "A"),
        ("5 A/m m", "A"), ("5 " + "A*" * 100 + "A", "A"), ("9" * 5000 + " A", "A"),
        ("k", "ohm"), ("4k7k", "ohm"), ("4r7", "ohm"), ("-4k7", "ohm"), ("4 k7", "ohm"),
        ("47 K", "ohm"), ("20 degC", "1/K"), ("20 ppm/degC", "1/K"), ("20 mdegC", "K"),
        ("20 C", "K"), ("20 degF", "K"), ("5 K ohm/ohm degC", "K"),
        (True, "1"), (math.nan, "A"), (math.inf, "A"), (-math.inf, "A"), (None, "A"), ([1], "A"),
        ({}, "A"), (1j, "A"), (10**400, "A"), (b"1 A", "A"),
    ],
)  # fmt: skip
def test_refused_with_what_was_found_and_what_is_accepted(found, unit):
    with pytest.raises(ValueError, match=r"^found .*; accepted: .*(a bare number in|'5 %')") as e:
        parse(found, unit)
    assert shown(found) in str(e.value)
    assert len(str(e.value)) < 250


def test_message_as_a_user_reads_it():
    message = "found '5 volt'; accepted: a current such as '10 uA', or a bare number in A"
    with pytest.raises(ValueError, match=f"^{re.escape(message)}$"):
        parse("5 volt", "A")


@given(st.floats(allow_nan=False, allow_infinity=False), st.sampled_from(UNITS))
@example(1e-5, "A")
@example(0.1 + 0.2, "K")
@example(5e-324, "K")
@example(1.7976931348623157e308, "ohm")
@example(-0.0, "V")
@example(9.9999999999999995e-07, "A")
def test_exact_text_reads_back_as_the_very_same_float(value, unit):
    assert parse(exact(value, unit), unit) == value


@given(st.text(max_size=90), st.sampled_from(UNITS))
@example("1e5 " + "\N{SUPERSCRIPT TWO}", "1")
@example("1 ppm" + "\0", "1")
def test_no_text_does_anything_but_give_a_finite_number_or_be_refused(text, unit):
    try:
        assert math.isfinite(parse(text, unit))
    except ValueError as refused:
        assert "; accepted: " in str(refused)  # noqa: PT017  either outcome is right


@given(st.from_regex(r"[0-9]{1,3} [a-zA-Z%/ *^0-9-]{1,12}", fullmatch=True), st.sampled_from(UNITS))
def test_no_unit_does_anything_but_give_a_finite_number_or_be_refused(text, unit):
    try:
        assert math.isfinite(parse(text, unit))
    except ValueError as refused:
        assert "; accepted: " in str(refused)  # noqa: PT017  either outcome is right


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (1e-5, "A", "10 uA"), (9306.1, "ohm", "9.3061 kohm"), (0.65, "V", "650 mV"),
        (300.15, "K", "27 degC"), (300.0, "K", "300 K"), (233.15, "K", "-40 degC"),
        (-1.8e-4, "1/K", "-180 ppm/K"), (-7e-7, "1/K^2", "-0.7 ppm/K^2"), (0.05, "1", "5 %"),
        (2e-8, "m", "20 nm"), (8.0, "1", "8"), (1e-4, "1/K", "100 ppm/K"), (0.0, "A", "0 A"),
    ],
)  # fmt: skip
def test_exact_text_is_short(value, unit, text):
    assert exact(value, unit) == text


@pytest.mark.parametrize(
    ("value", "unit", "digits", "text"),
    [
        (9306.123, "ohm", 4, "9.306 kohm"), (1e-5, "A", 4, "10 uA"), (999.96, "ohm", 4, "1 kohm"),
        (999.94, "ohm", 4, "999.9 ohm"), (123456.0, "ohm", 3, "123 kohm"), (0.0, "A", 4, "0 A"),
        (-2e-3, "V", 4, "-2 mV"), (300.15, "K", 4, "27 degC"), (1.8e-4, "1/K", 4, "180 ppm/K"),
        (2.1e-6, "1/K^2", 4, "2.1 ppm/K^2"), (3.6, "1", 4, "3.6"), (1e-40, "A", 4, "1E-40 A"),
        (math.nan, "A", 4, "nan A"),
    ],
)  # fmt: skip
def test_text_for_the_eye(value, unit, digits, text):
    assert format_quantity(value, unit, digits) == text


@pytest.mark.parametrize("value", [math.nan, math.inf])
def test_no_exact_text_for_what_is_not_finite(value):
    with pytest.raises(ValueError, match=f"found {value}; accepted: a current"):
        exact(value, "A")


def test_bare_numbers_need_no_unit_library():
    code = "import sys, tcopt.units as u; u.parse(1.0, 'A'); sys.exit('pint' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0


@pytest.mark.parametrize(
    "value",
    [
        "x" * 10**6,
        [["x" * 10**6] * 10**3],
        pytest.param(1 << 20000, id="1 << 20000"),
        {"a": {"b": {"c": {}}}},
    ],
)
def test_whatever_was_found_is_shown_in_a_line(value):
    assert len(shown(value)) < 400
