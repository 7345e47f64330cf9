"""What an evaluation gives back: every figure a chart, a sheet or a report shows. SI units."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.distortion import Distortion

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Constraint:
    """One named requirement over a population.

    Attributes:
        name: what is limited; unit: of value and limit.
        value, limit: (n,).
        margin: normalised distance to the limit, negative where violated (n,) [-].
        sense: "max" where the limit is an upper one, "min" where it is a lower one.
    """

    name: str
    unit: str
    value: Array
    limit: Array
    margin: Array
    sense: str


def at_most(
    name: str, unit: str, value: Array, limit: Array | float, scale: Array | float | None = None
) -> Constraint:
    """Require value <= limit; the margin is their distance over `scale` (default: the limit)."""
    value, limit = np.broadcast_arrays(value, np.asarray(limit, dtype=float))
    return Constraint(name, unit, value, limit, (limit - value) / (limit if scale is None else scale), "max")


def at_least(
    name: str, unit: str, value: Array, limit: Array | float, scale: Array | float | None = None
) -> Constraint:
    """Require value >= limit; the margin is their distance over `scale` (default: the limit)."""
    value, limit = np.broadcast_arrays(value, np.asarray(limit, dtype=float))
    return Constraint(name, unit, value, limit, (value - limit) / (limit if scale is None else scale), "min")


@dataclass(frozen=True)
class Evaluation:
    """Results of a population of n candidates over load levels p.

    Attributes:
        load_level: (p,) [-]; rated: index of rated load.
        losses: component -> (n, p) [W]; their sum is the whole loss.
        volumes: component -> (n,) [m3]; masses: [kg]; prices: [currency]. Sums are the totals.
        efficiency: (n, p) [-].
        efficiency_weighted, efficiency_european, efficiency_californian: (n,) [-].
        distortion: harmonic lines and totals.
        constraints: all requirements; feasible where every margin is >= 0.
        lost_energy: lost in a year over the load histogram (n,) [J]; lost_energy_cost: present value of that
            over the years of use (n,) [currency].
        details: intermediate quantities by column name with unit suffix (n,).
    """

    load_level: Array
    rated: int
    losses: dict[str, Array]
    volumes: dict[str, Array]
    masses: dict[str, Array]
    prices: dict[str, Array]
    efficiency: Array
    efficiency_weighted: Array
    efficiency_european: Array
    efficiency_californian: Array
    distortion: Distortion
    constraints: tuple[Constraint, ...]
    lost_energy: Array
    lost_energy_cost: Array
    details: dict[str, Array]

    @property
    def volume(self) -> Array:
        """Total volume (n,) [m3]."""
        return np.sum(list(self.volumes.values()), axis=0)

    @property
    def filter_volume(self) -> Array:
        """Volume of the output and the emission filter (n,) [m3]."""
        return np.sum([self.volumes[name] for name in FILTER_PARTS if name in self.volumes], axis=0)

    @property
    def mass(self) -> Array:
        """Total mass (n,) [kg]."""
        return np.sum(list(self.masses.values()), axis=0)

    @property
    def price(self) -> Array:
        """Total price (n,) [currency]."""
        return np.sum(list(self.prices.values()), axis=0)

    @property
    def margins(self) -> Array:
        """Margins of all constraints (n, c) [-]."""
        return np.stack([constraint.margin for constraint in self.constraints], axis=-1)

    @property
    def feasible(self) -> NDArray[np.bool_]:
        """Candidates that meet every constraint (n,)."""
        return np.all(self.margins >= 0.0, axis=-1)


FILTER_PARTS = ("inverter_inductor", "grid_inductor", "filter_capacitor", "emission_filter")


def joined(blocks: Sequence[Evaluation]) -> Evaluation:
    """Put the evaluations of consecutive blocks of candidates together."""
    return _joined_value(blocks)


_SHARED = {"load_level", "rated", "name", "unit", "sense"}


def _joined_value(values: Sequence[Any]) -> Any:
    """Concatenate arrays along candidates, through dataclasses, dictionaries and tuples."""
    first = values[0]
    if isinstance(first, np.ndarray):
        return np.concatenate(values)
    if isinstance(first, dict):
        return {key: _joined_value([value[key] for value in values]) for key in first}
    if isinstance(first, tuple):
        return tuple(_joined_value(same) for same in zip(*values, strict=True))
    kept = {
        entry.name: getattr(first, entry.name)
        if entry.name in _SHARED
        else _joined_value([getattr(value, entry.name) for value in values])
        for entry in fields(first)
    }
    return type(first)(**kept)
