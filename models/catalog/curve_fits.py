"""Least-squares fits of a data sheet's curves onto the laws of the models."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import least_squares

Array = NDArray[np.float64]
LEAST_SHARE, MOST_SHARE = 0.08, 1.25  # of rated current: the range that a line is fitted over
MOST_ENERGY_SHARE = 1.6  # likewise of energies, whose law bends with them
CONSTANT_LIMIT = 0.8  # greatest part of an energy at rated current that is there without current
EXPONENTS = (0.3, 2.5)
VOLTAGE_EXPONENTS = (0.1, 3.0)
COLD_GROWTH = 0.01  # greatest fall of an energy with temperature [1/K]
LEAST_COLD = 0.05  # of the hot energy: what is left of it at the coldest curve
POINTS_FOR_CONSTANT = 4  # fewer points in every curve leave the constant part at zero
START = {"exponent": 1.0, "constant": 0.05, "coefficient": 0.0, "voltage": 1.0}
UNTOLD = {"constant": 0.0, "coefficient": 0.0, "voltage": 0.0}  # where the curves say nothing about it


@dataclass(frozen=True)
class LineFit:
    """v = threshold [V] + slope [ohm] i, and the greatest deviation over the curve [-]."""

    threshold: float
    slope: float
    deviation: float


@dataclass(frozen=True)
class EnergyCurve:
    """Energies [J] over current [A] at so much below the hot temperature [K] and at a voltage over the
    reference voltage [-].
    """

    current: Array
    energy: Array
    below_hot: float = 0.0
    voltage_share: float = 1.0


@dataclass(frozen=True)
class EnergyFit:
    """E = energy [J] [(1 - c) (I/I_rated)^k + c] (V/V_ref)^k_v [1 - k_T (T_hot - T)].

    Attributes:
        energy: at rated current, reference voltage and hot [J].
        exponent, constant: k, c [-].
        temperature_coefficient: k_T [1/K]; None where all curves have one temperature.
        voltage_exponent: k_v [-]; None where all curves have one voltage.
    """

    energy: float
    exponent: float
    constant: float
    temperature_coefficient: float | None
    voltage_exponent: float | None

    def deviation(self, curve: EnergyCurve, rated: float, voltage_exponent: float | None = None) -> float:
        """Greatest deviation from a curve over the working range of currents [-].

        Args:
            curve: the curve.
            rated: rated current [A].
            voltage_exponent: in place of its own [-].
        """
        used = working_range(curve.current, rated, MOST_ENERGY_SHARE)
        x = curve.current[used] / rated
        exponent = self.voltage_exponent if voltage_exponent is None else voltage_exponent
        fitted = self.energy * ((1.0 - self.constant) * x**self.exponent + self.constant)
        fitted = fitted * curve.voltage_share ** (exponent or 0.0)
        fitted = fitted * (1.0 - (self.temperature_coefficient or 0.0) * curve.below_hot)
        return greatest_deviation(fitted, curve.energy[used])


def line_fit(current: Array, voltage: Array, rated: float, *, through_zero: bool = False) -> LineFit:
    """Fit threshold and slope over the working range of currents.

    Args:
        current, voltage: the curve [A], [V].
        rated: rated current [A].
        through_zero: for unipolar parts, which have no threshold.

    Source: linear least squares, weighted with the current (conduction loss is v i).
    """
    used = working_range(current, rated)
    i, v = current[used], voltage[used]
    if through_zero:
        slope = float(np.sum(v * i) / np.sum(i * i))
        threshold = 0.0
    else:
        slope, threshold = (float(value) for value in np.polyfit(i, v, 1, w=np.sqrt(i)))
        if threshold < 0.0:
            return line_fit(current, voltage, rated, through_zero=True)
    return LineFit(threshold, slope, greatest_deviation(threshold + slope * i, v))


def energy_fit(curves: Sequence[EnergyCurve], rated: float) -> EnergyFit:
    """Fit a switching energy over current, temperature and voltage, all curves at once.

    Args:
        curves: one at least, of two points each at least; a hot one at the reference voltage among them.
        rated: rated current [A].

    Raises:
        ValueError: where temperature and voltage change together, so that the curves cannot tell one's effect
            from the other's.

    Source: non-linear least squares of relative deviations, every curve of the same weight.
    """
    used = [working_range(curve.current, rated, MOST_ENERGY_SHARE) for curve in curves]
    count = [int(rows.sum()) for rows in used]
    x = np.concatenate([curve.current[rows] for curve, rows in zip(curves, used, strict=True)]) / rated
    y = np.concatenate([curve.energy[rows] for curve, rows in zip(curves, used, strict=True)])
    below = np.array([curve.below_hot for curve in curves])
    share = np.array([curve.voltage_share for curve in curves])
    bounds = {"energy": (-np.inf, np.inf), "exponent": EXPONENTS}
    if max(count) >= POINTS_FOR_CONSTANT:
        bounds["constant"] = 0.0, CONSTANT_LIMIT
    if np.ptp(below) > 0.0:
        bounds["coefficient"] = -COLD_GROWTH, (1.0 - LEAST_COLD) / float(below.max())
    if np.ptp(share) > 0.0:
        bounds["voltage"] = VOLTAGE_EXPONENTS
    _check_apart(below, share, 1 + ("coefficient" in bounds) + ("voltage" in bounds))
    cold, volts, weight = (np.repeat(values, count) for values in (below, share, np.array(count) ** -0.5))

    def law(values: Array) -> Array:
        at = UNTOLD | dict(zip(bounds, values, strict=True))
        over_current = (1.0 - at["constant"]) * x ** at["exponent"] + at["constant"]
        scale = volts ** at["voltage"] * (1.0 - at["coefficient"] * cold)
        return np.asarray(np.exp(at["energy"]) * over_current * scale)

    first = START | {"energy": float(np.log(np.interp(1.0, *_of_hottest(curves, rated))))}
    low, high = zip(*bounds.values(), strict=True)
    found = least_squares(
        lambda values: weight * (law(values) / y - 1.0),
        [first[name] for name in bounds],
        bounds=(low, high),
        x_scale="jac",
    ).x
    told = dict(zip(bounds, (float(value) for value in found), strict=True))
    return EnergyFit(
        energy=float(np.exp(told["energy"])),
        exponent=told["exponent"],
        constant=told.get("constant", 0.0),
        temperature_coefficient=told.get("coefficient"),
        voltage_exponent=told.get("voltage"),
    )


def _of_hottest(curves: Sequence[EnergyCurve], rated: float) -> tuple[Array, Array]:
    hottest = min(curves, key=lambda curve: (curve.below_hot, abs(curve.voltage_share - 1.0)))
    return hottest.current / rated, hottest.energy


def _check_apart(below: Array, share: Array, effects: int) -> None:
    """Raise ValueError where the curves cannot tell temperature from voltage."""
    table = np.stack([np.ones_like(below), below / max(float(np.ptp(below)), 1.0), np.log(share)], axis=-1)
    if np.linalg.matrix_rank(table) < effects:
        raise ValueError("temperature and supply voltage must not change only together")


def working_range(current: Array, rated: float, most: float = MOST_SHARE) -> NDArray[np.bool_]:
    """Points of a curve [A] in the working range; all of them where fewer than two lie in it."""
    inside = (current >= LEAST_SHARE * rated) & (current <= most * rated)
    return inside if inside.sum() >= 2 else np.ones(len(current), dtype=bool)


def greatest_deviation(fitted: Array, given: Array) -> float:
    """Greatest relative deviation [-]."""
    return float(np.max(np.abs(fitted / given - 1.0)))
