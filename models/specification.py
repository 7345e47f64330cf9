"""What an inverter is asked to do, and the design rules every candidate is held to. SI units."""

from __future__ import annotations

import math
from dataclasses import dataclass, field
from typing import Any

from models.ownership import EnergyTerms

GRID_CONNECTED = "grid-connected"
STAND_ALONE = "stand-alone"

EUROPEAN_WEIGHTS = {0.05: 0.03, 0.10: 0.06, 0.20: 0.13, 0.30: 0.10, 0.50: 0.48, 1.00: 0.20}
CALIFORNIAN_WEIGHTS = {0.10: 0.04, 0.20: 0.05, 0.30: 0.12, 0.50: 0.21, 0.75: 0.53, 1.00: 0.05}


def rule(default: float, unit: str, meaning: str) -> Any:
    """Declare one design rule: its default, its unit and what it means, in one place for reader, checks,
    docs.
    """
    return field(default=default, metadata={"unit": unit, "meaning": meaning})


@dataclass(frozen=True, kw_only=True)
class DesignRules:
    """Judgement values of early concept work; a study overrides any of them in its [rules] table.

    Each is common practice without one published source unless its meaning names one.
    """

    modulation_reserve: float = rule(0.02, "", "share of the linear modulation range kept for control")
    junction_margin: float = rule(15.0, "K", "distance kept from the greatest junction temperature")
    saturation_use: float = rule(0.85, "", "greatest flux density over the hot saturation flux density")
    inductance_left: float = rule(
        0.5, "", "least inductance of a powder core at peak current over its initial value"
    )
    winding_temperature_limit: float = rule(
        130.0, "degC", "mean winding temperature allowed (class F with reserve)"
    )
    coil_former_wall: float = rule(
        0.0015, "m", "wall of coil formers, between core and winding and at the winding's ends"
    )
    gap_share_limit: float = rule(0.3, "", "greatest total air gap over the winding breadth of all legs")
    largest_gap_section: float = rule(
        0.002, "m", "greatest length of one section of an inductor's air gap; longer gaps are split"
    )
    gap_section_price: float = rule(
        0.5, "", "price of a further gap section: block of core, spacer, bonding [currency]"
    )
    inductor_air_speed: float = rule(2.0, "m/s", "air speed past inductors in the fan's air")
    resonance_over_line: float = rule(10.0, "", "least resonance frequency over the line frequency")
    resonance_over_switching: float = rule(
        0.5, "", "greatest resonance frequency over the switching frequency"
    )
    damping_capacitance_ratio: float = rule(
        1.0, "", "capacitance of a parallel R-C damping branch over the filter capacitance"
    )
    capacitor_reactive_share: float = rule(
        0.08, "", "greatest filter capacitor reactive power over rated power"
    )
    total_inductance_share: float = rule(
        0.20, "", "greatest reactance of both filter inductors over base impedance"
    )
    sideband_limit: float = rule(
        0.003, "", "greatest switching sideband above order 50 over the rated current"
    )
    voltage_sideband_limit: float = rule(
        0.02, "", "greatest switching sideband of the output voltage, stand-alone"
    )
    current_loop_share: float = rule(
        0.10, "", "current-loop bandwidth over switching frequency (grid-connected)"
    )
    voltage_loop_share: float = rule(
        0.05, "", "voltage-loop bandwidth over switching frequency (stand-alone)"
    )
    dead_time_compensated: float = rule(
        0.5, "", "share of the dead-time voltage error that control compensates"
    )
    dc_ripple_share: float = rule(
        0.08, "", "double-line-frequency dc voltage ripple, peak to peak over nominal"
    )
    dc_switching_ripple_share: float = rule(
        0.01, "", "switching dc voltage ripple, peak to peak over nominal"
    )
    dc_voltage_use: float = rule(0.90, "", "greatest dc voltage over the rating of the dc-link capacitors")
    dc_link_life: float = rule(
        40e3, "", "least life of the dc-link capacitors at the hottest ambient and the load weights [h]"
    )
    dc_balancing_current: float = rule(
        0.002, "A", "current in the balancing resistors of series dc-link capacitors"
    )
    surge_current_factor: float = rule(
        1.0, "", "peak current to carry without saturation over the rated peak"
    )
    clamp_diode_current_share: float = rule(
        0.7, "", "rated current of clamp diodes over that of the switches they stand beside"
    )
    emission_margin_db: float = rule(6.0, "", "distance kept from the limit of conducted emission [dB]")
    leakage_current_limit: float = rule(0.0035, "A", "greatest earth leakage current of the Y capacitors")
    emission_x_share: float = rule(
        0.01, "", "reactive power of the emission filter's X capacitors over rated power"
    )
    emission_current_density: float = rule(5e6, "", "current density in the emission filter's chokes [A/m2]")
    choke_capacitance: float = rule(30e-12, "F", "capacitance of a choke's winding")
    switch_node_stray: float = rule(
        50e-12, "F", "capacitance of a switch node to earth beside its packages' tabs (board, windings)"
    )
    common_mode_asymmetry: float = rule(
        0.03, "", "share of a leg's voltage left in the common mode of schemes whose legs cancel"
    )
    sink_temperature_limit: float = rule(
        95.0, "degC", "greatest heatsink temperature (touch, boards beside it)"
    )
    dc_link_units_limit: float = rule(40.0, "", "greatest number of dc-link capacitors")
    sink_base_coverage: float = rule(
        0.6, "", "greatest share of the heatsink base that the devices may cover"
    )
    internal_air_rise: float = rule(10.0, "K", "air inside the housing, around inductors, over ambient")
    fan_load_start: float = rule(0.25, "", "load level from which the fan runs")
    packing_factor: float = rule(0.45, "", "sum of component boxes over the volume of the whole")
    control_volume_base: float = rule(1.5e-4, "m^3", "volume of control and auxiliary supply at small power")
    control_volume_per_va: float = rule(2.0e-8, "m^3/VA", "growth of that volume with rated power")
    further_driver_volume: float = rule(
        4e-6, "m^3", "isolated gate driver of each switch position beyond those of a two-level bridge"
    )
    further_driver_price: float = rule(3.0, "", "its price [currency]")


