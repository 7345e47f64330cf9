"""Reluctance of the core: air gap with fringing, distributed gap of powder with roll-off, saturation."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.constants import mu_0

Array = NDArray[np.float64]
COUNT_STEPS, GAP_STEPS = 5, 3


def fringing_factor(gap: Array, area: Array, window_breadth: Array) -> Array:
    """Gap permeance over that of the ideal gap, F = 1 + (l_g/sqrt A) ln(2 G/l_g) [-].

    Args:
        gap: length of the gap, of one section where it is split [m].
        area: core area [m2].
        window_breadth: breadth G of the winding beside the gap, of a section its share of it [m].

    Source: McLyman, Transformer and Inductor Design Handbook, ch. 8.
    """
    safe = np.maximum(gap, 1e-9)
    return 1.0 + safe / np.sqrt(area) * np.log(np.maximum(2.0 * window_breadth / safe, 1.0))


def gapped_inductance(
    turns: Array, gap: Array, area: Array, path: Array, permeability: Array, breadth: Array, sections: Array
) -> Array:
    """Inductance of a core with an air gap in equal sections, with the fringing of each [H].

    Args:
        turns: [-].
        gap: of all sections together [m]; area [m2]; path: effective length [m]; permeability: of the
            ungapped set [-].
        breadth: of the windings on all legs together [m].
        sections: number of sections on all legs together, evenly along the windings [-].
    """
    fringing = fringing_factor(gap / sections, area, breadth / sections)
    gap_reluctance = gap / (mu_0 * area * fringing)
    return turns**2 / (gap_reluctance + path / (mu_0 * permeability * area))


def gap_for_inductance(
    turns: Array,
    inductance: Array,
    area: Array,
    path: Array,
    permeability: Array,
    breadth: Array,
    legs: Array,
    largest_section: float,
) -> tuple[Array, Array]:
    """Air gap that gives the inductance, fringing included, and the sections it is split into.

    Args:
        turns, inductance, area, path, permeability, breadth: as in `gapped_inductance`.
        legs: that have a gap each at least [-].
        largest_section: greatest length of one section [m].

    Returns:
        Gap of all sections together, negative where even no gap gives too little [m], and their number [-].
        Solved by fixed-point steps of l_g = F(l_g) l_ideal, in the first of which the number may grow.
    """
    ideal = mu_0 * area * turns**2 / inductance - path / permeability
    start = np.maximum(ideal, 0.0)
    gap, per_leg = start, np.ones_like(ideal)
    for step in range(COUNT_STEPS + GAP_STEPS):
        if step < COUNT_STEPS:
            per_leg = np.maximum(per_leg, np.ceil(gap / (legs * largest_section) - 1e-9))
        sections = per_leg * legs
        gap = np.minimum(start * fringing_factor(gap / sections, area, breadth / sections), breadth)
    return np.where(ideal >= 0.0, gap, ideal), per_leg * legs


def powder_permeability_share(field: Array, half_field: Array, exponent: Array) -> Array:
    """Permeability of a powder core under bias over its initial value, 1/(1 + (H/H_50)^c) [-].

    Args:
        field: magnetising force N I/l_e [A/m].
        half_field: force at which half the permeability is left [A/m]; infinite for cores without roll-off.
        exponent: c [-].

    Source: the fit in common use for powder cores (percent = 1/(a + b H^c)).
    """
    return 1.0 / (1.0 + (field / half_field) ** exponent)


def powder_inductance(
    turns: Array,
    current: Array,
    area: Array,
    path: Array,
    permeability: Array,
    half_field: Array,
    exponent: Array,
) -> Array:
    """Inductance of a powder core at a current [H]; arguments as above, `current` [A]."""
    left = powder_permeability_share(turns * current / path, half_field, exponent)
    return mu_0 * permeability * left * turns**2 * area / path
