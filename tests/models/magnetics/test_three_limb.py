"""A core of three limbs: why a phase's share of it can be treated as an inductor of its own."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.catalog import Catalog
from models.designs import InductorDesigns
from models.magnetics.build import build


@given(st.floats(0.0, 6.28), st.floats(1e4, 1e7), st.floats(1e4, 1e7))
def test_balanced_currents_see_their_own_limb_alone(angle: float, limb: float, air: float) -> None:
    """Nodal solution of the magnetic circuit: limbs between two yokes, a return through air beside them."""
    turns, peak = 40.0, 7.0
    force = turns * peak * np.sin(angle - np.array([0.0, 2.0, 4.0]) * np.pi / 3.0)
    across = (force.sum() / limb) / (3.0 / limb + 1.0 / air)  # magnetic potential between the yokes
    flux = (force - across) / limb
    np.testing.assert_allclose(flux, force / limb, atol=1e-9 * turns * peak / limb)


def test_currents_in_phase_see_little() -> None:
    """The zero sequence has to return through air: what a core of three limbs does not choke."""
    limb, air = 1e5, 2e6
    across = 3.0 / limb / (3.0 / limb + 1.0 / air)
    own = (1.0 - across) / limb  # flux of a limb per ampere-turn in every limb
    assert own < 0.02 / limb


def phase_share(catalog: Catalog, family: str, product: float) -> float:
    """Boxed volume per phase of the smallest core of a family with an area product [m3]."""
    able = [
        shape.box_volume_m3
        for shape in catalog.core_shapes
        if shape.family == family and shape.area_m2 * shape.window_area_m2 >= product
    ]
    return min(able)


def test_one_core_of_three_limbs_is_smaller_than_three_single_ones(catalog: Catalog) -> None:
    """Up to a half less on the mean of all sizes, yokes and windows being shared (common practice, no
    source).
    """
    products = np.geomspace(2e-8, 2e-6, 40)
    ratios = [
        phase_share(catalog, "three-limb", one) / phase_share(catalog, "cut C", one) for one in products
    ]
    assert 0.5 < np.exp(np.mean(np.log(ratios))) < 1.0


def test_a_build_on_a_limb(catalog: Catalog) -> None:
    """25/25-30x75: 100 turns of 4 mm2; window of a coil 15 x 75 mm, turn of 2 (25 + 25) mm and more."""
    shape, material = catalog.core_shapes.index("three-limb 25/25-30x75"), "amorphous tape 25 um"
    one = np.ones(1, dtype=np.int64)
    built = build(
        catalog,
        InductorDesigns(
            material=catalog.core_materials.index(material) * one,
            shape=shape * one,
            stack=one,
            turns=100 * one,
            conductor=0 * one,
            copper_area_m2=np.array([4e-6]),
        ),
        1.5e-3,
    )
    assert built.height[0] == pytest.approx(15e-3)
    assert built.breadth[0] == pytest.approx(75e-3)
    assert built.coils[0] == 1
    assert 0.1 < built.inner_length[0] < built.turn_length[0]
    assert built.strip_width[0] > 0.0
