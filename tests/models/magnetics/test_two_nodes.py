"""Heat of a wound part: coefficients against handbook laws, balance of two nodes, limits."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.catalog import Catalog
from models.magnetics.surface_cooling import still_air_rise
from models.magnetics.two_nodes import (
    OTHER_SHARE,
    Air,
    Nodes,
    forced_coefficient,
    nodes,
    radiation_coefficient,
    rises,
    still_coefficient,
    winding_shares,
)

STILL = Air(40.0, 1.0, np.zeros(1))
BOX = np.array([2.2e-4])  # of an E65 set


def part(between: float = 0.3) -> Nodes:
    return Nodes(np.array([0.013]), np.array([0.009]), np.array([between]), np.array([0.06]))


def settled(parts: Nodes, core: float, winding: float, air: Air = STILL) -> tuple[float, float]:
    losses = np.array([[core]]), np.array([[winding]])
    rise = np.full((2, 1, 1), 50.0)
    forced = forced_coefficient(air, parts.length)
    for _ in range(60):
        rise = rises(parts, air, forced, losses, rise)
    return float(rise[0, 0, 0]), float(rise[1, 0, 0])


@pytest.mark.parametrize("power", [3.0, 6.0, 10.0, 15.0])
def test_close_nodes_meet_the_handbook_rise(power: float) -> None:
    """One node (no resistance between): 450 psi^0.826 K (McLyman) at 20..80 K within 15 %."""
    surface = 6.4 * 2.2e-4 ** (2.0 / 3.0)
    one = Nodes(np.array([0.5 * surface]), np.array([0.5 * surface]), np.array([1e4]), np.cbrt(BOX))
    core, winding = settled(one, 0.5 * power, 0.5 * power, Air(25.0, 1.0, np.zeros(1)))
    assert core == pytest.approx(winding, rel=1e-3)
    assert winding == pytest.approx(float(still_air_rise(np.array(power), np.array(surface))), rel=0.15)


def test_coefficients_by_hand() -> None:
    """50 K over 6 cm: 1.42 (50/0.06)^0.25 = 7.63 W/(m2 K); 75 to 25 degC radiate 0.85 sigma (T^4 - T0^4)/50 =
    6.54; a plate of 6 cm at 2 m/s, air of 70 degC (k 0.0290, nu 2.0e-5, Pr 0.70): Re 6000, Nu 45.7, 22.1.
    """
    assert still_coefficient(np.array(50.0), np.array(0.06), 1.0) == pytest.approx(7.63, rel=2e-3)
    assert radiation_coefficient(np.array(50.0), 25.0) == pytest.approx(6.54, rel=5e-3)
    found = forced_coefficient(Air(25.0, 1.0, np.array([2.0])), np.array([0.06]))
    assert found == pytest.approx(22.1, rel=0.03)


def test_moving_air_halves_the_rise() -> None:
    """Air of 2 m/s about halves the rise of still air (common practice)."""
    still, moving = (settled(part(), 5.0, 8.0, Air(40.0, 1.0, np.array([speed])))[1] for speed in (0.0, 2.0))
    assert moving / still == pytest.approx(0.5, abs=0.12)


@given(st.floats(0.0, 20.0), st.floats(0.0, 20.0), st.floats(0.01, 10.0))
def test_heat_flows_from_the_warmer_node(core: float, winding: float, between: float) -> None:
    cold_core, cold_winding = settled(part(between), core, winding)
    assert cold_core >= 0.0
    assert cold_winding >= 0.0
    given_off = 0.0
    for rise, surface in ((cold_core, 0.013), (cold_winding, 0.009)):
        still = float(still_coefficient(np.array(max(rise, 1e-6)), np.array(0.06), 1.0))
        given_off += surface * rise * (still + float(radiation_coefficient(np.array(rise), 40.0)))
    assert given_off == pytest.approx(core + winding, rel=1e-3, abs=1e-3)


@given(st.floats(1.0, 20.0), st.floats(1.0, 20.0), st.floats(1.1, 4.0))
def test_more_conductance_brings_the_nodes_together(core: float, winding: float, factor: float) -> None:
    loose, tight = settled(part(0.1), core, winding), settled(part(0.1 * factor), core, winding)
    assert abs(tight[0] - tight[1]) <= abs(loose[0] - loose[1]) + 1e-9


def test_thin_air_cools_less() -> None:
    high = Air(40.0, 0.7, np.zeros(1))
    assert settled(part(), 5.0, 8.0, high)[1] > settled(part(), 5.0, 8.0)[1]


def test_surfaces_share_the_box() -> None:
    """5 x 5 x 8.8 cm: 226 cm2, and between core and winding former, air and half the winding in series."""
    share, contact, wall, build = (np.array([value]) for value in (0.4, 4.6e-3, 1.5e-3, 8e-3))
    found = nodes(BOX, share, contact, wall, build)
    assert found.core_surface + found.winding_surface == pytest.approx(226e-4, rel=0.04)
    assert found.winding_surface / found.core_surface == pytest.approx(2.0 / 3.0)
    assert 1.0 / found.between == pytest.approx((1.5e-3 / 0.25 + 0.5e-3 / 0.029 + 4e-3) / 4.6e-3)


def test_every_family_has_its_share(catalog: Catalog) -> None:
    families = np.unique(catalog.core_shapes.column("family"))
    found = winding_shares(families)
    assert np.all((found > 0.0) & (found < 1.0))
    assert winding_shares(np.array(["unheard of"])) == OTHER_SHARE
