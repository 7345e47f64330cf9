"""Radiation: view factors by numerical integration, limits of the grey channel."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import Stefan_Boltzmann

from models.cooling import radiation

SIZES = st.floats(0.002, 0.3)


def midpoints(size, n):
    return (np.arange(n) + 0.5) * size / n


def parallel_by_integration(width, height, distance, n=24):
    x1, y1 = midpoints(width, n)[:, None, None, None], midpoints(height, n)[None, :, None, None]
    x2, y2 = midpoints(width, n)[None, None, :, None], midpoints(height, n)[None, None, None, :]
    square = (x1 - x2) ** 2 + (y1 - y2) ** 2 + distance**2
    kernel = distance**2 / (np.pi * square**2)
    return kernel.sum() * (width * height / n**2) ** 2 / (width * height)


def perpendicular_by_integration(depth, other, edge, n=28):
    a, x1 = midpoints(depth, n)[:, None, None, None], midpoints(edge, n)[None, :, None, None]
    b, x2 = midpoints(other, n)[None, None, :, None], midpoints(edge, n)[None, None, None, :]
    square = a**2 + b**2 + (x1 - x2) ** 2
    kernel = a * b / (np.pi * square**2)
    return kernel.sum() * (depth * edge / n**2) * (other * edge / n**2) / (depth * edge)


@pytest.mark.parametrize("shape", [(1.0, 1.0, 1.0), (1.0, 2.0, 1.5), (0.5, 0.7, 1.0)])
def test_parallel_rectangles_by_integration(shape):
    assert radiation.parallel_rectangles_view_factor(*shape) == pytest.approx(
        parallel_by_integration(*shape), rel=0.005
    )


@pytest.mark.parametrize("shape", [(1.0, 1.0, 1.0), (2.0, 1.0, 1.5), (0.6, 1.0, 1.0)])
def test_perpendicular_rectangles_by_integration(shape):
    # the kernel peaks at the common edge, so midpoint sums are good to some per cent there
    assert radiation.perpendicular_rectangles_view_factor(*shape) == pytest.approx(
        perpendicular_by_integration(*shape), rel=0.04
    )


def test_faces_of_a_cube():
    # Any text: 0.1998 to the opposite, 0.2000 to each of the four neighbours; together 1
    opposite = radiation.parallel_rectangles_view_factor(1.0, 1.0, 1.0)
    neighbour = radiation.perpendicular_rectangles_view_factor(1.0, 1.0, 1.0)
    assert opposite == pytest.approx(0.1998, abs=1e-4)
    assert opposite + 4.0 * neighbour == pytest.approx(1.0, abs=1e-9)


@given(SIZES, SIZES, SIZES)
def test_faces_of_any_box_see_all(width, height, distance):
    # one face's view factors to the five others add up to 1
    opposite = radiation.parallel_rectangles_view_factor(width, height, distance)
    beside = 2.0 * radiation.perpendicular_rectangles_view_factor(width, distance, height)
    above = 2.0 * radiation.perpendicular_rectangles_view_factor(height, distance, width)
    assert opposite + beside + above == pytest.approx(1.0, abs=1e-6)


@given(SIZES, SIZES, SIZES)
def test_perpendicular_reciprocity(depth, other, edge):
    there = radiation.perpendicular_rectangles_view_factor(depth, other, edge) * depth
    back = radiation.perpendicular_rectangles_view_factor(other, depth, edge) * other
    assert there == pytest.approx(back, rel=1e-6, abs=1e-12)


@given(st.floats(0.003, 0.02), st.floats(0.01, 0.1), st.floats(0.04, 0.5), st.floats(0.05, 1.0))
def test_channel_lies_between_its_bounds(gap, depth, length, emissivity):
    opening = radiation.channel_opening_area(gap, depth, length)
    exchange = radiation.channel_exchange_area(gap, depth, length, emissivity)
    wall = length * (2.0 * depth + gap)
    assert gap * length < opening < gap * (length + 2.0 * depth)
    assert exchange <= opening * (1.0 + 1e-9)
    # a cavity emits more than its opening painted with the same colour, less than its whole wall would alone
    assert emissivity * opening * (1.0 - 1e-9) <= exchange <= emissivity * wall


def test_black_channel_is_its_opening():
    args = (0.008, 0.05, 0.1)
    assert radiation.channel_exchange_area(*args, 1.0) == pytest.approx(radiation.channel_opening_area(*args))


def test_shallow_channel_is_a_grey_plate():
    assert radiation.channel_exchange_area(0.05, 1e-5, 0.1, 0.3) == pytest.approx(0.3 * 0.005, rel=0.005)


def test_linear_coefficient_is_the_fourth_power_law():
    hot, cold = 353.0, 303.0
    flux = Stefan_Boltzmann * (hot**4 - cold**4)
    assert radiation.linear_coefficient(hot, cold) * (hot - cold) == pytest.approx(flux, rel=1e-9)