@dataclass(frozen=True, kw_only=True)
class Specification:
    """One inverter's task. Voltages are rms; for three phases the phase voltage is line-to-line over sqrt 3.

    Attributes:
        application: GRID_CONNECTED or STAND_ALONE.
        phases: 1 or 3 [-].
        apparent_power_va: rated apparent power of all phases [VA].
        power_factor_min: least power factor to be delivered at rated apparent power, lagging and leading [-].
        phase_voltage_v, phase_voltage_min_v, phase_voltage_max_v: nominal and extreme phase voltages [V].
        line_frequency_hz: [Hz].
        dc_voltage_min_v, dc_voltage_v, dc_voltage_max_v: least, nominal and greatest dc voltage [V].
        ambient_c: hottest air at the heatsink [degC].
        coolant_c: hottest coolant at a cold plate [degC].
        altitude_m: height above sea level [m].
        bridge: name of the bridge [-].
        weights: load level -> weight of the weighted efficiency [-].
        rectifier_share: share of rated apparent power drawn by rectifier loads (stand-alone) [-].
        crest_factor: crest factor of that rectifier load's current [-].
        limit_table: name of the harmonic limit table in the catalogue [-].
        demand_current_a: greatest demand current at the point of connection, to which some limits refer; 0
            for the rated current [A].
        power_factor: of the delivered current at the load levels: positive lagging, negative leading [-].
        short_circuit_ratio_min, short_circuit_ratio_max: short-circuit power of the grid over rated apparent
            power; infinite for a stiff grid [-].
        emission_limit: name of the limit of conducted emission in the catalogue, "" where emission is left
            out [-].
        voltage_thd_limit_linear, voltage_thd_limit_rectifier: stand-alone voltage limits, fractions [-].
        rules: the design rules.
        energy: on what terms lost energy is paid for.
    """

    application: str
    phases: int
    apparent_power_va: float
    power_factor_min: float
    phase_voltage_v: float
    phase_voltage_min_v: float
    phase_voltage_max_v: float
    line_frequency_hz: float
    dc_voltage_min_v: float
    dc_voltage_v: float
    dc_voltage_max_v: float
    ambient_c: float
    altitude_m: float
    bridge: str
    weights: dict[float, float] = field(default_factory=lambda: dict(EUROPEAN_WEIGHTS))
    coolant_c: float = 45.0
    rectifier_share: float = 0.0
    crest_factor: float = 3.0
    limit_table: str = "IEEE 1547-2018"
    demand_current_a: float = 0.0
    emission_limit: str = ""
    power_factor: float = 1.0
    short_circuit_ratio_min: float = float("inf")
    short_circuit_ratio_max: float = float("inf")
    voltage_thd_limit_linear: float = 0.03
    voltage_thd_limit_rectifier: float = 0.08
    rules: DesignRules = field(default_factory=DesignRules)
    energy: EnergyTerms = field(default_factory=EnergyTerms)

    @property
    def displacement(self) -> float:
        """Lag of the delivered current behind the voltage [rad]."""
        return math.copysign(math.acos(abs(self.power_factor)), self.power_factor)

    @property
    def grid_inductance_min_h(self) -> float:
        """Inductance of the strongest grid per phase [H]."""
        return self._grid_inductance(self.short_circuit_ratio_max)

    @property
    def grid_inductance_max_h(self) -> float:
        """Inductance of the weakest grid per phase [H]."""
        return self._grid_inductance(self.short_circuit_ratio_min)

    def _grid_inductance(self, ratio: float) -> float:
        return self.base_impedance_ohm / (ratio * 2.0 * math.pi * self.line_frequency_hz)

    @property
    def rated_current_a(self) -> float:
        """Rated rms phase current at nominal voltage [A]."""
        return self.apparent_power_va / (self.phases * self.phase_voltage_v)

    @property
    def demand_share(self) -> float:
        """Demand current over rated current [-]."""
        return self.demand_current_a / self.rated_current_a if self.demand_current_a > 0.0 else 1.0

    @property
    def base_impedance_ohm(self) -> float:
        """Phase base impedance V^2/S [ohm]."""
        return self.phases * self.phase_voltage_v**2 / self.apparent_power_va
