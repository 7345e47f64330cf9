"""Legs over one line period: which level each leg stands at, between exact switching angles.

A two-level leg is one cell (upper switch on or off); a three-level leg is two cells of half the dc voltage
each, compared with the upper and the lower of two carriers in phase (phase disposition; Carrara et al. 1992):
the leg's level is the mean of its cells. Angles are found for an integer pulse number, the carrier's valley
(centre of the on-state at positive reference) at the line voltage's zero plus an offset.

Sampling: natural (the reference runs on), symmetrical regular (held from one carrier peak to the next) or
asymmetrical regular (held over each half carrier period); Holmes & Lipo (2003), ch. 3.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Reference = Callable[[Array], Array]
NATURAL, SYMMETRICAL, ASYMMETRICAL = "natural", "symmetrical regular", "asymmetrical regular"
SAMPLINGS = (NATURAL, SYMMETRICAL, ASYMMETRICAL)
BISECTIONS = 48
STEEPEST = 4.0  # slope that no reference of a cell exceeds between its jumps [1/rad]
PROBES = 512  # sub-intervals of half a carrier period where the carrier is not steeper than that
JUMP_GRID = 1440  # cells of the line period searched for jumps of the reference
JUMP = 0.02  # change within such a cell that no smooth reference makes
CONVERGED = 1e-13  # of a crossing: difference of reference and carrier [-], or bracket [rad]
FULL_TURN = 2.0 * np.pi
ROUNDING = 1e-11  # of a carrier period
TOUCH = 1e-7  # rad between two switchings that are none
AFTER = 1e-9  # rad after a sampling instant: where the reference jumps at it, the value after the jump counts


@dataclass(frozen=True)
class Cell:
    """One on/off cell of a leg over a line period.

    Attributes:
        angles: switching angles, ascending in [0, 2 pi) [rad].
        starts_on: whether the cell is on at angle 0.
    """

    angles: Array
    starts_on: bool

    def on(self, angle: Array) -> NDArray[np.bool_]:
        """Whether the cell is on at angles in [0, 2 pi)."""
        passed = np.searchsorted(self.angles, angle, side="right")
        return (passed % 2 == 1) ^ self.starts_on

    @property
    def turn_on_angles(self) -> Array:
        """Angles at which the cell turns on [rad]."""
        return self.angles[1::2] if self.starts_on else self.angles[0::2]

    @property
    def turn_off_angles(self) -> Array:
        """Angles at which the cell turns off [rad]."""
        return self.angles[0::2] if self.starts_on else self.angles[1::2]


def carrier(angle: Array, pulse_number: int, offset: float) -> Array:
    """Triangular carrier in [-1, 1] with its valley at angle `offset`/pulse_number [-]."""
    place = np.mod((pulse_number * angle - offset) / FULL_TURN, 1.0)
    return 4.0 * np.minimum(place, 1.0 - place) - 1.0


def held(reference: Reference, pulse_number: int, offset: float, sampling: str) -> Reference:
    """The reference as a regular sampler holds it; itself for natural sampling.

    Symmetrical: read at each carrier peak and held to the next one; asymmetrical: read at each peak and each
    valley and held to the next of either.

    Raises:
        ValueError: for an unknown sampling.
    """
    if sampling not in SAMPLINGS:
        raise ValueError(f"sampling {sampling!r}: expected one of {', '.join(SAMPLINGS)}")
    if sampling == NATURAL:
        return reference

    def sampled(angle: Array) -> Array:
        steps, shift = _sampler(sampling)
        place = (pulse_number * angle - offset) / FULL_TURN - shift
        instant = (np.floor(place * steps + ROUNDING) / steps + shift) * FULL_TURN + offset
        return reference(np.mod(instant / pulse_number + AFTER, FULL_TURN))

    return sampled


def _sampler(sampling: str) -> tuple[float, float]:
    """Readings per carrier period, and the first one's place after a valley [carrier periods]."""
    return (1.0, 0.5) if sampling == SYMMETRICAL else (2.0, 0.0)


def first_seen(angle: float, pulse_number: int, offset: float, sampling: str) -> float:
    """Angle at which a sampler first sees what happens at an angle; that angle itself if sampling is natural
    [rad].
    """
    if sampling == NATURAL:
        return angle
    steps, shift = _sampler(sampling)
    place = (pulse_number * (angle - AFTER) - offset) / FULL_TURN - shift
    return float(((np.ceil(place * steps - ROUNDING) / steps + shift) * FULL_TURN + offset) / pulse_number)


