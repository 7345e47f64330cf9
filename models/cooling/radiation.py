"""Thermal radiation of a plate-fin heatsink: grey diffuse channels seen through their openings, and plain
outer faces.

Each gap between two fins is a grey isothermal enclosure with three openings (front and two ends). What
leaves it follows from the two-surface network (Oppenheim 1956) with view factors in closed form (Hottel;
Howell's catalogue C-11 and C-14), the U-channel method of Ellison (1979). The surroundings are black and at
ambient temperature.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]

# Defining constants of the SI (exact since 2019)
BOLTZMANN, PLANCK, LIGHT_SPEED = 1.380649e-23, 6.62607015e-34, 299_792_458.0
STEFAN_BOLTZMANN = 2.0 * np.pi**5 * BOLTZMANN**4 / (15.0 * PLANCK**3 * LIGHT_SPEED**2)


def parallel_rectangles_view_factor(width: Array, height: Array, distance: Array) -> Array:
    """View factor between equal, directly opposed rectangles (Howell's catalogue, C-11).

    Args:
        width: one side [m].
        height: other side [m].
        distance: between the planes [m].

    Returns:
        View factor [-].
    """
    x, y = width / distance, height / distance
    x1, y1 = np.sqrt(1.0 + x * x), np.sqrt(1.0 + y * y)
    terms = (
        np.log(x1 * y1 / np.sqrt(1.0 + x * x + y * y))
        + x * y1 * np.arctan(x / y1)
        + y * x1 * np.arctan(y / x1)
        - x * np.arctan(x)
        - y * np.arctan(y)
    )
    return 2.0 / (np.pi * x * y) * terms


def perpendicular_rectangles_view_factor(depth: Array, other_depth: Array, edge: Array) -> Array:
    """View factor from one rectangle to another at right angles with a common edge (Howell's catalogue,
    C-14).

    Args:
        depth: extent of the emitting rectangle away from the edge [m].
        other_depth: extent of the receiving rectangle away from the edge [m].
        edge: length of the common edge [m].

    Returns:
        View factor [-].
    """
    w, h = depth / edge, other_depth / edge
    w2, h2 = w * w, h * h
    both = w2 + h2
    angles = w * np.arctan(1.0 / w) + h * np.arctan(1.0 / h) - np.sqrt(both) * np.arctan(1.0 / np.sqrt(both))
    logs = (
        np.log((1.0 + w2) * (1.0 + h2) / (1.0 + both))
        + w2 * np.log(w2 * (1.0 + both) / ((1.0 + w2) * both))
        + h2 * np.log(h2 * (1.0 + both) / ((1.0 + h2) * both))
    )
    return (angles + 0.25 * logs) / (np.pi * w)


def channel_opening_area(spacing: Array, depth: Array, length: Array) -> Array:
    """Area of a channel's three openings, less what one opening sees of another: A_wall F_wall-to-ambient.

    Args:
        spacing: gap between fins [m].
        depth: fin height, base to front opening [m].
        length: along the fins [m].

    Returns:
        Effective black opening area of one channel [m2].
    """
    front, end = spacing * length, spacing * depth
    front_to_end = perpendicular_rectangles_view_factor(length, depth, spacing)
    end_to_end = parallel_rectangles_view_factor(spacing, depth, length)
    return front + 2.0 * end - 4.0 * front * front_to_end - 2.0 * end * end_to_end


def channel_exchange_area(spacing: Array, depth: Array, length: Array, emissivity: Array) -> Array:
    """Exchange area of one grey channel with black surroundings, two-surface network (Oppenheim 1956).

    Args:
        spacing: gap between fins [m].
        depth: fin height [m].
        length: along the fins [m].
        emissivity: of the surface, above 0 up to 1 [-].

    Returns:
        Area of a black plane that would emit the same [m2].
    """
    wall = length * (2.0 * depth + spacing)
    opening = channel_opening_area(spacing, depth, length)
    return 1.0 / ((1.0 - emissivity) / (emissivity * wall) + 1.0 / opening)


def linear_coefficient(surface: Array, ambient: Array) -> Array:
    """Radiation of a black plane over its temperature rise, sigma (Ts + Ta)(Ts^2 + Ta^2) (Stefan-Boltzmann
    law).

    Args:
        surface: absolute surface temperature [K].
        ambient: absolute temperature of the surroundings [K].

    Returns:
        Coefficient [W/(m2 K)].
    """
    return STEFAN_BOLTZMANN * (surface + ambient) * (surface * surface + ambient * ambient)
