"""Losses and junction temperatures of all switches of a bridge, at every operating point."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.semiconductors.junction import solve
from models.semiconductors.packages import Packages
from models.semiconductors.position_heat import PositionHeat
from models.semiconductors.three_level_leg import three_level_heat
from models.semiconductors.two_level_leg import two_level_heat
from models.uncertainty import NOMINAL, ModelFactors
from models.waveforms.bridges import Bridge
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
        switch_over_limit, diode_over_limit: greatest junction temperature over the part's own limit [K].
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
    switch_over_limit: Array
    diode_over_limit: Array
    sink_temperature: Array
    settled: NDArray[np.bool_]

    @property
    def heat(self) -> Array:
        """Loss that goes into the heatsink (gate-drive power is spent in the drivers) [W]."""
        return self.conduction + self.switching + self.recovery + self.output_charge + self.dead_time


def bridge_losses(
    packages: tuple[Packages, ...],
    frequency: Array,
    bridge: Bridge,
    tables: WaveformTables,
    state: WaveformState,
    dc_voltage: Array,
    cooling: Cooling,
    factors: ModelFactors = NOMINAL,
) -> BridgeLosses:
    """Solve the bridge's losses and junction temperatures.

    Args:
        packages: those of every role of the bridge's legs.
        frequency: switching frequency (n,) [Hz].
        bridge, tables: the bridge and its waveform tables.
        state: waveform state at the loss points (n, p).
        dc_voltage: (p,) [V].
        cooling: ambient and heatsink.
        factors: on what the models say.

    Returns:
        Losses of all positions together and the hottest junctions.
    """
    at = (frequency, tables, state, dc_voltage)
    if bridge.levels == 2:
        heat = two_level_heat(packages, *at)
    else:
        heat = three_level_heat(bridge.leg_type, packages, *at)
    heat = heat.scaled(factors)
    switch_law, diode_law = heat.dies()
    alike = 2.0 * bridge.leg_copies  # positions that a modelled one stands for

    def narrowed(rows: NDArray[np.int64] | slice) -> Callable[[Array], Array]:
        """Junction temperatures over junction temperatures, of some candidates."""
        laws = switch_law.of(rows), diode_law.of(rows)
        junction_case, diode_case, case_sink = (part[..., rows, :] for part in heat.resistances)

        def temperatures_from(temperature: Array) -> Array:
            switch, diode = laws[0].at(temperature[0]), laws[1].at(temperature[1])
            both = switch + diode
            case = case_sink * both
            case += cooling.ambient_c + cooling.sink_rise(alike * both.sum(0), rows)
            return np.stack([case + junction_case * switch, case + diode_case * diode])

        return temperatures_from

    start = np.full((2, *heat.output_charge.shape), cooling.ambient_c + 30.0)
    point = solve(narrowed(slice(None)), start, narrowed=narrowed)
    switch_c, diode_c = point.temperature
    total = switch_law.at(switch_c) + diode_law.at(diode_c)
    return _summed(
        heat,
        alike,
        switch_c,
        np.where(heat.shared, switch_c, diode_c),
        cooling.ambient_c + cooling.sink_rise(alike * total.sum(0), slice(None)),
        np.asarray(point.converged.all(axis=(0, 1, 3))),
    )


def _summed(
    heat: PositionHeat,
    alike: float,
    switch_c: Array,
    diode_c: Array,
    sink_c: Array,
    settled: NDArray[np.bool_],
) -> BridgeLosses:
    """Losses of all positions together at the junction temperatures (l, n, p) [degC]."""
    gate = np.broadcast_to(heat.gate, switch_c.shape)
    return BridgeLosses(
        conduction=alike * heat.conduction(switch_c, diode_c).sum(0),
        switching=alike * np.broadcast_to(heat.switching.at(switch_c), switch_c.shape).sum(0),
        recovery=alike * np.broadcast_to(heat.recovery.at(diode_c), switch_c.shape).sum(0),
        output_charge=alike * heat.output_charge.sum(0),
        dead_time=alike * heat.dead_time.sum(0),
        gate=alike * gate.sum(0),
        switch_temperature=switch_c.max(0),
        diode_temperature=diode_c.max(0),
        switch_over_limit=(switch_c - heat.limit_c).max(0),
        diode_over_limit=(diode_c - heat.limit_c).max(0),
        sink_temperature=sink_c,
        settled=settled,
    )
