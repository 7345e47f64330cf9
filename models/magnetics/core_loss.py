"""Core loss by the improved generalised Steinmetz equation, over the line cycle."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.special import gamma

Array = NDArray[np.float64]
BIAS_MEAN = 2.0 / np.pi


def igse_factor(k: Array, alpha: Array, beta: Array) -> Array:
    """Constant k_i of the improved generalised Steinmetz equation [W/m3 with s and T].

    Args:
        k, alpha, beta: Steinmetz constants for sine flux, P = k f^alpha B^beta, SI [W/m3 with Hz and T; -;
            -].

    Source: Venkatachalam, Sullivan, Abdallah, Tacca (2002): k / ((2 pi)^(alpha-1) 2^(beta-alpha) integral
        |cos|^alpha).
    """
    integral = 2.0 * np.sqrt(np.pi) * gamma(0.5 * (alpha + 1.0)) / gamma(0.5 * alpha + 1.0)
    return k / ((2.0 * np.pi) ** (alpha - 1.0) * 2.0 ** (beta - alpha) * integral)


def steinmetz_loss(k: Array, alpha: Array, beta: Array, frequency: Array, peak_flux: Array) -> Array:
    """Loss density for sine flux, P = k f^alpha B^beta [W/m3]; `frequency` [Hz], `peak_flux` [T]."""
    return k * frequency**alpha * peak_flux**beta


def piecewise_linear_loss(k: Array, alpha: Array, beta: Array, flux: Array, times: Array) -> Array:
    """iGSE loss density of one periodic loop given by its corners [W/m3].

    Args:
        k, alpha, beta: sine Steinmetz constants.
        flux: flux density at the corners, first equal to last, corners on the last axis [T].
        times: their times, the last one the period [s].

    The loop must hold no minor loops; split those off first.
    """
    swing = np.ptp(flux, axis=-1)
    steps = np.diff(times)
    rates = np.abs(np.diff(flux, axis=-1) / steps)
    period = times[..., -1] - times[..., 0]
    shape = np.sum(rates**alpha * steps, axis=-1) / period
    return igse_factor(k, alpha, beta) * swing ** (beta - alpha) * shape


def switched_loss(
    factor: Array, alpha: Array, beta: Array, shape: Array, volt_per_turn_area: Array, frequency: Array
) -> Array:
    """Loss density of the switching-frequency loops averaged over the line cycle [W/m3].

    Args:
        factor: k_i of `igse_factor`.
        alpha, beta: Steinmetz exponents [-].
        shape: mean iGSE shape integral of the modulation scheme at the working modulation index [-].
        volt_per_turn_area: V_dc/(N A_e), the flux slope that one V_dc makes [T/s].
        frequency: switching frequency [Hz].
    """
    return factor * shape * volt_per_turn_area**beta * frequency ** (alpha - beta)


def line_loss(line_loss_density: Array, exponent: Array, peak_flux: Array, line_frequency_hz: float) -> Array:
    """Loss density of the line-frequency major loop [W/m3].

    Args:
        line_loss_density: at 50 Hz and 1 T peak [W/m3].
        exponent: of the loss on flux density [-].
        peak_flux: line-frequency peak flux density [T].
        line_frequency_hz: [Hz]; the loss per cycle is taken as constant between 50 and 60 Hz, times
            (f/50)^1.3 (common practice for hysteresis with some eddy current, no source).
    """
    return line_loss_density * peak_flux**exponent * (line_frequency_hz / 50.0) ** 1.3


def bias_factor(bias_loss_factor: Array, line_peak_flux: Array, saturation: Array) -> Array:
    """Rise of the switching-frequency loss by the slowly moving line-frequency premagnetisation [-].

    `bias_loss_factor` is the rise at half of saturation; taken linear in the local bias and averaged over the
    line cycle (mean of |sin| = 2/pi). The linear law is a judgement; the factor itself is catalogue data.
    """
    return 1.0 + (bias_loss_factor - 1.0) * BIAS_MEAN * np.minimum(line_peak_flux / (0.5 * saturation), 2.0)
