"""Spreading resistance: against the exact series and in its limits."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.special import j0, j1, jn_zeros

from models.cooling.spreading import base_conduction, spreading_resistance

CONDUCTIVITY, PLATE_RADIUS = 205.0, 0.05
ZEROS = jn_zeros(1, 3000)


def exact_series(epsilon, tau, biot):
    """Isoflux disc on a disc with a film (Yovanovich 1976): (average, greatest) spreading resistance."""
    z, k, radius = ZEROS, CONDUCTIVITY, epsilon * PLATE_RADIUS
    phi = (np.tanh(z * tau) + z / biot) / (1.0 + z / biot * np.tanh(z * tau))
    greatest = 8.0 / np.pi * np.sum(j1(z * epsilon) / (z**2 * j0(z) ** 2) * phi)
    average = 16.0 / (np.pi * epsilon) * np.sum(j1(z * epsilon) ** 2 / (z**3 * j0(z) ** 2) * phi)
    return average / (4.0 * k * radius), greatest / (4.0 * k * radius)


def closed_form(epsilon, tau, biot):
    area = np.pi * PLATE_RADIUS**2
    film = 1.0 / (np.pi * CONDUCTIVITY * PLATE_RADIUS * biot)
    return spreading_resistance(epsilon**2 * area, area, tau * PLATE_RADIUS, CONDUCTIVITY, film)


@pytest.mark.parametrize("biot", [0.01, 0.1, 0.3])
@pytest.mark.parametrize("tau", [0.1, 0.4, 1.0])
@pytest.mark.parametrize("epsilon", [0.1, 0.3, 0.6])
def test_against_the_exact_series(epsilon, tau, biot):
    average, greatest = exact_series(epsilon, tau, biot)
    ours = closed_form(epsilon, tau, biot)
    assert ours.average == pytest.approx(average, rel=0.12)
    assert ours.greatest == pytest.approx(greatest, rel=0.12)


@given(st.floats(0.02, 1.0), st.floats(0.02, 3.0), st.floats(1e-3, 100.0))
def test_never_negative_and_the_centre_is_hottest(epsilon, tau, biot):
    ours = closed_form(epsilon, tau, biot)
    assert ours.average >= 0.0
    assert ours.greatest >= ours.average * (1.0 - 1e-12) or epsilon < 0.22
    # below a radius ratio of 0.22 the closed form's average passes its centre value by up to 12 %
    assert ours.average <= ours.greatest * 1.14 + 1e-15


def test_full_source_spreads_nothing():
    ours = spreading_resistance(0.01, 0.01, 0.005, 205.0, 0.3)
    assert ours.greatest == 0.0
    assert ours.average == 0.0


@given(st.floats(0.05, 0.9), st.floats(0.05, 2.0), st.floats(1e-2, 10.0), st.floats(0.2, 5.0))
def test_similar_plates(epsilon, tau, biot, scale):
    # all lengths times s, film per area alike in k and Biot number: resistance over s
    area, film = np.pi * PLATE_RADIUS**2, 1.0 / (np.pi * CONDUCTIVITY * PLATE_RADIUS * biot)
    here = closed_form(epsilon, tau, biot)
    there = spreading_resistance(
        epsilon**2 * area * scale**2, area * scale**2, tau * PLATE_RADIUS * scale, CONDUCTIVITY, film / scale
    )
    assert there.greatest == pytest.approx(here.greatest / scale, rel=1e-9)


def test_base_conduction_of_a_plate():
    # 8 mm of aluminium under 100 cm2: 0.008/(205*0.01)
    assert base_conduction(0.008, 205.0, 0.01) == pytest.approx(3.902e-3, rel=1e-3)
