"""Core loss: the improved equation by numerical integration, scaling, bias, bands."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.integrate import quad

from models.catalog import Catalog
from models.magnetics.core_bands import CoreBands, core_bands
from models.magnetics.core_loss import (
    bias_factor,
    igse_factor,
    line_loss,
    piecewise_linear_loss,
    steinmetz_loss,
    switched_loss,
)

ALPHA, BETA = st.floats(1.0, 2.0), st.floats(1.8, 3.0)


def arrays(*values: float) -> tuple[np.ndarray, ...]:
    return tuple(np.array(value) for value in values)


@given(ALPHA, BETA)
def test_constant_by_quadrature(alpha: float, beta: float) -> None:
    """k_i = k/((2 pi)^(alpha - 1) 2^(beta - alpha) integral of |cos|^alpha over a period)."""
    integral = quad(lambda angle: abs(np.cos(angle)) ** alpha, 0.0, 0.5 * np.pi)[0] * 4.0
    expected = 1.0 / ((2.0 * np.pi) ** (alpha - 1.0) * 2.0 ** (beta - alpha) * integral)
    assert float(igse_factor(*arrays(1.0, alpha, beta))) == pytest.approx(expected, rel=1e-7)


@given(ALPHA, BETA, st.floats(1.5, 4.0))
def test_powers_of_frequency_and_flux(alpha: float, beta: float, factor: float) -> None:
    one = float(steinmetz_loss(*arrays(1.0, alpha, beta, 20e3, 0.1)))
    assert float(steinmetz_loss(*arrays(1.0, alpha, beta, factor * 20e3, 0.1))) == pytest.approx(
        factor**alpha * one
    )
    assert float(steinmetz_loss(*arrays(1.0, alpha, beta, 20e3, factor * 0.1))) == pytest.approx(
        factor**beta * one
    )


@given(ALPHA, BETA, st.floats(0.05, 0.95), st.floats(0.5, 3.0))
def test_triangle_keeps_its_powers(alpha: float, beta: float, duty: float, factor: float) -> None:
    """A triangle twice as high, or run through twice as fast, follows the same powers as a sine."""

    def loss(scale: float, period: float) -> float:
        flux, times = np.array([-0.1, 0.1, -0.1]) * scale, np.array([0.0, duty, 1.0]) * period
        return float(piecewise_linear_loss(*arrays(1.0, alpha, beta), flux, times))

    assert loss(factor, 1e-4) == pytest.approx(factor**beta * loss(1.0, 1e-4))
    assert loss(1.0, 1e-4 / factor) == pytest.approx(factor**alpha * loss(1.0, 1e-4))


@given(ALPHA, BETA, st.floats(-0.9, 0.9))
def test_switched_loss_is_the_triangles(alpha: float, beta: float, m: float) -> None:
    """Bipolar switching at one index: shape integral and flux slope give the loss of the triangle in
    teslas.
    """
    frequency, slope = 25e3, 9e3  # V_dc/(N A) [T/s]
    rising, falling = 0.5 * (1.0 + m), 0.5 * (1.0 - m)
    swing = 0.5 * (1.0 - m * m)
    shape = (rising * (1.0 - m) ** alpha + falling * (1.0 + m) ** alpha) * swing ** (beta - alpha)
    found = switched_loss(
        igse_factor(*arrays(2.0, alpha, beta)), *arrays(alpha, beta, shape, slope, frequency)
    )
    teslas = slope / frequency * swing
    flux, times = np.array([0.0, teslas, 0.0]), np.array([0.0, rising, 1.0]) / frequency
    assert float(found) == pytest.approx(
        float(piecewise_linear_loss(*arrays(2.0, alpha, beta), flux, times)), rel=1e-9
    )


def test_line_loss_reference_point() -> None:
    assert line_loss(*arrays(8e3, 1.8, 1.0), 50.0) == pytest.approx(8e3)
    assert line_loss(*arrays(8e3, 1.8, 0.5), 50.0) == pytest.approx(8e3 * 0.5**1.8)
    assert line_loss(*arrays(8e3, 1.8, 1.0), 60.0) > 8e3


@given(st.floats(1.0, 3.0), st.floats(0.0, 0.4))
def test_bias_never_lowers_the_loss(rise: float, flux: float) -> None:
    found = float(bias_factor(*arrays(rise, flux, 0.4)))
    assert 1.0 <= found <= 1.0 + (rise - 1.0) * 2.0 * 2.0 / np.pi + 1e-12
    assert float(bias_factor(*arrays(rise, 0.0, 0.4))) == 1.0


def band_loss(bands: CoreBands, material: int, frequency: float, flux: float) -> float:
    """Loss density that a material is given at a frequency and peak flux density [W/m3]."""
    place, hertz = np.array([material]), np.array([frequency])

    def law(band: NDArray[np.int64]) -> NDArray[np.float64]:
        k, alpha, beta = (table[place, band] for table in (bands.k, bands.alpha, bands.beta))
        return steinmetz_loss(k, alpha, beta, hertz, np.array(flux))

    return float(bands.blended(place, hertz, law)[0])


def test_bands_of_the_catalogue(catalog: Catalog) -> None:
    """Well inside its band a material has that band's law; beyond the last band that one is extrapolated."""
    bands = core_bands(catalog)
    for place, material in enumerate(catalog.core_materials):
        sets = zip(
            material.band_min_hz,
            material.band_max_hz,
            material.steinmetz_k,
            material.steinmetz_alpha,
            material.steinmetz_beta,
            strict=True,
        )
        for low, high, k, alpha, beta in sets:
            hertz = float(np.sqrt(low * high))
            assert band_loss(bands, place, hertz, 0.05) == pytest.approx(k * hertz**alpha * 0.05**beta)
        beyond = 10.0 * material.band_max_hz[-1]
        expected = (
            material.steinmetz_k[-1]
            * beyond ** material.steinmetz_alpha[-1]
            * 0.05 ** material.steinmetz_beta[-1]
        )
        assert band_loss(bands, place, beyond, 0.05) == pytest.approx(expected)


def test_loss_does_not_jump_between_bands(catalog: Catalog) -> None:
    """A step in the loss law is a false optimum just below it: a 0.1 % step of frequency moves loss by 2 % at
    most.
    """
    bands = core_bands(catalog)
    for place, material in enumerate(catalog.core_materials):
        hertz = np.geomspace(0.5 * material.band_min_hz[0], 2.0 * material.band_max_hz[-1], 4000)
        for flux in (0.02, 0.1):
            losses = np.array([band_loss(bands, place, one, flux) for one in hertz[::4]])
            steps = np.abs(np.diff(np.log(losses))) / np.diff(np.log(hertz[::4]))
            assert steps.max() < 12.0, (material.name, flux)
