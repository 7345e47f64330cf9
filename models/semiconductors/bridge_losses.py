"""Losses and junction temperatures of all switches of a bridge, at every operating point."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.catalog.gathered import Gathered
from models.semiconductors.conduction import HeatLaw, conduction_law, diode_path, switch_path
from models.semiconductors.junction import junction_to_case, solve
from models.semiconductors.switching import LegSwitching, dead_time_loss, gate_drive_loss, leg_switching
from models.waveforms.bridges import Bridge
from models.waveforms.device_currents import leg_currents
from models.waveforms.state import WaveformState
from models.waveforms.tables import WaveformTables

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Cooling:
    """How the dies are cooled.

    Attributes:
        ambient_c: air at the heatsink [degC].
        sink_rise: (power (n, p) [W], rows of the population) -> heatsink rise (n, p) [K].
    """

    ambient_c: float
    sink_rise: Any


@dataclass(frozen=True)
class BridgeLosses:
    """Losses of the whole bridge (n, p) [W] and the hottest junctions (n, p) [degC].

    Attributes:
        conduction, switching, recovery, output_charge, dead_time, gate: [W].
        switch_temperature, diode_temperature: hottest junction of its kind; of a shared die both are the same
            [degC].
        sink_temperature: [degC].
        settled: true where the electro-thermal fixed point was found (n,).
    """

    conduction: Array
    switching: Array
    recovery: Array
    output_charge: Array
    dead_time: Array
    gate: Array
    switch_temperature: Array
    diode_temperature: Array
    sink_temperature: Array
    settled: NDArray[np.bool_]

    @property
    def heat(self) -> Array:
        """Loss that goes into the heatsink (gate-drive power is spent in the drivers) [W]."""
        return self.conduction + self.switching + self.recovery + self.output_charge + self.dead_time


@dataclass(frozen=True)
class _Position:
    """What heats one switch position, per modelled leg (l, n, p), each part apart.

    Attributes:
        forward, channel: conduction of switch current and, of a shared die, of reverse current, in the switch
            die.
        freewheel: conduction of a diode die of its own.
        switching, recovery: laws without resistive part.
        fixed: loss that does not depend on temperature (output charge, dead time) [W].
        shared: true where one die carries both directions (n, 1).
    """

    forward: HeatLaw
    channel: HeatLaw
    freewheel: HeatLaw
    switching: HeatLaw
    recovery: HeatLaw
    fixed: Array
    shared: NDArray[np.bool_]

    def dies(self) -> tuple[HeatLaw, HeatLaw]:
        """All of it as one law for the switch die and one for the diode die."""
        together = self.shared.astype(float)
        apart = 1.0 - together
        switch = HeatLaw(
            self.forward.constant + self.switching.constant + self.fixed + together * self.recovery.constant,
            self.forward.linear + self.switching.linear + together * self.recovery.linear,
            self.forward.resistive + together * self.channel.resistive,
            self.forward.growth,
        )
        diode = HeatLaw(
            apart * (self.freewheel.constant + self.recovery.constant),
            apart * (self.freewheel.linear + self.recovery.linear),
            apart * self.freewheel.resistive,
            self.freewheel.growth,
        )
        return switch, diode

    def conduction(self, switch_c: Array, diode_c: Array) -> Array:
        """Conduction loss of the position [W]."""
        reverse = np.where(self.shared, self.channel.at(switch_c), self.freewheel.at(diode_c))
        return self.forward.at(switch_c) + reverse


def bridge_losses(
    device: Gathered,
    parallel: Array,
    die_area: Array,
    frequency: Array,
    bridge: Bridge,
    tables: WaveformTables,
    state: WaveformState,
    dc_voltage: Array,
    cooling: Cooling,
) -> BridgeLosses:
    """Solve the bridge's losses and junction temperatures.

    Args:
        device: catalogue columns of shape (n, 1).
        parallel: packages per switch position (n,) [-].
        die_area: switch die per package (n,) [m2].
        frequency: switching frequency (n,) [Hz].
        bridge, tables: the bridge and its waveform tables.
        state: waveform state at the loss points (n, p).
        dc_voltage: (p,) [V].
        cooling: ambient and heatsink.

    Returns:
        Losses of all positions together and the hottest junctions.
    """
    total_area = (parallel * die_area)[:, None]
    legs = _leg_switching(device, total_area, frequency, tables, state, dc_voltage)
    position = _position(device, total_area, frequency, tables, state, legs)
    switch_law, diode_law = position.dies()
    dead = position.fixed - 0.5 * legs.output_charge
    count = parallel[:, None]
    resistances = (
        junction_to_case(device, die_area[:, None]) / count,
        junction_to_case(device, die_area[:, None] * device.diode_area_share)
        * device.diode_junction_case_factor
        / count,
        device.case_sink_k_per_w / count,
    )
    positions = 2.0 * bridge.leg_copies

    def narrowed(rows: NDArray[np.int64] | slice) -> Callable[[Array], Array]:
        """Junction temperatures over junction temperatures, of some candidates."""
        laws = switch_law.of(rows), diode_law.of(rows)
        junction_case, diode_case, case_sink = (part[rows] for part in resistances)

        def temperatures_from(temperature: Array) -> Array:
            switch, diode = laws[0].at(temperature[0]), laws[1].at(temperature[1])
            both = switch + diode
            case = case_sink * both
            case += cooling.ambient_c + cooling.sink_rise(positions * both.sum(0), rows)
            return np.stack([case + junction_case * switch, case + diode_case * diode])

        return temperatures_from

    start = np.full((2, *position.fixed.shape), cooling.ambient_c + 30.0)
    point = solve(narrowed(slice(None)), start, narrowed=narrowed)
    switch_c, diode_c = point.temperature
    switch, diode = switch_law.at(switch_c), diode_law.at(diode_c)
    recovering_c = np.where(position.shared, switch_c, diode_c)
    driven = gate_drive_loss(device, total_area, frequency[:, None]) * _active_legs(tables, state)
    gate = driven + count * device.gate_unit_power_w
    return BridgeLosses(
        conduction=positions * position.conduction(switch_c, diode_c).sum(0),
        switching=positions * position.switching.at(switch_c).sum(0),
        recovery=positions * position.recovery.at(recovering_c).sum(0),
        output_charge=positions * 0.5 * legs.output_charge.sum(0),
        dead_time=positions * dead.sum(0),
        gate=positions * np.broadcast_to(gate.sum(0), switch.shape[1:]),
        switch_temperature=switch_c.max(0),
        diode_temperature=np.where(device.shared_die, switch_c.max(0), diode_c.max(0)),
        sink_temperature=cooling.ambient_c
        + cooling.sink_rise(positions * (switch + diode).sum(0), slice(None)),
        settled=np.asarray(point.converged.all(axis=(0, 1, 3))),
    )


def _active_legs(tables: WaveformTables, state: WaveformState) -> Array:
    """1 for modelled legs that switch at the carrier frequency (l, n, 1) [-]."""
    return tables.leg_switching.T[:, state.scheme]


def _leg_switching(
    device: Gathered,
    total_area: Array,
    frequency: Array,
    tables: WaveformTables,
    state: WaveformState,
    dc_voltage: Array,
) -> LegSwitching:
    """Switching of every modelled leg, (l, n, p): legs that rest at line frequency have none."""
    parts = np.stack([np.cos(state.displacement), -np.sin(state.displacement)], axis=-1)
    parts *= state.peak_current[..., None]
    waves = np.stack([np.sin(tables.angle), np.cos(tables.angle)])
    current = (parts.reshape(-1, 2) @ waves).reshape(*parts.shape[:-1], -1)
    offset = tables.read(tables.commutation_offset, state.scheme, state.row, state.weight)
    offset *= state.ripple_unit[..., None]
    share = tables.switching_share[state.scheme]
    leg = leg_switching(device, total_area, dc_voltage, frequency[:, None], current, offset, share)
    active = _active_legs(tables, state)
    return LegSwitching(**{name: value * active for name, value in vars(leg).items()})


def _position(
    device: Gathered,
    total_area: Array,
    frequency: Array,
    tables: WaveformTables,
    state: WaveformState,
    legs: LegSwitching,
) -> _Position:
    scheme = state.scheme
    index = np.minimum(state.modulation_index, tables.linear_limit[scheme])
    constant, slope = (
        np.moveaxis(table, 1, 0)[:, scheme[:, 0]]
        for table in (tables.reference_constant, tables.reference_slope)
    )
    per_unit = leg_currents(constant, slope, index, state.displacement)
    peak = state.peak_current
    square = peak**2 + 2.0 * state.ripple_mean_square
    switch, diode = switch_path(device, total_area), diode_path(device, total_area)
    dead = dead_time_loss(device, legs.mean_current, 0.5 * square, diode.slope, frequency[:, None])
    reverse_square = per_unit.diode_mean_square * square
    return _Position(
        forward=conduction_law(switch, per_unit.switch_average * peak, per_unit.switch_mean_square * square),
        channel=conduction_law(switch, np.zeros_like(reverse_square), reverse_square),
        freewheel=conduction_law(diode, per_unit.diode_average * peak, reverse_square),
        switching=_energy_law(
            device,
            (0.5 * legs.turn_on_hot, device.turn_on_temperature_coefficient_per_k),
            (0.5 * legs.turn_off_hot, device.turn_off_temperature_coefficient_per_k),
        ),
        recovery=_energy_law(
            device, (0.5 * legs.recovery_hot, device.recovery_temperature_coefficient_per_k)
        ),
        fixed=0.5 * (legs.output_charge + dead * _active_legs(tables, state)),
        shared=device.shared_die,
    )


def _energy_law(device: Gathered, *parts: tuple[Array, Array]) -> HeatLaw:
    """Switching losses E_hot [1 - k (T_hot - T)] of (hot loss [W], coefficient k [1/K]) as one law of
    temperature.
    """
    linear = np.sum([hot * coefficient for hot, coefficient in parts], axis=0)
    constant = np.sum([hot for hot, _ in parts], axis=0) - device.energy_hot_c * linear
    return HeatLaw(constant, linear, np.zeros(()), np.zeros(()))
