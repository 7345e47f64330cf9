"""Distortion of a whole population at its worst point: sidebands and low orders put together for grid or
load.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.limits import LimitTable
from models.distortion import (
    HIGHEST_ORDER,
    Distortion,
    Lines,
    dead_time_share,
    dead_time_voltage,
    loop_left,
    low_orders,
    rectifier_harmonic,
    summarise,
)
from models.output_filter import (
    Filter,
    LinePhasors,
    grid_transfer,
    loaded_transfer,
    open_circuit_transfer,
    output_impedance,
)
from models.specification import GRID_CONNECTED, Specification
from models.waveforms.state import WaveformState
from models.waveforms.tables import WaveformTables

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Spectrum:
    """Lines of a population, rms per phase (n, k): the fundamental, the low orders, the listed sidebands.

    Attributes:
        order: frequency over the line frequency [-].
        bridge_voltage: [V]; of low orders what dead time and control leave.
        inverter_current, output_current: of the bridge-side inductor, and into grid or load [A].
        output_voltage: at the terminals of grid or load [V].
        listed: false where a column only stands for what the listed sidebands leave.
    """

    order: Array
    bridge_voltage: Array
    inverter_current: Array
    output_current: Array
    output_voltage: Array
    listed: NDArray[np.bool_]


def spectrum(
    spec: Specification,
    circuit: Filter,
    phasors: LinePhasors,
    tables: WaveformTables,
    state: WaveformState,
    point: int,
    frequency: Array,
    dead_time: Array,
) -> Spectrum:
    """Spectrum at rated current, the study's power factor and greatest dc voltage.

    Behind the filter stands the strongest grid, without harmonics of its own, or the rated linear load: a
    resistor with an inductor (lagging) or a capacitor (leading) in series.

    Args:
        spec: the task; circuit: filter elements (n, 1); phasors: of all operating points (n, q).
        tables, state, point, frequency, dead_time: as in `current_distortion`.
    """
    hertz, volts, listed = sideband_voltages(tables, state, point, frequency, spec.line_frequency_hz)
    orders = low_orders(spec.phases)
    low_hz = np.broadcast_to(orders * spec.line_frequency_hz, (len(frequency), len(orders)))
    on_grid = spec.application == GRID_CONNECTED
    share = spec.rules.current_loop_share if on_grid else spec.rules.voltage_loop_share
    error = _dead_time_error(spec, tables, state, point, frequency, dead_time, orders)
    slow = error * loop_left(low_hz, share * frequency[:, None])
    bridge = np.concatenate([slow, volts * spec.dc_voltage_max_v], axis=-1)
    whole = np.concatenate([low_hz, hertz], axis=-1)
    currents, output_voltage = loaded_transfer(circuit, _beyond(spec, whole), whole)
    first = {
        name: np.abs(np.broadcast_to(getattr(phasors, name), state.row.shape))[:, point, None]
        for name in ("bridge_voltage", "inverter_current", "output_current")
    }
    one = np.ones((len(frequency), 1))
    lines = _lines(spec, orders, slow, hertz, volts, listed)
    return Spectrum(
        order=np.concatenate([one, lines.order], axis=-1),
        bridge_voltage=np.concatenate([first["bridge_voltage"], bridge], axis=-1),
        inverter_current=np.concatenate([first["inverter_current"], bridge * currents[0]], axis=-1),
        output_current=np.concatenate([first["output_current"], bridge * currents[1]], axis=-1),
        output_voltage=np.concatenate([one * spec.phase_voltage_v, bridge * output_voltage], axis=-1),
        listed=np.concatenate([one > 0.0, lines.listed], axis=-1),
    )


def _beyond(spec: Specification, hertz: Array) -> NDArray[np.complex128]:
    """Impedance that the filter feeds [ohm]."""
    if spec.application == GRID_CONNECTED:
        return np.asarray(2j * np.pi * hertz * spec.grid_inductance_min_h)
    order, factor = hertz / spec.line_frequency_hz, abs(spec.power_factor)
    reactance = np.sqrt(1.0 - factor**2) * (order if spec.power_factor > 0.0 else -1.0 / order)
    return np.asarray(spec.base_impedance_ohm * (factor + 1j * reactance))


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
    error = _dead_time_error(spec, tables, state, point, frequency, dead_time, orders)
    left = loop_left(low_hz, spec.rules.current_loop_share * frequency[:, None])
    slow = error * left * grid_transfer(circuit, low_hz).output_current
    lines = _lines(spec, orders, slow / base, hertz, switched / base, listed)
    table = limits.limit_of(np.arange(HIGHEST_ORDER + 1))
    table = table * limit_base(spec, limits)
    return summarise(lines, table, spec.rules.sideband_limit)


def limit_base(spec: Specification, limits: LimitTable) -> float:
    """What a table's limits refer to, over the rated current (of voltage tables: the rated voltage) [-]."""
    if limits.basis == "absolute ampere":
        return 1.0 / spec.rated_current_a
    return spec.demand_share if limits.basis == "demand current" else 1.0


def voltage_distortion(
    spec: Specification,
    limits: LimitTable,
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
    the worst phase. The table's limits of single harmonics hold under linear load; a rectifier load is judged
    by the total, as IEC 62040-3 has it (from memory).

    Args:
        as in `current_distortion`, limits of the voltage; rectifier_share: share of rated apparent power that
            rectifiers draw [-].
    """
    base = spec.phase_voltage_v
    hertz, volts, listed = sideband_voltages(tables, state, point, frequency, spec.line_frequency_hz)
    switched = volts * spec.dc_voltage_max_v * open_circuit_transfer(circuit, hertz).capacitor_voltage
    orders = low_orders(spec.phases)
    low_hz = np.broadcast_to(orders * spec.line_frequency_hz, (len(frequency), len(orders)))
    load = rectifier_share * spec.rated_current_a * rectifier_harmonic(orders, spec.crest_factor)
    error = _dead_time_error(spec, tables, state, point, frequency, dead_time, orders)
    left = loop_left(low_hz, spec.rules.voltage_loop_share * frequency[:, None])
    slow = (load * output_impedance(circuit, low_hz) + error) * left
    lines = _lines(spec, orders, slow / base, hertz, switched / base, listed)
    single = limits.limit_of(np.arange(HIGHEST_ORDER + 1))
    table = single if rectifier_share == 0.0 else np.full_like(single, np.inf)
    return summarise(lines, table, spec.rules.voltage_sideband_limit)


def _dead_time_error(
    spec: Specification,
    tables: WaveformTables,
    state: WaveformState,
    point: int,
    frequency: Array,
    dead_time: Array,
    orders: Array,
) -> Array:
    """Rms error voltage of the bridge per order (n, k) [V]: the switching legs of a phase add up."""
    legs = tables.error_legs[state.scheme]
    peak = dead_time_voltage(
        orders, np.asarray(spec.dc_voltage_max_v), dead_time[:, None], frequency[:, None]
    )
    whole = legs * peak * (1.0 - spec.rules.dead_time_compensated) / np.sqrt(2.0)
    share = tables.switching_share[state.scheme[:, 0]]
    clamped = np.flatnonzero(share.min(-1) < 1.0)
    lag = np.broadcast_to(state.displacement, state.row.shape)[clamped, point]
    whole[clamped] *= dead_time_share(orders, share[clamped], lag)
    return whole


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
