"""Roll-up: losses, volumes, masses and prices of all components, efficiencies, and what the columns of a
result show.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from models.catalog.parts import Catalog
from models.cooling import auxiliary_power
from models.designs import COLD_PLATE
from models.evaluation import Constraint, Evaluation
from models.operating_points import OperatingPoints
from models.ownership import lost_energy, lost_energy_cost
from models.requirements import Findings
from models.specification import CALIFORNIAN_WEIGHTS, EUROPEAN_WEIGHTS, Specification
from models.waveforms.leg_commutations import CLAMP

Array = NDArray[np.float64]
TWO_LEVEL_POSITIONS = {1: 4, 3: 6}  # switch positions of the two-level bridges, by phases
PACKAGE_DENSITY = 4000.0  # kg/m3, moulded package with copper tab, estimate
CONTROL_DENSITY = 600.0  # kg/m3, populated boards in air, estimate
HOUSING_DENSITY = 250.0  # kg/m3 of the whole volume, sheet or cast housing, estimate


def weighted_efficiency(efficiency: Array, weights: Array) -> Array:
    """Weighted efficiency sum(w_i eta_i) of efficiencies over load levels on the last axis [-].

    Source: EN 50530 (European), Californian Energy Commission protocol.
    """
    return efficiency @ weights


def roll_up(
    spec: Specification,
    catalog: Catalog,
    points: OperatingPoints,
    found: Findings,
    constraints: tuple[Constraint, ...],
) -> Evaluation:
    """Put the single results together.

    Returns:
        The evaluation of the population over the load levels.
    """
    losses = _losses(spec, catalog, points, found)
    level = points.load_level[points.loads]
    power = level * spec.apparent_power_va * abs(spec.power_factor)
    whole: Array = np.asarray(sum(losses.values()))
    efficiency = power / (power + whole)
    volumes, masses = _volumes(spec, found), _masses(spec, found)
    lost = lost_energy(whole, level, spec.weights, spec.energy)
    return Evaluation(
        load_level=level,
        rated=points.rated,
        losses=losses,
        volumes=volumes,
        masses=masses | {"housing": HOUSING_DENSITY * np.sum(list(volumes.values()), axis=0)},
        prices=_prices(spec, catalog, found),
        efficiency=efficiency,
        efficiency_weighted=weighted_efficiency(efficiency, points.weights(spec.weights)),
        efficiency_european=weighted_efficiency(efficiency, points.weights(EUROPEAN_WEIGHTS)),
        efficiency_californian=weighted_efficiency(efficiency, points.weights(CALIFORNIAN_WEIGHTS)),
        distortion=found.distortion,
        constraints=constraints,
        lost_energy=lost,
        lost_energy_cost=lost_energy_cost(lost, spec.energy),
        details=_details(spec, points, found),
    )


def _losses(
    spec: Specification, catalog: Catalog, points: OperatingPoints, found: Findings
) -> dict[str, Array]:
    """Losses per component at the load levels (n, p) [W]."""
    loads, bridge = points.loads, found.losses
    first, second = found.inductors
    capacitor_current = np.abs(found.phasors.capacitor_current[:, loads])
    ripple = found.state.ripple_mean_square[:, loads]
    damping = _damping_loss(spec, found, capacitor_current, ripple)
    running = points.load_level[loads] >= spec.rules.fan_load_start
    shape = damping.shape
    auxiliary = np.full(shape, float(catalog.cost.auxiliary_power_at(spec.apparent_power_va)))
    auxiliary *= found.factors.auxiliary_power[:, None]
    return {
        "conduction": bridge.conduction[:, loads],
        "switching": bridge.switching[:, loads],
        "recovery": bridge.recovery[:, loads],
        "output_charge": bridge.output_charge[:, loads],
        "dead_time": bridge.dead_time[:, loads],
        "gate_drive": bridge.gate[:, loads],
        "inverter_inductor_winding": spec.phases * first.winding_loss[:, loads],
        "inverter_inductor_core": spec.phases * first.core_loss[:, loads],
        "grid_inductor_winding": spec.phases * second.winding_loss[:, loads],
        "grid_inductor_core": spec.phases * second.core_loss[:, loads],
        "filter_capacitor": found.ac_capacitor.loss[:, loads],
        "damping": damping,
        "dc_link": found.dc_link.loss[:, loads],
        **_emission_loss(spec, loads, found),
        "fan": found.sink.fan_power_w[:, None] * running + _pumping(found, bridge.heat[:, loads]),
        "auxiliary": auxiliary,
    }


def _dc_voltage_needed(spec: Specification, points: OperatingPoints, found: Findings) -> Array:
    """Dc voltage that the worst ac voltage and the filter's drop take at the modulation limit (n,) [V]."""
    index = found.state.modulation_index[:, points.modulation] * points.dc_voltage[points.modulation]
    return index.max(-1) / (found.linear_limit * (1.0 - spec.rules.modulation_reserve))