def pulse_width_cell(
    reference: Reference,
    pulse_number: int,
    *,
    jumps: Array,
    offset: float = 0.0,
    sampling: str = NATURAL,
    inverted: bool = False,
) -> Cell:
    """Cell that is on while its reference exceeds the carrier.

    Args:
        reference: angle [rad] -> reference in [-1, 1] [-].
        pulse_number: carrier periods in a line period, a whole number [-].
        jumps: angles at which the reference jumps, as of `jumps_of` [rad].
        offset: carrier angle of the valley at line angle 0 [rad].
        sampling: one of SAMPLINGS.
        inverted: compare with the inverted carrier.

    Returns:
        The cell with its exact switching angles. Pulses and gaps below 1e-7 rad are left out: carrier and
        reference only touch there.
    """
    shown = held(reference, pulse_number, offset, sampling)
    sign = -1.0 if inverted else 1.0

    def excess(angle: Array) -> Array:
        return shown(np.mod(angle, FULL_TURN)) - sign * carrier(angle, pulse_number, offset)

    # where the carrier is steeper than any reference they cross once at most between its corners
    probes = 1 if 2.0 * pulse_number / np.pi > STEEPEST else PROBES
    count = 2 * pulse_number * probes
    bounds = np.mod((offset / pulse_number) + FULL_TURN * np.arange(count) / count, FULL_TURN)
    bounds = np.unique(np.concatenate([bounds, jumps]))
    bounds = np.append(bounds, bounds[0] + FULL_TURN)
    inside = 1e-8 / pulse_number  # far more than ROUNDING of a carrier period, far less than a pulse
    left, right = bounds[:-1] + inside, bounds[1:] - inside
    start, end = excess(left), excess(right)
    crossing = (start > 0.0) != (end > 0.0)
    crossings = _crossings(excess, left[crossing], right[crossing], start[crossing], end[crossing])
    switched = bounds[1:][(end > 0.0) != np.roll(start > 0.0, -1)]
    angles = _without_touches(np.sort(np.mod(np.concatenate([crossings, switched]), FULL_TURN)))
    before = (angles[0] if len(angles) else 0.0) - inside
    return Cell(angles, bool(excess(np.array([before]))[0] > 0.0))


def _crossings(excess: Reference, old: Array, new: Array, at_old: Array, at_new: Array) -> Array:
    """Angles between `old` and `new` at which the excess changes its sign, by false position with the staying
    end's value halved (Dowell & Jarratt 1971).
    """
    for _ in range(2 * BISECTIONS):
        if not np.any((np.abs(at_new) > CONVERGED) & (np.abs(new - old) > CONVERGED)):
            break
        between = new - at_new * (new - old) / (at_new - at_old)
        found = excess(between)
        crossed = (found > 0.0) != (at_new > 0.0)
        old, at_old = np.where(crossed, new, old), np.where(crossed, at_new, 0.5 * at_old)
        new, at_new = between, found
    return new


def _without_touches(angles: Array) -> Array:
    """Switching angles without pairs that bound no time: carrier and reference only touch there."""
    if len(angles) < 2 or min(np.diff(angles).min(), angles[0] + FULL_TURN - angles[-1]) >= TOUCH:
        return angles
    kept: list[float] = []
    for angle in angles.tolist():
        if kept and angle - kept[-1] < TOUCH:
            kept.pop()
        else:
            kept.append(angle)
    if len(kept) > 1 and kept[0] + FULL_TURN - kept[-1] < TOUCH:
        kept = kept[1:-1]
    return np.array(kept)


def jumps_of(references: Reference) -> Array:
    """Angles at which any leg's reference jumps (clamped schemes, a change of polarity), with 0 and pi [rad].

    Args:
        references: angle [rad] -> references of all legs, legs on the last axis [-].
    """
    bounds = FULL_TURN * np.arange(JUMP_GRID + 1) / JUMP_GRID
    values = references(np.mod(bounds, FULL_TURN))
    jumping = np.abs(np.diff(values, axis=0)).max(-1) > JUMP
    low, high = bounds[:-1][jumping], bounds[1:][jumping]
    for _ in range(BISECTIONS if len(low) else 0):
        middle = 0.5 * (low + high)
        nearer = np.abs(references(middle) - references(low)).max(-1) > 0.5 * JUMP
        low, high = np.where(nearer, low, middle), np.where(nearer, middle, high)
    return np.concatenate([0.5 * (low + high), [0.0, np.pi]])


def line_switched_cell(turn_on: float, turn_off: float) -> Cell:
    """Cell that turns on and off once a line period, at the given angles [rad]."""
    angles = np.sort(np.mod([turn_on, turn_off], FULL_TURN))
    return Cell(angles, bool(np.mod(turn_off, FULL_TURN) < np.mod(turn_on, FULL_TURN)))
