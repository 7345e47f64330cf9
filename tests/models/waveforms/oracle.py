"""A second road to every waveform quantity: one line period of a switched bridge, edge by edge in the time
domain.

Shares no code with the models. References are written out again from the definitions of the schemes (Holmes
& Lipo 2003), switching instants come from root finding against a triangular carrier of an integer pulse
ratio (natural sampling), the inductor current is the exact integral of the switched voltage less its
fundamental, and every average is integrated piece by piece. No harmonic flux, no Bessel functions, no
closed forms of device currents, no assumption that the line stands still within a switching period.

Units: V_dc = 1; time is the line angle; current in units of the fundamental's peak; ripple enters by
`ripple_unit` = V_dc/(L f_s).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property, partial

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Bools = NDArray[np.bool_]
TURN = 2.0 * np.pi
THIRD = TURN / 3.0
INSIDE = 1e-10  # one-sided limits are taken this far inside a piece [rad]
SHORTEST = 1e-8  # a state that lasts no longer is a touch of carrier and reference, not a pulse [rad]
NODES, WEIGHTS = np.polynomial.legendre.leggauss(6)  # exact to rounding on pieces of a few degrees


@dataclass(frozen=True)
class Scheme:
    """A bridge with one scheme: leg references, carriers (+1, -1, 0 for none), filter voltage, leg
    currents' phases.

    `breaks` are the angles at which a reference jumps; `phases` shift the current of each leg behind phase
    one [rad], and `signs` give its direction out of the leg.
    """

    reference: Callable[[Array, float], Array]
    carriers: tuple[int, ...]
    weights: tuple[float, ...]
    signs: tuple[int, ...]
    phases: tuple[float, ...]
    breaks: tuple[float, ...]
    limit: float


def _pair(angle: Array, index: float) -> Array:
    return np.array([index * np.sin(angle), -index * np.sin(angle)])


def _folded(angle: Array, index: float) -> Array:
    up = np.sin(angle) >= 0.0
    slow = np.where(up, -1.0, 1.0)
    return np.array([2.0 * index * np.sin(angle) + slow, slow])


def _sines(angle: Array, index: float) -> Array:
    return np.array([index * np.sin(angle - shift) for shift in (0.0, THIRD, 2.0 * THIRD)])


def _with_third(angle: Array, index: float) -> Array:
    return _sines(angle, index) + index / 6.0 * np.sin(3.0 * angle)


def _middle_out(angle: Array, index: float) -> Array:
    """Half of the middle one of the three is added to all: the outer two then lie equally far from zero."""
    sines = _sines(angle, index)
    return sines + 0.5 * np.median(sines, axis=0)


def _greatest_clamped(angle: Array, index: float) -> Array:
    """The phase of greatest magnitude stays at its rail."""
    sines = _sines(angle, index)
    greatest = np.take_along_axis(sines, np.argmax(np.abs(_sines(angle, 1.0)), axis=0)[None], axis=0)
    return sines + np.sign(greatest) - greatest


def _greatest_current_clamped(angle: Array, index: float, turned: float = 0.0) -> Array:
    """The phase whose current is greatest stays at its rail, within 30 degrees of its voltage's peak."""
    sines = _sines(angle, index)
    greatest = np.argmax(np.abs(_sines(angle - turned, 1.0)), axis=0)[None]
    own = np.take_along_axis(sines, greatest, axis=0)
    return sines + np.sign(np.take_along_axis(_sines(angle - turned, 1.0), greatest, axis=0)) - own


