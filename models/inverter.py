"""The whole inverter: the one room that knows all of physics' rooms and puts a population through them."""

from __future__ import annotations

from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from models.bridge_packages import BridgePackages
from models.capacitors import (
    AcFilterCapacitor,
    DcLink,
    ac_filter_capacitor,
    dc_link,
    in_series,
    slow_ripple_capacitance,
    switching_ripple_capacitance,
)
from models.catalog.gathered import Gathered
from models.catalog.parts import AcCapacitor, Catalog
from models.cooling import SinkCurve, SinkPoint, sink_kinds
from models.cooling.air import STANDARD_PRESSURE_PA, pressure_at_altitude
from models.designs import COLD_PLATE, FORCED, Designs
from models.distortion import Distortion, worse
from models.emission.emission_filter import Emission, EmissionModel
from models.evaluation import Evaluation, joined
from models.filter_inductors import RippleView, Surroundings, bridge_side, grid_side
from models.magnetics.core_bands import CoreBands, core_bands
from models.magnetics.inductor import Inductor, InductorMaking
from models.magnetics.two_nodes import Air
from models.operating_points import OperatingPoints, operating_points
from models.output_distortion import Spectrum, current_distortion, spectrum, voltage_distortion
from models.output_filter import Filter, LinePhasors, line_phasors, resonance_hz
from models.requirements import Findings, requirements
from models.roll_up import roll_up
from models.semiconductors.bridge_losses import BridgeLosses, Cooling, bridge_losses
from models.specification import GRID_CONNECTED, Specification
from models.uncertainty import NOMINAL, ModelFactors, as_built
from models.waveforms.bridges import BRIDGES, Bridge
from models.waveforms.dc_link_current import rail_rms
from models.waveforms.state import WaveformState, waveform_state
from models.waveforms.tables import WaveformTables, waveform_tables

Array = NDArray[np.float64]
BLOCK = 1024  # candidates; their arrays over load points and angles are about a megabyte each


