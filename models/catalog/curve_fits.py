"""Least-squares fits of a data sheet's curves onto the laws of the models."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import least_squares

Array = NDArray[np.float64]
LEAST_SHARE, MOST_SHARE = 0.08, 1.25  # of rated current: the range that a line is fitted over
MOST_ENERGY_SHARE = 1.6  # likewise of energies, whose law bends with them
CONSTANT_LIMIT = 0.8  # greatest part of an energy at rated current that is there without current
EXPONENTS = (0.3, 2.5)
POINTS_FOR_CONSTANT = 4  # fewer points leave the constant part at zero


@dataclass(frozen=True)
class LineFit:
    """v = threshold [V] + slope [ohm] i, and the greatest deviation over the curve [-]."""

    threshold: float
    slope: float
    deviation: float


@dataclass(frozen=True)
class EnergyFit:
    """E = energy [J] [(1 - c) (I/I_rated)^k + c]: exponent k, constant part c, greatest deviation [-]."""

    energy: float
    exponent: float
    constant: float
    deviation: float


def line_fit(current: Array, voltage: Array, rated: float, *, through_zero: bool = False) -> LineFit:
    """Fit threshold and slope over the working range of currents.

    Args:
        current, voltage: the curve [A], [V].
        rated: rated current [A].
        through_zero: for unipolar parts, which have no threshold.

    Source: linear least squares, weighted with the current (conduction loss is v i).
    """
    used = _working(current, rated)
    i, v = current[used], voltage[used]
    if through_zero:
        slope = float(np.sum(v * i) / np.sum(i * i))
        threshold = 0.0
    else:
        slope, threshold = (float(value) for value in np.polyfit(i, v, 1, w=np.sqrt(i)))
        if threshold < 0.0:
            return line_fit(current, voltage, rated, through_zero=True)
    return LineFit(threshold, slope, _deviation(threshold + slope * i, v))


def energy_fit(current: Array, energy: Array, rated: float) -> EnergyFit:
    """Fit a switching energy over current.

    Args:
        current, energy: the curve [A], [J]; two points at least.
        rated: rated current [A].

    Source: non-linear least squares of relative deviations.
    """
    used = _working(current, rated, MOST_ENERGY_SHARE)
    x, y = current[used] / rated, energy[used]
    constant = len(x) >= POINTS_FOR_CONSTANT

    def law(values: Array) -> Array:
        share = values[2] if constant else 0.0
        return np.exp(values[0]) * ((1.0 - share) * x ** values[1] + share)

    at_rated = float(np.interp(1.0, x, y))
    start = [np.log(at_rated), 1.0, 0.05][: 3 if constant else 2]
    low = [-np.inf, EXPONENTS[0], 0.0][: len(start)]
    high = [np.inf, EXPONENTS[1], CONSTANT_LIMIT][: len(start)]
    found = least_squares(lambda values: law(values) / y - 1.0, start, bounds=(low, high)).x
    share = float(found[2]) if constant else 0.0
    return EnergyFit(float(np.exp(found[0])), float(found[1]), share, _deviation(law(found), y))


def _working(current: Array, rated: float, most: float = MOST_SHARE) -> NDArray[np.bool_]:
    """Points in the working range; all of them where fewer than two lie in it."""
    inside = (current >= LEAST_SHARE * rated) & (current <= most * rated)
    return inside if inside.sum() >= 2 else np.ones(len(current), dtype=bool)


def _deviation(fitted: Array, given: Array) -> float:
    return float(np.max(np.abs(fitted / given - 1.0)))
