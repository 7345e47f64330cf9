"""Axial fans: pressure over flow, fans side by side, working point, electrical power.

The curve is given by its two ends alone, free flow and greatest pressure, and a shape exponent. A straight
line (1) is the default. With the ends of catalogue fans its greatest flow times pressure is 0.07..0.14 of
the input power for small quiet fans and 0.19..0.29 for the others; fans are said to reach 0.1..0.4,
typically 0.22. A parabola would promise half as much again. A stall dip is not modelled, so sinks that
throttle a fan below about a third of its free flow are taken too kindly.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

STRAIGHT = 1.0
RATED_DENSITY = 1.2
HALVINGS = 26


@dataclass(frozen=True)
class Fan:
    """One catalogue fan; flow, pressure and power at rated speed in air of 1.2 kg/m3.

    Attributes:
        name: class name.
        face_width_m: side of the square face [m].
        depth_m: along the flow [m].
        free_flow_m3_per_s: flow without back pressure [m3/s].
        greatest_pressure_pa: static pressure without flow [Pa].
        input_power_w: electrical [W].
        life_l10_h: life that 90 % of the fans reach [h].
        price: in the study's currency [-].
    """

    name: str
    face_width_m: float
    depth_m: float
    free_flow_m3_per_s: float
    greatest_pressure_pa: float
    input_power_w: float
    life_l10_h: float
    price: float

    def __post_init__(self) -> None:
        for field, value in vars(self).items():
            if field not in ("name", "price") and not value > 0.0:
                raise ValueError(f"fan {self.name!r}: {field} must be above 0, got {value}")
        if not self.price >= 0.0:
            raise ValueError(f"fan {self.name!r}: price must not be negative, got {self.price}")


def fan_pressure(
    flow: Array, free_flow: Array, greatest_pressure: Array, density_ratio: Array, shape: float = STRAIGHT
) -> Array:
    """Static pressure of a fan at rated speed, p_0 (rho/rho_0) (1 - (q/q_0)^shape); density by the fan laws.

    Args:
        flow: volume flow, 0 to free_flow [m3/s].
        free_flow: [m3/s].
        greatest_pressure: at rated density [Pa].
        density_ratio: air density over rated density [-].
        shape: exponent; 1 a straight line, 2 a parabola [-].

    Returns:
        Pressure [Pa].
    """
    share = flow / free_flow
    return greatest_pressure * density_ratio * (1.0 - (share if shape == STRAIGHT else share**shape))


def parallel_pressure(
    flow: Array, count: Array, free_flow: Array, greatest_pressure: Array, density_ratio: Array
) -> Array:
    """Static pressure of equal fans side by side: each carries its share of the flow (straight curve).

    Args:
        flow: of all fans together [m3/s].
        count: number of fans [-].
        free_flow: of one fan [m3/s].
        greatest_pressure: of one fan at rated density [Pa].
        density_ratio: air density over rated density [-].

    Returns:
        Pressure [Pa].
    """
    return fan_pressure(flow / count, free_flow, greatest_pressure, density_ratio)


def working_flow(
    free_flow: Array,
    greatest_pressure: Array,
    density_ratio: Array,
    pressure_drop: Callable[[Array], Array],
    shape: float = STRAIGHT,
) -> Array:
    """Flow at which fan pressure meets the pressure drop, for all candidates at once (bisection, 2^-26 of
    free flow).

    Args:
        free_flow: [m3/s].
        greatest_pressure: at rated density [Pa].
        density_ratio: air density over rated density [-].
        pressure_drop: drop of every candidate at the given flows, rising with flow [m3/s -> Pa].
        shape: exponent of the fan curve [-].

    Returns:
        Working flow [m3/s].
    """
    half = 0.5 * np.asarray(free_flow, dtype=np.float64)
    flow = half
    for _ in range(HALVINGS):
        half = 0.5 * half
        surplus = fan_pressure(flow, free_flow, greatest_pressure, density_ratio, shape) - pressure_drop(flow)
        flow = flow + np.copysign(half, surplus)
    return flow


def fan_input_power(input_power: Array, density_ratio: Array) -> Array:
    """Electrical power of a fan at its working point and rated speed; it goes with density (fan laws).

    Notes:
        Along the curve the input of an axial fan changes little (some 15 %, from memory), so the rated
        value stands for all flows.

    Args:
        input_power: rated [W].
        density_ratio: air density over rated density [-].

    Returns:
        Power [W].
    """
    return input_power * density_ratio
