"""The search space: points of a unit cube to candidate inverters.

Every variable runs over [0, 1]: real ones on a linear or logarithmic scale, categories and whole numbers in
equal parts that `repaired` snaps to their middles, so that equal candidates are equal points.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from models.designs import COOLING, Designs, InductorDesigns
from models.inverter import Inverter
from models.magnetics.alternatives import Offer
from models.magnetics.sizing import (
    CoreLadder,
    core_ladder,
    fitting_families,
    materials_in,
    size_inductor,
)
from models.output_filter import NO_CAPACITANCE
from models.waveforms.leg_commutations import INNER, OUTER
from models.waveforms.tables import WaveformTables
from optimizer.evolution.mating import Axes
from optimizer.study.schema import LCL, ONLY_L, PARALLEL_RC
from optimizer.study.study import Study

Array = NDArray[np.float64]
Ints = NDArray[np.int64]
CATEGORY, WHOLE, LINEAR, LOGARITHMIC = "category", "whole", "linear", "logarithmic"
CARRIER, SWITCHES, SINK, DC_LINK, FILTER = "carrier", "switches", "heatsink", "dc link", "filter"


@dataclass(frozen=True)
class Variable:
    """One variable of the search.

    Attributes:
        name: its name.
        scale: CATEGORY, WHOLE, LINEAR or LOGARITHMIC.
        low, high: ends in SI units; for categories 0 and the number of choices less one.
        part: the part of the inverter it belongs to: variables of one part only make sense together.
    """

    name: str
    scale: str
    low: float
    high: float
    part: str

    @property
    def parts(self) -> int:
        """Number of equal parts of [0, 1]; 0 for a real variable [-]."""
        return round(self.high - self.low) + 1 if self.scale in (CATEGORY, WHOLE) else 0

    def value(self, unit: Array) -> Array:
        """Values in SI units of points in [0, 1]; for categories the choice's index."""
        if self.parts:
            return self.low + np.minimum(np.floor(unit * self.parts), self.parts - 1)
        if self.scale == LOGARITHMIC:
            return self.low * (self.high / self.low) ** unit
        return self.low + (self.high - self.low) * unit

    def unit(self, value: float | None) -> float:
        """Place of a value (SI units) in [0, 1], the nearest end beyond; the middle where there is none."""
        if value is None or self.high <= self.low:
            return 0.5
        held = min(max(value, self.low), self.high)
        if self.parts:
            return (round(held - self.low) + 0.5) / self.parts
        if self.scale == LOGARITHMIC:
            return float(np.log(held / self.low) / np.log(self.high / self.low))
        return (held - self.low) / (self.high - self.low)


