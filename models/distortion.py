"""Distortion of the injected current (grid) or of the output voltage (stand-alone).

Switching sidebands come from the double Fourier series through the filter's transfer function at each line;
low orders come from the dead time and, stand-alone, from the rectifier load, as the control loop leaves them:
the loop is stated as an integrator of bandwidth f_bw, so that a disturbance at f is left with the share
f/sqrt(f^2 + f_bw^2).
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
LOW_ORDERS = np.arange(3.0, 50.0, 2.0)
HIGHEST_ORDER = 50


@dataclass(frozen=True)
class Lines:
    """Harmonic lines of a population: frequency order and rms amplitude over the base, (n, k) [-]."""

    order: Array
    amplitude: Array
    listed: NDArray[np.bool_]


@dataclass(frozen=True)
class Distortion:
    """Distortion of a population.

    Attributes:
        total: rms of all lines and of the rest the listed sidebands leave, over the base (n,) [-].
        low: rms of the lines up to order 50 over the base (n,) [-].
        worst_share: greatest line over its own limit (n,) [-]; worst_order: its order (n,) [-].
        lines: low orders first, then switching sidebands.
        line_limit: (n, k) [-], infinite where there is none.
    """

    total: Array
    low: Array
    worst_share: Array
    worst_order: Array
    lines: Lines
    line_limit: Array


def worse(first: Distortion, second: Distortion) -> Distortion:
    """Of two circuits the one whose lines come nearer to their limits, candidate by candidate; totals are the
    greater ones.
    """
    other = second.worst_share > first.worst_share
    rows = other[:, None]
    lines = Lines(
        order=np.where(rows, second.lines.order, first.lines.order),
        amplitude=np.where(rows, second.lines.amplitude, first.lines.amplitude),
        listed=np.where(rows, second.lines.listed, first.lines.listed),
    )
    return Distortion(
        total=np.maximum(first.total, second.total),
        low=np.maximum(first.low, second.low),
        worst_share=np.maximum(first.worst_share, second.worst_share),
        worst_order=np.where(other, second.worst_order, first.worst_order),
        lines=lines,
        line_limit=np.where(rows, second.line_limit, first.line_limit),
    )


def loop_left(frequency_hz: Array, bandwidth_hz: Array) -> Array:
    """Share of a disturbance that a loop of integrator gain leaves, f/sqrt(f^2 + f_bw^2) [-]."""
    return frequency_hz / np.sqrt(frequency_hz**2 + bandwidth_hz**2)


def dead_time_voltage(order: Array, dc_voltage: Array, dead_time: Array, frequency: Array) -> Array:
    """Peak voltage error harmonic of one leg from its dead time [V].

    Args:
        order: odd harmonic order [-]; dc_voltage: [V]; dead_time: [s]; frequency: switching frequency [Hz].

    Source: Jeong & Park (1991): a square wave of V_dc t_d f_s in phase with the current, (4/pi)/k of it.
    """
    return 4.0 / (np.pi * order) * dc_voltage * dead_time * frequency


def dead_time_share(order: Array, switching_share: Array, displacement: Array) -> Array:
    """Harmonic of a leg's dead-time error over that of the whole square wave, where the leg is clamped for
    part of the line period and loses nothing there (n, k) [-].

    Between 0.5 and 1.5 for clamping over 60 degrees: clamped at the current's peak the square wave loses its
    middle, clamped beside it less cancels.

    Args:
        order: odd (k,) [-].
        switching_share: 1 where the leg switches, 0 where it rests, in equal cells of the half wave that
            begins at the reference's zero (n, a) [-].
        displacement: lag of the current behind the reference (n,) [rad].
    """
    cells = switching_share.shape[-1]
    edges = np.pi * np.arange(cells + 1) / cells
    turn = np.mod(displacement, np.pi)  # where the current changes its sign within the half wave
    cell = np.minimum((turn * cells / np.pi).astype(np.int64), cells - 1)
    rows = np.arange(len(turn))

    def turned(angle: Array) -> NDArray[np.complex128]:
        return np.exp(-1j * np.outer(angle, order))

    # integral of switching share, sign of the current and exp(-j k theta); the change cuts its cell
    signed = switching_share * np.where(np.arange(cells) > cell[:, None], 1.0, -1.0)
    rest = 2.0 * switching_share[rows, cell, None] * (turned(edges[cell + 1]) - turned(turn))
    return np.asarray(0.5 * np.abs(signed @ np.diff(turned(edges), axis=0) + rest))


def low_orders(phases: int) -> Array:
    """Low orders that the bridge can drive: odd, without multiples of three for three phases [-]."""
    return LOW_ORDERS[LOW_ORDERS % 3 != 0.0] if phases == 3 else LOW_ORDERS


def rectifier_harmonic(order: Array, crest_factor: float) -> Array:
    """Harmonic of a rectifier load's current over its rms value, rms over rms [-].

    The current is one half-sine pulse each half wave, whose width 2 pi/CF^2 gives the crest factor.

    Args:
        order: odd [-].
        crest_factor: peak over rms, above sqrt 2 [-].
    """
    width = 2.0 * np.pi / crest_factor**2
    base = np.pi / width
    gap = base**2 - np.square(order, dtype=float)
    peak = np.where(
        np.abs(gap) > 1e-9,
        4.0 / np.pi * base * np.cos(0.5 * order * width) / np.where(np.abs(gap) > 1e-9, gap, 1.0),
        width / np.pi,
    )
    return np.abs(peak) * crest_factor / np.sqrt(2.0)


def summarise(lines: Lines, limits_by_order: Array, beyond: float) -> Distortion:
    """Hold lines against their limits and sum them up.

    Args:
        lines: rms lines over the base.
        limits_by_order: limit of orders 0..50 over the base [-].
        beyond: limit of any listed line above order 50 [-].
    """
    order = np.rint(lines.order)
    inside = order <= HIGHEST_ORDER
    limit = np.where(inside, limits_by_order[np.minimum(order, HIGHEST_ORDER).astype(np.int64)], beyond)
    limit = np.where(lines.listed, limit, np.inf)
    share = lines.amplitude / limit
    worst = np.argmax(share, axis=-1)
    square = lines.amplitude**2
    rows = np.arange(len(worst))
    return Distortion(
        total=np.sqrt(square.sum(-1)),
        low=np.sqrt(np.where(inside, square, 0.0).sum(-1)),
        worst_share=share[rows, worst],
        worst_order=lines.order[rows, worst],
        lines=lines,
        line_limit=limit,
    )
