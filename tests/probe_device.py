"""Ideal devices that read one quantity out of the bridge's loss model, and the state to read it at.

A switch with 1 V of threshold and nothing else loses its average current in watts, one with 1 ohm its mean
square, one with 1 J per ampere and volt at 1 V and 1 Hz the sum of its commutated currents. A population of
such parts turns `bridge_losses` into a meter of currents, so that the tests look through the public door.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cache
from types import SimpleNamespace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.output_filter import LinePhasors
from models.semiconductors.bridge_losses import BridgeLosses, Cooling, bridge_losses
from models.semiconductors.packages import Packages
from models.waveforms.bridges import BRIDGES, Bridge
from models.waveforms.leg_commutations import ROLES, blocking_shares
from models.waveforms.state import WaveformState, waveform_state
from models.waveforms.tables import WaveformTables, waveform_tables

Array = NDArray[np.float64]
NOTHING = 1e-30  # ohm m2: resistances enter as logarithms and cannot be zero

IDEAL: dict[str, float | bool] = {
    "hot_c": 125.0, "threshold_25_v": 0.0, "threshold_hot_v": 0.0, "slope_area_25_ohm_m2": NOTHING,
    "slope_area_hot_ohm_m2": NOTHING, "dynamic_resistance_factor": 1.0, "shared_die": False,
    "diode_area_share": 1.0, "diode_threshold_25_v": 0.0, "diode_threshold_hot_v": 0.0,
    "diode_slope_area_25_ohm_m2": NOTHING, "diode_slope_area_hot_ohm_m2": NOTHING,
    "energy_reference_voltage_v": 1.0, "turn_on_energy_j_per_av": 0.0, "turn_off_energy_j_per_av": 0.0,
    "recovery_energy_j_per_av": 0.0, "turn_on_current_exponent": 1.0, "turn_off_current_exponent": 1.0,
    "recovery_current_exponent": 1.0, "energy_voltage_exponent": 1.0, "recovery_voltage_exponent": 1.0,
    "energy_hot_c": 125.0, "turn_on_temperature_coefficient_per_k": 0.0,
    "turn_off_temperature_coefficient_per_k": 0.0, "recovery_temperature_coefficient_per_k": 0.0,
    "turn_on_includes_output_charge": False, "output_charge_c_per_m2": 0.0,
    "output_charge_voltage_exponent": 1.0, "output_energy_j_per_m2": 0.0, "gate_charge_c_per_m2": 0.0,
    "gate_swing_v": 1.0, "junction_case_k_m2_per_w": 1e-9, "junction_case_reference_area_m2": 1.0,
    "gate_unit_power_w": 0.0,
    "junction_case_exponent": 0.0, "diode_junction_case_factor": 1.0, "case_sink_k_per_w": 1e-9,
    "junction_limit_c": 150.0, "turn_on_constant_share": 0.0, "turn_off_constant_share": 0.0,
    "recovery_constant_share": 0.0, "dead_time_s": 0.0, "reference_current_density_a_per_m2": 1.0,
}  # fmt: skip


def device(*rows: dict[str, float | bool]) -> Any:
    """Columns (n, 1) of ideal parts, each with the given fields changed."""
    parts = [IDEAL | row for row in rows]
    return SimpleNamespace(**{name: np.array([part[name] for part in parts])[:, None] for name in IDEAL})


METERS: dict[str, dict[str, float | bool]] = {
    "switch_average": {"threshold_25_v": 1.0, "threshold_hot_v": 1.0},
    "switch_mean_square": {"slope_area_25_ohm_m2": 1.0, "slope_area_hot_ohm_m2": 1.0},
    "diode_average": {"diode_threshold_25_v": 1.0, "diode_threshold_hot_v": 1.0},
    "diode_mean_square": {"diode_slope_area_25_ohm_m2": 1.0, "diode_slope_area_hot_ohm_m2": 1.0},
    "turn_on": {"turn_on_energy_j_per_av": 1.0},
    "turn_off": {"turn_off_energy_j_per_av": 1.0},
    "recovery": {"recovery_energy_j_per_av": 1.0},
    # with an endless dead time any reversed current takes the whole output charge: hard turn-ons are left
    "hard_turn_ons": {"output_charge_c_per_m2": 1.0, "dead_time_s": 1e15},
}


@cache
def tables_of(bridge: str, displacement: float) -> WaveformTables:
    """Tables of a bridge, kept for all tests."""
    return waveform_tables(bridge, (), displacement)


def packages(bridge: Bridge, part: Any, parallel: Array, area: Array) -> tuple[Packages, ...]:
    """Packages of the same part in every role of a bridge's legs."""
    blocking, roles = blocking_shares(bridge.leg_type), list(ROLES[bridge.leg_type].values())
    legs = bridge.leg_copies * len(bridge.modelled_legs)
    return tuple(
        Packages(role, part, parallel, area, roles.count(role) * legs, share)
        for role, share in blocking.items()
    )