@dataclass(frozen=True)
class SearchSpace:
    """The variables of one device class and how they become designs."""

    study: Study
    inverter: Inverter
    device_class: str

    @cached_property
    def devices(self) -> Ints:
        """Catalogue indexes of the class's devices for the outer positions of the legs [-]."""
        return self._bearing(OUTER)

    @cached_property
    def inner_devices(self) -> Ints:
        """Those for the inner positions of T-type legs, which block less than the outer ones [-]."""
        return self._bearing(INNER)

    def _bearing(self, role: str) -> Ints:
        """Devices of the class that bear what a role blocks of the greatest dc voltage.

        Where none does, those of the highest rating stand in, so that the search can say what they lack.
        """
        voltage = self.study.specification.dc_voltage_max_v * self.inverter.packages.blocking[role]
        of_class = self.inverter.catalog.devices.select(
            lambda device: device.device_class == self.device_class
        )
        parts = [self.inverter.catalog.devices[index] for index in of_class]
        bearing = [part.voltage_rating_v * part.voltage_use_limit >= voltage for part in parts]
        if not any(bearing):
            highest = max(part.voltage_rating_v for part in parts)
            bearing = [part.voltage_rating_v == highest for part in parts]
        least = min(part.voltage_rating_v for part, bears in zip(parts, bearing, strict=True) if bears)
        return of_class[
            [
                bears and part.voltage_rating_v <= 2.0 * least
                for part, bears in zip(parts, bearing, strict=True)
            ]
        ]

    @cached_property
    def materials(self) -> Ints:
        """Catalogue indexes of the core materials to choose from [-]."""
        catalog = self.inverter.catalog
        chosen = _chosen(catalog.core_materials.names, self.study.search.core_materials)
        return chosen[np.isin(chosen, materials_in(catalog, self._families))]

    @cached_property
    def _families(self) -> frozenset[str]:
        """Core families to choose from."""
        wanted = frozenset(self.study.search.core_families)
        fitting = fitting_families(self.inverter.catalog, self.study.specification.phases)
        return fitting & wanted if wanted else fitting

    @cached_property
    def conductors(self) -> Ints:
        """Catalogue indexes of the conductors to choose from [-]."""
        return _chosen(self.inverter.catalog.conductors.names, self.study.search.conductors)

    @cached_property
    def offer(self) -> Offer:
        """What inductors may be made of."""
        rules = self.study.specification.rules
        return Offer(
            self.inverter.catalog,
            self._families,
            self.materials,
            self.conductors,
            rules.saturation_use,
            rules.coil_former_wall,
        )

    @cached_property
    def dc_links(self) -> Ints:
        """Catalogue indexes of the dc-link capacitors to choose from [-]."""
        technologies = self.study.search.dc_links
        return self.inverter.catalog.dc_link_capacitors.select(lambda unit: unit.technology in technologies)

    @cached_property
    def variables(self) -> tuple[Variable, ...]:
        """All variables, in the order of the cube's axes."""
        search, real = self.study.search, self._real
        inductors = ["inverter", "grid"] if search.filter_kind == LCL else ["inverter"]
        return (
            _category("device", len(self.devices), SWITCHES),
            _category("modulation", len(self._schemes), CARRIER),
            _category("dc link", len(self.dc_links), DC_LINK),
            _category("cooling", len(search.cooling), SINK),
            real("switching_frequency", CARRIER),
            Variable(
                "parallel", WHOLE, search.ranges["parallel"].low, search.ranges["parallel"].high, SWITCHES
            ),
            Variable("die area", LINEAR, 0.0, 1.0, SWITCHES),
            *self._inner_variables(),
            real("ripple", FILTER),
            *([real("grid_inductance_ratio", FILTER)] if search.filter_kind == LCL else []),
            *self._capacitor_variables(),
            real("sink_resistance", SINK),
            *(variable for name in inductors for variable in self._inductor_variables(name)),
        )

    def _capacitor_variables(self) -> tuple[Variable, ...]:
        search = self.study.search
        if search.filter_kind == ONLY_L:
            return ()
        kinds = len(search.damping_branches)
        choice = (_category("damping branch", kinds, FILTER),) if kinds > 1 else ()
        return (self._real("filter_capacitance_share", FILTER), *choice, self._real("damping", FILTER))

    def _inner_variables(self) -> tuple[Variable, ...]:
        """Of three-level legs: the inner part where it blocks less than the outer one, and its die area."""
        blocking = self.inverter.packages.blocking
        if INNER not in blocking:
            return ()
        mixed = blocking[INNER] < blocking[OUTER]
        part = (_category("inner device", len(self.inner_devices), SWITCHES),) if mixed else ()
        return (*part, Variable("inner die area", LINEAR, 0.0, 1.0, SWITCHES))

    def _real(self, name: str, part: str) -> Variable:
        ends = self.study.search.ranges[name]
        return Variable(name, LOGARITHMIC, ends.low, ends.high, part)

    def _inductor_variables(self, side: str) -> tuple[Variable, ...]:
        ranges = self.study.search.ranges
        size, flux, window = (ranges[name] for name in ("core_size_factor", "flux_use", "window_use"))
        part = f"{side} inductor"
        return (
            _category(f"{side} core material", len(self.materials), part),
            _category(f"{side} conductor", len(self.conductors), part),
            Variable(f"{side} core size", LOGARITHMIC, size.low, size.high, part),
            Variable(f"{side} flux use", LINEAR, flux.low, flux.high, part),
            Variable(f"{side} window use", LINEAR, window.low, window.high, part),
        )

    @cached_property
    def axis(self) -> dict[str, int]:
        """Axis of each variable by name [-]."""
        return {variable.name: position for position, variable in enumerate(self.variables)}

    @cached_property
    def parts(self) -> Ints:
        """Number of parts per axis, 0 for real variables [-]."""
        return np.array([variable.parts for variable in self.variables], dtype=np.int64)

    @cached_property
    def redrawn(self) -> NDArray[np.bool_]:
        """True for axes that a mutation draws anew: categories, and whole numbers, whose steps small moves
        never cross.
        """
        return self.parts > 0

    @cached_property
    def axes(self) -> Axes:
        """What mating has to know of the axes."""
        parts = list(dict.fromkeys(variable.part for variable in self.variables))
        part = np.array([parts.index(variable.part) for variable in self.variables])
        return Axes(part, self.redrawn, self.axis["modulation"])

    def repaired(self, points: Array) -> Array:
        """Clip points to the cube and snap categories and whole numbers to the middles of their parts."""
        parts = np.maximum(self.parts, 1)
        clipped = np.clip(points, 0.0, 1.0)
        snapped = (np.minimum(np.floor(clipped * parts), parts - 1) + 0.5) / parts
        return np.where(self.parts > 0, snapped, clipped)

    def designs(self, points: Array) -> Designs:
        """Candidates of repaired points (n, k)."""
        values = {name: self.variables[axis].value(points[:, axis]) for name, axis in self.axis.items()}
        choose = {
            name: values[name].astype(np.int64) for name in ("device", "modulation", "dc link", "cooling")
        }
        spec, tables = self.study.specification, self.inverter.tables
        device = self.devices[choose["device"]]
        scheme = self._schemes[choose["modulation"]]
        frequency = values["switching_frequency"]
        ripple_current = values["ripple"] * np.sqrt(2.0) * spec.rated_current_a
        inverter_inductance = (
            spec.dc_voltage_max_v * self._ripple_scale(tables)[scheme] / (ripple_current * frequency)
        )
        grid_inductance = inverter_inductance * values.get("grid_inductance_ratio", np.zeros_like(frequency))
        omega = 2.0 * np.pi * spec.line_frequency_hz
        none = np.zeros_like(frequency)
        capacitance = values.get("filter_capacitance_share", none) / (omega * spec.base_impedance_ohm)
        effective = np.where(
            grid_inductance > 0.0,
            inverter_inductance * grid_inductance / (inverter_inductance + grid_inductance),
            inverter_inductance,
        )
        inner = device
        if "inner device" in values:
            inner = self.inner_devices[values["inner device"].astype(np.int64)]
        current = spec.apparent_power_va / (spec.phases * spec.phase_voltage_min_v)
        peak = np.sqrt(2.0) * current + 0.5 * ripple_current
        first = self._inductor(
            values, "inverter", inverter_inductance, self._surge(peak, ripple_current), current
        )
        second = (
            first
            if "grid core material" not in values
            else self._inductor(
                values, "grid", grid_inductance, np.full_like(peak, 1.05 * np.sqrt(2.0) * current), current
            )
        )
        return Designs(
            device=device,
            modulation=scheme,
            switching_frequency_hz=frequency,
            die_area_m2=self._die_area(device, values["die area"]),
            parallel=values["parallel"].astype(np.int64),
            inner_device=inner,
            inner_die_area_m2=self._die_area(inner, values.get("inner die area", values["die area"])),
            inverter_inductance_h=inverter_inductance,
            grid_inductance_h=grid_inductance,
            filter_capacitance_f=capacitance,
            damping_resistance_ohm=values.get("damping", none)
            * np.sqrt(effective / np.maximum(capacitance, NO_CAPACITANCE)),
            damping_capacitance_f=np.where(
                self._beside(values), spec.rules.damping_capacitance_ratio * capacitance, 0.0
            ),
            inverter_inductor=first,
            grid_inductor=second,
            dc_link=self.dc_links[choose["dc link"]],
            cooling=self._cooling[choose["cooling"]],
            sink_resistance_k_per_w=values["sink_resistance"],
        )

    def _beside(self, values: dict[str, Array]) -> NDArray[np.bool_]:
        """Whether the damping branch stands beside the filter capacitor (n,)."""
        kinds = np.array([name == PARALLEL_RC for name in self.study.search.damping_branches])
        chosen = values.get("damping branch", np.zeros_like(values["switching_frequency"]))
        return kinds[chosen.astype(np.int64)]

    def _die_area(self, device: Ints, unit: Array) -> Array:
        """Die areas between the least and the greatest of each device, on a logarithmic scale [m2]."""
        low, high = (
            self.inverter.catalog.devices.column(f"die_area_{end}_m2")[device] for end in ("min", "max")
        )
        return np.asarray(low * (high / low) ** unit)

    def _surge(self, peak: Array, ripple_current: Array) -> Array:
        spec = self.study.specification
        share = spec.rectifier_share
        pulse = (share * spec.crest_factor + (1.0 - share) * np.sqrt(2.0)) * spec.rated_current_a
        return np.maximum(peak, pulse + 0.5 * ripple_current)

    def _inductor(
        self, values: dict[str, Array], side: str, inductance: Array, peak: Array, rms: float
    ) -> InductorDesigns:
        return size_inductor(
            self.inverter.catalog,
            self._ladder,
            self.materials[values[f"{side} core material"].astype(np.int64)],
            self.conductors[values[f"{side} conductor"].astype(np.int64)],
            inductance,
            peak,
            np.full_like(peak, rms),
            values[f"{side} core size"],
            values[f"{side} flux use"],
            values[f"{side} window use"],
            self.study.specification.rules.saturation_use,
            self.study.specification.rules.coil_former_wall,
        )

    @cached_property
    def _ladder(self) -> CoreLadder:
        return core_ladder(self.inverter.catalog, self._families)

    @cached_property
    def _schemes(self) -> Ints:
        """Schemes of the bridge among those the study names [-]."""
        wanted, schemes = self.study.search.modulations, self.inverter.bridge.modulations
        return np.array([place for place, scheme in enumerate(schemes) if scheme.name in wanted])

    @cached_property
    def _cooling(self) -> Ints:
        return np.array([COOLING.index(kind) for kind in self.study.search.cooling])

    def _ripple_scale(self, tables: WaveformTables) -> Array:
        """Greatest peak-to-peak ripple of every scheme at greatest dc voltage (s,) [V_dc/(L f_s)]."""
        spec, bridge = self.study.specification, self.inverter.bridge
        index = np.sqrt(2.0) * spec.phase_voltage_v / (bridge.index_base * spec.dc_voltage_max_v)
        scheme = np.arange(len(bridge.modulations))
        row, weight = tables.position(np.minimum(index, tables.linear_limit))
        return tables.read(tables.peak_ripple, scheme, row, weight)


def _category(name: str, count: int, part: str) -> Variable:
    return Variable(name, CATEGORY, 0.0, float(count - 1), part)


def _chosen(names: tuple[str, ...], wanted: tuple[str, ...]) -> Ints:
    return np.array([names.index(name) for name in (wanted or names)], dtype=np.int64)
