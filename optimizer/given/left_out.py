"""What a designs file may leave out, and what stands in for it: said in words, never in silence."""

from __future__ import annotations

from collections.abc import Collection, Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.designs import FORCED
from models.inverter import Inverter
from models.magnetics.sizing import core_ladder, fitting_families, size_inductor
from models.waveforms.leg_commutations import INNER
from optimizer.errors import Problem

Array = NDArray[np.float64]
INDUCTOR_MATERIAL = "amorphous tape 25 um"  # cut cores of it are made for any current
INDUCTOR_CONDUCTOR_KIND = "litz"
SIZE_FACTOR, FLUX_USE, WINDOW_USE = 2.0, 0.9, 0.8  # an ordinary build: neither the least nor a generous one
SINK_RESISTANCE = 0.1  # K/W in a fan's air, stands in where no heatsink is named
GRID_SIDE_PEAK = 1.05  # of the rated peak current: ripple is small behind the capacitor
SAME_AREA = 1e-3  # a data sheet's part has one die area; what a rounded table may differ from it [-]
INDUCTOR_PARTS = ("core_material", "core", "turns", "conductor", "copper_area_mm2")
SIDES = ("inverter", "grid")


def left_out(header: Sequence[str]) -> tuple[str, ...]:
    """Columns that a file lacks and something can stand in for; an inductor's only all together."""
    lacking = [name for name in ("die_area_mm2", "dc_link", "sink_resistance_k_per_w") if name not in header]
    if "inner_die_area_mm2" not in header:
        lacking.append("inner_die_area_mm2")
    if "sink_resistance_k_per_w" in lacking and "cooling" not in header:
        lacking.append("cooling")
    for side in SIDES:
        parts = [f"{side}_inductor_{part}" for part in (*INDUCTOR_PARTS, "stack")]
        if not any(name in header for name in parts):
            lacking += parts
    return tuple(lacking)


def filled_in(
    values: dict[str, Any], lacking: Collection[str], inverter: Inverter
) -> tuple[dict[str, Any], tuple[str, ...], tuple[Problem, ...]]:
    """Complete the columns of a designs file.

    Args:
        values: columns that were read, by name.
        lacking: columns that the file lacks, as `left_out` finds them.
        inverter: the study's inverter.

    Returns:
        All columns, notes on what stands in for what, and problems where nothing can.
    """
    notes: list[str] = []
    problems: list[Problem] = []
    done = dict(values)
    _fill_die_areas(done, lacking, inverter, notes, problems)
    if "dc_link" in lacking:
        done["dc_link"] = np.full(len(values["device"]), _dc_link(inverter))
        name = inverter.catalog.dc_link_capacitors.names[done["dc_link"][0]]
        notes.append(f"dc link: {name}, as many as the study's rules ask for")
    if "sink_resistance_k_per_w" in lacking:
        done["sink_resistance_k_per_w"] = np.full(len(values["device"]), SINK_RESISTANCE)
        done.setdefault("cooling", np.full(len(values["device"]), FORCED))
        notes.append(f"heatsink: {SINK_RESISTANCE:g} K/W" + " with a fan" * ("cooling" in lacking))
    for side, inductance, peak in _inductors(done, inverter):
        if f"{side}_inductor_core" in lacking:
            done |= _inductor(side, np.where(inductance > 0.0, inductance, 1e-6), peak, inverter)
            if np.any(inductance > 0.0):
                notes.append(f"{side}-side inductor: sized by the rules of the search, {INDUCTOR_MATERIAL}")
    return done, tuple(notes), tuple(problems)


