"""Curves of a data sheet as a part's entry has them: read, brought to SI, and checked one by one."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.catalog.key_units import KEY_UNITS

Array = NDArray[np.float64]
ENERGIES = ("turn_on", "turn_off", "recovery")
_LINE = ("temperature_c", "current_a", "voltage_v")
_ENERGY = ("temperature_c", "supply_v", "current_a", "energy_j")
KINDS: dict[str, tuple[str, ...]] = {
    "on_state": _LINE,
    "diode": _LINE,
    "on_resistance": ("temperature_c", "resistance_ohm"),
    **dict.fromkeys(ENERGIES, _ENERGY),
}
COLD_C = 25.0
COLDEST_C, HOTTEST_C = -60.0, 300.0  # what a data sheet can mean by a junction temperature, judgement
LEAST_SPAN = 10.0  # curves nearer than that to each other say nothing about temperature [K], judgement
REACHED = 0.5  # a curve that ends below this share of the rated current says nothing about it, judgement
# Plausible values at rated current, wide enough for any part: they find values typed in another unit.
DROP_V = (0.02, 30.0)
CROSSING_S = (2e-11, 2e-5)  # energy over voltage and current: half the time of crossing


class CurveFault(Exception):
    """What is wrong with a curve, in words."""


@dataclass(frozen=True)
class Curve:
    """A curve at a junction temperature [degC] and, of energies, a supply voltage [V] (else 0).

    `value` is a voltage [V] or an energy [J] over `current` [A].
    """

    temperature: float
    supply: float
    current: Array
    value: Array

    @property
    def place(self) -> str:
        """Temperature and supply voltage in words."""
        return f"{self.temperature:g} degC" + (f" and {self.supply:g} V" if self.supply else "")


def check_entry(entry: Any, rated_current: float | None) -> tuple[str, float]:
    """Check a part's table of curves as a whole.

    Args:
        entry: the table as the file has it.
        rated_current: of the part [A]; None where it is not given.

    Returns:
        Origin of the curves, and the rated current [A].

    Raises:
        CurveFault: naming key, what is expected and what was given.
    """
    if not isinstance(entry, Mapping):
        raise CurveFault(f"must be a table [devices.curves], got {entry!r}")
    for key in entry:
        if key not in (*KINDS, "origin"):
            raise CurveFault(f"unknown key {key!r}; known are origin, {', '.join(KINDS)}")
    origin = entry.get("origin")
    if not isinstance(origin, str) or not origin.strip():
        raise CurveFault(f"origin must say where the curves come from, got {origin!r}")
    if rated_current is None or not 0.0 < rated_current < np.inf:
        raise CurveFault(
            "need sheet_rated_current_a above 0 beside them: fits weigh the range up to it, "
            f"got {'none' if rated_current is None else f'{rated_current:g}'}"
        )
    if "on_state" in entry and "on_resistance" in entry:
        raise CurveFault("on_state and on_resistance say the same; give one of them")
    return origin, rated_current


def line_curves(entry: Any, kind: str, rated: float) -> list[Curve]:
    """Voltages over current at two temperatures at least, rising in temperature.

    Args:
        entry: list of curves as the file has it.
        kind: `on_state` or `diode`.
        rated: rated current [A].

    Raises:
        CurveFault.
    """
    found = _curves(entry, kind, rated)
    for place, one in enumerate(found):
        _check_plausible(f"{kind}[{place}].voltage_v", _at(one, rated), DROP_V, "V at rated current")
    _check_temperatures(kind, np.array([one.temperature for one in found]))
    return sorted(found, key=lambda one: one.temperature)


def energy_curves(entry: Any, kind: str, rated: float) -> list[Curve]:
    """Energies over current, one curve at least.

    Args:
        entry: list of curves as the file has it.
        kind: one of ENERGIES.
        rated: rated current [A].

    Raises:
        CurveFault.
    """
    found = _curves(entry, kind, rated)
    for place, one in enumerate(found):
        key = f"{kind}[{place}].energy_j"
        if one.supply <= 0.0:
            raise CurveFault(f"{kind}[{place}].supply_v must be above 0, got {one.supply:g}")
        if np.any(np.diff(one.value) < 0.0):
            raise CurveFault(f"{key} must not fall with the current, got {_told(one.value)}")
        time = _at(one, rated) / (rated * one.supply)
        _check_plausible(key, time, CROSSING_S, "J per ampere and volt at rated current")
    return found


def resistance_table(entry: Any) -> tuple[Array, Array]:
    """On-resistance [ohm] over junction temperature [degC], rising in temperature.

    Args:
        entry: table as the file has it.

    Raises:
        CurveFault.
    """
    kind = "on_resistance"
    values = _read(entry, kind, kind)
    temperature, resistance = values["temperature_c"], values["resistance_ohm"]
    _check_pair(kind, "temperature_c", temperature, "resistance_ohm", resistance)
    _check_temperatures(kind, temperature)
    return temperature, resistance


def _at(curve: Curve, rated: float) -> float:
    """Value of a curve at rated current, or at its end where that comes first."""
    return float(np.interp(rated, curve.current, curve.value))


def _check_plausible(key: str, value: float, ends: tuple[float, float], unit: str) -> None:
    if not ends[0] <= value <= ends[1]:
        raise CurveFault(
            f"{key} must come to {ends[0]:g} to {ends[1]:g} {unit}, got {value:.3g}: another unit?"
        )


def _curves(entry: Any, kind: str, rated: float) -> list[Curve]:
    if not isinstance(entry, Sequence) or isinstance(entry, str) or not entry:
        raise CurveFault(f"{kind} must be a list of curves, each {_shape(kind)}, got {entry!r}")
    found = []
    for place, one in enumerate(entry):
        where = f"{kind}[{place}]"
        values = _read(one, kind, where)
        current, value = values["current_a"], values[KINDS[kind][-1]]
        _check_pair(where, "current_a", current, KINDS[kind][-1], value)
        if current[0] < 0.0:
            raise CurveFault(f"{where}.current_a must not be negative, got {_told(current)}")
        if current[-1] < REACHED * rated:
            raise CurveFault(
                f"{where}.current_a must reach {REACHED:g} of the rated {rated:g} A, "
                f"got {current[-1]:g} A at most"
            )
        temperature = float(values["temperature_c"][0])
        _check_junction(f"{where}.temperature_c", values["temperature_c"])
        supply = float(values["supply_v"][0]) if "supply_v" in values else 0.0
        found.append(Curve(temperature, supply, current, value))
    places = [one.place for one in found]
    for one in found:
        if places.count(one.place) > 1:
            raise CurveFault(f"{kind} must have one curve at {one.place}, got {places.count(one.place)}")
    return found


def _shape(kind: str) -> str:
    return f"{{ {', '.join(KINDS[kind])} }}"


def _read(entry: Any, kind: str, where: str) -> dict[str, Array]:
    """One curve's values in SI; temperature and supply voltage of a curve hold one value."""
    if not isinstance(entry, Mapping):
        raise CurveFault(f"{where} must be {_shape(kind)}, got {entry!r}")
    values: dict[str, Array] = {}
    for key, given in entry.items():
        name, factor = _si_key(key, kind, where)
        if name in values:
            raise CurveFault(f"{where}: {name} is given twice, in two units")
        single = kind != "on_resistance" and name in ("temperature_c", "supply_v")
        values[name] = _numbers(f"{where}.{key}", given, single) * factor
    for name in KINDS[kind]:
        if name not in values:
            raise CurveFault(f"{where} must be {_shape(kind)}, {name} is missing")
    return values


