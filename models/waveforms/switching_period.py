"""One switching period in exact pieces: voltage levels, flux, ripple, current at the switching instants.

Within a period the line quantities stand still (f_s >> f_1). The legs' states cut the period into intervals
of constant voltage; the flux is piecewise linear. Harmonic-flux method: Hava, Kerkman, Lipo (1999); Holmes &
Lipo (2003), ch. 2, 5.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from models.waveforms.bridges import Bridge, Modulation
from models.waveforms.minor_loops import ClosedLoops, closed_loops

Array = NDArray[np.float64]


def cells(bridge: Bridge, references: Array) -> tuple[Array, Array]:
    """Switching cell of each leg: its on-state share, and the leg's level with that cell off.

    Args:
        bridge: two-level legs are one cell over all of V_dc; of a three-level leg's two, over half of V_dc
            each, only the one on the reference's side switches (phase disposition).
        references: of all legs, legs last [-].

    Returns:
        Share in [0, 1] [-] and floor level [V_dc], of the references' shape.
    """
    if bridge.levels == 2:
        return np.clip(0.5 * (1.0 + references), 0.0, 1.0), np.zeros_like(references)
    upper = references >= 0.0
    return np.clip(np.where(upper, references, 1.0 + references), 0.0, 1.0), np.where(upper, 0.5, 0.0)


def switching_periods(bridge: Bridge, scheme: Modulation, angle: Array, index: Array) -> SwitchingPeriod:
    """Switching periods of a scheme at line angles [rad] and modulation indexes [-] that broadcast."""
    share, floor = cells(bridge, scheme.references(*np.broadcast_arrays(angle, index)))
    weights = np.array(bridge.voltage_weights)
    step = tuple((weights / (bridge.levels - 1)).tolist())
    return SwitchingPeriod(share, scheme.carrier_sign, step, (floor - 0.5) @ weights)


@dataclass(frozen=True)
class SwitchingPeriod:
    """A period normalised to length 1 and V_dc = 1; leading axes are any operating points.

    Attributes:
        duty: on-state share of each leg's switching cell, legs last [-].
        carrier_sign: carrier sign per leg [-].
        weights: voltage that a leg's switching cell adds when on, per leg [V_dc].
        base: voltage of all legs with their switching cells off, against the dc midpoint (...) [V_dc].
    """

    duty: Array
    carrier_sign: tuple[int, ...]
    weights: tuple[float, ...]
    base: Array = field(default_factory=lambda: np.zeros(()))

    @cached_property
    def instants(self) -> tuple[Array, Array]:
        """Turn-on and turn-off instant of every leg's upper switch, as share of the period [-]."""
        sign = np.array(self.carrier_sign)
        half = np.where(sign > 0, 0.5 * self.duty, 0.5 * (1.0 - self.duty))
        return np.where(sign > 0, 0.5 - half, 0.5 + half), np.where(sign > 0, 0.5 + half, 0.5 - half)

    @cached_property
    def times(self) -> Array:
        """Bounds of the intervals, ascending, on the last axis [-]."""
        edges = np.concatenate(self.instants, axis=-1)
        shape = (*edges.shape[:-1], 1)
        return np.concatenate([np.zeros(shape), np.sort(edges, axis=-1), np.ones(shape)], axis=-1)

    @cached_property
    def steps(self) -> Array:
        """Length of each interval [-]."""
        return np.diff(self.times, axis=-1)

    @cached_property
    def states(self) -> NDArray[np.bool_]:
        """Whether each leg's switching cell is on in each interval, legs last but one [-]."""
        middle = np.abs(0.5 * (self.times[..., 1:] + self.times[..., :-1]) - 0.5)
        duty = self.duty[..., None]
        rows = [
            middle < 0.5 * duty[..., leg, :] if sign > 0 else middle > 0.5 * (1.0 - duty[..., leg, :])
            for leg, sign in enumerate(self.carrier_sign)
        ]
        return np.stack(rows, axis=-2)

    @cached_property
    def levels(self) -> Array:
        """Voltage in each interval [V_dc]."""
        return np.asarray(self.base)[..., None] + np.array(self.weights) @ self.states

    @cached_property
    def ripple_voltage(self) -> Array:
        """Voltage less its average over the period, in each interval [V_dc]."""
        return self.levels - (self.base + self.duty @ np.array(self.weights))[..., None]

    @cached_property
    def flux(self) -> Array:
        """Flux deviation from its mean at the interval bounds [V_dc T_s]."""
        start = np.zeros((*self.steps.shape[:-1], 1))
        raw = np.concatenate([start, np.cumsum(self.ripple_voltage * self.steps, axis=-1)], axis=-1)
        mean = np.sum(self.steps * 0.5 * (raw[..., 1:] + raw[..., :-1]), axis=-1, keepdims=True)
        return raw - mean

    @property
    def peak_to_peak(self) -> Array:
        """Peak-to-peak flux [V_dc T_s]; times V_dc/(L f_s) it is the ripple current."""
        return self.flux.max(-1) - self.flux.min(-1)

    @property
    def mean_square(self) -> Array:
        """Mean square of the flux deviation [(V_dc T_s)^2]."""
        left, right = self.flux[..., :-1], self.flux[..., 1:]
        return np.sum(self.steps * (left * left + left * right + right * right), axis=-1) / 3.0

    @property
    def voltage_mean_square(self) -> Array:
        """Mean square of the voltage [V_dc^2]."""
        return np.sum(self.steps * self.levels**2, axis=-1)

    def flux_at_turn_on(self, leg: int) -> Array:
        """Flux deviation at the turn-on instant of a leg's upper switch [V_dc T_s]."""
        instant = self.instants[0][..., leg, None]
        passed = np.clip(instant - self.times[..., :-1], 0.0, self.steps)
        return self.flux[..., 0] + np.sum(self.ripple_voltage * passed, axis=-1)

    @cached_property
    def loops(self) -> ClosedLoops:
        """Closed loops of the flux."""
        return closed_loops(self.flux, self.steps, self.ripple_voltage)

    def loss_shape(self, alpha: float, beta: float) -> Array:
        """Waveform part of the iGSE with minor loops split off, see `ClosedLoops.loss_shape` [-]."""
        return self.loops.loss_shape(alpha, beta)