SECTORS = tuple(np.arange(1, 6) * np.pi / 3.0)
TOGETHER = (1, 1, 1), (2.0 / 3.0, -1.0 / 3.0, -1.0 / 3.0), (1, 1, 1), (0.0, THIRD, 2.0 * THIRD)
WIDE = 2.0 / np.sqrt(3.0)
FOLLOWING = "discontinuous following the current"
SCHEMES = {
    "bipolar": Scheme(_pair, (1, -1), (1.0, -1.0), (1, -1), (0.0, 0.0), (), 1.0),
    "unipolar": Scheme(_pair, (1, 1), (1.0, -1.0), (1, -1), (0.0, 0.0), (), 1.0),
    "one leg at line frequency": Scheme(_folded, (1, 0), (1.0, -1.0), (1, -1), (0.0, 0.0), (np.pi,), 1.0),
    "sine-triangle": Scheme(_sines, *TOGETHER, (), 1.0),
    "third harmonic one sixth": Scheme(_with_third, *TOGETHER, (), WIDE),
    "centred space vector": Scheme(_middle_out, *TOGETHER, (), WIDE),
    "discontinuous clamped at voltage peak": Scheme(_greatest_clamped, *TOGETHER, SECTORS, WIDE),
    FOLLOWING: Scheme(_greatest_current_clamped, *TOGETHER, SECTORS, WIDE),
}


def scheme_at(name: str, lag: float) -> Scheme:
    """A scheme for a current that lags by an angle [rad]."""
    scheme = SCHEMES[name]
    if name != FOLLOWING:
        return scheme
    turned = min(max(lag, -np.pi / 6.0), np.pi / 6.0)
    breaks = np.sort((np.array((0.0, *scheme.breaks)) + turned) % TURN)
    return replace(
        scheme, reference=partial(scheme.reference, turned=turned), breaks=tuple(breaks[breaks > SHORTEST])
    )


def triangle(angle: Array, ratio: int) -> Array:
    """Carrier between -1 and +1, at -1 where the angle is a multiple of a carrier period."""
    return 4.0 * np.abs((angle * ratio / TURN + 0.5) % 1.0 - 0.5) - 1.0