def _numbers(key: str, given: Any, single: bool) -> Array:
    numbers = [given] if single else given
    fitting = isinstance(numbers, list) and bool(numbers) and all(_is_number(one) for one in numbers)
    if not fitting:
        raise CurveFault(f"{key} must be {'one number' if single else 'a list of numbers'}, got {given!r}")
    return np.array(numbers, dtype=float)


def _is_number(value: Any) -> bool:
    if isinstance(value, bool) or not isinstance(value, int | float):
        return False
    return abs(value) <= 1e30  # neither NaN nor infinite nor beyond what a float holds


def _si_key(key: str, kind: str, where: str) -> tuple[str, float]:
    stem, _, unit = key.rpartition("_")
    si, factor = KEY_UNITS.get(unit, (unit, 1.0))
    name = f"{stem}_{si}"
    if name not in KINDS[kind]:
        raise CurveFault(f"{where}: unknown key {key!r}; expected {', '.join(KINDS[kind])}")
    return name, factor


def _check_pair(where: str, first: str, x: Array, second: str, y: Array) -> None:
    if len(x) != len(y) or len(x) < 2:
        raise CurveFault(
            f"{where}: {first} and {second} must have the same number of values, two at least, "
            f"got {len(x)} and {len(y)}"
        )
    if np.any(np.diff(x) <= 0.0):
        raise CurveFault(f"{where}.{first} must rise, got {_told(x)}")
    if np.any(y <= 0.0):
        raise CurveFault(f"{where}.{second} must be above 0, got {_told(y)}")


def _check_junction(key: str, temperature: Array) -> None:
    if np.any((temperature < COLDEST_C) | (temperature > HOTTEST_C)):
        raise CurveFault(f"{key} must lie in {COLDEST_C:g} to {HOTTEST_C:g} degC, got {_told(temperature)}")


def _check_temperatures(kind: str, temperature: Array) -> None:
    _check_junction(f"{kind}.temperature_c", temperature)
    if len(temperature) < 2 or np.ptp(temperature) < LEAST_SPAN or temperature.max() < COLD_C + LEAST_SPAN:
        raise CurveFault(
            f"{kind} must have two temperatures, {LEAST_SPAN:g} K apart at least, the hotter "
            f"{COLD_C + LEAST_SPAN:g} degC at least, got {_told(temperature)}"
        )


def _told(values: Array) -> str:
    return ", ".join(f"{value:g}" for value in values)
