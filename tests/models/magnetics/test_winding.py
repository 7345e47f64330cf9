"""Winding resistance: limits of Dowell's law, its agreement with the litz form, monotony."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import mu_0

from models.magnetics.winding import (
    COPPER_RESISTIVITY_20,
    copper_resistivity,
    dowell_ratio,
    foil_ratio,
    litz_ratio,
    round_wire_skin_ratio,
    skin_depth,
    wire_ratio,
)

RHO = np.array(2.2e-8)


def foil_by_the_diffusion_equation(depth: float, layers: int) -> float:
    """Ac over dc resistance of a stack of foils, field 0 to N I, from the complex field in each sheet.

    In a sheet of thickness h = depth skin depths between the fields H1 and H2 the loss is the real part of
    the Poynting flux at its two faces, with H'' = (2j/delta^2) H. No hyperbolic closed form of Dowell's is
    used.
    """
    gamma = (1.0 + 1.0j) * depth  # per sheet thickness
    total = 0.0
    for layer in range(layers):
        below, above = float(layer), float(layer + 1)
        slope_above = gamma * (above * np.cosh(gamma) - below) / np.sinh(gamma)
        slope_below = gamma * (above - below * np.cosh(gamma)) / np.sinh(gamma)
        total += np.real(slope_above * above - slope_below * below)
    return total / layers  # dc: each sheet carries one unit of current, loss 1


@pytest.mark.parametrize("depth", [0.05, 0.3, 1.0, 2.5, 8.0])
@pytest.mark.parametrize("layers", [1, 2, 7])
def test_dowell_solves_the_diffusion_equation(depth: float, layers: int) -> None:
    found = float(dowell_ratio(np.array(depth), np.array(float(layers))))
    assert found == pytest.approx(foil_by_the_diffusion_equation(depth, layers), rel=1e-6)


@given(st.floats(0.001, 20.0), st.integers(1, 20))
def test_dowell_never_lies_below_dc_and_grows_with_layers(depth: float, layers: int) -> None:
    here = float(dowell_ratio(np.array(depth), np.array(float(layers))))
    assert here >= 1.0 - 1e-9
    assert float(dowell_ratio(np.array(depth), np.array(layers + 1.0))) >= here - 1e-9


@given(st.floats(0.001, 0.25), st.integers(1, 8))
def test_dowell_at_small_thickness(depth: float, layers: int) -> None:
    """1 + (5 p^2 - 1) D^4/45 (Hurley, Gath, Breslin 2000)."""
    found = float(dowell_ratio(np.array(depth), np.array(float(layers))))
    assert found - 1.0 == pytest.approx((5.0 * layers**2 - 1.0) * depth**4 / 45.0, rel=0.02, abs=1e-9)


def test_thick_foil_conducts_in_a_skin() -> None:
    assert float(dowell_ratio(np.array(12.0), np.array(1.0))) == pytest.approx(12.0, rel=1e-6)


@given(st.floats(0.01, 30.0))
def test_round_wire_never_lies_below_dc(ratio: float) -> None:
    assert float(round_wire_skin_ratio(np.array(ratio))) >= 1.0 - 1e-9


def test_round_wire_at_high_frequency() -> None:
    """d/(4 delta) + 1/4 where the current flows in a skin (any text)."""
    assert float(round_wire_skin_ratio(np.array(40.0))) == pytest.approx(40.0 / 4.0 + 0.25, rel=0.01)


@given(st.floats(1e3, 1e6), st.floats(2.0, 10.0))
def test_skin_depth_falls_with_the_root_of_frequency(frequency: float, factor: float) -> None:
    one, other = skin_depth(np.array(frequency), RHO), skin_depth(np.array(factor**2 * frequency), RHO)
    assert one == pytest.approx(factor * other)


def test_copper_is_linear_in_temperature() -> None:
    span = copper_resistivity(np.array([20.0, 60.0, 100.0]))
    assert np.diff(span)[0] == pytest.approx(np.diff(span)[1])
    assert span[0] == COPPER_RESISTIVITY_20


def litz_loss_by_integration(
    frequency: float, strands: float, turns: float, diameter: float, breadth: float, layers: int = 4000
) -> float:
    """Proximity loss of thin strands in the winding's own field, summed strand layer by strand layer, over
    the dc loss.

    A strand in a transverse field of peak B loses pi omega^2 B^2 d^4 l/(128 rho); the field rises linearly
    from 0 to mu0 N I/b (Sullivan 1999, appendix; strands' skin effect left out).
    """
    omega, rho = 2.0 * math.pi * frequency, float(RHO)
    place = (np.arange(layers) + 0.5) / layers
    field = mu_0 * turns * place / breadth  # peak, for a turn current of 1 A peak
    proximity = np.mean(math.pi * omega**2 * field**2 * diameter**4 / (128.0 * rho)) * strands * turns
    dc = 0.5 * turns * rho / (strands * 0.25 * math.pi * diameter**2)
    return 1.0 + proximity / dc


@pytest.mark.parametrize("frequency", [20e3, 100e3, 300e3])
def test_litz_form_is_the_sum_over_its_strands(frequency: float) -> None:
    arguments = (120.0, 40.0, 7.1e-5, 0.03)
    found = litz_ratio(np.array(frequency), *(np.array(value) for value in arguments), RHO)
    assert float(found) == pytest.approx(litz_loss_by_integration(frequency, *arguments), rel=1e-4)


def test_foil_is_dowell_with_a_turn_a_layer() -> None:
    depth = 2e-4 / float(skin_depth(np.array(50e3), RHO))
    found = foil_ratio(np.array(50e3), np.array(12.0), np.array(2e-4), RHO)
    assert float(found) == pytest.approx(foil_by_the_diffusion_equation(depth, 12), rel=1e-6)


@given(st.floats(1e3, 1e6), st.floats(2e-4, 2e-3), st.integers(1, 80), st.integers(1, 6))
def test_wire_grows_with_frequency(frequency: float, diameter: float, turns: int, strands: int) -> None:
    def ratio(hertz: float) -> float:
        wires, breadth = np.array(float(strands * turns)), np.array(0.03)
        layers = np.ceil(wires * 1.1 * diameter / breadth)
        return float(wire_ratio(np.array(hertz), wires, layers, np.array(diameter), breadth, RHO))

    assert 1.0 - 1e-9 <= ratio(frequency) <= ratio(1.5 * frequency) + 1e-9


def test_one_layer_of_wire_is_near_an_isolated_one_at_low_frequency() -> None:
    """Few well-spaced turns: within some percent of the exact law of a wire alone."""
    diameter = 1e-3
    frequency = 4e3  # d/delta = 0.85
    found = wire_ratio(
        np.array(frequency), np.array(4.0), np.array(1.0), np.array(diameter), np.array(0.04), RHO
    )
    alone = round_wire_skin_ratio(diameter / skin_depth(np.array(frequency), RHO))
    assert float(found) == pytest.approx(float(alone), rel=0.05)
