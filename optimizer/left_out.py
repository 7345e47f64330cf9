"""What a designs file may leave out, and what stands in for it: said in words, never in silence."""

from __future__ import annotations

from collections.abc import Collection
from typing import Any

import numpy as np

from models.inverter import Inverter
from models.magnetics.sizing import core_ladder, size_inductor

INDUCTOR_MATERIAL = "amorphous tape 25 um"  # cut cores of it are made for any current
INDUCTOR_CONDUCTOR_KIND = "litz"
SIZE_FACTOR, FLUX_USE, WINDOW_USE = 2.0, 0.9, 0.8  # an ordinary build: neither the least nor a generous one
SINK_RESISTANCE = 0.1  # K/W, stands in where no heatsink is named
INDUCTOR_PARTS = ("core_material", "core", "turns", "conductor", "copper_area_mm2")


def may_be_left_out() -> tuple[str, ...]:
    """Columns that a file may lack as a whole; those of an inductor only together."""
    return (
        "die_area_mm2",
        "dc_link",
        "sink_resistance_k_per_w",
        *(f"inverter_inductor_{part}" for part in INDUCTOR_PARTS),
    )


def filled_in(
    values: dict[str, Any], left_out: Collection[str], inverter: Inverter
) -> tuple[dict[str, Any], tuple[str, ...], tuple[str, ...]]:
    """Complete the columns of a designs file.

    Args:
        values: columns that were read, by name.
        left_out: columns that the file lacks.
        inverter: the study's inverter.

    Returns:
        All columns, notes on what stands in for what, and faults where nothing can.
    """
    notes, faults = [], []
    done = dict(values)
    if "die_area_mm2" in left_out:
        low, high = (
            inverter.catalog.devices.column(f"die_area_{end}_m2")[values["device"]] for end in ("min", "max")
        )
        scalable = np.unique(np.array(inverter.catalog.devices.names)[values["device"][low < high]])
        if len(scalable):
            faults.append(f"die_area_mm2: needed, since {', '.join(scalable)} comes in more than one size")
        done["die_area_mm2"] = 1e6 * high
        notes.append("die area: that of the data sheet's part")
    if "dc_link" in left_out:
        done["dc_link"] = np.full(len(values["device"]), _dc_link(inverter))
        name = inverter.catalog.dc_link_capacitors.names[done["dc_link"][0]]
        notes.append(f"dc link: {name}, as many as the study's rules ask for")
    if "sink_resistance_k_per_w" in left_out:
        done["sink_resistance_k_per_w"] = np.full(len(values["device"]), SINK_RESISTANCE)
        notes.append(f"heatsink: {SINK_RESISTANCE:g} K/W")
    if "inverter_inductor_core" in left_out:
        done |= _inductor(done, inverter)
        notes.append(f"inverter-side inductor: sized by the rules of the search, {INDUCTOR_MATERIAL}")
    return done, tuple(notes), tuple(faults)


def _dc_link(inverter: Inverter) -> int:
    """The film unit of the highest rating (of all units where there is no film)."""
    units = inverter.catalog.dc_link_capacitors
    film = units.select(lambda unit: unit.technology == "film")
    chosen = film if len(film) else np.arange(len(units))
    return int(chosen[np.argmax(units.column("voltage_rating_v")[chosen])])


def _inductor(values: dict[str, Any], inverter: Inverter) -> dict[str, Any]:
    spec, catalog = inverter.specification, inverter.catalog
    count = len(values["device"])
    current = spec.apparent_power_va / (spec.phases * spec.phase_voltage_min_v)
    inductance = np.asarray(values["inverter_inductance_h"], dtype=float)
    unit = spec.dc_voltage_max_v / (inductance * values["switching_frequency_hz"])
    peak = np.sqrt(2.0) * current + 0.25 * unit
    kinds = [conductor.kind for conductor in catalog.conductors]
    built = size_inductor(
        catalog,
        core_ladder(catalog),
        np.full(count, catalog.core_materials.index(INDUCTOR_MATERIAL)),
        np.full(count, kinds.index(INDUCTOR_CONDUCTOR_KIND)),
        inductance,
        peak,
        np.full(count, current),
        np.full(count, SIZE_FACTOR),
        np.full(count, FLUX_USE),
        np.full(count, WINDOW_USE),
        spec.rules.saturation_use,
    )
    return {
        "inverter_inductor_core_material": built.material,
        "inverter_inductor_core": built.shape,
        "inverter_inductor_stack": built.stack,
        "inverter_inductor_turns": built.turns,
        "inverter_inductor_conductor": built.conductor,
        "inverter_inductor_copper_area_mm2": 1e6 * built.copper_area_m2,
    }
