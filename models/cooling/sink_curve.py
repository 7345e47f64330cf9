"""The smallest heatsink for a thermal resistance: a curve found once per study, then read for whole
populations.

A curve holds, on a uniform logarithmic grid of thermal resistance, the candidate of least boxed volume
whose resistance is at most the grid value. Between grid points volume, mass, area and price go as powers of
resistance, fan power linearly with its logarithm.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from models.cooling.plate_fin import PlateFin

Array = NDArray[np.float64]
Ints = NDArray[np.int64]

END_TOLERANCE = 1e-9
NO_FAN = -1


@dataclass(frozen=True, kw_only=True)
class SinkPoint:
    """What a curve says at the asked resistances.

    Attributes:
        volume_m3: boxed, fans included [m3].
        mass_kg: fans included [kg].
        base_area_m2: mounting area [m2].
        fan_power_w: electrical, all fans [W].
        price: in the study's currency [-].
        count: equal sinks that share the heat [-].
        available: False where the resistance lies outside the curve; the other values are then those of the
            nearer end.
    """

    volume_m3: Array
    mass_kg: Array
    base_area_m2: Array
    fan_power_w: Array
    price: Array
    count: Ints
    available: NDArray[np.bool_]


@dataclass(frozen=True, kw_only=True)
class SinkCurve:
    """Least-volume sinks over thermal resistance; arrays of equal length, by falling resistance.

    Attributes:
        thermal_resistance_k_per_w: hottest point of the base to ambient, uniform logarithmic grid [K/W].
        volume_m3: boxed, fans and plenum included [m3].
        mass_kg: fans included [kg].
        base_area_m2: mounting area [m2].
        base_thickness_m: [m].
        fan_power_w: electrical, all fans [W].
        price: in the study's currency [-].
        air_flow_m3_per_s: of all fans together, 0 without [m3/s].
        geometry: the sinks; None for a cold plate.
        fan_count: of all fans, 0 without [-].
        fan_index: which of the given fans, -1 without [-].
        sink_count: equal sinks that share the heat; the other columns are those of all of them, base
            thickness and geometry those of one [-].
        reference_rise_k: base over ambient for which the resistances hold [K].
        rise_exponent: m of R = R_ref (rise/reference)^-m, 0 for forced air [-].
        rise_deviation: greatest relative departure of the model from that power law over 10..60 K [-].
    """

    thermal_resistance_k_per_w: Array
    volume_m3: Array
    mass_kg: Array
    base_area_m2: Array
    base_thickness_m: Array
    fan_power_w: Array
    price: Array
    air_flow_m3_per_s: Array
    geometry: PlateFin | None
    fan_count: Ints
    fan_index: Ints
    sink_count: Ints
    reference_rise_k: float
    rise_exponent: float
    rise_deviation: float

    @cached_property
    def _table(self) -> tuple[Array, Array]:
        """Rows of log volume, log mass, log area, log price, fan power; and the steps to the next row."""
        logs = np.log([self.volume_m3, self.mass_kg, self.base_area_m2, self.price])
        rows = np.vstack([logs, self.fan_power_w]).T
        return rows[:-1].copy(), np.diff(rows, axis=0)

    @cached_property
    def _axis(self) -> tuple[float, float, float, float]:
        """Greatest and least resistance, logarithm of the greatest, grid points per unit of logarithm."""
        high, low = float(self.thermal_resistance_k_per_w[0]), float(self.thermal_resistance_k_per_w[-1])
        return high, low, float(np.log(high)), (len(self.volume_m3) - 1) / float(np.log(high / low))

    def _position(self, resistance: Array) -> tuple[Ints, Array, NDArray[np.bool_]]:
        """Grid cell, fraction within it, and whether the resistance lies on the curve. NaN counts as
        outside.
        """
        high, low, log_high, density = self._axis
        inside = (resistance >= low * (1.0 - END_TOLERANCE)) & (resistance <= high * (1.0 + END_TOLERANCE))
        place = (log_high - np.log(np.fmin(np.fmax(resistance, low), high))) * density
        cell = np.minimum(place.astype(np.int64), len(self.volume_m3) - 2)
        return cell, place - cell, inside

    def at(self, resistance: Array) -> SinkPoint:
        """Interpolate the curve; any shape.

        Args:
            resistance: asked thermal resistance at the reference rise [K/W].

        Returns:
            The sinks, with `available` False outside the curve.
        """
        cell, fraction, inside = self._position(np.asarray(resistance, dtype=np.float64))
        start, step = self._table
        rows = start.take(cell, axis=0) + fraction[..., None] * step.take(cell, axis=0)
        values = np.exp(rows[..., :4])
        return SinkPoint(
            volume_m3=values[..., 0],
            mass_kg=values[..., 1],
            base_area_m2=values[..., 2],
            price=values[..., 3],
            fan_power_w=rows[..., 4],
            count=self.sink_count[self._built(cell, fraction)],
            available=inside,
        )

    def index(self, resistance: Array) -> Ints:
        """Grid point of the sink to build: the largest resistance that does not exceed the asked one.

        Args:
            resistance: [K/W].

        Returns:
            Index into the curve's arrays; the nearer end outside the curve [-].
        """
        cell, fraction, _ = self._position(np.asarray(resistance, dtype=np.float64))
        return self._built(cell, fraction)

    @staticmethod
    def _built(cell: Ints, fraction: Array) -> Ints:
        return np.asarray(cell + (fraction > 1e-6))

    def rise(self, power: Array, resistance: Array) -> Array:
        """Rise of the base over ambient, from rise = P R (rise/reference)^-m in closed form.

        Args:
            power: heat into the base, not negative [W].
            resistance: at the reference rise [K/W].

        Returns:
            Temperature rise [K].
        """
        drive = power * resistance
        if self.rise_exponent == 0.0:
            return drive
        reference = self.reference_rise_k
        return reference * (drive / reference) ** (1.0 / (1.0 + self.rise_exponent))