@dataclass(frozen=True)
class At:
    """A bridge at one modulation index, lag of the current [rad], peak current [A] and ripple unit V_dc/(L
    f_s) [A].
    """

    bridge: str
    scheme: str
    index: float
    lag: float = 0.0
    peak: float = 1.0
    ripple_unit: float = 0.0
    dc_voltage: float = 1.0

    @property
    def entry(self) -> Bridge:
        return BRIDGES[self.bridge]

    @property
    def tables(self) -> WaveformTables:
        followed = self.lag if self.entry.scheme(self.scheme).follows_current else 0.0
        return tables_of(self.bridge, followed)

    def state(self, count: int = 1) -> WaveformState:
        """Waveform state of `count` equal candidates at one operating point."""
        voltage = np.full(
            (count, 1), self.index * self.entry.index_base * self.dc_voltage / np.sqrt(2.0), dtype=complex
        )
        current = np.full((count, 1), self.peak * np.exp(-1j * self.lag) / np.sqrt(2.0))
        phasors = LinePhasors(voltage, current, np.zeros_like(current), voltage, current)
        scheme = np.full(count, self.entry.modulation_index(self.scheme))
        per_volt = np.full(count, self.ripple_unit / self.dc_voltage)
        return waveform_state(self.entry, self.tables, scheme, phasors, np.array([self.dc_voltage]), per_volt)

    def losses(
        self, parts: Any, frequency: float = 1.0, area: float = 1.0, parallel: float = 1.0
    ) -> BridgeLosses:
        """Losses of the given parts (n, 1), cooled without any rise of case and sink over 25 degC."""
        count = len(parts.hot_c)
        cooling = Cooling(25.0, lambda power, rows: np.zeros_like(power))
        return bridge_losses(
            packages(self.entry, parts, np.full(count, parallel), np.full(count, area)),
            np.full(count, frequency),
            self.entry,
            self.tables,
            self.state(count),
            np.array([self.dc_voltage]),
            cooling,
        )

    def read(self) -> dict[str, float]:
        """Currents per device (conduction, mean over modelled legs) and per switching leg and carrier
        period.
        """
        found = self.losses(device(*METERS.values()))
        devices = 2.0 * self.entry.leg_copies * len(self.entry.modelled_legs)
        scheme = self.entry.modulations[self.entry.modulation_index(self.scheme)]
        switching_legs = float(sum(scheme.switching_legs[leg] for leg in self.entry.modelled_legs))
        values: dict[str, float] = {}
        for row, name in enumerate(METERS):
            if name.startswith(("switch", "diode")):
                values[name] = float(found.conduction[row, 0]) / devices
            elif name in ("recovery", "hard_turn_ons"):
                loss = found.recovery if name == "recovery" else found.output_charge
                values[name] = float(loss[row, 0]) / (switching_legs * self.entry.leg_copies)
            else:
                values[name] = float(found.switching[row, 0]) / (switching_legs * self.entry.leg_copies)
        return values
