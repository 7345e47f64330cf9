"""Quantities: known conversions, laws of scaling, and a clear error for all that is none."""

import math
import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from optimizer.errors import InputError
from optimizer.study.quantity import KINDS, parse, written

# Conversions by definition of the units (SI brochure, 9th edition): prefixes, 0 degC = 273.15 K,
# 1 degF = 5/9 K with 32 degF = 0 degC, 1 ft = 0.3048 m.
KNOWN = [
    ("5 kW", "W", 5000.0),
    ("5 kW", "VA", 5000.0),
    ("5 kVA", "VA", 5000.0),
    ("5 kVA", "W", 5000.0),
    ("230 V", "V", 230.0),
    ("230V", "V", 230.0),
    ("20 kHz", "Hz", 20e3),
    ("45 degC", "degC", 45.0),
    ("45 °C", "degC", 45.0),
    ("318.15 K", "degC", 45.0),
    ("113 degF", "degC", 45.0),
    ("-40 degC", "degC", -40.0),
    ("15 K", "K", 15.0),
    ("10 %", "", 0.1),
    ("1 %", "", 0.01),
    ("0.9", "", 0.9),
    (0.9, "", 0.9),
    (3, "", 3.0),
    ("3 mH", "H", 3e-3),
    ("4.7 µF", "F", 4.7e-6),
    ("4.7 uF", "F", 4.7e-6),
    ("0.5 K/W", "K/W", 0.5),
    ("60 mm^2", "m^2", 60e-6),
    ("20 cm^3/kVA", "m^3/VA", 20e-9),
    ("0.15 l", "m^3", 150e-6),
    ("3280 ft", "m", 999.744),
    ("1e3 V", "V", 1000.0),
    ("+.5 ohm", "ohm", 0.5),
]


@pytest.mark.parametrize(("text", "unit", "value"), KNOWN)
def test_known_conversions(text, unit, value):
    assert parse(text, unit) == pytest.approx(value, rel=1e-12)


WRONG = [
    ("5 A", "V", 'given "5 A", expected a voltage, e.g. "230 V"'),
    ("45 degC", "K/W", 'given "45 degC", expected a thermal resistance, e.g. "0.5 K/W"'),
    ("15 degC", "K", 'given "15 degC", expected a temperature difference, e.g. "15 K"'),
    ("27 degF", "K", 'given "27 degF", expected a temperature difference, e.g. "15 K"'),
    ("15 delta_degC", "degC", 'given "15 delta_degC", expected a temperature, e.g. "45 degC"'),
    ("3000 rpm", "Hz", 'given "3000 rpm", expected a frequency, e.g. "20 kHz"'),
    ("314 rad/s", "Hz", 'given "314 rad/s", expected a frequency, e.g. "20 kHz"'),
    ("3 dB", "", 'given "3 dB", expected a number or a share, e.g. 0.9 or "90 %"'),
    ("50 khz", "Hz", 'given "50 khz" (unit "khz" not known), expected a frequency, e.g. "20 kHz"'),
    ("230", "V", 'given "230" without a unit, expected a voltage, e.g. "230 V"'),
    (230, "V", 'given 230, expected a voltage, e.g. "230 V"'),
    (True, "", 'given true, expected a number or a share, e.g. 0.9 or "90 %"'),
    ("5,5 kW", "W", 'given "5,5 kW", expected a power, e.g. "5 kW" (with a decimal point, not a comma)'),
    ("10 000 V", "V", 'given "10 000 V", expected a voltage, e.g. "230 V"'),
    ("5 kW + 3 kW", "W", 'given "5 kW + 3 kW" (unit "kW + 3 kW" not known), expected a power, e.g. "5 kW"'),
    ("kW", "W", 'given "kW", expected a power, e.g. "5 kW"'),
    ("", "W", 'given "", expected a power, e.g. "5 kW"'),
    ("1e999 V", "V", 'given "1e999 V", expected a voltage, e.g. "230 V"'),
    (math.nan, "", 'given NaN, expected a number or a share, e.g. 0.9 or "90 %"'),
    (10**400, "", "given 1000000"),
    (16**5000, "", "given a number too long to print, expected a number or a share"),
    ([], "V", 'given [], expected a voltage, e.g. "230 V"'),
    ({}, "V", 'given a table, expected a voltage, e.g. "230 V"'),
    ("1 s", "V*s", 'given "1 s", expected a quantity in V*s, e.g. "1 V*s"'),
]


@pytest.mark.parametrize(("text", "unit", "message"), WRONG, ids=range(len(WRONG)))
def test_errors_say_what_was_given_and_what_is_expected(text, unit, message):
    with pytest.raises(InputError, match="^" + re.escape(message)):
        parse(text, unit)


@pytest.mark.parametrize("unit", KINDS)
def test_the_example_of_every_unit_reads_in_that_unit(unit):
    for example in KINDS[unit][1].split(" or "):
        assert math.isfinite(parse(example.strip('"'), unit))


FINITE = st.floats(min_value=1e-6, max_value=1e6)
PREFIXED = st.sampled_from(
    [("n", 1e-9), ("u", 1e-6), ("m", 1e-3), ("", 1.0), ("k", 1e3), ("M", 1e6), ("G", 1e9)]
)


@given(value=FINITE, prefix=PREFIXED, unit=st.sampled_from(["V", "A", "VA", "W", "Hz", "H", "F", "ohm"]))
def test_a_prefix_scales_the_value(value, prefix, unit):
    assert parse(f"{value!r} {prefix[0]}{unit}", unit) == pytest.approx(value * prefix[1], rel=1e-12)


@given(value=st.floats(min_value=-1e12, max_value=1e12), unit=st.sampled_from(sorted(KINDS)))
def test_a_value_in_the_unit_itself_is_unchanged(value, unit):
    assert parse(f"{value!r} {unit}", unit) == value


@given(value=st.floats(min_value=-1e9, max_value=1e9), unit=st.sampled_from(sorted(KINDS)))
def test_what_is_written_reads_back_to_six_digits(value, unit):
    assert parse(written(value, unit), unit) == pytest.approx(value, rel=1e-5)


@pytest.mark.parametrize(
    ("value", "unit", "text"),
    [
        (100e6, "VA", "100 MVA"),
        (357.8, "V", "357.8 V"),
        (8e3, "Hz", "8 kHz"),
        (2e-3, "A", "2 mA"),
        (0.0, "V", "0 V"),
    ]
    + [(0.02, "", "0.02"), (5000.0, "m", "5000 m"), (-100.0, "m", "-100 m"), (0.05, "K/W", "0.05 K/W")],
)
def test_written_as_people_write_it(value, unit, text):
    assert written(value, unit) == text


def read_or_refused(text, unit):
    """Whether a text is read as a finite number or refused as input; any other error passes through."""
    try:
        return math.isfinite(parse(text, unit))
    except InputError as error:
        return len(error.problems) == 1


@given(text=st.text(max_size=70))
def test_any_text_is_read_or_refused_as_input(text):
    assert read_or_refused(text, "V")


@given(
    number=st.integers(0, 99), unit=st.text(alphabet="kVAWmHz^*/()+-. %_°0123456789", min_size=1, max_size=12)
)
def test_malformed_units_are_refused_as_input(number, unit):
    assert read_or_refused(f"{number} {unit}", "VA")
