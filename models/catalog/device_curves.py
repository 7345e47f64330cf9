"""A device's curves out of a data sheet: read, checked, and turned into the quantities the rules start from.

[devices.curves]
origin = "data sheet, figures 3 to 9"
on_state = [{ temperature_c = 25, current_a = [...], voltage_v = [...] }, ...]         # two temperatures
diode = [{ temperature_c = 25, current_a = [...], voltage_v = [...] }, ...]            # two temperatures
on_resistance = { temperature_c = [25, 100, 150], resistance_mohm = [...] }            # instead of on_state
turn_on = [{ temperature_c = 150, supply_v = 600, current_a = [...], energy_mj = [...] }, ...]
turn_off = [...]    # one curve at least of each; further temperatures give the temperature coefficient,
recovery = [...]    # further voltages the voltage exponent
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.catalog.curve_fits import EnergyFit, energy_fit, line_fit
from models.catalog.derivations import Quantity
from models.catalog.key_units import KEY_UNITS

Array = NDArray[np.float64]
ENERGIES = ("turn_on", "turn_off", "recovery")
COLD_C = 25.0
COLD_ROOM = 10.0  # a curve within that of 25 degC may stand for it [K], judgement
KINDS = {
    "on_state": ("temperature_c", "current_a", "voltage_v"),
    "diode": ("temperature_c", "current_a", "voltage_v"),
    "on_resistance": ("temperature_c", "resistance_ohm"),
    **dict.fromkeys(ENERGIES, ("temperature_c", "supply_v", "current_a", "energy_j")),
}


class CurveFault(Exception):
    """What is wrong with a curve, in words."""


@dataclass(frozen=True)
class Curve:
    """A curve at a junction temperature [degC] and, of energies, a supply voltage [V]."""

    temperature: float
    supply: float
    current: Array
    value: Array


def curve_quantities(
    entry: Any, rated_current: float | None, unipolar: bool
) -> tuple[dict[str, Quantity], list[str]]:
    """Quantities that follow from a part's curves.

    Args:
        entry: the part's `curves` table as the file has it.
        rated_current: of the part [A]; None where it is not given.
        unipolar: whether reverse current flows in the switch's channel.

    Returns:
        Quantities in SI with the fit's greatest deviation in their origin, and faults in words.
    """
    try:
        origin = _checked(entry, rated_current)
        assert rated_current is not None
        found: dict[str, tuple[float, str]] = {}
        hot = _conduction(entry, rated_current, unipolar, found)
        _diode(entry, rated_current, hot, found)
        _switching(entry, rated_current, found)
    except CurveFault as fault:
        return {}, [f"curves: {fault}"]
    return {name: Quantity(value, f"fitted to {origin}{words}") for name, (value, words) in found.items()}, []


def _checked(entry: Any, rated_current: float | None) -> str:
    if not isinstance(entry, Mapping):
        raise CurveFault(f"expected a table [devices.curves], got {entry!r}")
    for key in entry:
        if key not in (*KINDS, "origin"):
            raise CurveFault(f"unknown key {key!r}; known are origin, {', '.join(KINDS)}")
    origin = entry.get("origin")
    if not isinstance(origin, str) or not origin.strip():
        raise CurveFault("has no origin: say where the curves come from")
    if rated_current is None:
        raise CurveFault("need sheet_rated_current_a beside them: it scales the energies")
    if "on_state" in entry and "on_resistance" in entry:
        raise CurveFault("on_state and on_resistance say the same; give one of them")
    return origin


def _conduction(
    entry: Mapping[str, Any], rated: float, unipolar: bool, found: dict[str, tuple[float, str]]
) -> float | None:
    """Threshold and slope (or on-resistance) of the switch; returns the temperature of the hot values."""
    if "on_resistance" in entry:
        if not unipolar:
            raise CurveFault("on_resistance: a bipolar part has a threshold, give on_state")
        temperature, resistance = _table(entry["on_resistance"], "on_resistance")
    elif "on_state" in entry:
        curves = _curves(entry["on_state"], "on_state", supply=False)
        temperature = np.array([curve.temperature for curve in curves])
        fits = [line_fit(one.current, one.value, rated, through_zero=unipolar) for one in curves]
        resistance = np.array([fit.slope for fit in fits])
        words = f", within {max(fit.deviation for fit in fits):.1%}"
        if not unipolar:
            cold, hot = _two_temperatures(temperature, np.array([fit.threshold for fit in fits]))
            found["threshold_25_v"], found["threshold_hot_v"] = (cold, words), (hot, words)
            cold, hot = _two_temperatures(temperature, resistance, logarithmic=True)
            found["sheet_slope_25_ohm"], found["sheet_slope_hot_ohm"] = (cold, words), (hot, words)
            found["hot_c"] = float(temperature.max()), ""
            return float(temperature.max())
    else:
        return None
    cold, hot = _two_temperatures(temperature, resistance, logarithmic=True)
    found["sheet_on_resistance_25_ohm"] = cold, ""
    found["resistance_ratio_hot"] = hot / cold, ""
    found["hot_c"] = float(temperature.max()), ""
    return float(temperature.max())


def _diode(
    entry: Mapping[str, Any], rated: float, hot: float | None, found: dict[str, tuple[float, str]]
) -> None:
    """Threshold and slope of the diode, at 25 degC and at the switch's hot temperature."""
    if "diode" not in entry:
        return
    curves = _curves(entry["diode"], "diode", supply=False)
    temperature = np.array([curve.temperature for curve in curves])
    fits = [line_fit(one.current, one.value, rated) for one in curves]
    words = f", within {max(fit.deviation for fit in fits):.1%}"
    at = float(temperature.max()) if hot is None else hot
    cold, warm = _two_temperatures(temperature, np.array([fit.threshold for fit in fits]), at=at)
    found["diode_threshold_25_v"], found["diode_threshold_hot_v"] = (cold, words), (max(warm, 0.0), words)
    cold, warm = _two_temperatures(
        temperature, np.array([fit.slope for fit in fits]), at=at, logarithmic=True
    )
    found["sheet_diode_slope_25_ohm"], found["sheet_diode_slope_hot_ohm"] = (cold, words), (warm, words)
    found.setdefault("hot_c", (at, ""))


