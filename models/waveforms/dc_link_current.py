"""Current of the dc-link capacitor with a smooth dc source and no output ripple."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def three_phase_rms(modulation_index: Array, displacement: Array) -> Array:
    """Capacitor rms current over the phase rms current, three-phase two-level bridge, any zero sequence.

    Args:
        modulation_index: M [-].
        displacement: current lag phi [rad].

    Returns:
        Ratio [-].

    Source: Dahono, Sato, Kataoka (1996); Kolar & Round (2006): sqrt(2 M (sqrt3/(4 pi) + cos^2 phi (sqrt3/pi -
        9 M/16))).
    """
    cosine = np.cos(displacement)
    root3 = np.sqrt(3.0)
    inner = root3 / (4.0 * np.pi) + cosine * cosine * (root3 / np.pi - 9.0 * modulation_index / 16.0)
    return np.sqrt(np.maximum(2.0 * modulation_index * inner, 0.0))


def single_phase_double_frequency_rms(modulation_index: Array) -> Array:
    """Double-line-frequency part of a full bridge's dc current over the peak output current [-].

    The dc current is m(theta) i(theta): its alternating part has the amplitude M I/2 at twice the line
    frequency.
    """
    return np.asarray(modulation_index) / (2.0 * np.sqrt(2.0))


def single_phase_mean_square(on_mean: Array, on_cosine: Array, displacement: Array) -> Array:
    """Mean square of a full bridge's dc current over the square of the peak output current [-].

    Args:
        on_mean: mean over the line angle of the squared bridge state (share of time current flows from the
            link) [-].
        on_cosine: mean of that squared state times cos 2 theta [-].
        displacement: current lag phi [rad].
    """
    return 0.5 * (on_mean - on_cosine * np.cos(2.0 * displacement))


def single_phase_switching_rms(
    modulation_index: Array, displacement: Array, on_mean: Array, on_cosine: Array
) -> Array:
    """Carrier-frequency part of a full bridge's dc-link current, rms over peak output current [-]."""
    average = 0.5 * modulation_index * np.cos(displacement)
    rest = single_phase_mean_square(on_mean, on_cosine, displacement) - average**2
    return np.sqrt(np.maximum(rest - single_phase_double_frequency_rms(modulation_index) ** 2, 0.0))
