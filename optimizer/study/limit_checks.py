"""Whether the limits a study names are made for such an inverter at all."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from models.specification import GRID_CONNECTED, Specification
from optimizer.errors import Problem
from optimizer.study.quantity import show, written

if TYPE_CHECKING:
    from models.catalog.parts import Catalog

HARMONICS, EMISSION = "application.harmonic_limits", "application.emission_limit"


def unfitting_limits(spec: Specification, catalog: Catalog, file: str) -> list[Problem]:
    """Problems with the study's limits: of the wrong quantity, or for other currents, grids, phases, powers.

    Args:
        spec: the task; its limits are in the catalogue.
        catalog: the catalogue.
        file: the study file.
    """
    expected = [(HARMONICS, spec.limit_table, words) for words in _harmonics(spec, catalog)]
    if spec.emission_limit:
        limits = catalog.emission_limits
        low, high = limits[limits.index(spec.emission_limit)].power_range_va
        if not low < spec.apparent_power_va <= high:
            rated = written(spec.apparent_power_va, "VA")
            words = f"a limit for {rated}; this one is for {_range(low, high, 'VA')}"
            expected.append((EMISSION, spec.emission_limit, words))
    return [Problem(show(given), words, key, file) for key, given, words in expected]


def _harmonics(spec: Specification, catalog: Catalog) -> list[str]:
    table = catalog.limit_table(spec.limit_table)
    on_grid = spec.application == GRID_CONNECTED
    if table.of_voltage == on_grid:
        wanted, made = ("current", "voltage") if on_grid else ("voltage", "current")
        return [f"limits of the {wanted}; these are limits of the {made}"]
    found = []
    low, high = table.current_range_a
    if not low < spec.rated_current_a <= high:
        rated = written(round(spec.rated_current_a, 1), "A")
        found.append(f"limits for {rated} a phase; these are for {_range(low, high, 'A')}")
    if table.phases not in (0, spec.phases):
        found.append(f"limits for phases = {spec.phases}; these are for {table.phases}")
    low, high = table.ratio_range
    weakest, strongest = spec.short_circuit_ratio_min, spec.short_circuit_ratio_max
    stated = math.isfinite(weakest) or math.isfinite(strongest)
    if stated and not (low <= weakest and (strongest <= high or not math.isfinite(strongest))):
        given = _range(weakest, strongest, "")
        found.append(f"limits for a short-circuit ratio {given}; these are for {_range(low, high, '')}")
    return found


def _range(low: float, high: float, unit: str) -> str:
    ends = [f"above {written(low, unit)}"] if low > 0.0 else []
    ends += [f"up to {written(high, unit)}"] if math.isfinite(high) else []
    return " ".join(ends) or "any"