def _switching(entry: Mapping[str, Any], rated: float, found: dict[str, tuple[float, str]]) -> None:
    """Energies at rated current, hot and at the reference voltage, their exponents and coefficients."""
    kinds = {name: _curves(entry[name], name, supply=True) for name in ENERGIES if name in entry}
    if not kinds:
        return
    hottest = {name: max(curve.temperature for curve in curves) for name, curves in kinds.items()}
    if len(set(hottest.values())) > 1:
        told = ", ".join(f"{name} {value:g} degC" for name, value in hottest.items())
        raise CurveFault(f"energies must share their highest temperature, got {told}")
    hot = next(iter(hottest.values()))
    supplies = [{one.supply for one in curves if one.temperature == hot} for curves in kinds.values()]
    shared = set.intersection(*supplies)
    if not shared:
        raise CurveFault("energies must share one supply voltage at their highest temperature")
    reference = max(shared)
    exponents = []
    for name, curves in kinds.items():
        fits = {(one.temperature, one.supply): energy_fit(one.current, one.value, rated) for one in curves}
        main = fits[hot, reference]
        words = f", within {main.deviation:.1%}"
        found[f"sheet_{name}_energy_j"] = main.energy, words
        found[f"{name}_current_exponent"] = main.exponent, words
        found[f"{name}_constant_share"] = main.constant, words
        coefficient = _temperature_coefficient(fits, hot, reference)
        if coefficient is not None:
            found[f"{name}_temperature_coefficient_per_k"] = coefficient, ""
        exponent = _voltage_exponent(fits, hot, reference)
        if exponent is not None and name == "recovery":
            found["recovery_voltage_exponent"] = exponent, ""
        elif exponent is not None:
            exponents.append(exponent)
    if exponents:
        found["energy_voltage_exponent"] = float(np.mean(exponents)), ""
    found["energy_hot_c"] = hot, ""
    found["energy_reference_voltage_v"] = reference, ""


Fits = Mapping[tuple[float, float], EnergyFit]


def _temperature_coefficient(fits: Fits, hot: float, reference: float) -> float | None:
    """k of E = E_hot [1 - k (T_hot - T)] from the coldest curve at the reference voltage [1/K]."""
    colder = [temperature for temperature, supply in fits if supply == reference and temperature < hot]
    if not colder:
        return None
    ratio = fits[min(colder), reference].energy / fits[hot, reference].energy
    return max((1.0 - ratio) / (hot - min(colder)), 0.0)


