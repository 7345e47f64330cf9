"""What every candidate must meet: each requirement named, with its value, its limit and its margin."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.capacitors import AcFilterCapacitor, DcLink
from models.catalog.parts import Catalog
from models.cooling import SinkPoint
from models.designs import Designs, InductorDesigns
from models.distortion import Distortion
from models.emission.emission_filter import Emission
from models.evaluation import Constraint, at_least, at_most
from models.magnetics.inductor import Inductor
from models.operating_points import OperatingPoints
from models.output_distortion import limit_base
from models.output_filter import Filter, LinePhasors, resonance_hz
from models.semiconductors.bridge_losses import BridgeLosses
from models.semiconductors.packages import Packages
from models.specification import GRID_CONNECTED, DesignRules, Specification
from models.uncertainty import ModelFactors
from models.waveforms.leg_commutations import CLAMP, OUTER
from models.waveforms.state import WaveformState
from models.waveforms.tables import WaveformTables

Array = NDArray[np.float64]
EMISSION_SCALE_DB = 20.0  # a margin of 1 in decibels
DECIBEL_ROUNDING = 0.1  # the stages' sizing is good to that


@dataclass(frozen=True)
class Findings:
    """Results of the single models for one population, on their way to requirements and roll-up."""

    designs: Designs
    circuit: Filter
    ripple_frequency: Array
    linear_limit: Array
    phasors: LinePhasors
    state: WaveformState
    packages: tuple[Packages, ...]
    losses: BridgeLosses
    sink: SinkPoint
    distortion: Distortion
    linear_distortion: Distortion
    inductors: tuple[Inductor, Inductor]
    ac_capacitor: AcFilterCapacitor
    dc_link: DcLink
    resonance: Array
    emission: Emission | None
    factors: ModelFactors


def requirements(
    spec: Specification,
    catalog: Catalog,
    tables: WaveformTables,
    points: OperatingPoints,
    found: Findings,
) -> tuple[Constraint, ...]:
    """List all requirements of a population in a fixed order."""
    return (
        *_bridge(spec, tables, points, found),
        *_semiconductors(spec, points, found),
        *_inductor(
            "inverter-side inductor",
            spec.rules,
            points,
            found.inductors[0],
            found.designs.inverter_inductor,
            catalog,
        ),
        *_inductor(
            "grid-side inductor",
            spec.rules,
            points,
            found.inductors[1],
            found.designs.grid_inductor,
            catalog,
        ),
        *_filter(spec, found),
        *_quality(spec, catalog, found),
        *_emission(spec, found),
    )


def _bridge(
    spec: Specification, tables: WaveformTables, points: OperatingPoints, found: Findings
) -> tuple[Constraint, ...]:
    limit = tables.linear_limit[found.state.scheme[:, 0]] * (1.0 - spec.rules.modulation_reserve)
    switches = [part.device for part in found.packages if part.role != CLAMP]
    greatest = np.min([device.greatest_switching_frequency_hz[:, 0] for device in switches], axis=0)
    return (
        at_most("modulation index", "", found.state.modulation_index[:, points.modulation].max(-1), limit),
        *(_voltage(spec, part) for part in found.packages),
        at_most(
            "switching frequency over the device's greatest",
            "",
            found.designs.switching_frequency_hz / greatest,
            1.0,
        ),
    )


def _voltage(spec: Specification, part: Packages) -> Constraint:
    rating, limit = part.device.voltage_rating_v[:, 0], part.device.voltage_use_limit[:, 0]
    which = "device" if part.role == OUTER else f"{part.role} device"
    return at_most(
        f"dc voltage over {which} rating", "", spec.dc_voltage_max_v * part.blocking_share / rating, limit
    )


def _semiconductors(spec: Specification, points: OperatingPoints, found: Findings) -> tuple[Constraint, ...]:
    losses = found.losses
    greatest = found.packages[0].device.junction_limit_c[:, 0]
    limit = greatest - spec.rules.junction_margin
    # of parts with different limits the one nearest to its own counts, told as if its limit were the outer's
    switch, diode = (
        greatest + over[:, points.thermal].max(-1)
        for over in (losses.switch_over_limit, losses.diode_over_limit)
    )
    covered = np.sum([part.mounting_area for part in found.packages], axis=0) / found.sink.base_area_m2
    scale, hot = limit - spec.ambient_c, spec.rules.sink_temperature_limit
    return (
        at_most("switch junction temperature", "degC", switch, limit, scale),
        at_most("diode junction temperature", "degC", diode, limit, scale),
        at_most(
            "heatsink temperature",
            "degC",
            losses.sink_temperature[:, points.thermal].max(-1),
            hot,
            hot - spec.ambient_c,
        ),
        at_least("no thermal runaway", "yes/no", losses.settled.astype(float), 0.5),
        at_least("heatsink can be built", "yes/no", found.sink.available.astype(float), 0.5),
        at_most("heatsink base covered by devices", "", covered, spec.rules.sink_base_coverage),
    )


def _inductor(
    name: str,
    rules: DesignRules,
    points: OperatingPoints,
    part: Inductor,
    build: InductorDesigns,
    catalog: Catalog,
) -> tuple[Constraint, ...]:
    core_limit = catalog.core_materials.column("temperature_limit_c")[build.material]
    insulation = catalog.conductors.column("insulation_limit_c")[build.conductor]
    limit = np.minimum(rules.winding_temperature_limit, insulation)
    winding, core = (
        temperature[:, points.thermal].max(-1)
        for temperature in (part.winding_temperature, part.core_temperature)
    )
    return (
        at_most(f"{name} flux density", "of saturation", part.flux_share, rules.saturation_use),
        at_least(f"{name} inductance left at peak", "", part.inductance_left, rules.inductance_left),
        at_least(f"{name} inductance possible", "of required", part.inductance_share, 0.999),
        at_most(f"{name} gap", "of winding breadth", part.gap_share, rules.gap_share_limit),
        at_most(f"{name} window fill", "", part.window_fill, 1.0),
        at_most(f"{name} layers", "of the window's room", part.layer_share, 1.0),
        at_most(f"{name} winding temperature", "degC", winding, limit, limit - 40.0),
        at_most(f"{name} core temperature", "degC", core, core_limit, core_limit - 40.0),
    )


def _filter(spec: Specification, found: Findings) -> tuple[Constraint, ...]:
    rules, designs, link = spec.rules, found.designs, found.dc_link
    omega = 2.0 * np.pi * spec.line_frequency_hz
    reactance = omega * (designs.inverter_inductance_h + designs.grid_inductance_h) / spec.base_impedance_ohm
    capacitance = designs.filter_capacitance_f + designs.damping_capacitance_f
    reactive = omega * capacitance * spec.base_impedance_ohm
    there = designs.filter_capacitance_f > 0.0  # a filter of inductance alone has no resonance
    lowest, highest = (
        resonance_hz(found.circuit.behind(grid))
        for grid in (spec.grid_inductance_max_h, spec.grid_inductance_min_h)
    )
    over_line = np.where(there, lowest / spec.line_frequency_hz, 10.0 * rules.resonance_over_line)
    over_switching = np.where(there, highest / designs.switching_frequency_hz, 0.0)
    return (
        at_least("filter resonance over line frequency", "", over_line, rules.resonance_over_line),
        at_most(
            "filter resonance over switching frequency", "", over_switching, rules.resonance_over_switching
        ),
        at_most("filter reactance", "of base impedance", reactance, rules.total_inductance_share),
        at_most(
            "filter capacitor reactive power", "of rated power", reactive, rules.capacitor_reactive_share
        ),
        at_most("filter capacitor current", "of its limit", found.ac_capacitor.current_share, 1.0),
        at_most("dc-link capacitor count", "", link.series * link.parallel, rules.dc_link_units_limit),
        at_least("dc-link life", "h", link.life, rules.dc_link_life),
    )


def _emission(spec: Specification, found: Findings) -> tuple[Constraint, ...]:
    emission = found.emission
    if emission is None:
        return ()
    kept = spec.rules.emission_margin_db
    distance = emission.margin + kept
    return (
        at_least("distance from emission limit", "dB", distance, kept - DECIBEL_ROUNDING, EMISSION_SCALE_DB),
    )


def _quality(spec: Specification, catalog: Catalog, found: Findings) -> tuple[Constraint, ...]:
    worst = found.distortion
    if spec.application == GRID_CONNECTED:
        limits = catalog.limit_table(spec.limit_table)
        total = limits.total_limit * limit_base(spec, limits)
        return (
            at_most("total current distortion", "of rated current", worst.total, min(total, 1.0)),
            at_most("tightest harmonic", "of its limit", worst.worst_share, 1.0),
        )
    linear = found.linear_distortion
    return (
        at_most(
            "voltage distortion, linear load", "of rated voltage", linear.total, spec.voltage_thd_limit_linear
        ),
        at_most(
            "voltage distortion, rectifier load",
            "of rated voltage",
            worst.total,
            spec.voltage_thd_limit_rectifier,
        ),
        at_most(
            "tightest voltage line", "of its limit", np.maximum(linear.worst_share, worst.worst_share), 1.0
        ),
    )
