"""Quantities as people write them ("5 kW", "20 kHz", "45 degC") turned into plain numbers in a stated unit.

The only module that knows pint. It is imported on first use: commands that read no study start without it.
"""

from __future__ import annotations

import json
import math
import re
from functools import cache
from typing import Any

from optimizer.errors import InputError, Problem

KINDS = {
    # unit inside: (what it is called in an error, an example of how to write it)
    "": ("a number or a share", '0.9 or "90 %"'),
    "A": ("a current", '"10 A"'),
    "F": ("a capacitance", '"10 uF"'),
    "H": ("an inductance", '"3 mH"'),
    "Hz": ("a frequency", '"20 kHz"'),
    "K": ("a temperature difference", '"15 K"'),
    "K/W": ("a thermal resistance", '"0.5 K/W"'),
    "V": ("a voltage", '"230 V"'),
    "VA": ("a power", '"5 kVA"'),
    "W": ("a power", '"5 kW"'),
    "degC": ("a temperature", '"45 degC"'),
    "kg": ("a mass", '"12 kg"'),
    "m": ("a length", '"1000 m"'),
    "m/s": ("a speed", '"2 m/s"'),
    "m^2": ("an area", '"60 mm^2"'),
    "m^3": ("a volume", '"150 cm^3"'),
    "m^3/VA": ("a volume per power", '"20 cm^3/kVA"'),
    "ohm": ("a resistance", '"2 ohm"'),
}

PREFIXED = frozenset({"A", "F", "H", "Hz", "V", "VA", "W", "ohm"})
PREFIXES = (("M", 1e6), ("k", 1e3), ("", 1.0), ("m", 1e-3), ("u", 1e-6), ("n", 1e-9), ("p", 1e-12))

LONGEST_TEXT = 60
"""Longer texts are no quantity; also the length to which a given value is cut in an error."""

_WRITTEN = re.compile(r"\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*([^\d\s.,].*)?", re.DOTALL)
_DECIMAL_COMMA = re.compile(r"\s*[+-]?\d+,\d")


def parse(text: object, unit: str) -> float:
    """Return a quantity as a number in `unit`.

    A text carries its unit ("5 kVA"); a bare number is taken only where `unit` is "" (dimensionless). VA and
    W are one dimension; an angle is not a pure number, so that "3000 rpm" or "314 rad/s" is no frequency;
    where `unit` is "K" a temperature difference is meant, which degrees on a scale ("15 degC") are not.

    Args:
        text: what the user wrote.
        unit: the unit of the result, as pint writes it; "" for a dimensionless number.

    Returns:
        The value [unit].

    Raises:
        InputError: with one Problem without a place: what was given, and an example of what is expected.
    """
    if isinstance(text, str):
        return _parse_text(text, unit)
    if unit == "" and isinstance(text, (int, float)) and not isinstance(text, bool):
        return _finite(text, text, unit)
    raise InputError(Problem(show(text), expectation(unit)))


def expectation(unit: str) -> str:
    """Return in words what a quantity of this unit is, with an example."""
    kind, example = KINDS.get(unit, (f"a quantity in {unit}", f'"1 {unit}"'))
    return f"{kind}, e.g. {example}"


def written(value: float, unit: str) -> str:
    """Return a value [unit] as a person writes it, to six digits; parse() reads it back."""
    size = abs(value)
    prefix, factor = "", 1.0
    if unit in PREFIXED and size > 0.0 and not 1.0 <= size < 1e3:
        prefix, factor = next(((p, f) for p, f in PREFIXES if size >= f), PREFIXES[-1])
    return f"{value / factor:.6g} {prefix}{unit}".rstrip()


def show(value: object) -> str:
    """Return a value out of a TOML file as it stands there, cut where it is long."""
    if isinstance(value, dict):
        return "a table"
    try:
        shown = json.dumps(value, ensure_ascii=False, default=str)
    except ValueError:  # an integer of thousands of digits
        return "a number too long to print"
    return shown if len(shown) <= LONGEST_TEXT else shown[: LONGEST_TEXT - 3] + "..."


def _parse_text(text: str, unit: str) -> float:
    match = _WRITTEN.fullmatch(text) if len(text) <= LONGEST_TEXT else None
    if match is None:
        hint = " (with a decimal point, not a comma)" if _DECIMAL_COMMA.match(text) else ""
        raise InputError(Problem(show(text), expectation(unit) + hint))
    number, unit_text = match[1], (match[2] or "").strip()
    if not unit_text:
        if unit == "":
            return _finite(float(number), text, unit)
        raise InputError(Problem(f"{show(text)} without a unit", expectation(unit)))
    return _finite(_convert(float(number), unit_text, unit, text), text, unit)


def _convert(number: float, unit_text: str, unit: str, text: str) -> float:
    registry = _registry()
    try:
        given = registry.Quantity(number, registry.parse_units(unit_text))
        same = _base_units(given) == _base_units(registry.Quantity(1.0, registry.parse_units(unit)))
    except Exception as trouble:  # pint answers malformed units with errors of many unrelated types
        problem = Problem(f"{show(text)} (unit {show(unit_text)} not known)", expectation(unit))
        raise InputError(problem) from trouble
    on_a_scale, a_difference = not given._is_multiplicative, "delta_" in str(given.units)
    if not same or (a_difference if unit == "degC" else on_a_scale):
        raise InputError(Problem(show(text), expectation(unit)))
    return float(given.to(unit or "dimensionless").magnitude)


def _base_units(quantity: Any) -> dict[str, float]:
    """Return the powers of the base units, where the angle counts as one of its own."""
    return dict(quantity.to_root_units().unit_items())


def _finite(value: float, text: object, unit: str) -> float:
    try:
        number = float(value)
    except OverflowError:
        number = math.inf
    if math.isfinite(number):
        return number
    raise InputError(Problem(show(text), expectation(unit)))


@cache
def _registry() -> Any:
    import pint

    return pint.UnitRegistry()
