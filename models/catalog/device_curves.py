"""A device's curves out of a data sheet, turned into the quantities the rules of `device_sheet` start from.

[devices.curves]
origin = "data sheet, figures 3 to 9"
on_state = [{ temperature_c = 25, current_a = [...], voltage_v = [...] }, ...]         # two temperatures
diode = [{ temperature_c = 25, current_a = [...], voltage_v = [...] }, ...]            # two temperatures
on_resistance = { temperature_c = [25, 100, 150], resistance_mohm = [...] }            # instead of on_state
turn_on = [{ temperature_c = 150, supply_v = 600, current_a = [...], energy_mj = [...] }, ...]
turn_off = [...]    # one curve at least of each; further temperatures give the temperature coefficient,
recovery = [...]    # further voltages the voltage exponent; all with the gate resistors that are built in
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.catalog.curve_fits import EnergyCurve, energy_fit, greatest_deviation, line_fit, working_range
from models.catalog.curve_reading import (
    COLD_C,
    ENERGIES,
    Curve,
    CurveFault,
    check_entry,
    energy_curves,
    line_curves,
    resistance_table,
)
from models.catalog.derivations import Quantity

Array = NDArray[np.float64]
Found = dict[str, tuple[float, str]]  # quantity -> value in SI, how near the law comes in words


def curve_quantities(
    entry: Any, rated_current: float | None, unipolar: bool
) -> tuple[dict[str, Quantity], list[str]]:
    """Quantities that follow from a part's curves.

    Args:
        entry: the part's `curves` table as the file has it.
        rated_current: of the part [A]; None where it is not given.
        unipolar: whether reverse current flows in the switch's channel.

    Returns:
        Quantities in SI with the greatest deviation of the law from the curves in their origin, and faults in
        words.
    """
    try:
        origin, rated = check_entry(entry, rated_current)
        found: Found = {}
        hot = _conduction(entry, rated, unipolar, found)
        _diode(entry, rated, hot, found)
        _switching(entry, rated, found)
    except CurveFault as fault:
        return {}, [f"curves: {fault}"]
    return {name: Quantity(value, f"fitted to {origin}{words}") for name, (value, words) in found.items()}, []


def _conduction(entry: Mapping[str, Any], rated: float, unipolar: bool, found: Found) -> float | None:
    """Threshold and slope (or on-resistance) of the switch; returns the temperature of the hot values."""
    if "on_resistance" in entry:
        if not unipolar:
            raise CurveFault("on_resistance: a bipolar part has a threshold, give on_state")
        temperature, resistance = resistance_table(entry["on_resistance"])
        hot = float(temperature[-1])
        ends = _ends(temperature, resistance, hot, logarithmic=True)
        words = _within({"": greatest_deviation(_between(ends, temperature, hot), resistance)})
    elif "on_state" in entry:
        curves = line_curves(entry["on_state"], "on_state", rated)
        hot = curves[-1].temperature
        threshold, ends, words = _lines(curves, rated, hot, unipolar)
        if not unipolar:
            found["threshold_25_v"], found["threshold_hot_v"] = ((v, words) for v in threshold)
            found["sheet_slope_25_ohm"], found["sheet_slope_hot_ohm"] = ((r, words) for r in ends)
            found["hot_c"] = hot, ""
            return hot
    else:
        return None
    found["sheet_on_resistance_25_ohm"] = ends[0], words
    found["resistance_ratio_hot"] = ends[1] / ends[0], words
    found["hot_c"] = hot, ""
    return hot


def _diode(entry: Mapping[str, Any], rated: float, hot: float | None, found: Found) -> None:
    """Threshold and slope of the diode, at 25 degC and at the switch's hot temperature."""
    if "diode" not in entry:
        return
    curves = line_curves(entry["diode"], "diode", rated)
    at = curves[-1].temperature if hot is None else hot
    threshold, slope, words = _lines(curves, rated, at, False)
    if min(threshold) <= 0.0:
        raise CurveFault(
            "diode must have a threshold (of a unipolar part: the curve with its channel off), "
            f"got {threshold[0]:.3g} V at 25 degC and {threshold[1]:.3g} V at {at:g} degC"
        )
    found["diode_threshold_25_v"], found["diode_threshold_hot_v"] = ((v, words) for v in threshold)
    found["sheet_diode_slope_25_ohm"], found["sheet_diode_slope_hot_ohm"] = ((r, words) for r in slope)
    found.setdefault("hot_c", (at, ""))


