"""Catalogue entries that conducted emission needs: limit lines, and materials of common-mode chokes."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True)
class EmissionLimit:
    """Limit lines of conducted emission, straight over the logarithm of the frequency."""

    name: str
    frequency_hz: tuple[float, ...]  # rising [Hz]
    quasi_peak_dbuv: tuple[float, ...]  # [dB over 1 uV]
    average_dbuv: tuple[float, ...]  # [dB over 1 uV]
    power_range_va: tuple[float, ...]  # rated powers it is made for: above, up to [VA]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)

    def quasi_peak_at(self, frequency_hz: ArrayLike) -> NDArray[np.float64]:
        """Quasi-peak limit [dB over 1 uV] at frequencies [Hz]; infinite outside the limited band."""
        return self._at(frequency_hz, self.quasi_peak_dbuv)

    def average_at(self, frequency_hz: ArrayLike) -> NDArray[np.float64]:
        """Average limit [dB over 1 uV] at frequencies [Hz]; infinite outside the limited band."""
        return self._at(frequency_hz, self.average_dbuv)

    def _at(self, frequency_hz: ArrayLike, values: tuple[float, ...]) -> NDArray[np.float64]:
        at = np.log(np.asarray(frequency_hz, dtype=float))
        return np.interp(at, np.log(self.frequency_hz), values, left=np.inf, right=np.inf)


@dataclass(frozen=True)
class ChokeMaterial:
    """Ring core material of common-mode chokes: mu(f) = mu / (1 + (f/corner)^exponent)."""

    name: str
    families: tuple[str, ...]  # core shape families it is sold in
    permeability: float  # relative, at low frequency [-]
    corner_frequency_hz: float  # at which half of it is left [Hz]
    fall_exponent: float  # [-]
    flux_limit_t: float  # greatest flux density by unbalance [T]
    density_kg_m3: float  # [kg/m3]
    price_per_kg: float  # [currency/kg]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)

    def permeability_at(self, frequency_hz: ArrayLike) -> NDArray[np.float64]:
        """Magnitude of the relative permeability [-] at frequencies [Hz]."""
        fall = (np.asarray(frequency_hz, dtype=float) / self.corner_frequency_hz) ** self.fall_exponent
        return np.asarray(self.permeability / (1.0 + fall))
