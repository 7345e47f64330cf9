"""Average and rms currents of a two-level leg's switch and diode, exact for any reference with half-wave symmetry.

With the leg current i = I sin(theta - phi) and the reference u = sum Im(U_k exp(j k theta)), k odd, the upper switch
carries i for the share (1 + u)/2 of each period while i > 0, its diode for (1 - u)/2 of the other half wave. Over the half
wave sin x integrates against sin kx to pi/2 (k = 1) or 0, and sin^2 x to -4/(k (k^2 - 4)), which gives the sums below; with
a sinusoidal reference they are the textbook closed forms (Kolar, Ertl, Zach 1990).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
ORDERS = np.arange(1, 17, 2)
SINE_SQUARE_INTEGRALS = -4.0 / (ORDERS * (ORDERS**2 - 4.0))


@dataclass(frozen=True)
class LegCurrents:
    """Currents of one switch position over the phase current's peak: averages [-] and mean squares [-]."""

    switch_average: Array
    switch_mean_square: Array
    diode_average: Array
    diode_mean_square: Array


def leg_currents(reference: Complex, displacement: Array) -> LegCurrents:
    """Average and mean square of switch and diode current per unit of the peak phase current, no ripple.

    Args:
        reference: harmonics U_k of the leg's reference, orders 1, 3, 5, ... on the last axis [-].
        displacement: angle by which the leg current lags the fundamental voltage; broadcasts [rad].

    Returns:
        Averages over the peak current and mean squares over its square [-].
    """
    turned = reference * rotations(displacement)
    first = turned[..., 0].real
    shaped = turned.real @ SINE_SQUARE_INTEGRALS
    half = 0.5 * np.pi
    scale = 0.25 / np.pi
    return LegCurrents(
        switch_average=scale * (2.0 + half * first),
        switch_mean_square=scale * (half + shaped),
        diode_average=scale * (2.0 - half * first),
        diode_mean_square=scale * (half - shaped),
    )


def rotations(displacement: Array) -> Complex:
    """exp(j k displacement) for the orders k, on a new last axis [-]."""
    first = np.exp(1j * np.asarray(displacement))
    square = first * first
    turned = np.empty((*first.shape, len(ORDERS)), dtype=complex)
    turned[..., 0] = first
    for position in range(1, len(ORDERS)):
        turned[..., position] = turned[..., position - 1] * square
    return turned


def reference_harmonics(samples: Array) -> Complex:
    """Harmonics U_k of a reference sampled at (j + 1/2)/N of the line period, samples on the last axis [-].

    Returns:
        Orders 1, 3, 5, ...; u = sum Im(U_k exp(j k theta)) [-].
    """
    count = samples.shape[-1]
    angle = 2.0 * np.pi * (np.arange(count) + 0.5) / count
    return 2.0j / count * (samples @ np.exp(-1j * np.outer(angle, ORDERS)))
