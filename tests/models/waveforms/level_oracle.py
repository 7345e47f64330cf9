"""A second road to the waveforms of every bridge, three-level and line-switched ones included, with any
sampling and pulse number: one line period edge by edge.

Shares no code with the models. Schemes are written out again from their definitions; a leg is one comparison
with a carrier or two; edges come from bisection; currents are integrated piece by piece on a fine grid of
their own. V_dc = 1, currents over the peak of the fundamental, ripple by `ripple_unit` = V_dc/(L f_s).

What leaves room for choice is chosen here once more, in words: carrier valleys stand at line angle
offset/ratio; symmetrical sampling reads at carrier peaks; a leg at line frequency turns with the polarity
that the sampler sees; currents of three phases are balanced and lag the positive sequence; a carrier period
of the ripple runs from peak to peak or from valley to valley, whichever shows more.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
TURN = 2.0 * np.pi
FINE = 12  # steps of Simpson's rule in a piece of up to two degrees
CONDUCTS = {
    "two-level": {"T1": {(1.0, 1)}, "D1": {(1.0, -1)}, "T2": {(0.0, -1)}, "D2": {(0.0, 1)}},
    "neutral-point clamped": {
        "T1": {(1.0, 1)}, "T2": {(1.0, 1), (0.5, 1)}, "T3": {(0.5, -1), (0.0, -1)}, "T4": {(0.0, -1)},
        "D1": {(1.0, -1)}, "D2": {(1.0, -1)}, "D3": {(0.0, 1)}, "D4": {(0.0, 1)},
        "D5": {(0.5, 1)}, "D6": {(0.5, -1)},
    },
    "T-type": {
        "T1": {(1.0, 1)}, "D1": {(1.0, -1)}, "T4": {(0.0, -1)}, "D4": {(0.0, 1)},
        "T2": {(0.5, 1)}, "D3": {(0.5, 1)}, "T3": {(0.5, -1)}, "D2": {(0.5, -1)},
    },
}  # fmt: skip

EXCHANGES = {
    "two-level": {(0.0, 1.0, 1): ("T1", "D2"), (0.0, 1.0, -1): ("T2", "D1")},
    "neutral-point clamped": {
        (0.5, 1.0, 1): ("T1", "D5"), (0.5, 1.0, -1): ("T3", "D1"), (0.0, 0.5, 1): ("T2", "D4"),
        (0.0, 0.5, -1): ("T4", "D6"), (0.0, 1.0, 1): ("T1 T2", "D3 D4"), (0.0, 1.0, -1): ("T3 T4", "D1 D2"),
    },
    "T-type": {
        (0.5, 1.0, 1): ("T1", "D3"), (0.5, 1.0, -1): ("T3", "D1"), (0.0, 0.5, 1): ("T2", "D4"),
        (0.0, 0.5, -1): ("T4", "D2"), (0.0, 1.0, 1): ("T1", "D4"), (0.0, 1.0, -1): ("T4", "D1"),
    },
}  # fmt: skip
"""Lower and upper level, sign of the outward current: the switch and the diode that exchange the current."""


def references(scheme: str, angle: Array, index: float, lag: float) -> Array:
    """References of all legs (leg, angle), between -1 and 1."""
    if scheme in ("bipolar", "unipolar", "phase disposition, two legs"):
        return index * np.array([np.sin(angle), -np.sin(angle)])
    if scheme == "phase disposition, one leg":
        return index * np.sin(angle)[None]
    if scheme == "one leg at line frequency":
        up = np.where(angle % TURN < np.pi, 1.0, -1.0)
        return np.array([2.0 * index * np.sin(angle) - up, -up])
    sines = np.array([np.sin(angle - k * TURN / 3.0) for k in range(3)])
    legs = index * sines
    if scheme in ("sine-triangle", "phase disposition, three legs"):
        return legs
    if scheme == "third harmonic one sixth":
        return legs + index / 6.0 * np.sin(3.0 * angle)
    if scheme in ("centred space vector", "phase disposition with common-mode injection"):
        return legs - 0.5 * (legs.max(0) + legs.min(0))
    seen = (
        angle
        if scheme == "discontinuous clamped at voltage peak"
        else angle - np.clip(lag, -np.pi / 6, np.pi / 6)
    )
    turned = np.array([np.sin(seen - k * TURN / 3.0) for k in range(3)])
    chosen = np.argmax(np.abs(turned), axis=0)[None]
    return legs + np.sign(np.take_along_axis(turned, chosen, 0)) - np.take_along_axis(legs, chosen, 0)


@dataclass(frozen=True)
class Case:
    """One operating point; scheme as `references` names it, or square, quasi-square or six-step."""

    scheme: str
    leg_type: str = "two-level"
    index: float = 0.8
    lag: float = 0.0
    ratio: int = 45
    ripple_unit: float = 0.0
    sampling: str = "natural"
    conduction: float = np.pi
    offset: float = 0.0

    @property
    def legs(self) -> int:
        if self.scheme == "phase disposition, one leg":
            return 1
        single = ("bipolar", "unipolar", "one leg at line frequency", "square wave", "quasi-square wave")
        return 2 if self.scheme in (*single, "phase disposition, two legs") else 3

    @property
    def line_switched(self) -> bool:
        return self.scheme in ("square wave", "quasi-square wave", "six-step")

    def _sampled(self, angle: Array) -> Array:
        """Angle at which the reference is read: itself, the last carrier peak, or the last peak or valley."""
        place = self._place(angle)
        if self.sampling == "symmetrical regular":
            place = np.floor(place - 0.5 + 1e-12) + 0.5
        elif self.sampling == "asymmetrical regular":
            place = np.floor(2.0 * place + 1e-12) / 2.0
        after = 0.0 if self.sampling == "natural" else 1e-9  # what a jump at the instant leads to counts
        return (place * TURN + self.offset) / self.ratio + after

    def _place(self, angle: Array) -> Array:
        """Angle in carrier periods, valleys at whole numbers."""
        return (angle * self.ratio - self.offset) / TURN

    def _over(self, leg: int, cell: int, angle: Array) -> Array:
        """Reference less carrier of one comparison."""
        slow = self.scheme == "one leg at line frequency" and leg == 1
        value = references(self.scheme, self._sampled(angle) % TURN, self.index, self.lag)[leg]
        triangle = np.abs((self._place(angle) + 0.5) % 1.0 - 0.5) * 4.0 - 1.0
        if slow:
            return value
        if self.leg_type != "two-level":
            triangle = 0.5 * (triangle + 1.0) - (1.0 if cell else 0.0)
        return value - (-triangle if self.scheme == "bipolar" and leg == 1 else triangle)

    @cached_property
    def edges(self) -> Array:
        """All switching angles of all legs with the ends of the line period."""
        if self.line_switched:
            return np.unique(
                np.concatenate([[0.0, TURN], *[(np.array(pair) % TURN) for pair in self._windows]])
            )
        jumps = np.arange(0, 24) * np.pi / 12.0
        if "following" in self.scheme:
            shift = np.clip(self.lag, -np.pi / 6, np.pi / 6)
            jumps = np.concatenate([jumps, (np.arange(12) * np.pi / 6.0 + shift) % TURN])
        corners = (np.arange(2 * self.ratio * 8) * np.pi / 8.0 + self.offset) / self.ratio % TURN
        grid = np.unique(np.concatenate([corners, jumps, [TURN]]))
        grid = grid[np.concatenate([[True], np.diff(grid) > 1e-11])]
        found = [np.array([0.0, TURN])]
        for leg in range(self.legs):
            for cell in range(1 if self.leg_type == "two-level" else 2):
                left, right = grid[:-1] + 1e-10, grid[1:] - 1e-10
                first = self._over(leg, cell, left) > 0.0
                inside = first != (self._over(leg, cell, right) > 0.0)
                low, high, start = left[inside], right[inside], first[inside]
                for _ in range(50):
                    middle = 0.5 * (low + high)
                    same = (self._over(leg, cell, middle) > 0.0) == start
                    low, high = np.where(same, middle, low), np.where(same, high, middle)
                across = (self._over(leg, cell, right[:-1]) > 0.0) != (self._over(leg, cell, left[1:]) > 0.0)
                found += [0.5 * (low + high), grid[1:-1][across]]
        every = np.sort(np.concatenate(found))
        return every[np.concatenate([[True], np.diff(every) > 1e-10])]

    @property
    def _windows(self) -> list[tuple[float, float]]:
        """Turn-on and turn-off angle of every line-switched leg."""
        if self.scheme == "six-step":
            return [(k * TURN / 3.0, k * TURN / 3.0 + np.pi) for k in range(3)]
        half = 0.5 * self.conduction if self.scheme == "quasi-square wave" else 0.5 * np.pi
        first, second = 0.5 * np.pi - half, 0.5 * np.pi + half
        return [(first, first + np.pi), (second, second + np.pi)]

    def level(self, leg: int, angle: Array) -> Array:
        """Level of a leg at angles that are no edges."""
        if self.line_switched:
            on, off = self._windows[leg]
            return (((angle - on) % TURN) < (off - on) % TURN + (TURN if off == on else 0.0)).astype(float)
        cells = 1 if self.leg_type == "two-level" else 2
        return np.mean([self._over(leg, cell, angle) > 0.0 for cell in range(cells)], axis=0)

    @cached_property
    def levels(self) -> Array:
        # off the middle, where carrier and reference of a synchronised scheme may just touch
        within = self.edges[:-1] + 0.4871 * np.diff(self.edges)
        return np.array([self.level(leg, within) for leg in range(self.legs)])

    def output(self, phase: int = 0) -> Array:
        """Voltage of a phase on every piece."""
        if self.legs == 3:
            return self.levels[phase] - self.levels.mean(0)
        return self.levels[0] - (self.levels[1] if self.legs == 2 else 0.5)

    @property
    def common(self) -> Array:
        return self.levels.mean(0) - 0.5

    def harmonic(self, pieces: Array, order: int) -> complex:
        """Complex peak of a staircase's harmonic by exact integration."""
        turned = np.exp(-1j * order * self.edges)
        return complex(np.sum(pieces * (turned[:-1] - turned[1:])) / (1j * order * np.pi))

    def mean_square(self, pieces: Array) -> float:
        """Of the alternating part."""
        width = np.diff(self.edges) / TURN
        return float(np.sum(width * pieces**2) - np.sum(width * pieces) ** 2)

    @cached_property
    def grid(self) -> tuple[Array, Array, NDArray[np.int64]]:
        """Points of Simpson's rule, their weights, and the piece of each."""
        widths = np.diff(self.edges)
        parts = np.maximum(np.ceil(widths / (np.pi / 90.0)).astype(int), 1)
        piece = np.repeat(np.arange(len(widths)), parts)
        place = np.arange(parts.sum()) - np.repeat(np.cumsum(parts) - parts, parts)
        span = (widths[piece] / parts[piece])[:, None]
        share = np.linspace(0.0, 1.0, FINE + 1)
        rule = np.where(np.arange(FINE + 1) % 2 == 1, 4.0, 2.0) / (3.0 * FINE)
        rule[[0, -1]] /= 2.0
        points = self.edges[piece][:, None] + (place[:, None] + share) * span
        return points.ravel(), (span * rule / TURN).ravel(), np.repeat(piece, FINE + 1)

    @cached_property
    def _ripple_parts(self) -> list[tuple[Array, complex, Array, float]]:
        """Of every phase: pieces without mean, fundamental, integral at the edges, mean of the integral."""
        found = []
        for phase in range(3 if self.legs == 3 else 1):
            pieces = self.output(phase)
            pieces = pieces - np.sum(pieces * np.diff(self.edges)) / TURN
            first = self.harmonic(pieces, 1)
            raw = np.concatenate([[0.0], np.cumsum(pieces * np.diff(self.edges))])
            points, weights, where = self.grid
            mean = np.sum(self._integral(pieces, first, raw, points, where) * weights)
            found.append((pieces, first, raw, float(mean)))
        return found

    def _integral(
        self, pieces: Array, first: complex, raw: Array, points: Array, where: NDArray[np.int64]
    ) -> Array:
        smooth = np.real(first * (np.exp(1j * points) - 1.0) / 1j)
        return raw[where] + pieces[where] * (points - self.edges[where]) - smooth

    def ripple(self, phase: int, angle: Array, piece: NDArray[np.int64]) -> Array:
        """Ripple current of a phase, zero mean."""
        *parts, mean = self._ripple_parts[phase]
        return self.ripple_unit * self.ratio / TURN * (self._integral(*parts, angle, piece) - mean)

    def current(self, leg: int, angle: Array, piece: NDArray[np.int64]) -> Array:
        """Current out of a leg; balanced fundamentals lag the positive sequence of the bridge's."""
        phase = leg if self.legs == 3 else 0
        sign = -1.0 if self.legs == 2 and leg == 1 else 1.0
        smooth = np.sin(angle + self._lead - self.lag - phase * TURN / 3.0)
        return sign * (smooth + self.ripple(phase, angle, piece))

    @cached_property
    def _lead(self) -> float:
        """Angle of the fundamental voltage before sin(theta)."""
        phases = range(3 if self.legs == 3 else 1)
        first = sum(self.harmonic(self.output(k), 1) * np.exp(1j * k * TURN / 3.0) for k in phases)
        return float(np.angle(1j * first))

    def ripple_rms(self) -> float:
        points, weights, piece = self.grid
        return float(np.sqrt(np.sum(self.ripple(0, points, piece) ** 2 * weights)))

    @cached_property
    def _course(self) -> tuple[Array, Array]:
        """Angles and ripple of phase one at all points of the grid and all edges, ascending."""
        points, _, piece = self.grid
        every = np.concatenate([points, self.edges[:-1]])
        where = np.concatenate([piece, np.arange(len(self.edges) - 1)])
        order = np.argsort(every, kind="stable")
        return every[order], self.ripple(0, every[order], where[order])

    def ripple_peak(self) -> float:
        return float(np.abs(self._course[1]).max())

    def local_ripple(self, middle: float) -> float:
        """Peak to peak within half a carrier period on either side of an angle."""
        angle, value = self._course
        ends = middle % TURN + np.array([-1.0, 1.0]) * np.pi / self.ratio
        at_ends = self.ripple(0, ends % TURN, np.searchsorted(self.edges, ends % TURN, side="right") - 1)
        inside = [value[slice(*np.searchsorted(angle, ends + turn))] for turn in (-TURN, 0.0, TURN)]
        return float(np.ptp(np.concatenate([*inside, at_ends])))

    def ripple_peak_to_peak(self) -> float:
        """Greatest within a carrier period; over the line period where nothing switches at the carrier
        frequency.
        """
        if self.line_switched:
            return float(np.ptp(self._course[1]))
        middles = (np.arange(2 * self.ratio) * np.pi + self.offset) / self.ratio
        return max(self.local_ripple(float(middle)) for middle in middles)

    def positions(self, leg: int = 0) -> dict[str, tuple[float, float]]:
        """Average and rms current of every position of a leg."""
        points, weights, piece = self.grid
        current, level = self.current(leg, points, piece), self.levels[leg][piece]
        found = {}
        for name, pairs in CONDUCTS[self.leg_type].items():
            carried = sum(
                np.abs(current) * ((level == step) & (np.sign(current) == sign)) for step, sign in pairs
            )
            found[name] = float(np.sum(carried * weights)), float(np.sqrt(np.sum(carried**2 * weights)))
        return found

    def _steps(self, leg: int) -> tuple[Array, Array, Array]:
        """Levels before and after every level change of a leg, and its current there."""
        level = self.levels[leg]
        kept = np.flatnonzero(np.diff(self.edges) > 1e-7)  # shorter: touches of carrier and reference
        before, after = np.roll(level[kept], 1), level[kept]
        changed = before != after
        pieces = kept[changed]
        return before[changed], after[changed], self.current(leg, self.edges[pieces], pieces)

    def commutated(self, leg: int = 0) -> tuple[int, int, float, float]:
        """Rising level changes, hard turn-ons, sums of currents turned on hard and turned off; a jump over
        two levels counts twice.
        """
        before, after, current = self._steps(leg)
        size = np.rint(np.abs(after - before) * (1 if self.leg_type == "two-level" else 2))
        rising = after > before
        hard = np.where(rising, current > 0.0, current < 0.0)
        magnitude = np.abs(current) * size
        return (
            int(np.sum(size[rising])), int(np.sum(size[hard])), float(magnitude[hard].sum()),
            float(magnitude[~hard].sum()),
        )  # fmt: skip

    def taken_over(self, leg: int = 0) -> dict[str, tuple[int, float, int, float]]:
        """Times and currents with which every position takes over, and gives up, a leg's current."""
        counts = {name: [0, 0.0, 0, 0.0] for name in CONDUCTS[self.leg_type]}
        for before, after, current in zip(*self._steps(leg), strict=True):
            sign = 1 if current > 0.0 else -1
            switches, diodes = EXCHANGES[self.leg_type][(min(before, after), max(before, after), sign)]
            hard = (after > before) == (sign > 0)
            for names, takes in ((switches, hard), (diodes, not hard)):
                for name in names.split():
                    counts[name][0 if takes else 2] += 1
                    counts[name][1 if takes else 3] += abs(current)
        return {name: (int(one[0]), one[1], int(one[2]), one[3]) for name, one in counts.items()}

    def rails(self) -> dict[str, float]:
        """Upper rail: mean, rms about it, its double-frequency part and the rest; neutral: rms and peak of
        its third harmonic.
        """
        points, weights, piece = self.grid
        currents = np.array([self.current(leg, points, piece) for leg in range(self.legs)])
        rail = np.sum(currents * (self.levels[:, piece] == 1.0), axis=0)
        neutral = np.sum(currents * (self.levels[:, piece] == 0.5), axis=0)
        mean = float(np.sum(rail * weights))
        square = max(float(np.sum(rail**2 * weights)) - mean**2, 0.0)
        double = abs(2.0 * np.sum(rail * weights * np.exp(-2j * points))) / np.sqrt(2.0)
        return {
            "mean": mean,
            "capacitor_rms": float(np.sqrt(square)),
            "double_frequency_rms": float(double),
            "switching_rms": float(np.sqrt(max(square - double**2, 0.0))),
            "neutral_rms": float(np.sqrt(np.sum(neutral**2 * weights))),
            "neutral_third": float(abs(2.0 * np.sum(neutral * weights * np.exp(-3j * points)))),
        }
