"""The operating points at which every candidate is evaluated, from the specification alone."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.specification import (
    CALIFORNIAN_WEIGHTS,
    EUROPEAN_WEIGHTS,
    STAND_ALONE,
    Specification,
)

Array = NDArray[np.float64]


@dataclass(frozen=True)
class OperatingPoints:
    """Operating points on one axis q: load levels, thermal worst points, distortion point, modulation limit
    points.

    Attributes:
        load_level: apparent power over rated (q,) [-].
        output_voltage: rms phase voltage (q,) [V].
        output_current: rms phasor of the phase current, lagging negative imaginary (q,) [A].
        dc_voltage: (q,) [V].
        loads, thermal, modulation: slices of the axis; losses are computed on `losses` = loads and thermal
            points.
        distortion: index of the point for ripple, distortion and capacitor ripple (rated current, greatest dc
            voltage).
        rated: index of rated load at nominal voltages.
    """

    load_level: Array
    output_voltage: Array
    output_current: NDArray[np.complex128]
    dc_voltage: Array
    loads: slice
    thermal: slice
    losses: slice
    modulation: slice
    distortion: int
    rated: int

    def load_inductance(self, line_frequency_hz: float) -> Array:
        """Inductance of a linear load, a resistor and an inductor in series; 0 where it leads (q,) [H]."""
        impedance = self.output_voltage / self.output_current
        return np.asarray(np.maximum(impedance.imag, 0.0) / (2.0 * np.pi * line_frequency_hz))

    def weights(self, weights: dict[float, float]) -> Array:
        """Weights of the load levels on the `loads` slice [-]."""
        return np.array([weights.get(float(level), 0.0) for level in self.load_level[self.loads]])


def operating_points(specification: Specification) -> OperatingPoints:
    """List the operating points of a specification.

    Load levels: every one of the European, the Californian and the study's own weighting, at nominal
    voltages and the study's power factor (unity unless it says otherwise). Thermal points: rated apparent
    power at the least ac and the greatest dc voltage, at unity and at the least power factor, leading (its
    current and the filter capacitor's add). Distortion point: rated power at the study's power factor,
    nominal ac and greatest dc voltage. Modulation points: nominal ac at least dc voltage, and greatest ac at
    nominal dc voltage, both at the least power factor, lagging, which asks most of the bridge's voltage.
    """
    spec = specification
    levels = sorted({*EUROPEAN_WEIGHTS, *CALIFORNIAN_WEIGHTS, *spec.weights, 1.0})
    low_ac = spec.phase_voltage_v if spec.application == STAND_ALONE else spec.phase_voltage_min_v
    high_ac = spec.phase_voltage_v if spec.application == STAND_ALONE else spec.phase_voltage_max_v
    angle = float(np.arccos(spec.power_factor_min))
    lag = spec.displacement
    rows = [(level, spec.phase_voltage_v, lag, spec.dc_voltage_v) for level in levels]
    count = len(rows)
    rows += [(1.0, low_ac, 0.0, spec.dc_voltage_max_v), (1.0, low_ac, -angle, spec.dc_voltage_max_v)]
    rows += [(1.0, spec.phase_voltage_v, lag, spec.dc_voltage_max_v)]
    rows += [
        (1.0, spec.phase_voltage_v, angle, spec.dc_voltage_min_v),
        (1.0, high_ac, angle, spec.dc_voltage_v),
    ]
    level, voltage, angles, dc = np.array(rows).T
    phasor = level * spec.apparent_power_va / (spec.phases * voltage) * np.exp(-1j * angles)
    return OperatingPoints(
        load_level=level,
        output_voltage=voltage,
        output_current=phasor,
        dc_voltage=dc,
        loads=slice(0, count),
        thermal=slice(count, count + 2),
        losses=slice(0, count + 2),
        distortion=count + 2,
        modulation=slice(count + 3, count + 5),
        rated=levels.index(1.0),
    )
