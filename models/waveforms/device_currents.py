"""Average and rms currents of a two-level leg's switch and diode, exact for any reference with half-wave
symmetry.

With the leg current i = I sin(theta - phi) and the reference u = sum Im(U_k exp(j k theta)), k odd, the upper
switch carries i for the share (1 + u)/2 of each period while i > 0, its diode for (1 - u)/2 of the other half
wave. Over the half wave sin x integrates against sin kx to pi/2 (k = 1) or 0, and sin^2 x to -4/(k (k^2 -
4)), which gives the sums below; with a sinusoidal reference they are the textbook closed forms (Kolar, Ertl,
Zach 1990).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.waveforms.bridges import Bridge

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
ORDERS = np.arange(1, 13, 2)
SINE_SQUARE_INTEGRALS = -4.0 / (ORDERS * (ORDERS**2 - 4.0))


@dataclass(frozen=True)
class LegCurrents:
    """Currents of one switch position over the phase current's peak: averages [-] and mean squares [-]."""

    switch_average: Array
    switch_mean_square: Array
    diode_average: Array
    diode_mean_square: Array


def leg_currents(
    constant: Complex, slope: Complex, modulation_index: Array, displacement: Array
) -> LegCurrents:
    """Average and mean square of switch and diode current per unit of the peak phase current, no ripple.

    Args:
        constant, slope: harmonics of the legs' references, U = constant + M slope, orders 1, 3, 5, ... on the
            last axis (..., n, order) [-].
        modulation_index: M (n, p) [-].
        displacement: angle by which the leg current lags the fundamental voltage (n, p) [rad].

    Returns:
        Averages over the peak current and mean squares over its square (..., n, p) [-].
    """
    cosines, sines = _multiples(displacement)
    fixed = _projected(constant * SINE_SQUARE_INTEGRALS, cosines, sines)
    growing = _projected(slope * SINE_SQUARE_INTEGRALS, cosines, sines)
    first = _fundamental(constant, cosines, sines) + modulation_index * _fundamental(slope, cosines, sines)
    shaped = fixed + modulation_index * growing
    half = 0.5 * np.pi
    scale = 0.25 / np.pi
    return LegCurrents(
        switch_average=scale * (2.0 + half * first),
        switch_mean_square=scale * (half + shaped),
        diode_average=scale * (2.0 - half * first),
        diode_mean_square=scale * (half - shaped),
    )


def _projected(harmonics: Complex, cosines: Array, sines: Array) -> Array:
    """Real part of sum over k of U_k exp(j k phi), (..., n, p) [-]."""
    along = np.einsum("...nk,npk->...np", harmonics.real, cosines)
    if not harmonics.imag.any():  # references that are odd about the voltage's zero have sine terms only
        return along
    return along - np.einsum("...nk,npk->...np", harmonics.imag, sines)


def _fundamental(harmonics: Complex, cosines: Array, sines: Array) -> Array:
    """Real part of U_1 exp(j phi), (..., n, p) [-]."""
    lead = harmonics[..., 0, None]
    return lead.real * cosines[..., 0] - lead.imag * sines[..., 0]


def _multiples(angle: Array) -> tuple[Array, Array]:
    """cos(k angle) and sin(k angle) for the odd orders k on a new last axis, by recurrence [-]."""
    cosines, sines = np.empty((*angle.shape, len(ORDERS))), np.empty((*angle.shape, len(ORDERS)))
    cosines[..., 0], sines[..., 0] = np.cos(angle), np.sin(angle)
    double_cosine = 2.0 * np.square(cosines[..., 0]) - 1.0
    double_sine = 2.0 * cosines[..., 0] * sines[..., 0]
    for place in range(1, len(ORDERS)):
        cosines[..., place] = cosines[..., place - 1] * double_cosine - sines[..., place - 1] * double_sine
        sines[..., place] = sines[..., place - 1] * double_cosine + cosines[..., place - 1] * double_sine
    return cosines, sines


def reference_harmonics(samples: Array) -> Complex:
    """Harmonics U_k of a reference sampled at (j + 1/2)/N of the line period, samples on the last axis [-].

    Returns:
        Orders 1, 3, 5, ...; u = sum Im(U_k exp(j k theta)) [-].
    """
    count = samples.shape[-1]
    angle = 2.0 * np.pi * (np.arange(count) + 0.5) / count
    return 2.0j / count * (samples @ np.exp(-1j * np.outer(angle, ORDERS)))


def level_shares(bridge: Bridge, reference: Array) -> tuple[Array, Array]:
    """Share of a switching period that a leg stands at the upper rail and at the lower one [-].

    Args:
        bridge: levels of its legs.
        reference: of the leg, any shape [-].
    """
    if bridge.levels == 2:
        return 0.5 * (1.0 + reference), 0.5 * (1.0 - reference)
    return np.maximum(reference, 0.0), np.maximum(-reference, 0.0)