def _lines(
    curves: Sequence[Curve], rated: float, hot: float, through_zero: bool
) -> tuple[tuple[float, float], tuple[float, float], str]:
    """Thresholds [V] and slopes [ohm] at 25 degC and hot, and how near the law comes to every curve."""
    temperature = np.array([one.temperature for one in curves])
    fits = [line_fit(one.current, one.value, rated, through_zero=through_zero) for one in curves]
    threshold = _ends(temperature, np.array([fit.threshold for fit in fits]), hot)
    slope = _ends(temperature, np.array([fit.slope for fit in fits]), hot, logarithmic=True)
    deviations = {}
    for one in curves:
        used = working_range(one.current, rated)
        at = np.array([one.temperature])
        fitted = _straight(threshold, at, hot) + _between(slope, at, hot) * one.current[used]
        deviations[one.place] = greatest_deviation(fitted, one.value[used])
    return threshold, slope, _within(deviations)


def _switching(entry: Mapping[str, Any], rated: float, found: Found) -> None:
    """Energies at rated current, hot and at the reference voltage, their exponents and coefficients."""
    kinds = {name: energy_curves(entry[name], name, rated) for name in ENERGIES if name in entry}
    if not kinds:
        return
    hot, reference = _reference(kinds)
    curves = {
        name: [
            EnergyCurve(one.current, one.value, hot - one.temperature, one.supply / reference)
            for one in given
        ]
        for name, given in kinds.items()
    }
    fits = {}
    for name, given in curves.items():
        try:
            fits[name] = energy_fit(given, rated)
        except ValueError as trouble:
            told = "; ".join(one.place for one in kinds[name])
            raise CurveFault(f"{name}: {trouble}, got {told}") from trouble
    overlap = [fit.voltage_exponent for name, fit in fits.items() if name != "recovery"]
    known = [exponent for exponent in overlap if exponent is not None]
    together = float(np.mean(known)) if known else None  # turn-on and turn-off have one between them
    for name, fit in fits.items():
        exponent = fit.voltage_exponent if name == "recovery" else together
        deviations = {
            given.place: fit.deviation(curve, rated, exponent)
            for given, curve in zip(kinds[name], curves[name], strict=True)
        }
        words = _within(deviations)
        found[f"sheet_{name}_energy_j"] = fit.energy, words
        found[f"{name}_current_exponent"] = fit.exponent, words
        found[f"{name}_constant_share"] = fit.constant, words
        if fit.temperature_coefficient is not None:
            found[f"{name}_temperature_coefficient_per_k"] = fit.temperature_coefficient, words
    if together is not None:
        found["energy_voltage_exponent"] = together, ""
    if "recovery" in fits and fits["recovery"].voltage_exponent is not None:
        found["recovery_voltage_exponent"] = fits["recovery"].voltage_exponent, ""
    found["energy_hot_c"] = hot, ""
    found["energy_reference_voltage_v"] = reference, ""


def _reference(kinds: Mapping[str, Sequence[Curve]]) -> tuple[float, float]:
    """Hot temperature [degC] and reference voltage [V], which the energies must share."""
    hottest = {name: max(one.temperature for one in given) for name, given in kinds.items()}
    if len(set(hottest.values())) > 1:
        told = ", ".join(f"{name} {value:g} degC" for name, value in hottest.items())
        raise CurveFault(f"energies must share their highest temperature, got {told}")
    hot = next(iter(hottest.values()))
    supplies = {
        name: {one.supply for one in given if one.temperature == hot} for name, given in kinds.items()
    }
    shared = set.intersection(*supplies.values())
    if not shared:
        told = ", ".join(f"{name} {_listed(volts)} V" for name, volts in supplies.items())
        raise CurveFault(f"energies must share one supply voltage at their highest temperature, got {told}")
    return hot, max(shared)


def _listed(values: set[float]) -> str:
    return "/".join(f"{value:g}" for value in sorted(values))


def _ends(temperature: Array, values: Array, hot: float, *, logarithmic: bool = False) -> tuple[float, float]:
    """Values at 25 degC and hot on a straight line through the coldest and the hottest, of the logarithm for
    resistances.
    """
    low, high = int(np.argmin(temperature)), int(np.argmax(temperature))
    ends = np.log(values[[low, high]]) if logarithmic else values[[low, high]]
    slope = (ends[1] - ends[0]) / (temperature[high] - temperature[low])
    line = [ends[0] + slope * (at - temperature[low]) for at in (COLD_C, hot)]
    cold, warm = np.exp(line) if logarithmic else line
    return float(cold), float(warm)


def _straight(ends: tuple[float, float], temperature: Array, hot: float) -> Array:
    """Threshold at a temperature, as `conduction.Path` has it [V]."""
    return ends[0] + (ends[1] - ends[0]) * (temperature - COLD_C) / (hot - COLD_C)


def _between(ends: tuple[float, float], temperature: Array, hot: float) -> Array:
    """Resistance at a temperature, likewise [ohm]."""
    return np.asarray(ends[0] * (ends[1] / ends[0]) ** ((temperature - COLD_C) / (hot - COLD_C)))


def _within(deviations: Mapping[str, float]) -> str:
    """Greatest deviation of every curve in words."""
    told = (f"{share:.1%}" + (f" at {place}" if place else "") for place, share in deviations.items())
    return f", within {', '.join(told)}"
