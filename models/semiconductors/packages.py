"""Packages of a bridge: which part stands at which positions, how many, and what they cost in volume and
money.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.semiconductors.junction import junction_to_case
from models.semiconductors.switching import Dies

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Packages:
    """All packages of one role in a bridge.

    Attributes:
        role: a role of `leg_commutations`.
        device: catalogue columns of shape (n, 1): a switch with its diode, or a clamp diode.
        parallel: packages per position (n,) [-].
        die_area: switch (or clamp diode) die area of one package (n,) [m2].
        positions: positions of this role in the whole bridge [-].
        blocking_share: greatest voltage a position blocks over V_dc [-].
    """

    role: str
    device: Any
    parallel: Array
    die_area: Array
    positions: int
    blocking_share: float

    @cached_property
    def dies(self) -> Dies:
        """The parallel dies of one position."""
        return Dies(self.device, (self.parallel * self.die_area)[:, None])

    @property
    def resistances(self) -> tuple[Array, Array, Array]:
        """Of one position: switch junction to case, diode junction to case, case to heatsink (n, 1) [K/W]."""
        device, count = self.device, self.parallel[:, None]
        diode_area = self.die_area[:, None] * device.diode_area_share
        return (
            junction_to_case(device, self.die_area[:, None]) / count,
            junction_to_case(device, diode_area) * device.diode_junction_case_factor / count,
            device.case_sink_k_per_w / count,
        )

    @property
    def count(self) -> Array:
        """Packages in the bridge (n,) [-]."""
        return self.positions * self.parallel

    @property
    def volume(self) -> Array:
        """Of all packages (n,) [m3]."""
        return self.count * self.device.package_volume_m3[:, 0]

    @property
    def mounting_area(self) -> Array:
        """Of all packages on the heatsink (n,) [m2]."""
        return self.count * self.device.mounting_area_m2[:, 0]

    @property
    def price(self) -> Array:
        """Of all packages (n,) [currency]."""
        device = self.device
        each = device.price_per_area_per_m2[:, 0] * self.die_area + device.package_price[:, 0]
        return self.count * each
