"""Electro-thermal fixed point: losses at the junction temperature, junction temperature from the losses.

Solved for all candidates, load points and positions at once by fixed-point steps with element-wise secant
acceleration. A candidate whose losses grow faster than its cooling removes them has no fixed point below
RUNAWAY_C: it is reported as thermal runaway, never as NaN.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
RUNAWAY_C = 260.0
TOLERANCE_K = 0.1
SETTLED_K = 0.02  # change in a step below which a candidate rests
STEPS = 10


@dataclass(frozen=True)
class FixedPoint:
    """Temperatures at the fixed point [degC] and whether each was reached within TOLERANCE_K [-]."""

    temperature: Array
    converged: NDArray[np.bool_]


Temperatures = Callable[[Array], Array]


def solve(
    temperatures_from: Temperatures,
    start: Array,
    steps: int = STEPS,
    narrowed: Callable[[NDArray[np.int64]], Temperatures] | None = None,
) -> FixedPoint:
    """Solve T = g(T) where the elements of a candidate couple weakly and candidates not at all.

    Args:
        temperatures_from: g, junction temperatures that the losses at the given temperatures cause [degC].
        start: first guess (..., n, p), candidates on the axis before the last [degC].
        steps: greatest number of evaluations of g [-].
        narrowed: rows -> g of those candidates alone; with it the few that settle late are solved apart.

    Returns:
        The fixed point; temperatures are clipped to RUNAWAY_C. A candidate rests once it is settled, so that
        its result does not depend on the others it is solved with.
    """
    final, misses = start.copy(), np.full(start.shape, np.inf)
    rows, law = np.arange(start.shape[-2]), temperatures_from
    previous = start
    previous_image = np.minimum(law(previous), RUNAWAY_C)
    current = previous_image
    others = (*range(start.ndim - 2), start.ndim - 1)
    moving = np.ones(len(rows), dtype=bool)
    for _ in range(steps - 1):
        image = np.minimum(law(current), RUNAWAY_C)
        miss = np.abs(image - current)
        final[..., rows, :] = np.where(moving[:, None], image, final[..., rows, :])
        misses[..., rows, :] = np.where(moving[:, None], miss, misses[..., rows, :])
        moving &= np.asarray((miss >= SETTLED_K).any(axis=others))
        if not moving.any():
            break
        current, previous, previous_image = _next(current, image, previous, previous_image), current, image
        if narrowed is not None and not moving.all():
            rows = rows[moving]
            law = narrowed(rows)
            kept = (part[..., moving, :] for part in (current, previous, previous_image))
            current, previous, previous_image = kept
            moving = moving[moving]
    return FixedPoint(final, (misses < TOLERANCE_K) & (final < RUNAWAY_C - 1.0))


def _next(current: Array, image: Array, previous: Array, previous_image: Array) -> Array:
    """Element-wise secant step, with a slope between 0 and 0.9 [degC]."""
    step = current - previous
    moved = np.abs(step) > 1e-9
    slope = np.where(moved, np.clip((image - previous_image) / np.where(moved, step, 1.0), 0.0, 0.9), 0.0)
    return np.minimum(current + (image - current) / (1.0 - slope), RUNAWAY_C)


def junction_to_case(device: object, die_area: Array) -> Array:
    """Thermal resistance junction to case of one die, R = r/A_ref (A_ref/A)^k [K/W].

    Args:
        device: catalogue fields.
        die_area: area of that die [m2].
    """
    reference = device.junction_case_reference_area_m2  # type: ignore[attr-defined]
    base = device.junction_case_k_m2_per_w / reference  # type: ignore[attr-defined]
    return base * (reference / die_area) ** device.junction_case_exponent  # type: ignore[attr-defined]
