"""Current of the dc-link capacitor with a smooth dc source and no output ripple."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from models.waveforms.bridges import Bridge, Modulation
from models.waveforms.switching_period import cells, switching_periods

Array = NDArray[np.float64]
RAIL_ANGLES = 216  # over the line period; a multiple of 12, so that clamped sectors end between samples


def three_phase_rms(modulation_index: Array, displacement: Array) -> Array:
    """Capacitor rms current over the phase rms current, three-phase two-level bridge, any zero sequence.

    Args:
        modulation_index: M [-].
        displacement: current lag phi [rad].

    Returns:
        Ratio [-].

    Source: Dahono, Sato, Kataoka (1996); Kolar & Round (2006): sqrt(2 M (sqrt3/(4 pi) + cos^2 phi (sqrt3/pi -
        9 M/16))).
    """
    cosine = np.cos(displacement)
    root3 = np.sqrt(3.0)
    inner = root3 / (4.0 * np.pi) + cosine * cosine * (root3 / np.pi - 9.0 * modulation_index / 16.0)
    return np.sqrt(np.maximum(2.0 * modulation_index * inner, 0.0))


def single_phase_double_frequency_rms(modulation_index: Array) -> Array:
    """Double-line-frequency part of a full bridge's dc current over the peak output current [-].

    The dc current is m(theta) i(theta): its alternating part has the amplitude M I/2 at twice the line
    frequency.
    """
    return np.asarray(modulation_index) / (2.0 * np.sqrt(2.0))


def rail_moments(bridge: Bridge, scheme: Modulation, index: Array) -> tuple[Array, Array]:
    """Moments of the positive rail's alternating current, any bridge: exact but for the standing line.

    With the phase currents I sin(theta - phi) shifted from phase to phase, the rail carries I (A cos phi + B
    sin phi), A and B following from the legs' states. Its mean square is a quadratic form in cos phi and sin
    phi.

    Args:
        bridge, scheme: what to expand; a three-level bridge's rail is that of its upper half.
        index: modulation indexes (i,) [-].

    Returns:
        Slow (multiples of the line frequency) and fast (switching) part: means of A^2, AB, B^2 without those
        of the dc current (i, 3) [-]; `rail_rms` reads them.
    """
    angle = 2.0 * np.pi * (np.arange(RAIL_ANGLES) + 0.5) / RAIL_ANGLES
    period = switching_periods(bridge, scheme, angle, index[:, None])
    references = scheme.references(*np.broadcast_arrays(angle, index[:, None]))
    floor = cells(bridge, references)[1]
    at_rail = period.states & (floor[..., None] >= 1.0 - 1.0 / (bridge.levels - 1))
    current = _leg_currents(bridge, angle)
    through = np.einsum("ialk,cal->icak", at_rail.astype(float), current)
    local = np.einsum("icak,iak->ica", through, period.steps)
    total = np.einsum("icak,idak,iak->icd", through, through, period.steps) / RAIL_ANGLES
    averaged = np.einsum("ica,ida->icd", local, local) / RAIL_ANGLES
    dc = local.mean(-1)
    slow = averaged - dc[:, :, None] * dc[:, None, :]
    return _packed(slow), _packed(total - averaged)


def rail_rms(moments: Array, displacement: Array) -> Array:
    """Rms of a part of the rail's current over the peak phase current [-].

    Args:
        moments: of `rail_moments`, on the last axis [-].
        displacement: current lag phi [rad].
    """
    cosine, sine = np.cos(displacement), np.sin(displacement)
    form = moments[..., 0] * cosine**2 + 2.0 * moments[..., 1] * cosine * sine + moments[..., 2] * sine**2
    return np.sqrt(np.maximum(form, 0.0))


def _leg_currents(bridge: Bridge, angle: Array) -> Array:
    """Parts of every leg's current along cos phi and sin phi (2, angle, leg) [-]."""
    legs = len(bridge.voltage_weights)
    shift = np.array([0.0, -2.0, 2.0]) * np.pi / 3.0 if bridge.phases == 3 else np.zeros(legs)
    sign = np.ones(legs) if bridge.phases == 3 else np.array([1.0, -1.0])[:legs]
    place = angle[:, None] + shift
    return np.stack([sign * np.sin(place), -sign * np.cos(place)])


def _packed(form: Array) -> Array:
    return np.stack([form[:, 0, 0], form[:, 0, 1], form[:, 1, 1]], axis=-1)
