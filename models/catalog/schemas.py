"""Which section of a catalogue file holds which kind of part, and what its values must satisfy."""

from __future__ import annotations

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, fields
from functools import cached_property
from types import UnionType
from typing import Any, get_type_hints

from models.catalog.capacitor_sheet import DC_LINK_RULES
from models.catalog.consistency import Check, at_most, below, rising, same_length, warm_energy
from models.catalog.core_sheet import CORE_MATERIAL_RULES
from models.catalog.derivations import Number, Quantity, Rule
from models.catalog.device_curves import curve_quantities
from models.catalog.device_sheet import DEVICE_RULES, device_anchors
from models.catalog.parts import (
    DEVICE_CLASSES,
    AcCapacitor,
    ChokeMaterial,
    ClampDiode,
    Conductor,
    CoreMaterial,
    CoreShape,
    CostModel,
    DcLinkCapacitor,
    Device,
    EmissionLimit,
    Fan,
)


def _no_anchors(plain: Mapping[str, Any]) -> tuple[str, ...]:
    return ()


@dataclass(frozen=True)
class Schema:
    """One kind of part: its section in the TOML files, its dataclass, and rules for its values."""

    section: str
    part_type: type[Any]
    rules: tuple[Rule, ...] = ()
    zero_allowed: frozenset[str] = frozenset()
    signed: frozenset[str] = frozenset()
    at_most_one: frozenset[str] = frozenset()
    unbounded: frozenset[str] = frozenset()
    lists: frozenset[str] = frozenset()  # quantities apart from fields that hold more than one number
    choices: Mapping[str, tuple[str, ...]] | None = None
    checks: tuple[Check, ...] = ()
    anchors: Callable[[Mapping[str, Any]], tuple[str, ...]] = _no_anchors
    curves: Callable[[Any, float | None, bool], tuple[dict[str, Quantity], list[str]]] | None = None

    @cached_property
    def _hints(self) -> dict[str, type | UnionType]:
        return get_type_hints(self.part_type)

    @cached_property
    def field_names(self) -> tuple[str, ...]:
        """Fields of the dataclass but name and origin."""
        return tuple(f.name for f in fields(self.part_type) if f.name not in ("name", "origin"))

    @cached_property
    def numeric_fields(self) -> tuple[str, ...]:
        """Fields that hold numbers with a unit and an origin."""
        return tuple(n for n in self.field_names if self._hints[n] in (float, tuple[float, ...]))

    @cached_property
    def tuple_fields(self) -> frozenset[str]:
        """Numeric fields that hold more than one number."""
        return frozenset(n for n in self.numeric_fields if self._hints[n] == tuple[float, ...])

    @cached_property
    def plain_fields(self) -> dict[str, type]:
        """Fields that hold words, counts or yes/no, and their types."""
        plain = {n: self._hints[n] for n in self.field_names if n not in self.numeric_fields}
        return {n: tuple if hint == tuple[str, ...] else hint for n, hint in plain.items()}  # type: ignore[misc]

    @cached_property
    def quantities(self) -> tuple[str, ...]:
        """All numeric names a file may state: fields, and what the rules make fields from."""
        names = dict.fromkeys(self.numeric_fields)
        for rule in self.rules:
            names.update(dict.fromkeys((rule.target, *rule.needs)))
        return tuple(names)

    def faults_alone(self, quantities: Mapping[str, Quantity]) -> list[str]:
        """What is wrong with each value by itself, in words."""
        return [
            f"{name} {fault} ({quantity.origin})"
            for name, quantity in quantities.items()
            if (fault := self._fault(name, quantity.value))
        ]

    def faults(self, quantities: Mapping[str, Quantity]) -> list[str]:
        """What is wrong with the values of a whole part, in words: each by itself, then together."""
        values = {name: quantity.value for name, quantity in quantities.items()}
        alone = self.faults_alone(quantities)
        return alone or [message for check in self.checks if (message := check(values))]

    def _fault(self, name: str, value: Number) -> str:
        """What is wrong with one value: shape, finiteness, sign, greatest value."""
        many = name in self.tuple_fields or name in self.lists
        if isinstance(value, tuple) != many:
            return f"must be {'a list of numbers' if many else 'one number'}, got {value}"
        low = min(value) if isinstance(value, tuple) else value
        high = max(value) if isinstance(value, tuple) else value
        if any(math.isnan(n) for n in (value if isinstance(value, tuple) else (value,))):
            return "must not be NaN"
        if math.isinf(high) and name not in self.unbounded:
            return f"must be finite, got {high:g}"
        if name in self.at_most_one and high > 1.0:
            return f"must not exceed 1, got {high:g}"
        if name in self.signed:
            return ""
        if name in self.zero_allowed:
            return f"must not be negative, got {low:g}" if low < 0.0 else ""
        return "" if low > 0.0 else f"must be greater than zero, got {low:g}"