def _reactive_share(spec: Specification, found: Findings) -> Array:
    """Reactive power of the filter capacitors at nominal voltage over rated power (n,) [-]."""
    capacitance = found.designs.filter_capacitance_f + found.designs.damping_capacitance_f
    return 2.0 * np.pi * spec.line_frequency_hz * capacitance * spec.base_impedance_ohm


def _pumping(found: Findings, heat: Array) -> Array:
    """Power of pump and air-side exchanger behind cold plates (n, p) [W]."""
    return np.where((found.designs.cooling == COLD_PLATE)[:, None], auxiliary_power(heat), 0.0)


def _damping_loss(spec: Specification, found: Findings, line_current: Array, ripple: Array) -> Array:
    """Loss of the damping resistors: the capacitor branch's resistance at line frequency and at the carrier
    group that carries most ripple (n, p) [W].
    """
    circuit, carrier = found.circuit.columns(), found.ripple_frequency[:, None]
    slow, _ = circuit.branch(np.full_like(carrier, 2.0 * np.pi * spec.line_frequency_hz))
    fast, _ = circuit.branch(2.0 * np.pi * carrier)
    there = (found.designs.filter_capacitance_f > 0.0)[:, None]
    return np.where(there, spec.phases * (slow * line_current**2 + fast * ripple), 0.0)


def _emission_loss(spec: Specification, loads: slice, found: Findings) -> dict[str, Array]:
    """Copper loss of the emission filter's chokes; none where the study leaves emission out."""
    if found.emission is None:
        return {}
    lines = 2.0 if spec.phases == 1 else 3.0
    current = np.abs(found.phasors.output_current[..., loads])
    return {"emission_filter": lines * found.emission.resistance[:, None] * current**2}


def _of_emission_filter(found: Findings, quantity: str) -> dict[str, Array]:
    return {} if found.emission is None else {"emission_filter": getattr(found.emission, quantity)}


def _further_drivers(spec: Specification, found: Findings) -> float:
    """Switch positions beyond those of a two-level bridge, whose drivers count with the control [-]."""
    positions = sum(part.positions for part in found.packages if part.role != CLAMP)
    return max(float(positions) - TWO_LEVEL_POSITIONS[spec.phases], 0.0)


def _control_volume(spec: Specification, found: Findings) -> float:
    rules = spec.rules
    drivers = rules.further_driver_volume * _further_drivers(spec, found)
    return rules.control_volume_base + rules.control_volume_per_va * spec.apparent_power_va + drivers


def _volumes(spec: Specification, found: Findings) -> dict[str, Array]:
    """Boxed volumes per component (n,) [m3]; `unused` is what the packing factor leaves empty."""
    first, second = found.inductors
    rules = spec.rules
    control = _control_volume(spec, found)
    boxes = {
        "semiconductors": np.sum([part.volume for part in found.packages], axis=0),
        "heatsink": found.sink.volume_m3,
        "inverter_inductor": spec.phases * first.volume,
        "grid_inductor": spec.phases * second.volume,
        "filter_capacitor": found.ac_capacitor.volume,
        "dc_link": found.dc_link.volume,
        **_of_emission_filter(found, "volume"),
        "control": np.full(len(found.designs), control),
    }
    used = np.sum(list(boxes.values()), axis=0)
    whole = found.factors.whole_volume / rules.packing_factor
    return boxes | {"unused": used * np.maximum(whole - 1.0, 0.0)}


def _masses(spec: Specification, found: Findings) -> dict[str, Array]:
    first, second = found.inductors
    control = _control_volume(spec, found)
    return {
        "semiconductors": PACKAGE_DENSITY * np.sum([part.volume for part in found.packages], axis=0),
        "heatsink": found.sink.mass_kg,
        "inverter_inductor": spec.phases * first.mass,
        "grid_inductor": spec.phases * second.mass,
        "filter_capacitor": found.ac_capacitor.mass,
        "dc_link": found.dc_link.mass,
        **_of_emission_filter(found, "mass"),
        "control": np.full(len(found.designs), control * CONTROL_DENSITY),
    }


