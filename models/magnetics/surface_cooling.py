"""Temperature rise of a wound part from its loss and surface."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
LEAST_FLOW = 1e-30  # W/cm2, keeps the logarithm finite where there is no loss
SURFACE_OF_BOX = 6.4  # surface over volume^(2/3): a cube has 6, boxes of wound cores 6.2 to 6.8 (geometry)


def box_surface(volume: Array) -> Array:
    """Outer surface of a wound part from its boxed volume [m3], [m2]."""
    return SURFACE_OF_BOX * volume ** (2.0 / 3.0)


def still_air_rise(loss: Array, surface: Array) -> Array:
    """Temperature rise in still air, convection and radiation together [K].

    Args:
        loss: [W].
        surface: [m2].

    Source: McLyman, Transformer and Inductor Design Handbook: 450 psi^0.826 with psi in W/cm2.
    """
    flow = np.maximum(loss / (surface * 1e4), LEAST_FLOW)
    return 450.0 * np.exp(0.826 * np.log(flow))  # a power by logarithms costs half of what pow costs
