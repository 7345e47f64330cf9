"""Conduction of switch and freewheeling path: threshold plus resistance, scaled by die area, over
temperature.

Silicon IGBT and diode: v = V0(T) + r(T) i. MOSFET and HEMT: R_on(T), which also carries reverse current
(synchronous rectification); their diode conducts in the dead time only. Resistances scale with 1/area.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
COLD_C = 25.0


@dataclass(frozen=True)
class Path:
    """One conducting path at two temperatures: threshold [V] and slope resistance [ohm], cold and its growth.

    `slope_log` is ln(r_hot/r_cold) per kelvin [1/K], `threshold_slope` is in [V/K].
    """

    threshold: Array
    threshold_slope: Array
    slope: Array
    slope_log: Array

    def threshold_at(self, temperature: Array) -> Array:
        """Threshold voltage [V] at a junction temperature [degC]."""
        return self.threshold + self.threshold_slope * (temperature - COLD_C)

    def slope_at(self, temperature: Array) -> Array:
        """Slope resistance r25 (r_hot/r25)^((T - 25)/(T_hot - 25)) [ohm] at a junction temperature [degC]."""
        return self.slope * np.exp(self.slope_log * (temperature - COLD_C))

    def loss(self, temperature: Array, average: Array, mean_square: Array) -> Array:
        """Conduction loss [W] from average [A] and mean-square current [A2]."""
        return self.threshold_at(temperature) * average + self.slope_at(temperature) * mean_square


@dataclass(frozen=True)
class HeatLaw:
    """Loss of a die over its junction temperature T: constant + linear T + resistive exp(growth (T - 25
    degC)) [W].
    """

    constant: Array
    linear: Array
    resistive: Array
    growth: Array

    def at(self, temperature: Array) -> Array:
        """Loss [W] at a junction temperature [degC]."""
        loss = np.exp(self.growth * (temperature - COLD_C))
        loss *= self.resistive
        loss += self.linear * temperature
        loss += self.constant
        return loss

    def scaled(self, factor: Array) -> HeatLaw:
        """The law times a factor on all of its losses [-]."""
        return HeatLaw(self.constant * factor, self.linear * factor, self.resistive * factor, self.growth)

    def of(self, rows: NDArray[np.int64] | slice) -> HeatLaw:
        """The law of some candidates (axis before the last)."""
        return HeatLaw(
            *(part[..., rows, :] for part in (self.constant, self.linear, self.resistive, self.growth))
        )


def conduction_law(path: Path, average: Array, mean_square: Array) -> HeatLaw:
    """Conduction loss of a path as a law of temperature, from average [A] and mean-square current [A2]."""
    cold = path.threshold - path.threshold_slope * COLD_C
    return HeatLaw(cold * average, path.threshold_slope * average, path.slope * mean_square, path.slope_log)


def switch_path(device: Any, total_area: Array) -> Path:
    """Path through the switch of `total_area` [m2] of parallel dies; `device` has the catalogue's device
    fields.
    """
    span = device.hot_c - COLD_C
    cold = device.slope_area_25_ohm_m2
    return Path(
        threshold=device.threshold_25_v,
        threshold_slope=(device.threshold_hot_v - device.threshold_25_v) / span,
        slope=cold * device.dynamic_resistance_factor / total_area,
        slope_log=np.log(device.slope_area_hot_ohm_m2 / cold) / span,
    )


def diode_path(device: Any, total_area: Array) -> Path:
    """Path through the freewheeling (or body) diode beside `total_area` [m2] of switch dies."""
    span = device.hot_c - COLD_C
    cold = device.diode_slope_area_25_ohm_m2
    return Path(
        threshold=device.diode_threshold_25_v,
        threshold_slope=(device.diode_threshold_hot_v - device.diode_threshold_25_v) / span,
        slope=cold / (total_area * device.diode_area_share),
        slope_log=np.log(device.diode_slope_area_hot_ohm_m2 / cold) / span,
    )
