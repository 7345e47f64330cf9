"""Real chokes of an emission filter: for a current, the smallest core over the inductance it can give.

Solved once a study over the catalogue's cores: common-mode chokes on ring cores that carry the windings of
all lines, differential-mode chokes on powder rings. Of each core as many turns are taken as its hole, its
flux limit or its fall of permeability allows; fewer turns serve a smaller inductance.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.constants import mu_0

from models.catalog.emission_parts import ChokeMaterial
from models.catalog.parts import Catalog, CoreShape
from models.magnetics.gap import powder_inductance, powder_permeability_share
from models.magnetics.surface_cooling import box_surface, still_air_rise
from models.magnetics.winding import COPPER_DENSITY, copper_resistivity

Array = NDArray[np.float64]
HOLE_FILL = (
    0.3  # copper over the hole of a ring, room for the winding shuttle and between lines (common practice)
)
COPPER_C = 100.0  # copper temperature at which losses are taken [degC]
RISE_LIMIT_K = 60.0  # temperature rise allowed of a choke [K], judgement
LEAST_PERMEABILITY = 0.5  # permeability of a powder ring left at peak current [-], judgement
LEAKAGE_PERMEABILITY = 50.0  # leakage flux of windings on one ring, as of a core of that permeability: 1 % of
# what a ring of 5000 has (from memory: 0.3 to 2 %)


@dataclass(frozen=True)
class ChokeCurve:
    """Chokes by rising volume; each gives more than all before it.

    Attributes:
        inductance: greatest inductance (k,) [H].
        volume, mass: with that many turns (k,) [m3], [kg].
        resistance: of one line's winding, hot, with that many turns (k,) [ohm].
        price: core and copper (k,) [currency].
        names: core and material (k,).
    """

    inductance: Array
    volume: Array
    mass: Array
    resistance: Array
    price: Array
    names: tuple[str, ...]

    def at(self, inductance: Array) -> ChokePick:
        """The smallest choke for each inductance (n,) [H]; none where the inductance is 0."""
        rung = np.searchsorted(self.inductance, inductance * (1.0 - 1e-12))
        possible = rung < len(self.inductance)
        rung = np.minimum(rung, len(self.inductance) - 1)
        wanted = inductance > 0.0
        turns_share = np.sqrt(np.minimum(inductance / self.inductance[rung], 1.0))
        return ChokePick(
            volume=np.where(wanted, self.volume[rung], 0.0),
            mass=np.where(wanted, self.mass[rung], 0.0),
            resistance=np.where(wanted, self.resistance[rung] * turns_share, 0.0),
            price=np.where(wanted, self.price[rung], 0.0),
            possible=possible | ~wanted,
        )


@dataclass(frozen=True)
class ChokePick:
    """Chosen chokes (n,): volume [m3], mass [kg], resistance of one line [ohm], price [currency], and whether
    there is one.
    """

    volume: Array
    mass: Array
    resistance: Array
    price: Array
    possible: NDArray[np.bool_]


@dataclass(frozen=True)
class LineCurrent:
    """What the chokes carry: rms and peak current of a line [A], current density in copper [A/m2]."""

    rms: float
    peak: float
    density: float


def common_mode_curve(
    catalog: Catalog, material: ChokeMaterial, current: LineCurrent, lines: int, frequency_hz: float
) -> ChokeCurve:
    """Common-mode chokes of one material, all lines wound on one ring.

    Args:
        catalog: core shapes.
        material: of the rings.
        current: of a line.
        lines: windings on the ring [-].
        frequency_hz: at which the inductance counts [Hz].
    """
    shapes = [shape for shape in catalog.core_shapes if shape.family in material.families]
    permeability = float(material.permeability_at(frequency_hz))
    rows = []
    for shape in shapes:
        turns = _turns_in_hole(shape, current, lines)
        per_turn = mu_0 * permeability * shape.area_m2 / shape.path_length_m
        unbalance = mu_0 * LEAKAGE_PERMEABILITY * current.peak / shape.path_length_m
        turns = min(turns, int(material.flux_limit_t / unbalance))
        rows.append(_row(catalog, shape, material, per_turn * turns**2, turns, current, lines))
    return _curve(rows)


def differential_mode_curve(catalog: Catalog, current: LineCurrent) -> ChokeCurve:
    """Differential-mode chokes on powder rings, inductance at peak current."""
    rows = []
    for material in catalog.core_materials:
        if material.kind != "powder":
            continue
        for shape in catalog.core_shapes:
            if shape.family not in material.families or not shape.family.startswith("toroid"):
                continue
            most = _turns_in_hole(shape, current, 1)
            if most < 1:
                continue
            turns = np.arange(1, most + 1, dtype=float)
            core = (shape.path_length_m, material.initial_permeability)
            left = powder_permeability_share(
                turns * current.peak / core[0],
                np.asarray(material.rolloff_field_a_per_m),
                np.asarray(material.rolloff_exponent),
            )
            inductance = powder_inductance(
                turns, np.asarray(current.peak), np.asarray(shape.area_m2 * material.area_factor),
                np.asarray(core[0]), np.asarray(core[1]),
                np.asarray(material.rolloff_field_a_per_m), np.asarray(material.rolloff_exponent),
            )  # fmt: skip
            best = int(np.argmax(np.where(left >= LEAST_PERMEABILITY, inductance, 0.0)))
            if left[best] >= LEAST_PERMEABILITY:
                found = float(inductance[best]), int(turns[best])
                rows.append(_row(catalog, shape, material, *found, current, 1))
    return _curve(rows)


@dataclass(frozen=True)
class _Row:
    inductance: float
    volume: float
    mass: float
    resistance: float
    price: float
    rise: float
    name: str


def _turns_in_hole(shape: CoreShape, current: LineCurrent, lines: int) -> int:
    return int(HOLE_FILL * shape.window_area_m2 * current.density / (lines * current.rms))


def _row(
    catalog: Catalog,
    shape: CoreShape,
    material: object,
    inductance: float,
    turns: int,
    current: LineCurrent,
    lines: int,
) -> _Row:
    wire = current.rms / current.density
    length = turns * shape.mean_turn_length_m
    resistance = float(copper_resistivity(np.asarray(COPPER_C))) * length / wire
    iron = shape.core_volume_m3 * material.density_kg_m3  # type: ignore[attr-defined]
    copper = lines * length * wire * COPPER_DENSITY
    surface = box_surface(np.asarray(shape.box_volume_m3))
    copper_price = float(np.median(catalog.conductors.column("price_per_kg")))
    worth = iron * material.price_per_kg + copper * copper_price  # type: ignore[attr-defined]
    return _Row(
        inductance=inductance,
        volume=shape.box_volume_m3,
        mass=iron + copper,
        resistance=resistance,
        price=worth / (1.0 - catalog.cost.wound_part_margin),
        rise=float(still_air_rise(np.asarray(lines * resistance * current.rms**2), surface)),
        name=f"{shape.name}, {material.name}",  # type: ignore[attr-defined]
    )


def _curve(rows: list[_Row]) -> ChokeCurve:
    """Keep what no smaller choke matches; a study whose current no core takes gets one that gives nothing."""
    usable = [row for row in rows if row.inductance > 0.0 and row.rise <= RISE_LIMIT_K]
    usable.sort(key=lambda row: (row.volume, -row.inductance))
    kept: list[_Row] = []
    for row in usable:
        if not kept or row.inductance > kept[-1].inductance:
            kept.append(row)
    kept = kept or [_Row(1e-12, 0.0, 0.0, 0.0, 0.0, 0.0, "none")]
    columns = ("inductance", "volume", "mass", "resistance", "price")
    arrays = {column: np.array([getattr(row, column) for row in kept]) for column in columns}
    return ChokeCurve(**arrays, names=tuple(row.name for row in kept))
