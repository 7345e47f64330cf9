"""Air: against textbook values and against an independent library; laws of scaling."""

import fluids
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.cooling.air import air_at, conductivity, heat_capacity, pressure_at_altitude, viscosity

# Incropera & DeWitt, Fundamentals of Heat and Mass Transfer, table A.4, from memory; headed
# '1 atm', but its densities are those of 1 bar (p/(R T) = 1.1612 kg/m3 at 300 K):
# T, rho, cp, mu, k, Pr
TABLE_A4 = [
    (300.0, 1.1614, 1007.0, 184.6e-7, 26.3e-3, 0.707),
    (350.0, 0.9950, 1009.0, 208.2e-7, 30.0e-3, 0.700),
    (400.0, 0.8711, 1014.0, 230.1e-7, 33.8e-3, 0.690),
]


@pytest.mark.parametrize(("t", "density", "cp", "mu", "k", "pr"), TABLE_A4)
def test_textbook_table(t, density, cp, mu, k, pr):
    air = air_at(np.array(t), np.array(1.0e5))
    assert air.density == pytest.approx(density, rel=0.002)
    assert air.heat_capacity == pytest.approx(cp, rel=0.005)
    assert air.viscosity == pytest.approx(mu, rel=0.01)
    assert air.conductivity == pytest.approx(k, rel=0.01)
    assert air.prandtl == pytest.approx(pr, rel=0.01)
    assert air.expansion == pytest.approx(1.0 / t)


@pytest.mark.parametrize("altitude", [0.0, 1000.0, 3000.0, 6000.0])
def test_standard_atmosphere_of_an_independent_library(altitude):
    # that library takes geometric height, the law here geopotential: 0.1 % of height apart at 6 km
    standard = fluids.ATMOSPHERE_1976(altitude)
    assert pressure_at_altitude(np.array(altitude)) == pytest.approx(standard.P, rel=1e-3)
    assert viscosity(np.array(standard.T)) == pytest.approx(standard.mu, rel=1e-9)
    assert conductivity(np.array(standard.T)) == pytest.approx(standard.k, rel=1e-9)


@given(st.floats(250.0, 450.0), st.floats(4e4, 1.1e5))
def test_pressure_moves_density_alone(t, pressure):
    here, there = air_at(np.array(t), np.array(pressure)), air_at(np.array(t), np.array(2.0 * pressure))
    assert there.density == pytest.approx(2.0 * here.density)
    assert there.viscosity == here.viscosity
    assert there.prandtl == here.prandtl


def test_heat_capacity_rises_from_room_temperature():
    assert np.all(np.diff(heat_capacity(np.linspace(280.0, 600.0, 30))) > 0.0)


def test_arrays_equal_scalars():
    t = np.array([280.0, 330.0, 390.0])
    together = air_at(t, np.array(9e4))
    for i, one in enumerate(t):
        alone = air_at(np.array(one), np.array(9e4))
        assert together.kinematic_viscosity[i] == alone.kinematic_viscosity


@pytest.mark.parametrize("altitude", [-600.0, 11_001.0, float("nan")])
def test_altitude_outside_the_layer(altitude):
    with pytest.raises(ValueError, match=r"altitude must lie within -500\.\.11000 m, got"):
        pressure_at_altitude(np.array(altitude))


@pytest.mark.parametrize("t", [150.0, 900.0, float("nan")])
def test_temperature_outside_the_fits(t):
    with pytest.raises(ValueError, match=r"film temperature must lie within 200\.\.700 K, got"):
        air_at(np.array(t), np.array(1e5))
