"""How large the carrier groups of the bridge's voltages get within the line period, tabulated once a study.

A measuring receiver's 9 kHz bandwidth takes in a whole carrier group, whose amplitude swells and fades with
the line angle; the quasi-peak detector reads close to its greatest value. That value is the worst case used
here (after the worst-case detector of Raggl, Nussbaumer, Kolar, IEEE Trans. Ind. Electron. 56(1), 2009).
A leg that is on for the share d has the m-th carrier amplitude (2/(m pi)) |sin(m pi d)|.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from models.waveforms.bridges import BRIDGES, Bridge, Modulation
from models.waveforms.switching_period import cells
from models.waveforms.tables import INDEX_MAX, INDEX_POINTS

Array = NDArray[np.float64]
GROUPS = 24  # carrier groups solved; beyond them groups repeat the last ones' shape and fall with 1/m
COARSE = 25  # modulation indexes solved, the others interpolated
ANGLES = 241  # over half a line period


@dataclass(frozen=True)
class CarrierPeaks:
    """Greatest carrier amplitudes times m (s scheme, i modulation index, m - 1) [V_dc].

    Attributes:
        differential: of the filter voltage.
        common: of the mean of all legs' voltages.
    """

    differential: Array
    common: Array


@lru_cache(maxsize=8)
def carrier_peaks(bridge_name: str, displacement: float = 0.0) -> CarrierPeaks:
    """Tabulate a bridge's carrier groups on the grid of `waveforms.tables`.

    Args:
        bridge_name: a key of BRIDGES.
        displacement: lag of the current that schemes follow which do so [rad].
    """
    bridge = BRIDGES[bridge_name]
    rows = [_scheme(bridge, scheme.at(displacement)) for scheme in bridge.modulations]
    differential, common = (np.stack([row[part] for row in rows]) for part in (0, 1))
    return CarrierPeaks(differential, common)


def _scheme(bridge: Bridge, scheme: Modulation) -> tuple[Array, Array]:
    index = np.minimum(np.linspace(0.0, INDEX_MAX, COARSE), scheme.linear_limit)
    angle = np.linspace(0.0, np.pi, ANGLES)
    share, _ = cells(bridge, scheme.references(*np.broadcast_arrays(angle, index[:, None])))
    group = np.arange(1, GROUPS + 1)[:, None, None, None]
    legs = np.array(scheme.carrier_sign, dtype=float) ** group
    waves = legs * np.array(scheme.switching_legs) * 2.0 / np.pi * np.sin(np.pi * group * share)
    waves /= bridge.levels - 1
    weights = np.array(bridge.voltage_weights)
    both = (waves @ weights, waves @ np.full(len(weights), 1.0 / len(weights)))
    return tuple(_on_fine_grid(np.abs(one).max(-1).T) for one in both)  # type: ignore[return-value]


def _on_fine_grid(coarse: Array) -> Array:
    """Coarse rows over the modulation index to the grid of the waveform tables."""
    at, grid = np.linspace(0.0, 1.0, INDEX_POINTS), np.linspace(0.0, 1.0, len(coarse))
    return np.stack([np.interp(at, grid, column) for column in coarse.T], axis=-1)


def group_place(multiple: NDArray[np.int64]) -> NDArray[np.int64]:
    """Place in the tables of a carrier multiple m >= 1: itself, or the last of the same parity [-]."""
    beyond = GROUPS - 2 + (multiple - 1) % 2
    return np.where(multiple <= GROUPS, multiple - 1, beyond)
