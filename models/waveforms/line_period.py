"""One operating point's waveforms over a whole line period, exact: switching angle by switching angle.

The tables of a search take the line quantities as standing still within a switching period. Here nothing
does: legs switch at their true angles for an integer pulse number, the filter voltage is a staircase, and
everything follows from it in closed form or by Gauss quadrature between two switchings. It is the reference
for any pulse number, and the only right way at low ones.

Circuit: inductance L between bridge and a sinusoidal voltage (grid, or a filter capacitor) that takes up the
bridge's fundamental; for three phases an isolated star point. Smooth dc source. The ripple current is all of
the phase current but its fundamental: sidebands and harmonics of any order, zero on average.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

from models.waveforms.bridges import ALL_BRIDGES, QUASI_SQUARE, Bridge, Modulation
from models.waveforms.legs import (
    FULL_TURN,
    NATURAL,
    SAMPLINGS,
    Cell,
    first_seen,
    jumps_of,
    line_switched_cell,
    pulse_width_cell,
)

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
NODES, WEIGHTS = np.polynomial.legendre.leggauss(4)
LONGEST = np.pi / 90.0  # rad that a piece of the quadrature may be long
SHIFTS = 2.0 * np.pi / 3.0 * np.arange(3)  # lag of each phase behind phase one [rad]
NO_FUNDAMENTAL = 1e-9  # of V_dc


@dataclass(frozen=True, kw_only=True)
class LinePeriod:
    """Waveforms of one operating point.

    Attributes:
        bridge, modulation: names out of `bridges.ALL_BRIDGES`.
        modulation_index: M; without effect on line-switched schemes [-].
        displacement: angle by which the fundamental current lags the bridge's fundamental voltage, negative
            for leading [rad]. Currents of three phases are balanced, and the voltage is the positive
            sequence; where there is no fundamental voltage, sin(theta) takes its place.
        dc_voltage: [V].
        inductance: per phase between bridge and sinusoidal voltage; infinite for no ripple [H].
        pulse_number: carrier periods in a line period, whole [-].
        line_frequency: [Hz].
        current: rms of the fundamental phase current, 0 for the ripple alone [A].
        sampling: "natural", "symmetrical regular" or "asymmetrical regular".
        carrier_offset: carrier angle of the valley at the line voltage's zero, so that a valley stands at
            line angle `carrier_offset`/`pulse_number` [rad].
        conduction_angle: of a quasi-square wave, above 0 to pi [rad].

    Raises:
        ValueError: for unknown names or values out of their range.
    """

    bridge: str
    modulation: str
    modulation_index: float
    displacement: float
    dc_voltage: float
    inductance: float
    pulse_number: int
    line_frequency: float
    current: float
    sampling: str = NATURAL
    carrier_offset: float = 0.0
    conduction_angle: float = np.pi

    def __post_init__(self) -> None:
        if self.bridge not in ALL_BRIDGES:
            raise ValueError(f"bridge {self.bridge!r}: expected one of {', '.join(ALL_BRIDGES)}")
        limit = self.scheme.linear_limit
        if not 0.0 <= self.modulation_index <= limit + 1e-9:
            raise ValueError(
                f"modulation index {self.modulation_index}: expected 0 to {limit:.4f} for {self.modulation}"
            )
        if self.sampling not in SAMPLINGS:
            raise ValueError(f"sampling {self.sampling!r}: expected one of {', '.join(SAMPLINGS)}")
        for name in ("dc_voltage", "inductance", "pulse_number", "line_frequency"):
            if not getattr(self, name) > 0.0:
                raise ValueError(f"{name} {getattr(self, name)}: expected a number above 0")
        for name in ("dc_voltage", "pulse_number", "line_frequency", "displacement", "carrier_offset"):
            if not np.isfinite(getattr(self, name)):
                raise ValueError(f"{name} {getattr(self, name)}: expected a finite number")
        if self.pulse_number != round(self.pulse_number):
            raise ValueError(f"pulse_number {self.pulse_number}: expected a whole number")
        if not 0.0 <= self.current < np.inf:
            raise ValueError(f"current {self.current}: expected a finite number of at least 0")
        if not 0.0 < self.conduction_angle <= np.pi + 1e-12:
            raise ValueError(f"conduction_angle {self.conduction_angle}: expected above 0 to pi")

    @property
    def circuit(self) -> Bridge:
        """The bridge's registry entry."""
        return ALL_BRIDGES[self.bridge]

    @property
    def scheme(self) -> Modulation:
        """The scheme's registry entry."""
        return self.circuit.scheme(self.modulation)

    @cached_property
    def cells(self) -> tuple[tuple[Cell, ...], ...]:
        """Cells of every leg: one of a two-level leg, upper and lower of a three-level leg."""
        return tuple(self._leg(leg) for leg in range(len(self.circuit.voltage_weights)))

    def _references(self, angle: Array) -> Array:
        """References of all legs, legs on the last axis [-]."""
        index = np.full(np.shape(angle), self.modulation_index)
        return self.scheme.at(self.displacement).references(np.asarray(angle), index)

    @cached_property
    def _jumps(self) -> Array:
        return jumps_of(self._references)

    def _leg(self, leg: int) -> tuple[Cell, ...]:
        if not self.scheme.switching_legs[leg]:
            return (self._line_switched(leg),)

        def cell(part: Callable[[Array], Array]) -> Cell:
            return pulse_width_cell(
                lambda angle: part(self._references(angle)[..., leg]),
                self.pulse_number,
                jumps=self._jumps,
                offset=self.carrier_offset,
                sampling=self.sampling,
                inverted=self.scheme.carrier_sign[leg] < 0,
            )

        if self.circuit.levels == 2:
            return (cell(lambda value: value),)
        return (
            cell(lambda value: 2.0 * np.maximum(value, 0.0) - 1.0),
            cell(lambda value: 2.0 * np.minimum(value, 0.0) + 1.0),
        )

    def _line_switched(self, leg: int) -> Cell:
        shift = (0.0, 2.0 * np.pi / 3.0, 4.0 * np.pi / 3.0)[leg] if self.circuit.phases == 3 else leg * np.pi
        if any(self.scheme.switching_legs):
            # beside a leg at carrier frequency: both change with the polarity that the sampler sees
            seen = (self.pulse_number, self.carrier_offset, self.sampling)
            return line_switched_cell(first_seen(shift, *seen), first_seen(shift + np.pi, *seen))
        # the legs of a quasi-square wave are displaced so that their difference lasts the conduction angle
        lead = 0.5 * (np.pi - self.conduction_angle) if self.modulation == QUASI_SQUARE else 0.0
        turn_on = shift + (lead if leg == 0 else -lead)
        return line_switched_cell(turn_on, turn_on + np.pi)

    @cached_property
    def bounds(self) -> Array:
        """Angles between which no leg switches, from 0 to 2 pi [rad]."""
        angles = np.concatenate([cell.angles for leg in self.cells for cell in leg])
        return np.unique(np.concatenate([[0.0], angles, [FULL_TURN]]))

    @cached_property
    def middles(self) -> Array:
        """Middles of the intervals [rad]."""
        return 0.5 * (self.bounds[1:] + self.bounds[:-1])

    @cached_property
    def leg_levels(self) -> Array:
        """Level of every leg in every interval, 0 to 1 of V_dc (leg, interval) [-]."""
        return np.array([np.mean([cell.on(self.middles) for cell in leg], axis=0) for leg in self.cells])

    @cached_property
    def output_levels(self) -> Array:
        """Voltage across inductance and load of every phase in every interval (phase, interval) [V]."""
        weights = np.array(self.circuit.voltage_weights)
        if self.circuit.phases == 3:
            return self.dc_voltage * (self.leg_levels - self.leg_levels.mean(0))
        midpoint = 0.5 if len(weights) == 1 else 0.0  # a single leg works against the dc midpoint
        return self.dc_voltage * (weights @ self.leg_levels - midpoint)[None]

    @cached_property
    def common_mode_levels(self) -> Array:
        """Mean of the leg voltages against the dc midpoint in every interval [V]."""
        return self.dc_voltage * (self.leg_levels.mean(0) - 0.5)

    @cached_property
    def widths(self) -> Array:
        """Share of the line period of every interval [-]."""
        return np.diff(self.bounds) / FULL_TURN

    def harmonics(self, levels: Array, orders: NDArray[np.int64]) -> Complex:
        """Complex peak amplitudes of a staircase over the intervals, v = sum Re(c_n exp(j n theta)) [its
        unit].

        Args:
            levels: value in every interval.
            orders: harmonic orders, at least 1 [-].
        """
        turns = np.exp(-1j * np.outer(orders, self.bounds))
        return np.diff(turns, axis=1) @ levels / (-1j * np.asarray(orders)) / np.pi

    @cached_property
    def fundamental(self) -> Complex:
        """Fundamental of every phase's output voltage, complex peak; sin(theta) is -j [V]."""
        return np.array([self.harmonics(levels, np.array([1]))[0] for levels in self.output_levels])

    @cached_property
    def fundamental_peak(self) -> float:
        """Peak of the output voltage's fundamental, phase one [V]."""
        return float(np.abs(self.fundamental[0]))

    @cached_property
    def voltage_thd(self) -> float:
        """Distortion of phase one's output voltage over its fundamental [-].

        Counts all harmonics without end, from the exact rms value; a dc component counts for nothing.
        Infinite where there is no fundamental, as at M = 0 or with clamped legs at three pulses.
        """
        if self.fundamental_peak < NO_FUNDAMENTAL * self.dc_voltage:
            return float("inf")
        levels = self.output_levels[0]
        square = float(self.widths @ levels**2 - (self.widths @ levels) ** 2)
        return float(np.sqrt(max(2.0 * square / self.fundamental_peak**2 - 1.0, 0.0)))

    @cached_property
    def _flux_at_bounds(self) -> Array:
        """Integral of output voltage less mean and fundamental, from angle 0 (phase, bound) [V s]."""
        means = (self.output_levels @ self.widths)[:, None]
        raw = np.cumsum((self.output_levels - means) * np.diff(self.bounds), axis=1)
        raw = np.concatenate([np.zeros((len(raw), 1)), raw], axis=1)
        smooth = (self.fundamental[:, None] * (np.exp(1j * self.bounds) - 1.0) / 1j).real
        return (raw - smooth) / (FULL_TURN * self.line_frequency)

    @cached_property
    def nodes(self) -> tuple[Array, Array, NDArray[np.int64]]:
        """Quadrature angles [rad], their weights over the line period (sum 1), and the interval of each.

        Long intervals, as line-switched legs and low pulse numbers have, are cut into short ones, so that a
        current that changes its sign within one costs no accuracy.
        """
        return quadrature(self.bounds)

    def forget_nodes(self) -> None:
        """Drop what is kept at the quadrature nodes (megabytes at high pulse numbers); it is found again when
        asked for.
        """
        for name in ("nodes", "_flux_at_nodes", "ripple", "phase_current"):
            self.__dict__.pop(name, None)

    def _flux_at(self, angle: Array, interval: NDArray[np.int64]) -> Array:
        """Integral of output voltage less mean and fundamental at angles of given intervals [V s]."""
        means = (self.output_levels @ self.widths)[:, None]
        start = self.bounds[interval]
        straight = (self.output_levels[:, interval] - means) * (angle - start)
        # Re(c (exp(j a) - exp(j s))/j), written out in real numbers
        real, imaginary = self.fundamental.real[:, None], self.fundamental.imag[:, None]
        sines, cosines = np.sin([angle, start]), np.cos([angle, start])
        smooth = real * (sines[0] - sines[1]) + imaginary * (cosines[0] - cosines[1])
        return self._flux_at_bounds[:, interval] + (straight - smooth) / (FULL_TURN * self.line_frequency)

    @cached_property
    def _flux_at_nodes(self) -> Array:
        angle, _, interval = self.nodes
        return self._flux_at(angle, interval)

    @cached_property
    def _mean_flux(self) -> Array:
        return (self._flux_at_nodes @ self.nodes[1])[:, None]

    @cached_property
    def ripple(self) -> Array:
        """Ripple current at the quadrature nodes (phase, node) [A]."""
        return (self._flux_at_nodes - self._mean_flux) / self.inductance

    @cached_property
    def ripple_at_bounds(self) -> Array:
        """Ripple current at the switching angles and at 0 and 2 pi (phase, bound) [A]."""
        return (self._flux_at_bounds - self._mean_flux) / self.inductance

    @cached_property
    def ripple_rms(self) -> float:
        """Rms ripple current of phase one over the line period [A]."""
        return float(np.sqrt(self.ripple[0] ** 2 @ self.nodes[1]))

    @cached_property
    def ripple_peak(self) -> float:
        """Greatest magnitude of the ripple current of phase one over the line period [A]."""
        return float(np.abs(self._ripple_extremes[1]).max())

    def ripple_at(self, angle: Array) -> Array:
        """Ripple current of every phase at angles of any turn (phase, angle) [A]."""
        within = np.mod(angle, FULL_TURN)
        interval = np.clip(np.searchsorted(self.bounds, within, side="right") - 1, 0, len(self.widths) - 1)
        return (self._flux_at(within, interval) - self._mean_flux) / self.inductance

    def line_current(self, angle: Array) -> Array:
        """Fundamental phase currents, lagging the (positive-sequence) fundamental voltage (phase, angle)
        [A].
        """
        shifts = SHIFTS[: self.circuit.phases]
        first = np.mean(self.fundamental * np.exp(1j * shifts))
        lead = np.angle(1j * first) if abs(first) > NO_FUNDAMENTAL * self.dc_voltage else 0.0
        return np.sqrt(2.0) * self.current * np.sin(angle + lead - self.displacement - shifts[:, None])

    @cached_property
    def phase_current(self) -> Array:
        """Phase currents, ripple included, at the quadrature nodes (phase, node) [A]."""
        return self.line_current(self.nodes[0]) + self.ripple

    def ripple_swing(self, angle: Array) -> Array:
        """Peak-to-peak ripple of phase one in the window of one carrier period around each angle [A].

        Where no leg switches at the carrier frequency the window is the whole line period.

        Args:
            angle: middles of the windows (k,) [rad].
        """
        place, value = self._ripple_extremes
        if not any(self.scheme.switching_legs):
            return np.full(np.shape(angle), np.ptp(value))
        width = FULL_TURN / self.pulse_number
        start = np.mod(np.asarray(angle) - 0.5 * width, FULL_TURN)
        ends = self.ripple_at(np.concatenate([start, start + width]))[0].reshape(2, -1)
        turns = np.concatenate([place, place + FULL_TURN])
        values = np.concatenate([value, value, value[:1]])
        span = np.array([np.searchsorted(turns, start), np.searchsorted(turns, start + width)])
        top, bottom = ends.max(0), ends.min(0)
        filled = span[1] > span[0]  # some extreme lies inside
        top[filled] = np.maximum(top, np.maximum.reduceat(values, span.T.ravel())[::2])[filled]
        bottom[filled] = np.minimum(bottom, np.minimum.reduceat(values, span.T.ravel())[::2])[filled]
        return top - bottom

    @cached_property
    def local_peak_to_peak(self) -> tuple[Array, Array]:
        """Peak-to-peak ripple of phase one in every carrier period, and the periods' middle angles ([rad],
        [A]).

        Periods from one carrier peak to the next (the even entries, around the valleys) and from one valley
        to the next (the odd entries), 2 x pulse number in all. Where no leg switches at the carrier frequency
        the whole line period counts as one.
        """
        if not any(self.scheme.switching_legs):
            middle = np.array([np.pi])
        else:
            half_periods = np.arange(2 * self.pulse_number)
            middle = (half_periods * np.pi + self.carrier_offset) / self.pulse_number
        return middle, self.ripple_swing(middle)

    @cached_property
    def _ripple_extremes(self) -> tuple[Array, Array]:
        """Angles, ascending, and ripple current of phase one at all switchings and turning points between.

        Between two switchings the voltage level is constant, so that the ripple turns where the fundamental
        passes that level.
        """
        level = self.output_levels[0] - self.output_levels[0] @ self.widths
        size, lag = np.abs(self.fundamental[0]), np.angle(self.fundamental[0])
        lift = np.arccos(np.clip(level / np.maximum(size, 1e-30), -1.0, 1.0))
        start, end = self.bounds[:-1], self.bounds[1:]
        turning = [np.mod(sign * lift - lag, FULL_TURN) for sign in (1.0, -1.0)]
        inside = [angle[(angle > start) & (angle < end) & (np.abs(level) < size)] for angle in turning]
        angle = np.sort(np.concatenate([start, *inside]))
        return angle, self.ripple_at(angle)[0]

    @property
    def ripple_peak_to_peak(self) -> float:
        """Greatest peak-to-peak ripple of phase one within a carrier period, taken from peak to peak of the
        carrier or from valley to valley [A].
        """
        return float(self.local_peak_to_peak[1].max())


def quadrature(bounds: Array) -> tuple[Array, Array, NDArray[np.int64]]:
    """Gauss nodes [rad], their weights over the line period (sum 1) and intervals, as of `LinePeriod.nodes`.

    Args:
        bounds: ascending, from 0 to 2 pi [rad].
    """
    widths = np.diff(bounds)
    parts = np.maximum(np.ceil(widths / LONGEST).astype(np.int64), 1)
    interval = np.repeat(np.arange(len(widths)), parts)
    place = np.arange(parts.sum()) - np.repeat(np.cumsum(parts) - parts, parts)
    half = 0.5 * widths[interval] / parts[interval]
    middle = bounds[interval] + (2 * place + 1) * half
    angle = (middle[:, None] + half[:, None] * NODES).ravel()
    weight = (half[:, None] * WEIGHTS).ravel() / FULL_TURN
    return angle, weight, np.repeat(interval, len(NODES))
