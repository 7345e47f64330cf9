"""Distortion of a whole population at its worst point: sidebands and low orders put together for grid or
load.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from models.catalog.limits import LimitTable
from models.distortion import (
    HIGHEST_ORDER,
    Distortion,
    Lines,
    dead_time_voltage,
    loop_left,
    low_orders,
    rectifier_harmonic,
    summarise,
)
from models.output_filter import Filter, grid_transfer, open_circuit_transfer, output_impedance
from models.specification import Specification
from models.waveforms.state import WaveformState
from models.waveforms.tables import WaveformTables

Array = NDArray[np.float64]


def sideband_voltages(
    tables: WaveformTables, state: WaveformState, point: int, frequency: Array, line_frequency_hz: float
) -> tuple[Array, Array, NDArray[np.bool_]]:
    """Bridge voltage lines at one operating point.

    Returns:
        Frequencies (n, k) [Hz], rms over V_dc (n, k) [-], whether each is a listed sideband (n, k).
    """
    scheme = state.scheme[:, 0]
    carrier, line = tables.sideband_carrier[scheme], tables.sideband_line[scheme]
    position = (state.scheme, state.row[:, point, None], state.weight[:, point, None])
    amplitude = tables.read(tables.sideband_amplitude, *position)[:, 0]
    lines_hz = np.abs(carrier * frequency[:, None] + line * line_frequency_hz)
    return np.maximum(lines_hz, line_frequency_hz), amplitude / np.sqrt(2.0), tables.sideband_listed[scheme]


def current_distortion(
    spec: Specification,
    limits: LimitTable,
    circuit: Filter,
    tables: WaveformTables,
    state: WaveformState,
    point: int,
    frequency: Array,
    dead_time: Array,
) -> Distortion:
    """Distortion of the current injected into the grid, over the rated current.

    Args:
        spec, limits: task and harmonic limit table.
        circuit: filter elements (n, 1).
        tables, state, point: bridge voltage at the worst operating point.
        frequency: switching frequency (n,) [Hz].
        dead_time: (n,) [s].

    Dead-time harmonics are those that the current loop leaves; the grid's own distortion is not counted.
    """
    base = spec.rated_current_a
    hertz, volts, listed = sideband_voltages(tables, state, point, frequency, spec.line_frequency_hz)
    switched = volts * spec.dc_voltage_max_v * grid_transfer(circuit, hertz).output_current
    orders = low_orders(spec.phases)
    low_hz = np.broadcast_to(orders * spec.line_frequency_hz, (len(frequency), len(orders)))
    error = _dead_time_error(spec, tables, state, frequency, dead_time, orders)
    left = loop_left(low_hz, spec.rules.current_loop_share * frequency[:, None])
    slow = error * left * grid_transfer(circuit, low_hz).output_current
    lines = _lines(spec, orders, slow / base, hertz, switched / base, listed)
    table = limits.limit_of(np.arange(HIGHEST_ORDER + 1))
    table = table / base if limits.basis == "absolute ampere" else table
    return summarise(lines, table, spec.rules.sideband_limit)


def voltage_distortion(
    spec: Specification,
    circuit: Filter,
    tables: WaveformTables,
    state: WaveformState,
    point: int,
    frequency: Array,
    dead_time: Array,
    rectifier_share: float,
) -> Distortion:
    """Distortion of the stand-alone output voltage, over the rated voltage.

    Switching ripple is that of the unloaded filter; the rectifier load's harmonic currents meet the output
    impedance as the voltage loop leaves it, and add to the dead-time error's harmonics of the same order in
    the worst phase.

    Args:
        as in `current_distortion`; rectifier_share: share of rated apparent power that rectifiers draw [-].
    """
    base = spec.phase_voltage_v
    hertz, volts, listed = sideband_voltages(tables, state, point, frequency, spec.line_frequency_hz)
    switched = volts * spec.dc_voltage_max_v * open_circuit_transfer(circuit, hertz).capacitor_voltage
    orders = low_orders(spec.phases)
    low_hz = np.broadcast_to(orders * spec.line_frequency_hz, (len(frequency), len(orders)))
    load = rectifier_share * spec.rated_current_a * rectifier_harmonic(orders, spec.crest_factor)
    error = _dead_time_error(spec, tables, state, frequency, dead_time, orders)
    left = loop_left(low_hz, spec.rules.voltage_loop_share * frequency[:, None])
    slow = (load * output_impedance(circuit, low_hz) + error) * left
    lines = _lines(spec, orders, slow / base, hertz, switched / base, listed)
    return summarise(lines, np.full(HIGHEST_ORDER + 1, np.inf), spec.rules.voltage_sideband_limit)


def _dead_time_error(
    spec: Specification,
    tables: WaveformTables,
    state: WaveformState,
    frequency: Array,
    dead_time: Array,
    orders: Array,
) -> Array:
    """Rms error voltage of the bridge per order (n, k) [V]: the switching legs of a phase add up."""
    legs = tables.error_legs[state.scheme]
    peak = dead_time_voltage(
        orders, np.asarray(spec.dc_voltage_max_v), dead_time[:, None], frequency[:, None]
    )
    return legs * peak * (1.0 - spec.rules.dead_time_compensated) / np.sqrt(2.0)


def _lines(
    spec: Specification, orders: Array, slow: Array, hertz: Array, switched: Array, listed: NDArray[np.bool_]
) -> Lines:
    return Lines(
        order=np.concatenate(
            [np.broadcast_to(orders.astype(float), slow.shape), hertz / spec.line_frequency_hz], axis=-1
        ),
        amplitude=np.concatenate([slow, switched], axis=-1),
        listed=np.concatenate([np.ones(slow.shape, dtype=bool), listed], axis=-1),
    )
