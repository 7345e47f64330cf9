"""Candidate inverters as a struct of arrays: one row a candidate, every field of shape (n,)."""

from __future__ import annotations

from dataclasses import dataclass, fields
from typing import TypeVar

import numpy as np
from numpy.typing import NDArray

Floats = NDArray[np.float64]
Ints = NDArray[np.int64]
T = TypeVar("T")
COOLING = ("natural", "forced", "cold plate")
NATURAL, FORCED, COLD_PLATE = range(3)
"""What takes the heat: a heatsink in still air, one behind a fan, a plate with a coolant."""


@dataclass(frozen=True, kw_only=True)
class InductorDesigns:
    """The build of one filter inductor, per candidate. Indexes point into the catalogue's tables.

    Attributes:
        material, shape, conductor: catalogue indexes [-].
        stack: number of cores side by side [-].
        turns: whole turns [-].
        copper_area_m2: copper cross-section of one turn [m2].
    """

    material: Ints
    shape: Ints
    stack: Ints
    turns: Ints
    conductor: Ints
    copper_area_m2: Floats


@dataclass(frozen=True, kw_only=True)
class Designs:
    """Candidates to evaluate. All inductances and capacitances are per phase.

    Attributes:
        device: index into the catalogue's devices [-].
        modulation: index into the bridge's schemes [-].
        switching_frequency_hz: carrier frequency of one leg [Hz].
        die_area_m2: switch die area of one package [m2].
        parallel: packages in parallel per switch position [-].
        inner_device, inner_die_area_m2: part and die area of the inner positions of three-level legs, which a
            two-level bridge does not have [-], [m2].
        inverter_inductance_h: bridge-side inductance at peak current [H].
        grid_inductance_h: grid- or load-side inductance; 0 for an LC filter [H].
        filter_capacitance_f: filter capacitance; 0 for a filter of inductance alone [F].
        damping_resistance_ohm: resistor in series with the filter capacitor, or with the damping capacitor
            [ohm].
        damping_capacitance_f: of a damping branch beside the filter capacitor; 0 for a resistor in series
            [F].
        inverter_inductor, grid_inductor: their builds.
        dc_link: index into the catalogue's dc-link capacitors [-].
        cooling: index into COOLING [-].
        sink_resistance_k_per_w: heatsink to ambient, at the sink curve's reference rise [K/W].
    """

    device: Ints
    modulation: Ints
    switching_frequency_hz: Floats
    die_area_m2: Floats
    parallel: Ints
    inner_device: Ints
    inner_die_area_m2: Floats
    inverter_inductance_h: Floats
    grid_inductance_h: Floats
    filter_capacitance_f: Floats
    damping_resistance_ohm: Floats
    damping_capacitance_f: Floats
    inverter_inductor: InductorDesigns
    grid_inductor: InductorDesigns
    dc_link: Ints
    cooling: Ints
    sink_resistance_k_per_w: Floats

    def __len__(self) -> int:
        return len(self.switching_frequency_hz)

    def take(self, rows: slice | Ints) -> Designs:
        """Return the candidates of the given rows (views where `rows` is a slice)."""
        return take(self, rows)


def take(record: T, rows: slice | Ints) -> T:
    """Return a copy of a (nested) dataclass of arrays with only the given rows."""
    values = {}
    for entry in fields(record):  # type: ignore[arg-type]
        value = getattr(record, entry.name)
        values[entry.name] = value[rows] if isinstance(value, np.ndarray) else take(value, rows)
    return type(record)(**values)