_DEVICE_ZERO = frozenset(
    {
        "threshold_25_v",
        "threshold_hot_v",
        "recovery_energy_j_per_av",
        "recovery_charge_25_c_per_a",
        "output_charge_c_per_m2",
        "output_energy_j_per_m2",
        "output_charge_voltage_exponent",
        "gate_unit_power_w",
        *(f"{name}_constant_share" for name in ("turn_on", "turn_off", "recovery")),
    }
)

SCHEMAS: tuple[Schema, ...] = (
    Schema(
        "devices",
        Device,
        rules=DEVICE_RULES,
        zero_allowed=_DEVICE_ZERO,
        # turn-on of some unipolar parts gets cheaper with temperature
        signed=frozenset(
            {
                "gate_off_v",
                *(f"{name}_temperature_coefficient_per_k" for name in ("turn_on", "turn_off", "recovery")),
            }
        ),
        at_most_one=frozenset(
            {
                "voltage_use_limit",
                "turn_on_share",
                *(f"{name}_constant_share" for name in ("turn_on", "turn_off", "recovery")),
            }
        ),
        curves=curve_quantities,
        unbounded=frozenset({"greatest_switching_frequency_hz"}),
        choices={"device_class": DEVICE_CLASSES},
        checks=(
            at_most("die_area_min_m2", "die_area_max_m2"),
            *(warm_energy(name) for name in ("turn_on", "turn_off", "recovery")),
        ),
        anchors=lambda plain: device_anchors(bool(plain["shared_die"])),
    ),
    Schema(
        "clamp_diodes",
        ClampDiode,
        zero_allowed=frozenset(
            {
                "recovery_energy_j_per_av",
                "recovery_temperature_coefficient_per_k",
                "output_charge_c_per_m2",
                "output_charge_voltage_exponent",
            }
        ),
        at_most_one=frozenset({"voltage_use_limit"}),
    ),
    Schema(
        "core_materials",
        CoreMaterial,
        rules=CORE_MATERIAL_RULES,
        lists=frozenset({"steinmetz_k_per_kg_and_khz"}),
        unbounded=frozenset({"rolloff_field_a_per_m"}),
        choices={"kind": ("gapped", "powder")},
        checks=(
            same_length("band_min_hz", "band_max_hz", "steinmetz_k", "steinmetz_alpha", "steinmetz_beta"),
            rising("band_min_hz"),
            below("band_min_hz", "band_max_hz"),
        ),
    ),
    Schema("core_shapes", CoreShape, zero_allowed=frozenset({"stack_depth_m"})),
    Schema(
        "conductors",
        Conductor,
        zero_allowed=frozenset({"strand_diameter_m", "copper_share_bobbin", "copper_share_toroid"}),
        at_most_one=frozenset({"copper_share_bobbin", "copper_share_toroid"}),
        choices={"kind": ("round", "litz", "foil")},
    ),
    Schema("ac_capacitors", AcCapacitor, zero_allowed=frozenset({"price_fixed"})),
    Schema(
        "dc_link_capacitors",
        DcLinkCapacitor,
        rules=DC_LINK_RULES,
        choices={"technology": ("film", "electrolytic")},
    ),
    Schema("fans", Fan),
    Schema("choke_materials", ChokeMaterial),
    Schema(
        "emission_limits",
        EmissionLimit,
        zero_allowed=frozenset({"power_range_va"}),
        unbounded=frozenset({"power_range_va"}),
        checks=(same_length("frequency_hz", "quasi_peak_dbuv", "average_dbuv"), rising("frequency_hz")),
    ),
)

COST_SCHEMA = Schema(
    "cost",
    CostModel,
    at_most_one=frozenset({"packing_factors", "wound_part_margin"}),
    checks=(
        same_length("rating_va", "control_price", "housing_price"),
        same_length("auxiliary_rating_va", "auxiliary_power_w"),
        same_length("labour_rating_va", "inductor_labour"),
        same_length("choke_current_a", "choke_price"),
        same_length("quantity_pieces", "quantity_factor"),
        *(rising(n) for n in ("rating_va", "auxiliary_rating_va", "labour_rating_va")),
        *(rising(n) for n in ("choke_current_a", "quantity_pieces")),
    ),
)
