"""Loss of the field that fringes from an air gap, in the winding beside it and in tapes of wound cores."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
TAPE_GAP_LOSS = 0.0388e4  # W s/(m2 T2), of cut cores with two coils; McLyman's 0.0388 with cm, from memory


def _decay(distance: Array, pitch: Array) -> Array:
    """Exponent 4 pi c/P of the square of the slowest field component at a distance from the gaps [-]."""
    return 4.0 * np.pi * distance / pitch


def field_share(clearance: Array, height: Array, pitch: Array) -> Array:
    """Mean square of the fringing field over that of the field across the layers, over the winding [-].

    The gaps of a leg, mirrored in the yokes, stand in the pitch P. Their magnetic potential along the winding
    has components of the wave lengths P/k, each as strong as the even field's own, which fall off with
    exp(-2 pi k x/P) into the window; narrow gaps. The even field rises linearly across the layers. The sum
    over k is closed: 3 P/(pi h) ln[(1 - exp(-4 pi (c + h)/P))/(1 - exp(-4 pi c/P))].

    Args:
        clearance: c, from the leg to the winding [m].
        height: h, of the winding across its layers [m].
        pitch: P, of the gap's sections along the leg [m].

    Source: field of quasi-distributed gaps after Hu and Sullivan (1998), strand loss by the mean square field
        after Sullivan (1999).
    """
    near, far = _decay(clearance, pitch), _decay(clearance + height, pitch)
    spread = np.log(np.expm1(-far) / np.expm1(-near))
    return 3.0 * pitch / (np.pi * height) * spread


def shield_share(clearance: Array, pitch: Array) -> Array:
    """Loss of the currents that shield a foil winding from the fringing field: over the dc loss, over turns
    times foil thickness over the depth that these currents flow in [-].

    A pack of foils lets no field through its breadth, so that its inner face carries the tangential field of
    each component of `field_share`, sech(2 pi k c/P) of it. Summed up the loss is 2 N (t/delta) S of the dc
    loss, S = sum sech^2(2 pi k c/P); this is 2 S, with S = max(q - 1/2, 4 exp(-2/q)), q = P/(2 pi c), within
    10 %.

    Args:
        clearance, pitch: as in `field_share`.

    The estimate is ours, from the same field; that foil beside a gap conducts at its inner face is common
    knowledge (Kutkut and Divan 1998).
    """
    ratio = pitch / (2.0 * np.pi * clearance)
    return 2.0 * np.maximum(ratio - 0.5, 4.0 * np.exp(-2.0 / ratio))


def tape_gap_loss(strip_width: Array, gap: Array, frequency_times_square: Array) -> Array:
    """Loss of fringing flux that enters the strips of a wound core broadside [W].

    Args:
        strip_width: of the tape [m].
        gap: of all sections together [m].
        frequency_times_square: sum of f B^2 over the flux density's components, B peak [Hz T2].

    Source: McLyman, Transformer and Inductor Design Handbook, P = K_i E l_g f B_ac^2 (from memory). It
        takes no account of the sections a gap is split into, which lower it.
    """
    return TAPE_GAP_LOSS * strip_width * gap * frequency_times_square
