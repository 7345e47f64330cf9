"""Noise of a population at its judged lines: sources, the way to the mains network, levels with and without
filter.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.emission.chokes import LEAKAGE_PERMEABILITY, ChokePick
from models.emission.network import SERIES, SHUNT, choke_impedance, load_share, network_impedance
from models.output_filter import Filter

Array = NDArray[np.float64]
Complex = NDArray[Any]


@dataclass(frozen=True)
class Stages:
    """Equal L-C stages (n,): inductance of each [H], capacitance of all [F], count, chokes, material [-]."""

    inductance: Array
    capacitance: Array
    count: Array
    pick: ChokePick
    material: int | NDArray[np.int64]


@dataclass(frozen=True)
class Noise:
    """Noise of a population at its judged lines (n, k), and what it meets.

    Attributes:
        frequency: [Hz].
        differential_source, common_source: source voltages, rms of the greatest amplitude [V].
        circuit: output filter (n, 1).
        node_capacitance: of the switch nodes to earth (n, 1) [F].
        lines: [-]; winding_capacitance: of chokes [F].
        limit: quasi-peak limit less margin [dB over 1 uV].
        choke_left: inductance of common-mode chokes at the frequency over that at 150 kHz, by material.
        choke_permeability: at 150 kHz, by material [-].
    """

    frequency: Array
    differential_source: Array
    common_source: Array
    circuit: Filter
    node_capacitance: Array
    lines: int
    winding_capacitance: float
    limit: Array
    choke_left: tuple[Array, ...]
    choke_permeability: tuple[float, ...]

    @property
    def omega(self) -> Array:
        """2 pi f [rad/s]."""
        return 2.0 * np.pi * self.frequency

    @cached_property
    def network(self) -> Complex:
        """Impedance of one line of the mains network [ohm]."""
        return network_impedance(self.frequency)

    @cached_property
    def differential(self) -> Array:
        """Differential level without emission filter [dB over 1 uV]."""
        return self._differential(())

    @cached_property
    def common(self) -> Array:
        """Common-mode level without emission filter [dB over 1 uV]."""
        return self._common(())

    def with_filters(self, differential: Stages, common: Stages) -> tuple[Array, Array]:
        """Levels with filters, differential and common [dB over 1 uV]."""
        none = np.zeros_like(self.network)
        dm = self._stages(differential, np.ones_like(self.frequency))
        left = np.choose(np.asarray(common.material)[:, None], self.choke_left)
        cm = self._stages(common, left)
        # the common-mode chokes' leakage adds to the differential chokes
        share = np.choose(common.material, LEAKAGE_PERMEABILITY / np.array(self.choke_permeability))
        leakage = share * common.inductance * common.count
        extra = choke_impedance(
            leakage[:, None] * np.ones_like(left), self.winding_capacitance, self.frequency
        )
        return self._differential((*dm, (SERIES, extra + none))), self._common(cm)

    def _stages(self, stages: Stages, left: Array) -> tuple[tuple[str, Complex], ...]:
        inductance = stages.inductance[:, None] * left
        choke = choke_impedance(inductance, self.winding_capacitance, self.frequency)
        share = stages.capacitance / np.maximum(stages.count, 1.0)
        chain: list[tuple[str, Complex]] = []
        for stage in (1, 2):
            there = (stages.count >= stage)[:, None]
            chain.append((SHUNT, np.where(there, 1j * self.omega * share[:, None], 0.0)))
            chain.append((SERIES, np.where(there, choke, 0.0)))
        return tuple(chain)

    def _differential(self, stages: tuple[tuple[str, Complex], ...]) -> Array:
        circuit, both = self.circuit, 2.0 if self.lines == 2 else 1.0
        resistance, reactance = circuit.branch(self.omega)
        chain = (
            (SERIES, choke_impedance(circuit.inverter_inductance, self.winding_capacitance, self.frequency)),
            (SHUNT, 1.0 / (resistance - 1j * reactance)),
            (SERIES, choke_impedance(circuit.grid_inductance, self.winding_capacitance, self.frequency)),
            *stages,
        )
        voltage = self.differential_source * load_share(chain, both * self.network) / both
        return decibel_microvolt(voltage)

    def _common(self, stages: tuple[tuple[str, Complex], ...]) -> Array:
        source = (SERIES, 1.0 / (1j * self.omega * self.node_capacitance))
        load = self.network / self.lines
        return decibel_microvolt(self.common_source * load_share((source, *stages), load))


def decibel_microvolt(voltage: Array) -> Array:
    """Level of a voltage [V] over 1 uV [dB]; voltages below a picovolt count as one."""
    return 20.0 * np.log10(np.maximum(voltage, 1e-12) / 1e-6)
