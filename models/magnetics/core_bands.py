"""Steinmetz constants by material and frequency band, flattened for reading by index."""

from __future__ import annotations

from collections.abc import Callable
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
        change_from, change_to: frequencies between which one band's law passes into the next's (m, bands - 1)
            [Hz];
        k, alpha, beta: Steinmetz; factor: k_i of the iGSE.
        pair: index of (alpha, beta) among `exponents`.
    """

    change_from: Array
    change_to: Array
    k: Array
    alpha: Array
    beta: Array
    factor: Array
    pair: Ints
    exponents: tuple[tuple[float, float], ...]

    def between(self, material: Ints, frequency_hz: Array) -> tuple[Ints, Ints, Array]:
        """Bands that a frequency lies between, and the weight of the upper one (n,) [-].

        Loss passes from one band's law to the next geometrically, so that no step in it makes a false
        optimum.
        """
        start, end = self.change_from[material], self.change_to[material]
        passed = np.clip(np.log(frequency_hz[:, None] / start) / np.log(end / start), 0.0, 1.0).sum(-1)
        lower = np.minimum(passed.astype(np.int64), self.k.shape[1] - 1)
        return lower, np.minimum(lower + 1, self.k.shape[1] - 1), passed - lower

    def blended(self, material: Ints, frequency_hz: Array, law: Callable[[Ints], Array]) -> Array:
        """Geometric mean of a loss law in the two bands that a frequency lies between.

        Args:
            material: (n,) [-].
            frequency_hz: of the loss (n,) [Hz].
            law: band of every candidate (n,) -> loss, positive, (n, ...).
        """
        lower, upper, weight = self.between(material, frequency_hz)
        below = law(lower)
        if not weight.any():
            return below
        share = weight.reshape(weight.shape + (1,) * (below.ndim - 1))
        tiny = np.finfo(float).tiny
        return np.exp((1.0 - share) * np.log(below + tiny) + share * np.log(law(upper) + tiny))


LEAST_CHANGE = 1.25  # end over start of the passage between two bands that touch, a judgement


def core_bands(catalog: Catalog) -> CoreBands:
    """Collect the bands of the catalogue's core materials."""
    materials = catalog.core_materials
    k, alpha, beta = (materials.column(f"steinmetz_{name}") for name in ("k", "alpha", "beta"))
    exponents = sorted(set(zip(alpha.ravel().tolist(), beta.ravel().tolist(), strict=True)))
    pairs = [
        exponents.index(pair) for pair in zip(alpha.ravel().tolist(), beta.ravel().tolist(), strict=True)
    ]
    ends, starts = materials.column("band_max_hz")[:, :-1], materials.column("band_min_hz")[:, 1:]
    low, high = np.minimum(ends, starts), np.maximum(ends, starts)
    middle, ratio = np.sqrt(low * high), np.maximum(high / low, LEAST_CHANGE)
    return CoreBands(
        change_from=middle / np.sqrt(ratio),
        change_to=middle * np.sqrt(ratio),
        k=k,
        alpha=alpha,
        beta=beta,
        factor=igse_factor(k, alpha, beta),
        pair=np.array(pairs).reshape(k.shape),
        exponents=tuple(exponents),
    )
