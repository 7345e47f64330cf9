"""Natural convection: limits, best spacing, and an independent library for the plate."""

import ht
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.optimize import minimize_scalar

from models.cooling import natural_convection as natural


@pytest.mark.parametrize("prandtl", [0.7, 5.0])
@pytest.mark.parametrize("ra", [1e3, 1e6, 1e9, 1e11])
def test_plate_against_an_independent_library(ra, prandtl):
    expected = ht.Nu_vertical_plate_Churchill(Pr=prandtl, Gr=ra / prandtl)
    assert natural.vertical_plate_nusselt(np.array(ra), np.array(prandtl)) == pytest.approx(
        expected, rel=1e-9
    )


@given(st.floats(4.0, 8.5))
def test_laminar_plate_lies_near_the_general_law(exponent):
    # Churchill & Chu offer both; in laminar flow the general law is the less exact (up to a fifth off)
    ra, pr = np.array(10.0**exponent), np.array(0.7)
    laminar, general = natural.vertical_plate_laminar_nusselt(ra, pr), natural.vertical_plate_nusselt(ra, pr)
    assert laminar == pytest.approx(general, rel=0.2)


def test_close_plates_are_fully_developed():
    # Elenbaas 1942: Nu = El/24 for close isothermal plates
    assert natural.channel_isothermal_nusselt(np.array(0.01)) == pytest.approx(0.01 / 24.0, rel=1e-3)


def test_wide_plates_are_single_plates():
    # 0.59 Ra^(1/4): the classical laminar plate (McAdams 1954)
    assert natural.channel_isothermal_nusselt(np.array(1e7)) == pytest.approx(0.59 * 1e7**0.25, rel=1e-3)


def test_isoflux_wide_plates_are_single_plates():
    # Nu = 0.73 El*^(1/5) at mid height, 0.63 El*^(1/5) at the top (Bar-Cohen & Rohsenow 1984)
    elenbaas = np.array(1e9)
    assert natural.channel_isoflux_midheight_nusselt(elenbaas) == pytest.approx(0.73 * 1e9**0.2, rel=0.002)
    assert natural.channel_isoflux_top_nusselt(elenbaas) == pytest.approx(0.63 * 1e9**0.2, rel=0.003)


@given(st.floats(-2.0, 6.0))
def test_isoflux_top_is_the_hottest(exponent):
    elenbaas = np.array(10.0**exponent)
    top, middle = natural.channel_isoflux_top_nusselt, natural.channel_isoflux_midheight_nusselt
    assert top(elenbaas) < middle(elenbaas)


def heat_per_width(spacing, length, ra_per_cube):
    """Heat of thin isothermal plates per width of base, up to a constant: Nu k/S times 1/S plates."""
    elenbaas = ra_per_cube * spacing**4 / length
    return natural.channel_isothermal_nusselt(elenbaas) / spacing**2


@given(st.floats(0.03, 0.5), st.floats(7.0, 10.0))
def test_best_spacing_moves_most_heat(length, exponent):
    ra_per_cube = 10.0**exponent
    ra = ra_per_cube * length**3
    stated = float(natural.best_spacing_isothermal(np.array(length), np.array(ra)))
    found = minimize_scalar(
        lambda s: -heat_per_width(s, length, ra_per_cube),
        bounds=(0.2 * stated, 5.0 * stated),
        method="bounded",
    )
    assert found.x == pytest.approx(stated, rel=0.01)
    elenbaas = np.array(ra_per_cube * stated**4 / length)
    nusselt = natural.channel_isothermal_nusselt(elenbaas)
    assert nusselt == pytest.approx(natural.BEST_NUSSELT_ISOTHERMAL, abs=0.002)


@given(st.floats(1e-3, 2e-2), st.floats(0.1, 1e4))
def test_best_isoflux_spacing_does_not_depend_on_the_start(spacing, elenbaas):
    # El* goes with S^5
    here = natural.best_spacing_isoflux(np.array(spacing), np.array(elenbaas))
    there = natural.best_spacing_isoflux(np.array(2.0 * spacing), np.array(32.0 * elenbaas))
    assert there == pytest.approx(here)


@given(st.floats(0.02, 0.5), st.floats(5.0, 90.0))
def test_grashof_goes_with_the_cube_of_length(length, rise):
    beta, nu = np.array(1 / 330), np.array(1.9e-5)
    one = natural.grashof(np.array(length), np.array(rise), beta, nu)
    assert natural.grashof(np.array(2 * length), np.array(rise), beta, nu) == pytest.approx(8.0 * one)
    assert natural.rayleigh(np.array(length), np.array(rise), beta, nu, np.array(0.7)) == pytest.approx(
        0.7 * one
    )
