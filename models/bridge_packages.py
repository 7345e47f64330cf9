"""Which packages a candidate's bridge is built of: one part for each role in its legs."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from models.catalog.clamp_diode import ClampDiode, diode_of
from models.catalog.gathered import Gathered
from models.catalog.part_table import PartTable
from models.catalog.parts import Catalog
from models.designs import Designs
from models.semiconductors.packages import Packages
from models.specification import Specification
from models.waveforms.bridges import Bridge
from models.waveforms.leg_commutations import CLAMP, INNER, OUTER, ROLES, blocking_shares

Array = NDArray[np.float64]
Ints = NDArray[np.int64]


@dataclass(frozen=True)
class BridgePackages:
    """Packages of a study's bridge; holds what is chosen once for all candidates."""

    specification: Specification
    catalog: Catalog
    bridge: Bridge

    @cached_property
    def blocking(self) -> dict[str, float]:
        """Greatest voltage that each role's positions block, over V_dc [-]."""
        return blocking_shares(self.bridge.leg_type)

    @cached_property
    def clamp_table(self) -> PartTable[ClampDiode]:
        """Clamp diodes: the catalogue's, and the diode that each bipolar switch is sold with."""
        own = [diode_of(device) for device in self.catalog.devices if not device.shared_die]
        return PartTable((*self.catalog.clamp_diodes, *own))

    @cached_property
    def clamp_of(self) -> Ints:
        """Clamp diode beside each device of the catalogue, by index [-].

        A bipolar switch is clamped by the diode of its own class, a unipolar one by the Schottky diode of the
        least rating that bears its share of the greatest dc voltage (of the highest rating where none does).
        """
        voltage = self.specification.dc_voltage_max_v * self.blocking.get(CLAMP, 0.0)
        diodes = list(self.catalog.clamp_diodes)
        bearing = [one for one in diodes if one.voltage_rating_v * one.voltage_use_limit >= voltage]
        least = min(bearing, key=lambda one: one.voltage_rating_v, default=None)
        schottky = least or max(diodes, key=lambda one: one.voltage_rating_v)
        names = [
            schottky.name if device.shared_die else diode_of(device).name for device in self.catalog.devices
        ]
        return np.array([self.clamp_table.index(name) for name in names])

    def of(self, designs: Designs) -> tuple[Packages, ...]:
        """Packages of every role, outer ones first.

        The clamp diodes' rated current is a share of the inner switches' (design rule).
        """
        parallel = designs.parallel.astype(float)
        outer = Gathered(self.catalog.devices, designs.device, 1)
        made = [self._packages(OUTER, outer, designs.die_area_m2, parallel)]
        if INNER not in self.blocking:
            return tuple(made)
        inner = Gathered(self.catalog.devices, designs.inner_device, 1)
        made.append(self._packages(INNER, inner, designs.inner_die_area_m2, parallel))
        if CLAMP in self.blocking:
            clamp = Gathered(self.clamp_table, self.clamp_of[designs.inner_device], 1)
            current = inner.reference_current_density_a_per_m2[:, 0] * designs.inner_die_area_m2
            density = clamp.reference_current_density_a_per_m2[:, 0]
            area = self.specification.rules.clamp_diode_current_share * current / density
            made.append(self._packages(CLAMP, clamp, area, parallel))
        return tuple(made)

    def _packages(self, role: str, device: Gathered, area: Array, parallel: Array) -> Packages:
        in_a_leg = list(ROLES[self.bridge.leg_type].values()).count(role)
        legs = self.bridge.leg_copies * len(self.bridge.modelled_legs)
        return Packages(role, device, parallel, area, in_a_leg * legs, self.blocking[role])
