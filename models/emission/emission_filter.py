"""Conducted emission of a population and the filter that brings it below the limit.

Differential mode: the carrier groups of the filter voltage pass the output filter into the artificial mains
network. Common mode: the carrier groups of the legs' mean voltage drive a current through the capacitance of
the switch nodes (the packages' tabs on the earthed heatsink, and strays) to earth; the output filter's chokes
are not counted on (worst case). Levels are worst-case quasi-peak, one carrier group at a time. Each mode gets
one or two L-C stages, whichever needs less volume. Above some megahertz the layout decides, and no figure
here tells anything.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.catalog.emission_parts import EmissionLimit
from models.catalog.parts import Catalog
from models.designs import Designs
from models.emission.carrier_peaks import CarrierPeaks, carrier_peaks, group_place
from models.emission.chokes import (
    ChokeCurve,
    ChokePick,
    LineCurrent,
    common_mode_curve,
    differential_mode_curve,
)
from models.emission.noise import Noise, Stages
from models.emission.stages import stage_inductance
from models.output_filter import Filter
from models.semiconductors.packages import Packages
from models.specification import Specification
from models.uncertainty import NOMINAL, ModelFactors
from models.waveforms.bridges import Bridge
from models.waveforms.state import WaveformState
from models.waveforms.tables import WaveformTables

Array = NDArray[np.float64]
BAND_START_HZ = 150e3
SPOTS_HZ = (500e3, 5e6)  # where limits change; the carrier group next above each is judged too
FIRST_GROUPS = 6  # groups from 150 kHz on that are judged
Y_CAPACITOR_F, Y_CAPACITOR_M3 = 4.7e-9, 0.75e-6  # ceramic disc of class Y2, from memory
X_VOLUME_M3_PER_F = 5.0  # X2 film box, from memory: 5 cm3/uF
STAGES = (1, 2)
UNBUILT_DB = -60.0  # a distance that no design should have


@dataclass(frozen=True)
class Emission:
    """Emission and its filter (n,), lines (n, k).

    Attributes:
        frequency: judged lines [Hz].
        differential, common: levels without the emission filter [dB over 1 uV].
        limit: quasi-peak limit [dB over 1 uV].
        differential_left, common_left: levels with the filter [dB over 1 uV].
        margin: least distance of both from the limit less margin; UNBUILT_DB where no choke of the catalogue
            will do [dB].
        differential_inductance, common_inductance: of each stage [H]; x_capacitance, y_capacitance: in all,
            per line and to earth [F].
        stages: of differential and of common mode [-].
        volume, mass, price: [m3], [kg], [currency]; resistance: added in each line [ohm].
    """

    frequency: Array
    differential: Array
    common: Array
    limit: Array
    differential_left: Array
    common_left: Array
    margin: Array
    differential_inductance: Array
    common_inductance: Array
    x_capacitance: Array
    y_capacitance: Array
    differential_stages: Array
    common_stages: Array
    volume: Array
    mass: Array
    price: Array
    resistance: Array


@dataclass(frozen=True)
class EmissionModel:
    """What a study's emission is judged by, with everything that is solved once for all candidates."""

    specification: Specification
    catalog: Catalog
    bridge: Bridge
    tables: WaveformTables

    @cached_property
    def limit(self) -> EmissionLimit:
        """The study's limit. Raises ValueError for a name that the catalogue does not have."""
        limits = self.catalog.emission_limits
        return limits[limits.index(self.specification.emission_limit)]

    @cached_property
    def peaks(self) -> CarrierPeaks:
        """Carrier groups of the bridge."""
        return carrier_peaks(self.bridge.name, self.specification.displacement)

    @property
    def lines(self) -> int:
        """Lines that carry the current: two of a single-phase inverter [-]."""
        return 2 if self.specification.phases == 1 else 3

    @cached_property
    def current(self) -> LineCurrent:
        """Greatest current of a line, at the least ac voltage."""
        spec = self.specification
        rms = spec.apparent_power_va / (spec.phases * spec.phase_voltage_min_v)
        return LineCurrent(rms, np.sqrt(2.0) * rms, spec.rules.emission_current_density)

    @cached_property
    def differential_chokes(self) -> ChokeCurve:
        """Differential-mode chokes for that current."""
        return differential_mode_curve(self.catalog, self.current)

    @cached_property
    def common_chokes(self) -> tuple[ChokeCurve, ...]:
        """Common-mode chokes of every material for that current, inductance at 150 kHz."""
        return tuple(
            common_mode_curve(self.catalog, material, self.current, self.lines, BAND_START_HZ)
            for material in self.catalog.choke_materials
        )

    @property
    def y_capacitance(self) -> float:
        """Greatest capacitance to earth by the leakage current limit [F]."""
        spec = self.specification
        omega = 2.0 * np.pi * spec.line_frequency_hz
        return spec.rules.leakage_current_limit / (omega * spec.phase_voltage_max_v)

    def judged_multiples(self, frequency: Array) -> NDArray[np.int64]:
        """Carrier multiples judged for switching frequencies (n,) [Hz]: (n, k) [-]."""
        first = np.ceil(BAND_START_HZ / frequency - 1e-9)
        spots = [np.maximum(np.ceil(spot / frequency - 1e-9), first) for spot in SPOTS_HZ]
        rows = [first + step for step in range(FIRST_GROUPS)] + spots + [spot + 1.0 for spot in spots]
        return np.stack(rows, axis=-1).astype(np.int64)

    def evaluate(
        self,
        designs: Designs,
        circuit: Filter,
        state: WaveformState,
        point: int,
        packages: tuple[Packages, ...],
        factors: ModelFactors = NOMINAL,
    ) -> Emission:
        """Judge a population and size its filters.

        Args:
            designs: candidates (n,).
            circuit: output filter (n, 1).
            state, point: waveforms at the operating point of the greatest dc voltage.
            packages: of the bridge.
            factors: on what the models say.
        """
        judged = self.judged_multiples(designs.switching_frequency_hz)
        return self.at_multiples(judged, designs, circuit, state, point, packages, factors)

    def at_multiples(
        self,
        multiple: NDArray[np.int64],
        designs: Designs,
        circuit: Filter,
        state: WaveformState,
        point: int,
        packages: tuple[Packages, ...],
        factors: ModelFactors = NOMINAL,
    ) -> Emission:
        """As `evaluate`, at carrier multiples of one's own choice (n, k) [-]; the filter is sized at the same
        lines as in `evaluate`.
        """
        judged = self.judged_multiples(designs.switching_frequency_hz)
        at = (designs, circuit, state, point, packages, factors.emission_level)
        noise = self._noise(judged, *at)
        differential = self._differential_filter(noise)
        common = self._common_filter(noise)
        shown = noise if multiple is judged else self._noise(multiple, *at)
        left = shown.with_filters(differential, common)
        x, y = self._capacitors(differential, common)
        spec, lines = self.specification, self.lines
        dm_count = differential.count * (1.0 if spec.phases == 1 else 3.0)
        units = np.ceil(y / Y_CAPACITOR_F)
        boxes = X_VOLUME_M3_PER_F * x * (1.0 if spec.phases == 1 else 3.0)
        parts = ((differential.pick, dm_count), (common.pick, common.count))
        cost = self.catalog.cost
        capacitors = (
            cost.x_capacitor_price_per_f * x * (lines if lines == 3 else 1) + cost.y_capacitor_price * units
        )
        in_line = 0.5 if spec.phases == 1 else 1.0  # a single-phase choke stands in one of the two lines
        return Emission(
            frequency=shown.frequency,
            differential=shown.differential,
            common=shown.common,
            limit=shown.limit,
            differential_left=left[0],
            common_left=left[1],
            margin=np.where(
                differential.pick.possible & common.pick.possible,
                np.minimum(shown.limit - left[0], shown.limit - left[1]).min(-1),
                UNBUILT_DB,
            ),
            differential_inductance=differential.inductance,
            common_inductance=common.inductance,
            x_capacitance=x,
            y_capacitance=y,
            differential_stages=differential.count,
            common_stages=common.count,
            volume=sum((pick.volume * count for pick, count in parts), boxes + units * Y_CAPACITOR_M3),
            mass=sum((pick.mass * count for pick, count in parts), (boxes + units * Y_CAPACITOR_M3) * 1400.0),
            price=sum((pick.price * count for pick, count in parts), capacitors),
            resistance=differential.pick.resistance * differential.count * in_line
            + common.pick.resistance * common.count,
        )

    def _noise(
        self,
        multiple: NDArray[np.int64],
        designs: Designs,
        circuit: Filter,
        state: WaveformState,
        point: int,
        packages: tuple[Packages, ...],
        level: Array,
    ) -> Noise:
        spec = self.specification
        frequency = multiple * designs.switching_frequency_hz[:, None]
        place = (state.scheme, state.row[:, point, None], state.weight[:, point, None])
        chosen = group_place(multiple)
        voltages = []
        for table in (self.peaks.differential, self.peaks.common):
            rows = self.tables.read(table, *place)[:, 0]
            voltages.append(np.take_along_axis(rows, chosen, axis=-1) / multiple)
        # unequal edges leave part of a leg's voltage in the common mode of schemes whose legs cancel
        floor = spec.rules.common_mode_asymmetry * 2.0 / (np.pi * multiple * (self.bridge.levels - 1))
        scale = spec.dc_voltage_max_v / np.sqrt(2.0) * level[:, None]
        return Noise(
            frequency=frequency,
            differential_source=voltages[0] * scale,
            common_source=np.maximum(voltages[1], floor) * scale,
            circuit=circuit,
            node_capacitance=self._node_capacitance(packages)[:, None],
            lines=self.lines,
            winding_capacitance=spec.rules.choke_capacitance,
            limit=self.limit.quasi_peak_at(frequency) - spec.rules.emission_margin_db,
            choke_left=tuple(
                material.permeability_at(frequency) / material.permeability_at(BAND_START_HZ)
                for material in self.catalog.choke_materials
            ),
            choke_permeability=tuple(
                float(material.permeability_at(BAND_START_HZ)) for material in self.catalog.choke_materials
            ),
        )

    def _differential_filter(self, noise: Noise) -> Stages:
        spec = self.specification
        omega = 2.0 * np.pi * spec.line_frequency_hz
        x = spec.rules.emission_x_share / (omega * spec.base_impedance_ohm)
        capacitance = np.full(len(noise.frequency), x)
        found = []
        for count in STAGES:
            inductance = stage_inductance(
                noise.differential - noise.limit, noise.omega, capacitance, count, np.ones_like(noise.omega)
            )
            pick = self.differential_chokes.at(inductance)
            found.append(
                Stages(inductance, capacitance, np.where(inductance > 0.0, float(count), 0.0), pick, 0)
            )
        return _smaller(found)

    def _common_filter(self, noise: Noise) -> Stages:
        capacitance = np.full(len(noise.frequency), self.y_capacitance)
        found = []
        for place, curve in enumerate(self.common_chokes):
            for count in STAGES:
                inductance = stage_inductance(
                    noise.common - noise.limit, noise.omega, capacitance, count, noise.choke_left[place]
                )
                stages = np.where(inductance > 0.0, float(count), 0.0)
                found.append(Stages(inductance, capacitance, stages, curve.at(inductance), place))
        return _smaller(found)

    def _node_capacitance(self, packages: tuple[Packages, ...]) -> Array:
        """Capacitance of all switch nodes to earth (n,) [F]: the tabs of half of the positions, those whose
        drain or collector is the leg's output, and what board and windings add.
        """
        tabs = (0.5 * part.count * part.device.switch_node_capacitance_f[:, 0] for part in packages)
        stray = self.specification.rules.switch_node_stray * len(self.bridge.voltage_weights)
        return sum(tabs, np.full(len(packages[0].parallel), stray))

    @staticmethod
    def _capacitors(differential: Stages, common: Stages) -> tuple[Array, Array]:
        """X capacitance per line (or between the lines) and Y capacitance to earth in all [F]."""
        return (
            np.where(differential.count > 0.0, differential.capacitance, 0.0),
            np.where(common.count > 0.0, common.capacitance, 0.0),
        )


def _smaller(found: list[Stages]) -> Stages:
    """Element by element the possible one of least volume."""
    volume = np.stack([np.where(one.pick.possible, one.pick.volume * one.count, np.inf) for one in found])
    best = np.argmin(volume, axis=0)

    def chosen(values: list[Any]) -> Any:
        return np.take_along_axis(np.stack(values), best[None], axis=0)[0]

    names = tuple(vars(found[0].pick))
    return Stages(
        inductance=chosen([one.inductance for one in found]),
        capacitance=chosen([one.capacitance for one in found]),
        count=chosen([one.count for one in found]),
        pick=ChokePick(**{name: chosen([getattr(one.pick, name) for one in found]) for name in names}),
        material=chosen([np.full(len(best), one.material) for one in found]),
    )
