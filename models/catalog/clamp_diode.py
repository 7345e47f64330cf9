"""Clamp diodes of neutral-point clamped legs: Schottky diodes of the catalogue, and the silicon diodes that
bipolar switches are sold with.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field, fields
from typing import Any


@dataclass(frozen=True)
class ClampDiode:
    """A diode by itself, to be scaled by die area; fields named as those of a `Device`'s diode mean the same.

    Energies and charges refer to the diode's own die area and rated current.
    """

    name: str
    voltage_rating_v: float  # [V]
    voltage_use_limit: float  # greatest blocked dc voltage over the rating [-]
    reference_current_density_a_per_m2: float  # rated current over die area [A/m2]
    diode_threshold_25_v: float  # [V]
    diode_threshold_hot_v: float  # [V]
    diode_slope_area_25_ohm_m2: float  # [Ohm m2]
    diode_slope_area_hot_ohm_m2: float  # [Ohm m2]
    hot_c: float  # temperature of the hot conduction values [C]
    energy_reference_voltage_v: float  # voltage of recovery energy and charge [V]
    recovery_energy_j_per_av: float  # at rated current, hot; 0 for Schottky diodes [J/(A V)]
    recovery_current_exponent: float  # [-]
    recovery_voltage_exponent: float  # [-]
    energy_hot_c: float  # [C]
    recovery_temperature_coefficient_per_k: float  # refers to the hot value [1/K]
    output_charge_c_per_m2: float  # capacitive charge at the reference voltage [C/m2]
    output_charge_voltage_exponent: float  # [-]
    junction_case_k_m2_per_w: float  # thermal resistance times die area [K m2/W]
    junction_case_reference_area_m2: float  # [m2]
    junction_case_exponent: float  # [-]
    case_sink_k_per_w: float  # one package, insulation included [K/W]
    mounting_area_m2: float  # [m2]
    package_volume_m3: float  # [m3]
    junction_limit_c: float  # [C]
    price_per_area_per_m2: float  # package apart [currency/m2]
    package_price: float  # [currency]
    switch_node_capacitance_f: float  # package tab to heatsink [F]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)

    @property
    def recovery_constant_share(self) -> float:
        """Part of the recovery energy at rated current that is there without current [-]."""
        return 0.0

    @property
    def diode_area_share(self) -> float:
        """Diode die over the die areas given for it: it is the only die [-]."""
        return 1.0

    @property
    def diode_junction_case_factor(self) -> float:
        """Likewise [-]."""
        return 1.0


def diode_of(device: Any) -> ClampDiode:
    """The diode that a bipolar switch is sold with, as a part of its own.

    Args:
        device: the switch; its price is taken to be spent evenly on the area of both dies.
    """
    share = device.diode_area_share
    changed = {
        "name": f"diode of {device.name}",
        "reference_current_density_a_per_m2": device.reference_current_density_a_per_m2 / share,
        "output_charge_c_per_m2": 0.0,
        "junction_case_k_m2_per_w": device.junction_case_k_m2_per_w * device.diode_junction_case_factor,
        "price_per_area_per_m2": device.price_per_area_per_m2 / (1.0 + share),
        "origin": {},
    }
    taken = {entry.name: getattr(device, entry.name) for entry in fields(ClampDiode)}
    return ClampDiode(**(taken | changed))
