"""Steinmetz constants by material and frequency band, flattened for reading by index."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.parts import Catalog
from models.magnetics.core_loss import igse_factor

Array = NDArray[np.float64]
Ints = NDArray[np.int64]


@dataclass(frozen=True)
class CoreBands:
    """Steinmetz sets of all materials; rows are materials, columns bands.

    Attributes:
        upper_hz: upper ends of the bands [Hz]; k, alpha, beta: Steinmetz; factor: k_i of the iGSE.
        pair: index of (alpha, beta) among `exponents`.
    """

    upper_hz: Array
    k: Array
    alpha: Array
    beta: Array
    factor: Array
    pair: Ints
    exponents: tuple[tuple[float, float], ...]

    def band(self, material: Ints, frequency_hz: Array) -> Ints:
        """Band that a frequency [Hz] falls into; beyond the last band the last one is extrapolated [-]."""
        return np.sum(frequency_hz[:, None] > self.upper_hz[material][:, :-1], axis=-1)


def core_bands(catalog: Catalog) -> CoreBands:
    """Collect the bands of the catalogue's core materials."""
    materials = catalog.core_materials
    k, alpha, beta = (materials.column(f"steinmetz_{name}") for name in ("k", "alpha", "beta"))
    exponents = sorted(set(zip(alpha.ravel().tolist(), beta.ravel().tolist(), strict=True)))
    pairs = [
        exponents.index(pair) for pair in zip(alpha.ravel().tolist(), beta.ravel().tolist(), strict=True)
    ]
    return CoreBands(
        upper_hz=materials.column("band_max_hz"),
        k=k,
        alpha=alpha,
        beta=beta,
        factor=igse_factor(k, alpha, beta),
        pair=np.array(pairs).reshape(k.shape),
        exponents=tuple(exponents),
    )