@dataclass(frozen=True)
class Inverter:
    """One study's inverter: specification and catalogue with everything that is solved once for all
    candidates.

    `evaluate` maps designs to an evaluation; it holds no state between calls.
    """

    specification: Specification
    catalog: Catalog

    @cached_property
    def bridge(self) -> Bridge:
        """The bridge's registry entry. Raises KeyError for an unknown bridge."""
        return BRIDGES[self.specification.bridge]

    @cached_property
    def packages(self) -> BridgePackages:
        """What its legs are built of."""
        return BridgePackages(self.specification, self.catalog, self.bridge)

    @cached_property
    def points(self) -> OperatingPoints:
        """Operating points."""
        return operating_points(self.specification)

    @cached_property
    def bands(self) -> CoreBands:
        """Steinmetz constants of the catalogue's core materials."""
        return core_bands(self.catalog)

    @cached_property
    def tables(self) -> WaveformTables:
        """Waveform tables of the bridge."""
        return waveform_tables(self.bridge.name, self.bands.exponents, self.specification.displacement)

    @cached_property
    def emission(self) -> EmissionModel:
        """Conducted emission and its filter."""
        return EmissionModel(self.specification, self.catalog, self.bridge, self.tables)

    @cached_property
    def sinks(self) -> tuple[SinkCurve, SinkCurve, SinkCurve]:
        """Least-volume heatsinks over thermal resistance, in the order of COOLING."""
        spec, price = self.specification, self.catalog.cost.heatsink_price_per_kg
        return sink_kinds(spec.ambient_c, spec.altitude_m, tuple(self.catalog.fans), price)

    @cached_property
    def ac_capacitor(self) -> AcCapacitor:
        """The smallest ac film capacitor class whose rating covers the greatest output voltage."""
        voltage = self.specification.phase_voltage_max_v
        fitting = [kind for kind in self.catalog.ac_capacitors if kind.voltage_rating_v_ac >= voltage]
        if not fitting:
            raise ValueError(f"no ac capacitor class of the catalogue is rated for {voltage:.0f} V ac")
        return min(fitting, key=lambda kind: kind.volume_m3_per_f)

    def evaluate(self, designs: Designs, factors: ModelFactors = NOMINAL) -> Evaluation:
        """Evaluate candidates, in blocks that stay in cache.

        Args:
            designs: candidates (n,).
            factors: on parts and models, as they may turn out (n,) or (1,).

        Returns:
            Losses, sizes, prices, distortion and constraint margins; nothing in it is NaN or infinite for
            candidates with positive values in every field.
        """
        starts = range(0, len(designs), BLOCK)
        if len(starts) <= 1:
            return self._evaluate_block(designs, factors)
        blocks = (slice(start, start + BLOCK) for start in starts)
        return joined([self._evaluate_block(designs.take(rows), factors.of(rows)) for rows in blocks])

    def emission_at(self, designs: Designs, multiples: NDArray[np.int64]) -> Emission:
        """Conducted emission of candidates at carrier multiples of one's own choice (n, k) [-].

        The study must name a limit of conducted emission.
        """
        columns = _circuit(designs).columns()
        _, state = self._waveforms(designs, columns)
        packages = self.packages.of(designs)
        return self.emission.at_multiples(
            multiples, designs, columns, state, self.points.distortion, packages
        )

    def spectrum(self, designs: Designs) -> Spectrum:
        """Harmonic lines of bridge voltage, currents and output voltage, in the order of the distortion's
        lines with the fundamental before them.
        """
        columns = _circuit(designs).columns()
        phasors, state = self._waveforms(designs, columns)
        dead_time = self.packages.of(designs)[0].device.dead_time_s[:, 0]
        frequency, point = designs.switching_frequency_hz, self.points.distortion
        return spectrum(self.specification, columns, phasors, self.tables, state, point, frequency, dead_time)

    def _waveforms(self, designs: Designs, columns: Filter) -> tuple[LinePhasors, WaveformState]:
        """Line-frequency phasors and waveform state at all operating points."""
        spec, points = self.specification, self.points
        phasors = line_phasors(columns, spec.line_frequency_hz, points.output_voltage, points.output_current)
        per_volt = 1.0 / (designs.inverter_inductance_h * designs.switching_frequency_hz)
        scheme = designs.modulation
        state = waveform_state(self.bridge, self.tables, scheme, phasors, points.dc_voltage, per_volt)
        share = self._ripple_share(designs)
        if share is None:
            return phasors, state
        return phasors, replace(
            state,
            ripple_unit=state.ripple_unit * share,
            peak_ripple=state.peak_ripple * share,
            ripple_mean_square=state.ripple_mean_square * share**2,
        )

    def _ripple_share(self, designs: Designs) -> Array | None:
        """Part of the bridge's ripple voltage that falls on the bridge-side inductor, (n, q) [-].

        None for all of it, as wherever no inductive load follows it without a capacitor between.
        """
        spec = self.specification
        bare = designs.filter_capacitance_f <= 0.0
        if spec.application == GRID_CONNECTED or spec.power_factor == 1.0 or not bare.any():
            return None
        own = designs.inverter_inductance_h[:, None]
        load = self.points.load_inductance(spec.line_frequency_hz)
        return np.where(bare[:, None], own / (own + load), 1.0)

    def _evaluate_block(self, given: Designs, factors: ModelFactors) -> Evaluation:
        spec, points = self.specification, self.points
        designs = as_built(given, factors)
        circuit = _circuit(designs)
        columns = circuit.columns()
        phasors, state = self._waveforms(designs, columns)
        packages = self.packages.of(designs)
        losing = _at_points(state, points.losses)
        sink, cooled = self._sink(designs), designs.sink_resistance_k_per_w * factors.sink_resistance
        losses = bridge_losses(
            packages,
            designs.switching_frequency_hz,
            self.bridge,
            self.tables,
            losing,
            points.dc_voltage[points.losses],
            Cooling(spec.ambient_c, lambda power, rows: self._rise(designs.cooling, cooled, power, rows)),
            factors,
        )
        dead_time = packages[0].device.dead_time_s[:, 0] * factors.dead_time_error
        distortion, linear = self._distortion(columns, state, designs, dead_time)
        emission = (
            self.emission.evaluate(designs, columns, state, points.distortion, packages, factors)
            if spec.emission_limit
            else None
        )
        inductors = self._inductors(designs, phasors, state, distortion, factors)
        capacitors = self._capacitors(designs, phasors, losing, factors)
        findings = Findings(
            designs=designs,
            circuit=circuit,
            phasors=phasors,
            state=state,
            packages=packages,
            losses=losses,
            sink=sink,
            distortion=distortion,
            linear_distortion=linear,
            inductors=inductors,
            ac_capacitor=capacitors[0],
            dc_link=capacitors[1],
            ripple_frequency=designs.switching_frequency_hz * self.tables.main_carrier[designs.modulation],
            linear_limit=self.tables.linear_limit[designs.modulation],
            resonance=resonance_hz(circuit),
            emission=emission,
            factors=factors,
        )
        constraints = requirements(spec, self.catalog, self.tables, points, findings)
        return roll_up(spec, self.catalog, points, findings, constraints)

    def _sink(self, designs: Designs) -> SinkPoint:
        kinds = [curve.at(designs.sink_resistance_k_per_w) for curve in self.sinks]
        return SinkPoint(
            **{
                name: np.choose(designs.cooling, [getattr(kind, name) for kind in kinds])
                for name in vars(kinds[0])
            }
        )

    def _rise(
        self, cooling: NDArray[np.int64], to_ambient: Array, power: Array, rows: NDArray[np.int64] | slice
    ) -> Array:
        """Heatsink over ambient [K]; a cold plate counts from its coolant."""
        natural, forced, plate = self.sinks
        resistance, kind = to_ambient[rows, None], cooling[rows, None]
        rise = np.where(kind == FORCED, forced.rise(power, resistance), natural.rise(power, resistance))
        if np.any(kind == COLD_PLATE):
            over_air = self.specification.coolant_c - self.specification.ambient_c
            rise = np.where(kind == COLD_PLATE, plate.rise(power, resistance) + over_air, rise)
        return rise

    def _distortion(
        self, columns: Filter, state: WaveformState, designs: Designs, dead_time: Array
    ) -> tuple[Distortion, Distortion]:
        """Distortion under the worst load, and with a linear load only (the same thing on the grid)."""
        spec, point = self.specification, self.points.distortion
        common = (self.tables, state, point, designs.switching_frequency_hz, dead_time)
        limits = self.catalog.limit_table(spec.limit_table)
        if spec.application == GRID_CONNECTED:
            strong, weak = spec.grid_inductance_min_h, spec.grid_inductance_max_h
            found = current_distortion(spec, limits, columns.behind(strong), *common)
            if weak > strong:
                found = worse(found, current_distortion(spec, limits, columns.behind(weak), *common))
            return found, found
        linear = voltage_distortion(spec, limits, columns, *common, 0.0)
        if spec.rectifier_share <= 0.0:
            return linear, linear
        return voltage_distortion(spec, limits, columns, *common, spec.rectifier_share), linear

    def _inductors(
        self,
        designs: Designs,
        phasors: LinePhasors,
        state: WaveformState,
        distortion: Distortion,
        factors: ModelFactors,
    ) -> tuple[Inductor, Inductor]:
        spec, points = self.specification, self.points
        rules = spec.rules
        around = Surroundings(
            spec.line_frequency_hz,
            Air(
                spec.ambient_c + rules.internal_air_rise,
                float(pressure_at_altitude(np.asarray(spec.altitude_m))) / STANDARD_PRESSURE_PA,
                np.where(designs.cooling == FORCED, rules.inductor_air_speed, 0.0),
            ),
            InductorMaking(
                float(self.catalog.cost.inductor_labour_at(spec.apparent_power_va)),
                rules.coil_former_wall,
                rules.largest_gap_section,
                rules.gap_section_price,
            ),
            factors,
        )
        count = points.losses.stop
        spread = (np.arange(count) >= points.thermal.start).astype(np.int64)
        view = RippleView((points.rated, points.distortion), spread)
        at_losses = _phasors_at(phasors, points.losses)
        peak = self._peak_current(phasors, state)
        common = (self.catalog, designs, self.bands, self.tables)
        share = self._ripple_share(designs)
        dropped = points.dc_voltage if share is None else points.dc_voltage * share
        first = bridge_side(*common, state, dropped, at_losses, peak, view, around)
        ripple = np.sqrt(np.maximum(distortion.total**2 - distortion.low**2, 0.0)) * spec.rated_current_a
        second = grid_side(*common, at_losses, ripple, around)
        # a core that makes more inductance than wanted has not run out of turns
        reached = (factors.inverter_inductance, factors.grid_inductance)
        return (
            replace(first, inductance_share=first.inductance_share * reached[0]),
            replace(second, inductance_share=second.inductance_share * reached[1]),
        )

    def _peak_current(self, phasors: LinePhasors, state: WaveformState) -> Array:
        """Greatest current of the bridge-side inductor, half the greatest ripple on top [A]."""
        spec, points = self.specification, self.points
        current = np.sqrt(2.0) * np.abs(phasors.inverter_current[:, points.thermal]).max(-1)
        rectifier = spec.rectifier_share * spec.crest_factor + (1.0 - spec.rectifier_share) * np.sqrt(2.0)
        if spec.rectifier_share > 0.0:
            current = np.maximum(current, rectifier * spec.rated_current_a)
        return spec.rules.surge_current_factor * current + 0.5 * state.peak_ripple[:, points.distortion]

    def _capacitors(
        self, designs: Designs, phasors: LinePhasors, state: WaveformState, factors: ModelFactors
    ) -> tuple[AcFilterCapacitor, DcLink]:
        spec, points, rules = self.specification, self.points, self.specification.rules
        frequency = designs.switching_frequency_hz
        worst = points.thermal.start
        line = np.abs(phasors.capacitor_current)
        greatest = np.sqrt(line.max(-1) ** 2 + state.ripple_mean_square.max(-1))
        together = designs.filter_capacitance_f + designs.damping_capacitance_f
        film = ac_filter_capacitor(
            self.ac_capacitor,
            spec.phases,
            together,
            line[:, points.losses],
            state.ripple_mean_square,
            spec.line_frequency_hz,
            frequency * self.tables.main_carrier[designs.modulation],
            greatest,
            factors,
        )
        # a three-level leg's link is two halves in series, each of which carries its own rail's current
        halves = self.bridge.levels - 1
        voltage = spec.dc_voltage_v / halves
        slow, fast = self._dc_currents(state)
        needed = np.maximum(
            switching_ripple_capacitance(
                fast[:, worst], frequency, rules.dc_switching_ripple_share * voltage
            ),
            slow_ripple_capacitance(
                slow.max(-1),
                self.bridge.slow_order * spec.line_frequency_hz,
                rules.dc_ripple_share * voltage,
            ),
        )
        half = dc_link(
            Gathered(self.catalog.dc_link_capacitors, designs.dc_link),
            spec.dc_voltage_max_v / halves,
            voltage,
            rules.dc_voltage_use,
            rules.dc_balancing_current,
            needed,
            slow,
            fast,
            worst,
            spec.ambient_c + rules.internal_air_rise,
            self.points.weights(spec.weights),
            factors,
        )
        return film, in_series(half, halves)

    def _dc_currents(self, state: WaveformState) -> tuple[Array, Array]:
        """Slow (multiples of the line frequency) and switching rms current of a rail (n, p) [A]."""
        place = (state.scheme, state.row, state.weight)
        slow, fast = (
            rail_rms(self.tables.read(moments, *place), state.displacement) * state.peak_current
            for moments in (self.tables.rail_slow, self.tables.rail_fast)
        )
        return slow, fast


def _circuit(designs: Designs) -> Filter:
    return Filter(
        designs.inverter_inductance_h,
        designs.grid_inductance_h,
        designs.filter_capacitance_f,
        designs.damping_resistance_ohm,
        designs.damping_capacitance_f,
    )


def _at_points(state: WaveformState, points: slice) -> WaveformState:
    fields = {name: value if name == "scheme" else value[:, points] for name, value in vars(state).items()}
    return WaveformState(**fields)


def _phasors_at(phasors: LinePhasors, points: slice) -> LinePhasors:
    return LinePhasors(**{name: value[..., points] for name, value in vars(phasors).items()})


__all__ = ["BLOCK", "BridgeLosses", "Inverter"]
