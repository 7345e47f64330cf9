"""Reluctance of the core: air gap with fringing, distributed gap of powder with roll-off, saturation."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray
from scipy.constants import mu_0

Array = NDArray[np.float64]


def fringing_factor(gap: Array, area: Array, window_breadth: Array) -> Array:
    """Gap permeance over that of the ideal gap, F = 1 + (l_g/sqrt A) ln(2 G/l_g) [-].

    Args:
        gap: length of the gap [m].
        area: core area [m2].
        window_breadth: breadth G of the winding beside the gap [m].

    Source: McLyman, Transformer and Inductor Design Handbook, ch. 8.
    """
    safe = np.maximum(gap, 1e-9)
    return 1.0 + safe / np.sqrt(area) * np.log(np.maximum(2.0 * window_breadth / safe, 1.0))


def gapped_inductance(
    turns: Array, gap: Array, area: Array, path: Array, permeability: Array, breadth: Array
) -> Array:
    """Inductance of a core with an air gap of one limb, with fringing [H].

    Args:
        turns: [-].
        gap: [m]; area [m2]; path: effective length [m]; permeability: of the ungapped set [-]; breadth:
            window [m].
    """
    gap_reluctance = gap / (mu_0 * area * fringing_factor(gap, area, breadth))
    return turns**2 / (gap_reluctance + path / (mu_0 * permeability * area))


def gap_for_inductance(
    turns: Array, inductance: Array, area: Array, path: Array, permeability: Array, breadth: Array
) -> Array:
    """Air gap that gives the inductance, fringing included; negative where even no gap gives too little [m].

    Arguments as in `gapped_inductance`; solved by fixed-point steps of l_g = F(l_g) l_ideal.
    """
    ideal = mu_0 * area * turns**2 / inductance - path / permeability
    gap = np.maximum(ideal, 0.0)
    for _ in range(5):
        gap = np.minimum(np.maximum(ideal, 0.0) * fringing_factor(gap, area, breadth), breadth)
    return np.where(ideal >= 0.0, gap, ideal)


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
