"""Closed loops of a periodic flux in straight pieces: minor loops split from the major one.

The loops are those of rainflow counting (ASTM E1049-85, 5.4.5) of a course that begins at its lowest point.
They are found as intervals of time, all points at once: a loop begins where the flux turns back and ends
where it comes by that value again.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
LEAST_SWING = 1e-9  # loops smaller than this share of V_dc T_s are none: rounding of touching corners


@dataclass(frozen=True)
class ClosedLoops:
    """Loops of a population of courses; leading axes are any, pieces in the order of `slope`.

    Attributes:
        slope: of each piece (..., pieces) [V_dc].
        swing: peak to peak of each loop, the major one first (..., loops) [V_dc T_s].
        duration: time that a piece spends in a loop (..., pieces, loops) [T_s].
    """

    slope: Array
    swing: Array
    duration: Array

    def loss_shape(self, alpha: float, beta: float) -> Array:
        """Sum over loops of swing^(beta - alpha) times the integral of |slope|^alpha, the waveform's part of
        the iGSE (...) [-].

        Source: Venkatachalam, Sullivan, Abdallah, Tacca (2002).
        """
        rates = np.abs(self.slope) ** alpha
        swings = np.maximum(self.swing, LEAST_SWING) ** (beta - alpha)
        return np.einsum("...j,...jl,...l->...", rates, self.duration, swings, optimize=True)


def closed_loops(flux: Array, steps: Array, slope: Array) -> ClosedLoops:
    """Split courses into closed loops.

    Args:
        flux: at the bounds of the pieces, last equal to first (..., pieces + 1) [V_dc T_s].
        steps: lengths of the pieces (..., pieces) [T_s].
        slope: their slopes (..., pieces) [V_dc].
    """
    count = steps.shape[-1]
    begin = np.argmin(flux[..., :-1], axis=-1)[..., None]
    order = (begin + np.arange(count)) % count
    corner = np.take_along_axis(flux, np.concatenate([order, begin], axis=-1), axis=-1)
    steps, slope = (np.take_along_axis(part, order, axis=-1) for part in (steps, slope))
    major = np.ptp(corner, axis=-1)
    found = [_loop_from(corner, place) for place in range(1, count)]
    swing = np.stack([part for part, _ in found], axis=-1)
    covered = np.stack([part for _, part in found], axis=-1) * steps[..., None]
    kept = max(int((swing > 0.0).sum(-1).max()), 1)
    # loops first, in the order of their beginnings
    chosen = np.argsort(swing <= 0.0, axis=-1, kind="stable")[..., :kept]
    swing = np.take_along_axis(swing, chosen, axis=-1)
    covered = np.take_along_axis(covered, chosen[..., None, :], axis=-1)
    return ClosedLoops(slope, np.concatenate([major[..., None], swing], axis=-1), _own(steps, covered))


def _loop_from(corner: Array, place: int) -> tuple[Array, Array]:
    """Swing of the loop that begins at a corner, 0 where none does, and the share of each piece in it.

    The course turns back at the corner; it closes a loop if it comes by the corner's value again, and if
    before the corner it came from beyond the loop's far end without passing the corner's value. Of equal
    values the later one counts as the higher, the last of all as the lowest.
    """
    falling = (corner[..., place] > corner[..., place + 1])[..., None]
    course = np.where(falling, corner, -corner)  # a loop hangs below the corner
    falling, level = falling[..., 0], course[..., place]
    pieces = corner.shape[-1] - 1
    share = np.zeros((*corner.shape[:-1], pieces))
    open_still = np.ones_like(falling)
    far = level
    for piece in range(place, pieces):
        start, end = course[..., piece], course[..., piece + 1]
        back = (end >= level) if piece == pieces - 1 else np.where(falling, end >= level, end > level)
        closing = open_still & back
        part = np.where(closing, (level - start) / np.where(closing & (end > start), end - start, 1.0), 1.0)
        share[..., piece] = np.where(open_still, part, 0.0)
        far = np.where(open_still & ~closing, np.minimum(far, end), far)
        open_still = open_still & ~closing
    before = np.full(corner.shape[:-1], np.inf)
    free = np.ones_like(falling)
    for earlier in range(place - 1, -1, -1):
        free &= np.where(falling, course[..., earlier] <= level, course[..., earlier] < level)
        before = np.where(free, np.minimum(before, course[..., earlier]), before)
    closed = ~open_still & np.where(falling, before <= far, before < far) & (level - far > LEAST_SWING)
    return np.where(closed, level - far, 0.0), np.where(closed[..., None], share, 0.0)


def _own(steps: Array, covered: Array) -> Array:
    """Time that each piece spends in each loop itself, not in one inside it; the major loop first.

    Args:
        covered: time that each piece spends between beginning and end of each loop (..., pieces, loops), in
            the order of beginnings. Loops lie inside one another or apart.
    """
    whole = np.concatenate([steps[..., None], covered], axis=-1)
    own = whole.copy()
    for inner in range(1, whole.shape[-1]):
        part = whole[..., inner]
        taken = np.zeros(part.shape[:-1], dtype=bool)
        for outer in range(inner - 1, -1, -1):
            around = np.all(whole[..., outer] >= part - LEAST_SWING, axis=-1) & ~taken
            own[..., outer] -= np.where(around[..., None], part, 0.0)
            taken |= around
    return np.maximum(own, 0.0)