def _fill_die_areas(
    values: dict[str, Any],
    lacking: Collection[str],
    inverter: Inverter,
    notes: list[str],
    problems: list[Problem],
) -> None:
    """Die areas of parts that have one size; such parts' areas are no choice."""
    roles = {"": "device"} | ({"inner_": "inner_device"} if INNER in inverter.packages.blocking else {})
    for start, device in roles.items():
        name, devices = f"{start}die_area_mm2", inverter.catalog.devices
        low, high = (1e6 * devices.column(f"die_area_{end}_m2")[values[device]] for end in ("min", "max"))
        if name in lacking:
            scalable = np.unique(np.array(devices.names)[values[device][low < high]])
            if len(scalable):
                expected = f"a column of areas, since {', '.join(scalable)} comes in more than one size"
                problems.append(Problem("no such column", expected, key=name))
            values[name] = high
            notes.append(f"{start.replace('_', ' ')}die area: that of the data sheet's part")
            continue
        wrong = (low == high) & (np.abs(values[name] / high - 1.0) > SAME_AREA)
        rows = zip(values[name][wrong], high[wrong], values[device][wrong], strict=True)
        for given, area, place in sorted(set(rows)):
            expected = f"{area:.6g}, the one size of {devices.names[place]} (or no such column at all)"
            problems.append(Problem(f"{given:g}", expected, key=name))


def _dc_link(inverter: Inverter) -> int:
    """The smallest film unit that bears the dc voltage, where there is none the one of the highest rating (of
    all units where there is no film).
    """
    units, spec = inverter.catalog.dc_link_capacitors, inverter.specification
    film = units.select(lambda unit: unit.technology == "film")
    chosen = film if len(film) else np.arange(len(units))
    rating = units.column("voltage_rating_v")[chosen]
    borne = spec.dc_voltage_max_v / (inverter.bridge.levels - 1) / spec.rules.dc_voltage_use
    if np.any(rating >= borne):
        volume = np.where(rating >= borne, units.column("unit_volume_m3")[chosen], np.inf)
        return int(chosen[np.argmin(volume)])
    return int(chosen[np.argmax(rating)])


def _inductors(values: dict[str, Any], inverter: Inverter) -> tuple[tuple[str, Array, Array], ...]:
    """Side, inductance [H] and peak current [A] of both inductors."""
    spec, points = inverter.specification, inverter.points
    peak = np.sqrt(2.0) * spec.apparent_power_va / (spec.phases * spec.phase_voltage_min_v)
    first, second = (np.asarray(values[f"{side}_inductance_h"], dtype=float) for side in SIDES)
    load = points.load_inductance(spec.line_frequency_hz)[points.rated]
    bare = (np.asarray(values["filter_capacitance_f"]) <= 0.0) & (load > 0.0)
    smoothing = first + np.where(bare, load, 0.0)
    ripple = spec.dc_voltage_max_v / (smoothing * values["switching_frequency_hz"])
    behind = np.full_like(first, GRID_SIDE_PEAK * peak)
    return ("inverter", first, peak + 0.25 * ripple), ("grid", second, behind)


def _inductor(side: str, inductance: Array, peak: Array, inverter: Inverter) -> dict[str, Any]:
    spec, catalog = inverter.specification, inverter.catalog
    count = len(inductance)
    kinds = [conductor.kind for conductor in catalog.conductors]
    built = size_inductor(
        catalog,
        core_ladder(catalog, fitting_families(catalog, 1)),  # single inductors
        np.full(count, catalog.core_materials.index(INDUCTOR_MATERIAL)),
        np.full(count, kinds.index(INDUCTOR_CONDUCTOR_KIND)),
        inductance,
        peak,
        np.full(count, spec.apparent_power_va / (spec.phases * spec.phase_voltage_min_v)),
        np.full(count, SIZE_FACTOR),
        np.full(count, FLUX_USE),
        np.full(count, WINDOW_USE),
        spec.rules.saturation_use,
        spec.rules.coil_former_wall,
    )
    return {
        f"{side}_inductor_core_material": built.material,
        f"{side}_inductor_core": built.shape,
        f"{side}_inductor_stack": built.stack,
        f"{side}_inductor_turns": built.turns,
        f"{side}_inductor_conductor": built.conductor,
        f"{side}_inductor_copper_area_mm2": 1e6 * built.copper_area_m2,
    }