@dataclass(frozen=True)
class LinePeriod:
    """One line period of a scheme at an index, an integer pulse ratio and a current that lags by `lag`."""

    scheme: Scheme
    index: float
    ratio: int
    lag: float = 0.0
    ripple_unit: float = 0.0

    def _toggles(self, leg: int) -> tuple[Array, Bools]:
        """Angles at which a leg changes state, and its state from each on; the first entry stands at angle
        0.
        """
        sign = self.scheme.carriers[leg]
        corners = np.arange(2 * self.ratio + 1) * np.pi / self.ratio if sign else np.array([0.0, TURN])
        bounds = np.unique(np.concatenate([corners, self.scheme.breaks]))
        bounds = bounds[np.concatenate([[True], np.diff(bounds) > SHORTEST])]
        left, right = bounds[:-1] + INSIDE, bounds[1:] - INSIDE

        def over(angle: Array) -> Array:
            carrier = sign * triangle(angle, self.ratio) if sign else np.zeros_like(angle)
            return self.scheme.reference(angle, self.index)[leg] - carrier

        before, after = over(left) > 0.0, over(right) > 0.0
        low, high = left.copy(), right.copy()
        for _ in range(52):
            middle = 0.5 * (low + high)
            same = (over(middle) > 0.0) == before
            low, high = np.where(same, middle, low), np.where(same, high, middle)
        crossed = before != after
        angles = np.concatenate([bounds[:-1], low[crossed]])
        states = np.concatenate([before, after[crossed]])
        order = np.argsort(angles, kind="stable")
        return _without_touches(angles[order], states[order])

    @cached_property
    def legs(self) -> list[tuple[Array, Bools]]:
        """Toggles of every leg."""
        return [self._toggles(leg) for leg in range(len(self.scheme.carriers))]

    @cached_property
    def edges(self) -> Array:
        """Bounds of all pieces of constant bridge state, from 0 to a full turn."""
        return np.unique(np.concatenate([*(angles for angles, _ in self.legs), [0.0, TURN]]))

    def state(self, leg: int) -> Array:
        """State of a leg's upper switch on every piece."""
        angles, states = self.legs[leg]
        return states[np.searchsorted(angles, 0.5 * (self.edges[1:] + self.edges[:-1])) - 1].astype(float)

    def voltage(self, shift: int = 0) -> Array:
        """Filter voltage on every piece; `shift` turns the weights on to another phase."""
        weights = np.roll(self.scheme.weights, shift)
        return np.sum([weight * self.state(leg) for leg, weight in enumerate(weights)], axis=0)

    def harmonic(self, order: int) -> complex:
        """Complex peak c of the filter voltage's harmonic, Re(c exp(j k angle)), integrated exactly."""
        turned = np.exp(-1j * order * self.edges)
        return complex(1j / (np.pi * order) * np.sum(self.voltage() * np.diff(turned)))

    @property
    def voltage_mean_square(self) -> float:
        return float(np.sum(self.voltage() ** 2 * np.diff(self.edges)) / TURN)

    def _ripple_at_edges(self, shift: int) -> tuple[Array, Array, complex]:
        """Integral of voltage less fundamental at the edges, the level of each piece, the fundamental."""
        turned = np.exp(-1j * self.edges)
        level = self.voltage(shift)
        first = complex(1j / np.pi * np.sum(level * np.diff(turned)))
        raw = np.concatenate([[0.0], np.cumsum(level * np.diff(self.edges))])
        raw = raw - np.real(first * (np.exp(1j * self.edges) - 1.0) / 1j)
        return raw, level, first

    def ripple(self, angle: Array, shift: int = 0) -> Array:
        """Ripple current at any angles, zero mean over the line period [peak fundamental current]."""
        return self._ripple_of[shift](angle)

    @cached_property
    def _ripple_of(self) -> list[Callable[[Array], Array]]:
        return [self._ripple_function(shift) for shift in range(len(self.scheme.weights))]

    def _ripple_function(self, shift: int) -> Callable[[Array], Array]:
        raw, level, first = self._ripple_at_edges(shift)
        scale = self.ripple_unit * self.ratio / TURN

        def free(angle: Array) -> Array:
            piece = np.clip(np.searchsorted(self.edges, angle, side="right") - 1, 0, len(level) - 1)
            start = self.edges[piece]
            sine = np.real(first * (np.exp(1j * angle) - np.exp(1j * start)) / 1j)
            return raw[piece] + level[piece] * (angle - start) - sine

        points, weights = self._quadrature(self.edges)
        mean = np.sum(free(points) * weights) / TURN
        return lambda angle: scale * (free(angle) - mean)

    @staticmethod
    def _quadrature(bounds: Array) -> tuple[Array, Array]:
        half = 0.5 * np.diff(bounds)[:, None]
        return bounds[:-1, None] + half * (1.0 + NODES), half * WEIGHTS

    def current(self, angle: Array, leg: int = 0) -> Array:
        """Current out of a leg."""
        shift = leg if len(self.scheme.weights) == 3 else 0
        smooth = np.sin(angle - self.lag - self.scheme.phases[leg])
        ripple = self.ripple(angle, shift) if self.ripple_unit else 0.0
        return self.scheme.signs[leg] * (smooth + ripple)

    @property
    def ripple_mean_square(self) -> float:
        points, weights = self._quadrature(self.edges)
        return float(np.sum(self.ripple(points) ** 2 * weights) / TURN)

    @property
    def ripple_peak_to_peak(self) -> float:
        """Greatest peak-to-peak within one carrier period."""
        inner = np.sort(np.concatenate([self.edges, 0.5 * (self.edges[1:] + self.edges[:-1])]))
        value = self.ripple(np.minimum(inner, TURN - INSIDE))
        width = TURN / self.ratio
        starts = np.arange(2 * self.ratio - 1) * 0.5 * width
        inside = (inner >= starts[:, None] - 1e-12) & (inner <= starts[:, None] + width + 1e-12)
        top = np.where(inside, value, -np.inf).max(-1)
        return float(np.max(top - np.where(inside, value, np.inf).min(-1)))

    def _sign_changes(self, leg: int) -> Array:
        """Edges and zeros of a leg's current."""
        grid = np.unique(np.concatenate([self.edges, np.linspace(0.0, TURN, 4 * self.ratio + 1)]))
        left, right = grid[:-1] + INSIDE, grid[1:] - INSIDE
        here = self.current(left, leg) > 0.0
        crossed = here != (self.current(right, leg) > 0.0)
        low, high, start = left[crossed], right[crossed], here[crossed]
        for _ in range(45):
            middle = 0.5 * (low + high)
            same = (self.current(middle, leg) > 0.0) == start
            low, high = np.where(same, middle, low), np.where(same, high, middle)
        return np.unique(np.concatenate([self.edges, low]))

    def device_currents(self, leg: int = 0) -> dict[str, float]:
        """Average and mean-square current of the upper switch and of the upper diode."""
        bounds = self._sign_changes(leg)
        points, weights = self._quadrature(bounds)
        value = self.current(points, leg)
        angles, states = self.legs[leg]
        on = states[np.searchsorted(angles, 0.5 * (bounds[1:] + bounds[:-1])) - 1][:, None]
        forward = np.where(on & (value > 0.0), value, 0.0)
        reverse = np.where(on & (value < 0.0), -value, 0.0)
        return {
            "switch_average": float(np.sum(forward * weights) / TURN),
            "switch_mean_square": float(np.sum(forward**2 * weights) / TURN),
            "diode_average": float(np.sum(reverse * weights) / TURN),
            "diode_mean_square": float(np.sum(reverse**2 * weights) / TURN),
        }

    def commutations(self, leg: int = 0) -> dict[str, float]:
        """Currents switched by both switches of a leg, summed over the period and divided by the pulse
        ratio.

        A switch turns on hard where the current was in the other position's diode; otherwise the edge is a
        turn-off.
        """
        angles, states = self.legs[leg]
        changed = np.concatenate([[states[0] != states[-1]], states[1:] != states[:-1]])
        value = self.current(angles[changed], leg)
        hard = np.where(states[changed], value > 0.0, value < 0.0)
        size = np.abs(value)
        return {
            "turn_on": float(np.sum(size[hard])) / self.ratio,
            "turn_off": float(np.sum(size[~hard])) / self.ratio,
            "hard_turn_ons": float(np.sum(hard)) / self.ratio,
            "turn_offs": float(np.sum(~hard)) / self.ratio,
        }

    def dc_current(self) -> tuple[Array, Array]:
        """Bridge input current at the quadrature points, and their weights."""
        points, weights = self._quadrature(self.edges)
        legs = range(len(self.scheme.carriers))
        total = np.sum([self.state(leg)[:, None] * self.current(points, leg) for leg in legs], axis=0)
        return total, weights

    @property
    def dc_capacitor_rms(self) -> float:
        """Rms of the dc current less its average."""
        value, weights = self.dc_current()
        mean = np.sum(value * weights) / TURN
        return float(np.sqrt(np.sum((value - mean) ** 2 * weights) / TURN))

    @property
    def dc_double_frequency_rms(self) -> float:
        """Rms of the dc current's component at twice the line frequency."""
        value, weights = self.dc_current()
        points, _ = self._quadrature(self.edges)
        return float(np.abs(np.sum(value * weights * np.exp(-2j * points))) / np.pi / np.sqrt(2.0))

    def period_loops(self) -> list[tuple[Array, Array]]:
        """Lengths [carrier periods] and slopes [V_dc] of the pieces of every carrier period, averages taken
        off.
        """
        width = TURN / self.ratio
        level = self.voltage()
        found = []
        for place in range(self.ratio):
            low, high = place * width, (place + 1) * width
            inside = (self.edges[:-1] < high - SHORTEST) & (self.edges[1:] > low + SHORTEST)
            lengths = np.clip(self.edges[1:][inside], low, high) - np.clip(self.edges[:-1][inside], low, high)
            lengths = lengths / lengths.sum()
            found.append((lengths, level[inside] - np.sum(lengths * level[inside])))
        return found


def _without_touches(angles: Array, states: Bools) -> tuple[Array, Bools]:
    """Drop repeated states and states that last no longer than a touch."""
    lasting = np.diff(np.concatenate([angles, [TURN]])) > SHORTEST
    lasting[0] = True
    angles, states = angles[lasting], states[lasting]
    fresh = np.concatenate([[True], states[1:] != states[:-1]])
    return angles[fresh], states[fresh]
