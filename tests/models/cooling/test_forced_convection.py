"""Duct flow: limits, other published laws and an independent library."""

import fluids
import ht
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.cooling import forced_convection as forced

AIR_PR = np.array(0.70)
X_STAR = np.geomspace(1e-3, 1.0, 25)
TUBE_FRICTION, TUBE_NUSSELT = 64.0, 3.657


def exact_rectangle_friction(aspect, terms=200):
    """Darcy f Re of a rectangle from the series solution of Poisson's equation (Boussinesq 1868)."""
    n = np.arange(1, 2 * terms, 2)
    series = np.sum(np.tanh(n * np.pi / (2 * aspect)) / n**5)
    return 96.0 / ((1 + aspect) ** 2 * (1 - 192 * aspect / np.pi**5 * series))


@pytest.mark.parametrize("aspect", [0.02, 0.0625, 0.125, 0.3, 0.5, 0.8, 1.0])
def test_friction_against_the_exact_series(aspect):
    expected = exact_rectangle_friction(aspect)
    assert forced.laminar_friction(np.array(aspect)) == pytest.approx(expected, rel=0.0006)


@pytest.mark.parametrize("aspect", [0.05, 0.2, 0.5, 0.7, 1.0])
def test_isoflux_nusselt_against_an_independent_library(aspect):
    expected = ht.conv_internal.Nu_laminar_rectangular_Shan_London(aspect)
    assert forced.laminar_isoflux_nusselt(np.array(aspect)) == pytest.approx(expected, rel=1e-9)


@given(st.floats(0.0, 1.0))
def test_isothermal_transfers_less_than_isoflux(aspect):
    a = np.array(aspect)
    assert forced.laminar_isothermal_nusselt(a) < forced.laminar_isoflux_nusselt(a)


def test_combined_entrance_against_stephan():
    model = forced.developing_nusselt(X_STAR, AIR_PR, np.array(96.0), np.array(7.541))
    np.testing.assert_allclose(model, forced.plates_combined_entrance(X_STAR, AIR_PR), rtol=0.06)


def test_combined_entrance_of_thick_fluids_is_the_thermal_entrance():
    # Pr -> infinity: the velocity is developed from the start (Shah & London 1978 for plates, a law in pieces
    # with a jump at 0.006); 10 % is what Muzychka & Yovanovich claim
    model = forced.developing_nusselt(X_STAR, np.array(1000.0), np.array(96.0), np.array(7.541))
    np.testing.assert_allclose(model, forced.plates_thermal_entrance_isothermal(X_STAR), rtol=0.10)


@pytest.mark.parametrize("graetz", [3.0, 10.0, 30.0, 100.0, 300.0, 1000.0])
def test_combined_entrance_of_a_tube_against_an_independent_library(graetz):
    # Baehr & Stephan's law for tubes; the model is said to hold to 10 % for ducts of any shape
    expected = ht.laminar_entry_Baehr_Stephan(Re=1000.0, Pr=0.7, L=1.0, Di=graetz / 700.0)
    model = forced.developing_nusselt(
        np.array(1.0 / graetz), AIR_PR, np.array(TUBE_FRICTION), np.array(TUBE_NUSSELT)
    )
    assert model == pytest.approx(expected, rel=0.10)


def test_apparent_friction_against_shah():
    # Shah 1978, correlation for parallel plates, said to hold to 2.4 %
    x = np.geomspace(1e-3, 1.0, 25)
    entrance = 3.44 / np.sqrt(x)
    shah = 4.0 * (entrance + (24.0 + 0.674 / (4 * x) - entrance) / (1.0 + 2.9e-5 / x**2))
    np.testing.assert_allclose(forced.developing_friction(x, np.array(96.0)), shah, rtol=0.08)


@pytest.mark.parametrize("reynolds", [4e3, 1e4, 5e4, 1e5])
def test_turbulent_laws_against_an_independent_library(reynolds):
    colebrook = fluids.friction_factor(Re=reynolds, eD=0.0)
    assert forced.turbulent_friction(np.array(reynolds)) == pytest.approx(colebrook, rel=0.04)
    expected = ht.turbulent_Gnielinski(Re=reynolds, Pr=0.7, fd=colebrook)
    model = forced.turbulent_nusselt(np.array(reynolds), AIR_PR, np.array(0.0))
    assert model == pytest.approx(expected, rel=0.05)


@pytest.mark.parametrize("share", [0.2, 0.5, 0.8])
def test_end_losses_against_an_independent_library(share):
    ratio = share**0.5
    assert forced.expansion_loss(np.array(share)) == pytest.approx(
        fluids.diffuser_sharp(ratio, 1.0), rel=1e-9
    )
    # Idelchik: 0.5 (1 - sigma) for a sharp entry; White's 0.42 is the milder
    assert forced.contraction_loss(np.array(share)) == pytest.approx(0.5 * (1.0 - share), rel=0.17)


@given(st.floats(1e-4, 10.0), st.floats(0.0, 1.0))
def test_entrance_helps_and_fades(x_star, aspect):
    friction = forced.laminar_friction(np.array(aspect))
    developed = forced.laminar_isothermal_nusselt(np.array(aspect))
    here = forced.developing_nusselt(np.array(x_star), AIR_PR, friction, developed)
    later = forced.developing_nusselt(np.array(2.0 * x_star), AIR_PR, friction, developed)
    assert developed < later < here
    far = forced.developing_nusselt(np.array(1e3), AIR_PR, friction, developed)
    assert far == pytest.approx(developed, rel=0.01)


def test_turbulent_share_is_a_ramp():
    share = forced.turbulent_share(np.array([100.0, 2300.0, 3150.0, 4000.0, 1e5]))
    np.testing.assert_allclose(share, [0.0, 0.0, 0.5, 1.0, 1.0])


@given(st.floats(0.0, 20.0))
def test_fin_efficiency_is_the_mean_of_the_fin_temperature(slenderness):
    # the profile cosh(m(L - x))/cosh(mL), integrated numerically
    x = (np.arange(20_000) + 0.5) / 20_000
    mean = np.mean(np.cosh(slenderness * (1.0 - x)) / np.cosh(slenderness))
    assert forced.fin_efficiency(np.array(slenderness)) == pytest.approx(mean, rel=1e-4)


@given(st.floats(1e-3, 0.1), st.floats(1e-3, 0.1))
def test_hydraulic_diameter_is_symmetric(a, b):
    assert forced.hydraulic_diameter(a, b) == pytest.approx(4.0 * a * b / (2.0 * a + 2.0 * b))
    assert forced.hydraulic_diameter(a, b) == forced.hydraulic_diameter(b, a)