def _voltage_exponent(fits: Fits, hot: float, reference: float) -> float | None:
    """Exponent from the lowest supply voltage at the highest temperature [-]."""
    lower = [supply for temperature, supply in fits if temperature == hot and supply < reference]
    if not lower:
        return None
    ratio = fits[hot, reference].energy / fits[hot, min(lower)].energy
    return float(np.log(ratio) / np.log(reference / min(lower)))


def _two_temperatures(
    temperature: Array, values: Array, *, at: float | None = None, logarithmic: bool = False
) -> tuple[float, float]:
    """Values at 25 degC and at `at` (the hottest where None): a straight line through the coldest and the
    hottest, of the logarithm for resistances.
    """
    low, high = int(np.argmin(temperature)), int(np.argmax(temperature))
    ends = np.log(values[[low, high]]) if logarithmic else values[[low, high]]
    slope = (ends[1] - ends[0]) / (temperature[high] - temperature[low])
    line = [
        ends[0] + slope * (t - temperature[low]) for t in (COLD_C, temperature[high] if at is None else at)
    ]
    cold, hot = np.exp(line) if logarithmic else line
    return float(cold), float(hot)


def _table(entry: Any, kind: str) -> tuple[Array, Array]:
    values = _read(entry, kind)
    temperature, resistance = values["temperature_c"], values["resistance_ohm"]
    _check_pair(kind, "temperature_c", temperature, "resistance", resistance)
    _check_temperatures(kind, temperature)
    return temperature, resistance


def _curves(entry: Any, kind: str, *, supply: bool) -> list[Curve]:
    if not isinstance(entry, Sequence) or isinstance(entry, str) or not entry:
        raise CurveFault(f"{kind}: expected a list of curves {{ ... }}, got {entry!r}")
    found = []
    for place, one in enumerate(entry):
        where = f"{kind}[{place}]"
        values = _read(one, kind, where)
        name = "energy_j" if supply else "voltage_v"
        current, value = values["current_a"], values[name]
        _check_pair(where, "current_a", current, name, value)
        if supply and np.any(np.diff(value) < 0.0):
            raise CurveFault(f"{where}: energies must not fall with the current")
        single = [float(values[key][0]) for key in ("temperature_c", "supply_v") if key in values]
        found.append(Curve(single[0], single[1] if supply else 0.0, current, value))
    if not supply:
        _check_temperatures(kind, np.array([one.temperature for one in found]))
    places = [(one.temperature, one.supply) for one in found]
    if len(set(places)) < len(places):
        raise CurveFault(f"{kind}: two curves of one temperature{' and supply voltage' if supply else ''}")
    return found


def _read(entry: Any, kind: str, where: str | None = None) -> dict[str, Array]:
    """One curve's values in SI."""
    where = where or kind
    if not isinstance(entry, Mapping):
        raise CurveFault(f"{where}: expected {{ {', '.join(KINDS[kind])} }}, got {entry!r}")
    values: dict[str, Array] = {}
    for key, given in entry.items():
        name, factor = _si_key(key, kind, where)
        numbers = given if isinstance(given, list) else [given]
        if not numbers or any(isinstance(n, bool) or not isinstance(n, int | float) for n in numbers):
            raise CurveFault(f"{where}.{key}: expected numbers, got {given!r}")
        values[name] = np.array(numbers, dtype=float) * factor
    for name in KINDS[kind]:
        if name not in values:
            raise CurveFault(f"{where}: {name} is missing")
    return values


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
            f"{where}: {first} and {second} need the same number of values, two at least, "
            f"got {len(x)} and {len(y)}"
        )
    if np.any(np.diff(x) <= 0.0):
        raise CurveFault(f"{where}: {first} must rise, got {x.tolist()}")
    if np.any(y <= 0.0) or (first == "current_a" and x[0] < 0.0):
        raise CurveFault(f"{where}: values must be above zero")


def _check_temperatures(kind: str, temperature: Array) -> None:
    if len(temperature) < 2 or np.ptp(temperature) < COLD_ROOM:
        raise CurveFault(f"{kind}: needs two temperatures, {COLD_ROOM:g} K apart at least")