def _prices(spec: Specification, catalog: Catalog, found: Findings) -> dict[str, Array]:
    """Prices per component (n,) [currency]."""
    first, second = found.inductors
    cost, count = catalog.cost, len(found.designs)
    drivers = spec.rules.further_driver_price * _further_drivers(spec, found)
    others = {
        "heatsink": found.sink.price,
        "inverter_inductor": spec.phases * first.price,
        "grid_inductor": spec.phases * second.price,
        "filter_capacitor": found.ac_capacitor.price,
        "dc_link": found.dc_link.price,
        **_of_emission_filter(found, "price"),
        "control": np.full(count, float(cost.control_price_at(spec.apparent_power_va)) + drivers),
        "housing": np.full(count, float(cost.housing_price_at(spec.apparent_power_va))),
    }
    switches = np.sum([part.price for part in found.packages], axis=0)
    return {
        "semiconductors": switches * found.factors.semiconductor_price,
        **{name: price * found.factors.other_prices for name, price in others.items()},
    }


def _details(spec: Specification, points: OperatingPoints, found: Findings) -> dict[str, Array]:
    """Intermediate quantities by column name; the unit is the name's suffix."""
    state, losses, link = found.state, found.losses, found.dc_link
    details = {
        "modulation_index_rated": state.modulation_index[:, points.rated],
        "modulation_index_greatest": state.modulation_index[:, points.modulation].max(-1),
        "bridge_voltage_rated_v": np.abs(found.phasors.bridge_voltage[:, points.rated]),
        "dc_voltage_needed_v": _dc_voltage_needed(spec, points, found),
        "filter_reactive_share": _reactive_share(spec, found),
        "ripple_peak_to_peak_a": state.peak_ripple[:, points.distortion],
        "ripple_share": state.peak_ripple[:, points.distortion] / (np.sqrt(2.0) * spec.rated_current_a),
        "resonance_hz": np.where(found.designs.filter_capacitance_f > 0.0, found.resonance, 0.0),
        "junction_temperature_c": losses.switch_temperature[:, points.thermal].max(-1),
        "diode_temperature_c": losses.diode_temperature[:, points.thermal].max(-1),
        "sink_temperature_c": losses.sink_temperature[:, points.thermal].max(-1),
        "rated_junction_temperature_c": losses.switch_temperature[:, points.rated],
        "rated_diode_temperature_c": losses.diode_temperature[:, points.rated],
        "rated_sink_temperature_c": losses.sink_temperature[:, points.rated],
        "heatsinks": found.sink.count,
        "heat_worst_w": losses.heat[:, points.thermal].max(-1),
        "filter_capacitor_current_share": found.ac_capacitor.current_share,
        "dc_link_capacitance_f": link.capacitance,
        "dc_link_series": link.series,
        "dc_link_parallel": link.parallel,
        "dc_link_ripple_share": link.ripple_share,
        "dc_link_life_h": link.life,
        "distortion_low_order": found.distortion.low,
        "tightest_harmonic_order": found.distortion.worst_order,
        "tightest_harmonic_share": found.distortion.worst_share,
    }
    if found.emission is not None:
        emission = found.emission
        details |= {
            "emission_distance_db": emission.margin + spec.rules.emission_margin_db,
            "emission_differential_inductance_h": emission.differential_inductance,
            "emission_differential_stages": emission.differential_stages,
            "emission_common_inductance_h": emission.common_inductance,
            "emission_common_stages": emission.common_stages,
        }
    for name, part in zip(("inverter_inductor", "grid_inductor"), found.inductors, strict=True):
        details |= {
            f"{name}_flux_t": part.flux_density,
            f"{name}_gap_m": part.gap,
            f"{name}_window_fill": part.window_fill,
            f"{name}_inductance_left": part.inductance_left,
            f"{name}_gap_sections": part.gap_sections,
            f"{name}_layer_share": part.layer_share,
            f"{name}_winding_temperature_c": part.winding_temperature[:, points.thermal].max(-1),
            f"{name}_core_temperature_c": part.core_temperature[:, points.thermal].max(-1),
            f"{name}_resistance_ohm": part.resistance,
        }
    return details
