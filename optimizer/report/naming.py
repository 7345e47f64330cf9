"""Words and units for names with a unit at their end, so that no reader meets a name of the program."""

from __future__ import annotations

import math

from models.catalog.key_units import si_unit_of
from optimizer.decision.figures import figure

SHOWN_UNITS = {
    "m": ("mm", 1e3), "m2": ("mm²", 1e6), "m3": ("cm³", 1e6), "s": ("µs", 1e6), "h": ("h", 1.0),
    "hz": ("kHz", 1e-3), "v": ("V", 1.0), "v_ac": ("V ac", 1.0), "a": ("A", 1.0), "va": ("VA", 1.0),
    "w": ("W", 1.0), "j": ("mJ", 1e3), "f": ("µF", 1e6), "ohm": ("mΩ", 1e3),
    "pa": ("Pa", 1.0), "t": ("T", 1.0),
    "ohm_m2": ("mΩ cm²", 1e7), "a_per_m2": ("A/mm²", 1e-6), "a_per_m": ("kA/m", 1e-3),
    "c_per_m2": ("nC/mm²", 1e3), "j_per_m2": ("µJ/mm²", 1.0), "c_per_a": ("nC/A", 1e9),
    "j_per_av": ("nJ/(A V)", 1e9), "per_k": ("1/K", 1.0), "k_per_w": ("K/W", 1.0),
    "k_m2_per_w": ("K mm²/W", 1e6), "kg_m3": ("kg/m³", 1.0), "w_per_m3": ("kW/m³", 1e-3),
    "w_per_kg": ("W/kg", 1.0), "m3_per_s": ("m³/s", 1.0), "m3_per_f": ("cm³/µF", 1.0),
    "a_per_f": ("A/µF", 1e-6), "j_per_m3": ("J/cm³", 1e-6), "per_f": ("1/µF", 1e-6),
    "per_m2": ("1/mm²", 1e-6), "per_kg": ("1/kg", 1.0), "ohm_c": ("mΩ nC", 1e12), "ohm_j": ("mΩ µJ", 1e9),
}  # fmt: skip
TEMPERATURES = ("temperature", "limit", "hot")


def quantity_words(name: str) -> tuple[str, str, float]:
    """Words, unit shown and factor from SI of a quantity's name.

    Args:
        name: with its SI unit at the end.
    """
    unit = si_unit_of(name)
    if not unit:
        return name.replace("_", " "), "", 1.0
    words = name.removesuffix(f"_{unit}").replace("_", " ")
    if unit == "c":
        hot = any(part in name for part in TEMPERATURES)
        return (words, "°C", 1.0) if hot else (words, "nC", 1e9)
    return (words, *SHOWN_UNITS[unit])


def told_value(value: object, factor: float) -> str:
    """A value, or several, in the unit shown; words as they are."""
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, int | float):
        scaled = factor * value
        return "-" if math.isinf(scaled) else figure(scaled, 4) if abs(scaled) >= 1e4 else f"{scaled:.4g}"
    if isinstance(value, tuple | list):
        return ", ".join(told_value(entry, factor) for entry in value)
    return str(value)
