"""What heats a position of a two-level leg; upper and lower position are alike over a line period."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from models.semiconductors.conduction import conduction_law, diode_path, switch_path
from models.semiconductors.packages import Packages
from models.semiconductors.position_heat import PositionHeat, recovery_law, switching_law
from models.semiconductors.switching import (
    LegSwitching,
    dead_time_loss,
    gate_drive_loss,
    leg_switching,
    output_charge,
)
from models.waveforms.device_currents import leg_currents
from models.waveforms.state import WaveformState
from models.waveforms.tables import WaveformTables

Array = NDArray[np.float64]


def two_level_heat(
    packages: tuple[Packages, ...],
    frequency: Array,
    tables: WaveformTables,
    state: WaveformState,
    dc_voltage: Array,
) -> PositionHeat:
    """Losses of one position of every modelled leg (l, n, p).

    Args:
        packages: the one role of a two-level leg.
        frequency: switching frequency (n,) [Hz].
        tables, state: waveforms at the loss points.
        dc_voltage: (p,) [V].
    """
    (all_equal,) = packages
    dies, device = all_equal.dies, all_equal.device
    active = tables.leg_switching.T[
        :, state.scheme
    ]  # 1 for modelled legs that switch at the carrier frequency
    legs = _switching(all_equal, frequency, tables, state, dc_voltage, active)
    scheme = state.scheme
    index = np.minimum(state.modulation_index, tables.linear_limit[scheme])
    constant, slope = (
        np.moveaxis(table, 1, 0)[:, scheme[:, 0]]
        for table in (tables.reference_constant, tables.reference_slope)
    )
    per_unit = leg_currents(constant, slope, index, state.displacement)
    peak = state.peak_current
    square = peak**2 + 2.0 * state.ripple_mean_square
    switch, diode = switch_path(device, dies.area), diode_path(device, dies.area)
    dead = dead_time_loss(device, legs.mean_current, legs.mean_square, diode.slope, frequency[:, None])
    reverse_square = per_unit.diode_mean_square * square
    driven = gate_drive_loss(device, dies.area, frequency[:, None]) * active
    return PositionHeat(
        forward=conduction_law(switch, per_unit.switch_average * peak, per_unit.switch_mean_square * square),
        channel=conduction_law(switch, np.zeros_like(reverse_square), reverse_square),
        freewheel=conduction_law(diode, per_unit.diode_average * peak, reverse_square),
        switching=switching_law(dies, 0.5 * legs.turn_on_hot, 0.5 * legs.turn_off_hot),
        recovery=recovery_law(dies, 0.5 * legs.recovery_hot),
        output_charge=0.5 * legs.output_charge,
        dead_time=0.5 * dead * active,
        gate=driven + all_equal.parallel[:, None] * device.gate_unit_power_w,
        shared=device.shared_die,
        resistances=all_equal.resistances,
        limit_c=device.junction_limit_c,
    )


def _switching(
    packages: Packages,
    frequency: Array,
    tables: WaveformTables,
    state: WaveformState,
    dc_voltage: Array,
    active: Array,
) -> LegSwitching:
    """Switching of every modelled leg, (l, n, p): legs that rest at line frequency have none."""
    current, dies = tables.cell_currents(state.displacement, state.peak_current), packages.dies
    offset = tables.read(tables.commutation_offset, state.scheme, state.row, state.weight)
    offset *= state.ripple_unit[..., None]
    share = tables.switching_share[state.scheme]
    charge = 2.0 * output_charge(dies.device, dc_voltage, dies.area)
    leg = leg_switching(dies, dies, charge, dc_voltage, frequency[:, None], current, offset, share)
    return LegSwitching(**{name: value * active for name, value in vars(leg).items()})
