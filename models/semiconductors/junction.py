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
STEPS = 10


@dataclass(frozen=True)
class FixedPoint:
    """Temperatures at the fixed point [degC] and whether each was reached within TOLERANCE_K [-]."""

    temperature: Array
    converged: NDArray[np.bool_]


def solve(temperatures_from: Callable[[Array], Array], start: Array, steps: int = STEPS) -> FixedPoint:
    """Solve T = g(T) where the elements of a candidate couple weakly and candidates not at all.

    Args:
        temperatures_from: g, junction temperatures that the losses at the given temperatures cause [degC].
        start: first guess (..., n, p), candidates on the axis before the last [degC].
        steps: greatest number of evaluations of g [-].

    Returns:
        The fixed point; temperatures are clipped to RUNAWAY_C. A candidate rests once it is settled, so that
        its result does not depend on the others it is solved with.
    """
    previous = start
    previous_image = np.minimum(temperatures_from(previous), RUNAWAY_C)
    current = image = previous_image
    residual = np.full_like(current, np.inf)
    resting = np.zeros((current.shape[-2], 1), dtype=bool)
    others = (*range(current.ndim - 2), current.ndim - 1)
    for _ in range(steps - 1):
        latest = np.minimum(temperatures_from(current), RUNAWAY_C)
        image = np.where(resting, image, latest)
        residual = np.where(resting, residual, np.abs(image - current))
        resting = np.asarray((residual < 0.2 * TOLERANCE_K).all(axis=others))[:, None]
        if resting.all():
            break
        step = current - previous
        moved = np.abs(step) > 1e-9
        slope = np.where(moved, np.clip((image - previous_image) / np.where(moved, step, 1.0), 0.0, 0.9), 0.0)
        previous, previous_image = current, image
        current = np.where(
            resting, current, np.minimum(current + (image - current) / (1.0 - slope), RUNAWAY_C)
        )
    return FixedPoint(image, (residual < TOLERANCE_K) & (image < RUNAWAY_C - 1.0))


def junction_to_case(device: object, die_area: Array) -> Array:
    """Thermal resistance junction to case of one die, R = r/A_ref (A_ref/A)^k [K/W].

    Args:
        device: catalogue fields.
        die_area: area of that die [m2].
    """
    reference = device.junction_case_reference_area_m2  # type: ignore[attr-defined]
    base = device.junction_case_k_m2_per_w / reference  # type: ignore[attr-defined]
    return base * (reference / die_area) ** device.junction_case_exponent  # type: ignore[attr-defined]
