"""Harmonic limit tables of standards, as bands of orders."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike, NDArray

Parity = Literal["odd", "even"]
Multiples = Literal["any", "of three", "not of three"]


@dataclass(frozen=True)
class LimitBand:
    """Limit of the orders order_min <= h <= order_max of one parity: constant + over_order / h."""

    parity: Parity
    order_min: int
    order_max: int
    constant: float  # [basis of the table]
    over_order: float = 0.0  # numerator of the part that falls with the order [basis of the table]
    multiples: Multiples = "any"

    def covers(self, order: NDArray[np.int64]) -> NDArray[np.bool_]:
        """Whether each order lies in the band [-]."""
        parity = order % 2 == (1 if self.parity == "odd" else 0)
        inside = parity & (order >= self.order_min) & (order <= self.order_max)
        if self.multiples == "any":
            return inside
        return inside & ((order % 3 == 0) == (self.multiples == "of three"))


@dataclass(frozen=True)
class LimitTable:
    """Limits of single harmonics and of the total distortion.

    `basis` says of what the limits are a share: "rated current", "demand current" (the greatest load
    current over a demand interval), "fundamental voltage"; or that they are amperes: "absolute ampere".
    """

    name: str
    basis: str
    bands: tuple[LimitBand, ...]
    total_limit: float  # infinite where the standard has none [basis]
    total_name: str  # the standard's name of the total
    current_range_a: tuple[float, float] = (0.0, math.inf)  # rated currents it is for: above, up to [A]
    ratio_range: tuple[float, float] = (0.0, math.inf)  # short-circuit ratios it is made for [-]
    phases: int = 0  # phases it is made for; 0 for any [-]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)

    @property
    def of_voltage(self) -> bool:
        """Whether it limits the voltage of a stand-alone inverter rather than the current into a grid."""
        return self.basis == "fundamental voltage"

    def limit_of(self, order: ArrayLike) -> NDArray[np.float64]:
        """Limit of each harmonic order, infinite for orders the standard does not limit.

        Parameters
        ----------
        order : whole harmonic orders, any shape [-]

        Returns
        -------
        limit : same shape [share of the basis, or A where the basis is "absolute ampere"]
        """
        orders = np.asarray(order).astype(np.int64)
        limit = np.full(orders.shape, np.inf)
        for band in self.bands:
            value = band.constant + band.over_order / np.maximum(orders, 1)
            limit = np.where(band.covers(orders), value, limit)
        return limit
