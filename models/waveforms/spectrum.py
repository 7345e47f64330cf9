"""Spectrum of naturally sampled pulse-width modulation as a double Fourier series.

A leg that is on for the share d of a period, centred, has the carrier-multiple m coefficient (2/(m pi)) sin(m
pi d). Its Fourier series over the line angle gives the sidebands m f_s + n f_1: for a sinusoidal reference
these are the Bessel functions of Black (1953) and Bowes & Bird (1975); for any reference, Holmes & Lipo
(2003), ch. 3 and 4.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.special import jv

from models.waveforms.bridges import Bridge, Modulation
from models.waveforms.switching_period import cells

Array = NDArray[np.float64]
ANGLE_SAMPLES = 384
CARRIER_GROUPS = 6
SIDEBAND_SPAN = 24


@dataclass(frozen=True)
class Sidebands:
    """Lines of one scheme at m f_s + n f_1: the sidebands that matter, then one rest line per carrier group.

    Attributes:
        carrier_multiple, line_multiple: m and n (k,) [-].
        listed: (k,) true for a sideband, false for a group's rest line (rms of all that is not listed there)
            [-].
        amplitude: (index, k), peak over V_dc; all lines together have the exact rms of the switched voltage
            [-].
        group_mean_square: (index, m - 1), mean square of whole carrier groups [V_dc^2].
    """

    carrier_multiple: Array
    line_multiple: Array
    listed: NDArray[np.bool_]
    amplitude: Array
    group_mean_square: Array


def leg_sideband(carrier_multiple: Array, line_multiple: Array, modulation_index: Array) -> Array:
    """Sideband of one two-level leg with sine-triangle modulation, closed form.

    Args:
        carrier_multiple: m >= 1 [-].
        line_multiple: n, any sign [-].
        modulation_index: M [-].

    Returns:
        Peak over V_dc/2; arguments broadcast [-].

    Source: Bowes & Bird (1975); Holmes & Lipo (2003), eq. 3.39: 4/(m pi) J_n(m pi M/2) sin((m + n) pi/2).
    """
    m, n = np.asarray(carrier_multiple), np.asarray(line_multiple)
    bessel = jv(n, 0.5 * np.pi * m * np.asarray(modulation_index))
    return np.abs(4.0 / (np.pi * m) * bessel * np.sin(0.5 * np.pi * (m + n)))


def carrier_coefficients(
    bridge: Bridge, modulation: Modulation, modulation_index: Array
) -> NDArray[np.complex128]:
    """Complex sideband coefficients of the filter voltage, (index, m - 1, angle harmonic) [V_dc peak]."""
    angle = 2.0 * np.pi * (np.arange(ANGLE_SAMPLES) + 0.5) / ANGLE_SAMPLES
    references = modulation.references(*np.broadcast_arrays(angle, modulation_index[:, None]))
    duty, _ = cells(bridge, references)
    step = 1.0 / (bridge.levels - 1)
    groups = np.arange(1, CARRIER_GROUPS + 1)[:, None]
    total = np.zeros((len(modulation_index), CARRIER_GROUPS, ANGLE_SAMPLES))
    for leg, weight in enumerate(bridge.voltage_weights):
        sign = float(modulation.carrier_sign[leg]) ** groups
        height = step * weight * sign * 2.0 / (np.pi * groups)
        total += height * np.sin(np.pi * groups * duty[:, None, :, leg])
    return np.fft.fft(total, axis=-1) / ANGLE_SAMPLES


def sidebands(
    bridge: Bridge, modulation: Modulation, modulation_index: Array, voltage_mean_square: Array, count: int
) -> Sidebands:
    """Pick the sidebands that matter most behind an inductor; sum the others up per carrier group.

    Args:
        bridge, modulation: what to expand.
        modulation_index: grid of M (index,) [-].
        voltage_mean_square: exact mean square of the switched voltage (index,) [V_dc^2].
        count: how many sidebands to keep [-].

    Returns:
        `count` sidebands and CARRIER_GROUPS + 1 rest lines; the last rest line stands at the first carrier
        group that is not expanded and closes the rms identity.
    """
    coefficients = np.abs(carrier_coefficients(bridge, modulation, modulation_index))
    groups = 0.5 * np.sum(coefficients**2, axis=-1)
    span = np.arange(-SIDEBAND_SPAN, SIDEBAND_SPAN + 1)
    listed = coefficients[:, :, span % ANGLE_SAMPLES].reshape(len(modulation_index), -1)
    carrier = np.repeat(np.arange(1, CARRIER_GROUPS + 1), len(span)).astype(float)
    line = np.tile(span, CARRIER_GROUPS).astype(float)
    kept = np.sort(np.argsort(-(listed.max(0) / carrier**2), kind="stable")[:count])
    inside = [
        0.5 * np.sum(listed[:, kept[carrier[kept] == m]] ** 2, axis=-1) for m in range(1, CARRIER_GROUPS + 1)
    ]
    fundamental = 0.5 * (bridge.index_base * modulation_index) ** 2
    beyond = voltage_mean_square - fundamental - groups.sum(-1)
    rest = np.concatenate([groups - np.stack(inside, axis=-1), beyond[:, None]], axis=-1)
    return Sidebands(
        carrier_multiple=np.concatenate([carrier[kept], np.arange(1.0, CARRIER_GROUPS + 2)]),
        line_multiple=np.concatenate([line[kept], np.zeros(CARRIER_GROUPS + 1)]),
        listed=np.arange(count + CARRIER_GROUPS + 1) < count,
        amplitude=np.concatenate([listed[:, kept], np.sqrt(2.0 * np.maximum(rest, 0.0))], axis=-1),
        group_mean_square=groups,
    )
