"""Waveform state of a population: modulation, displacement and ripple at every operating point."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.output_filter import LinePhasors
from models.waveforms.bridges import Bridge
from models.waveforms.tables import WaveformTables

Array = NDArray[np.float64]
Ints = NDArray[np.int64]


@dataclass(frozen=True)
class WaveformState:
    """Population n, operating points q.

    Attributes:
        scheme: (n, 1) modulation scheme index.
        row, weight: (n, q) place in the tables.
        modulation_index: required M, may exceed the linear limit (n, q) [-].
        displacement: lag of the bridge current (n, q) [rad].
        peak_current: peak of the line-frequency bridge current (n, q) [A].
        ripple_unit: V_dc/(L1 f_s) (n, q) [A].
        peak_ripple: greatest peak-to-peak ripple over the line period (n, q) [A].
        ripple_mean_square: (n, q) [A2].
    """

    scheme: Ints
    row: Ints
    weight: Array
    modulation_index: Array
    displacement: Array
    peak_current: Array
    ripple_unit: Array
    peak_ripple: Array
    ripple_mean_square: Array


def waveform_state(
    bridge: Bridge,
    tables: WaveformTables,
    scheme: Ints,
    phasors: LinePhasors,
    dc_voltage: Array,
    reactive_volt: Array,
) -> WaveformState:
    """Read the waveform tables for a population.

    Args:
        bridge, tables: the bridge and its tables.
        scheme: modulation scheme per candidate (n,).
        phasors: filter phasors (n, q).
        dc_voltage: (q,) [V].
        reactive_volt: 1/(L1 f_s) (n,) [A/V].
    """
    chosen = scheme[:, None]
    index = np.sqrt(2.0) * np.abs(phasors.bridge_voltage) / (bridge.index_base * dc_voltage)
    row, weight = tables.position(np.minimum(index, tables.linear_limit[chosen]))
    unit = dc_voltage * reactive_volt[:, None]
    return WaveformState(
        scheme=chosen,
        row=row,
        weight=weight,
        modulation_index=index,
        displacement=phasors.displacement,
        peak_current=np.sqrt(2.0) * np.abs(phasors.inverter_current),
        ripple_unit=unit,
        peak_ripple=tables.read(tables.peak_ripple, chosen, row, weight) * unit,
        ripple_mean_square=tables.read(tables.ripple_mean_square, chosen, row, weight) * unit * unit,
    )
