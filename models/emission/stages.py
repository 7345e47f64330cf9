"""Size of filter stages: the inductance that one or two L-C stages need for an attenuation."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]


def stage_inductance(excess_db: Array, omega: Array, capacitance: Array, count: int, left: Array) -> Array:
    """Inductance of each of `count` equal L-C stages so that no line exceeds its limit [H].

    Stages fed by a large impedance and loaded by a small one attenuate by A = x - 1, two in a chain by A =
    x^2 - 3 x + 1, with x = omega^2 L C of each (ladder network, by circuit laws; the use of the asymptote is
    common practice: Raggl, Nussbaumer, Kolar 2009). Lines below the limit count as well: there the stages'
    resonance may lift a line up to the limit, not above.

    Args:
        excess_db: level over limit less margin at the frequencies on the last axis (n, k) [dB].
        omega: 2 pi f (n, k) [rad/s].
        capacitance: of all stages together (n,) [F].
        count: stages [-].
        left: inductance at the frequency over the nominal one (n, k) [-].

    Returns:
        (n,) [H]; 0 where nothing exceeds.

    Raises:
        ValueError: for other counts than one and two.
    """
    attenuation = 10.0 ** (excess_db / 20.0)
    if count == 1:
        x = 1.0 + attenuation
    elif count == 2:
        x = 0.5 * (3.0 + np.sqrt(5.0 + 4.0 * attenuation))
    else:
        raise ValueError(f"{count} stages: expected 1 or 2")
    needed = x / (omega * omega * capacitance[:, None] / count * left)
    return np.where((excess_db > 0.0).any(-1), needed.max(-1), 0.0)
