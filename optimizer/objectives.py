"""Objectives a study may minimise: where each is read from an evaluation, and the column that reports it."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.evaluation import Constraint, Evaluation, at_most
from models.ownership import SECONDS_AN_HOUR, hour_shares, lost_energy_cost
from models.specification import GRID_CONNECTED, Specification

Array = NDArray[np.float64]
JUNCTIONS = ("switch junction temperature", "diode junction temperature")
UNBUILT_LOSS = 0.12
"""Loss over power that nobody would build."""


@dataclass(frozen=True)
class Objective:
    """One objective; every objective is minimised.

    Attributes:
        name: as a study names it.
        column: column of the result tables, unit in its suffix.
        title: words for axes and tables.
        unit: of the column.
        scale: column value over SI value [-].
        read: evaluation -> values (n,) in the column's unit.
        reference: specification -> value that bounds the hypervolume, a judgement of what nobody would build.
    """

    name: str
    column: str
    title: str
    unit: str
    scale: float
    read: Callable[[Evaluation], Array]
    reference: Callable[[Specification], float]


def _kva(spec: Specification) -> float:
    return spec.apparent_power_va / 1e3


def _unbuilt_price(spec: Specification) -> float:
    return 50.0 + 100.0 * _kva(spec)


def _unbuilt_cost(spec: Specification) -> float:
    """Price and lost energy of what nobody would build [currency]."""
    shares = hour_shares(spec.weights, spec.energy.weights_are)
    power = spec.apparent_power_va * sum(level * share for level, share in shares.items())
    lost = UNBUILT_LOSS * power * spec.energy.hours_a_year * SECONDS_AN_HOUR
    return _unbuilt_price(spec) + float(lost_energy_cost(np.array(lost), spec.energy))


def _rated_loss(result: Evaluation) -> Array:
    """Loss over delivered power at rated load [-]."""
    return 1.0 / result.efficiency[:, result.rated] - 1.0


def _junction_rise(result: Evaluation) -> Array:
    """Rise of the hotter junction over ambient, over the rise allowed [-]."""
    margins = [entry.margin for entry in result.constraints if entry.name in JUNCTIONS]
    return 1.0 - np.min(margins, axis=0)


OBJECTIVES = {
    objective.name: objective
    for objective in (
        Objective(
            "weighted loss",
            "loss_weighted_percent",
            "weighted loss",
            "%",
            100.0,
            lambda result: 100.0 * (1.0 - result.efficiency_weighted),
            lambda spec: 100.0 * UNBUILT_LOSS,
        ),
        Objective(
            "volume",
            "volume_l",
            "volume",
            "l",
            1e3,
            lambda result: 1e3 * result.volume,
            lambda spec: 1.0 + 4.0 * _kva(spec),
        ),
        Objective(
            "price",
            "price",
            "price",
            "currency",
            1.0,
            lambda result: result.price,
            _unbuilt_price,
        ),
        Objective(
            "mass",
            "mass_kg",
            "mass",
            "kg",
            1.0,
            lambda result: result.mass,
            lambda spec: 1.0 + 6.0 * _kva(spec),
        ),
        Objective(
            "distortion",
            "distortion_percent",
            "distortion",
            "%",
            100.0,
            lambda result: 100.0 * result.distortion.total,
            lambda spec: 10.0,
        ),
        Objective(
            "cost of ownership",
            "cost_of_ownership",
            "price and lost energy",
            "currency",
            1.0,
            lambda result: result.price + result.lost_energy_cost,
            _unbuilt_cost,
        ),
        Objective(
            "rated loss",
            "loss_rated_percent",
            "loss at rated load",
            "%",
            100.0,
            lambda result: 100.0 * _rated_loss(result),
            lambda spec: 100.0 * UNBUILT_LOSS,
        ),
        Objective(
            "junction temperature rise",
            "junction_rise_percent",
            "junction temperature rise used",
            "%",
            100.0,
            lambda result: 100.0 * _junction_rise(result),
            lambda spec: 110.0,
        ),
    )
}


def requirements_of(limits: Mapping[str, float], result: Evaluation) -> tuple[Constraint, ...]:
    """All requirements of a population: the physical ones and the study's own limits on objectives.

    Args:
        limits: greatest value by objective name, SI units.
        result: evaluation (n,).
    """
    own = (
        at_most(
            f"{name} wanted",
            OBJECTIVES[name].unit,
            OBJECTIVES[name].read(result),
            OBJECTIVES[name].scale * limit,
        )
        for name, limit in limits.items()
    )
    return (*result.constraints, *own)


def margins_of(constraints: tuple[Constraint, ...]) -> Array:
    """Margins (n, c) of constraints [-]."""
    return np.stack([entry.margin for entry in constraints], axis=-1)


def distortion_column(spec: Specification) -> str:
    """Name of the column that holds the total distortion as a fraction."""
    return "current_thd" if spec.application == GRID_CONNECTED else "voltage_thd"
