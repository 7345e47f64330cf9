"""A study's task in words: what the head of the page says about it."""

from __future__ import annotations

from models.specification import GRID_CONNECTED, Specification
from optimizer.study.study import Study

KILO, PERCENT = 1e3, 100.0
ROOT_3 = 3.0**0.5


def task_words(study: Study) -> list[tuple[str, str]]:
    """Pairs of a name and a figure with its unit.

    Args:
        study: the study.
    """
    spec, search = study.specification, study.search
    return [
        ("rated power", f"{spec.apparent_power_va / KILO:g} kVA, {_phases(spec)}, {spec.application}"),
        ("power factor", f"{spec.power_factor_min:g} to 1, lagging and leading"),
        ("ac voltage", _ac_voltage(spec)),
        ("dc voltage", f"{spec.dc_voltage_v:g} V ({spec.dc_voltage_min_v:g} to {spec.dc_voltage_max_v:g} V)"),
        ("air", f"{spec.ambient_c:g} °C at {spec.altitude_m:g} m"),
        ("bridge", f"{spec.bridge}, {search.filter_kind} filter"),
        ("distortion limits", _limits(spec)),
        ("weighting of the loss", _weights(spec)),
        ("minimised", ", ".join(study.objectives)),
    ]


def _phases(spec: Specification) -> str:
    return "three phases" if spec.phases == 3 else "single phase"


def _ac_voltage(spec: Specification) -> str:
    factor, of = (ROOT_3, " line to line") if spec.phases == 3 else (1.0, "")
    nominal, low, high = (
        f"{factor * value:.4g}"
        for value in (spec.phase_voltage_v, spec.phase_voltage_min_v, spec.phase_voltage_max_v)
    )
    return f"{nominal} V{of} ({low} to {high} V), {spec.line_frequency_hz:g} Hz"


def _limits(spec: Specification) -> str:
    if spec.application == GRID_CONNECTED:
        return spec.limit_table
    linear, rectifier = spec.voltage_thd_limit_linear, spec.voltage_thd_limit_rectifier
    return f"voltage {PERCENT * linear:g} % at a linear, {PERCENT * rectifier:g} % at a rectifier load"


def _weights(spec: Specification) -> str:
    told = (
        f"{PERCENT * weight:g} % at {PERCENT * level:g}" for level, weight in sorted(spec.weights.items())
    )
    return ", ".join(told) + " % load"
