"""The full choice of inductors for a duty: what is in it, and that a sized inductor is never beyond it."""

import numpy as np
import pytest

from models.catalog import Catalog
from models.magnetics.alternatives import MORE_TURNS, WINDOW_USES, Offer, alternatives
from models.magnetics.build import build
from models.magnetics.sizing import STACK_LIMIT, fitting_families

INDUCTANCE, PEAK = 300e-6, 30.0


@pytest.fixture(scope="module")
def offer(catalog: Catalog) -> Offer:
    return Offer(
        catalog,
        fitting_families(catalog, 1),
        np.arange(len(catalog.core_materials)),
        np.arange(len(catalog.conductors)),
        0.9,
        1.5e-3,
    )


def test_every_material_conductor_and_stack_is_there(offer: Offer) -> None:
    found = alternatives(offer, INDUCTANCE, PEAK, 1.0)
    assert set(found.material) == set(offer.materials)
    assert set(found.conductor) == set(offer.conductors)
    assert set(found.stack) == set(range(1, STACK_LIMIT + 1))
    families = {offer.catalog.core_shapes[int(shape)].family for shape in set(found.shape)}
    sold = set().union(*(part.families for part in offer.catalog.core_materials))
    assert families == set(offer.families) & sold
    assert len(found.turns) < 1.1 * len(set(zip(*map(tuple, vars(found).values()), strict=True)))


def test_cores_are_no_larger_than_asked_and_sold_for_the_material(offer: Offer) -> None:
    found = alternatives(offer, INDUCTANCE, PEAK, 2e-4)
    built = build(offer.catalog, found, offer.former_wall)
    assert built.box_volume.max() <= 2e-4 * 1.2  # the boxes of stacks differ a little in the last digit
    for material, shape in set(zip(found.material, found.shape, strict=True)):
        part = offer.catalog.core_materials[int(material)]
        assert offer.catalog.core_shapes[int(shape)].family in part.families


def test_gapped_cores_begin_at_the_fewest_turns_that_saturation_allows(offer: Offer) -> None:
    """N = L I/(B_max A), whole turns up (Faraday), and go on to 2.5 times as many."""
    found = alternatives(offer, INDUCTANCE, PEAK, 2e-4)
    built = build(offer.catalog, found, offer.former_wall)
    gapped = built.material.kind == "gapped"
    flux = INDUCTANCE * PEAK / (built.turns * built.area)
    limit = 0.9 * built.material.saturation_t
    assert np.all(flux[gapped] <= limit[gapped] * (1.0 + 1e-9))
    fewer = INDUCTANCE * PEAK / ((built.turns - 1.0) * built.area + 1e-30)
    at_the_limit = gapped & (fewer > limit)
    cores = set(zip(found.material[gapped], found.shape[gapped], found.stack[gapped], strict=True))
    rows = np.flatnonzero(at_the_limit)
    begun = set(zip(found.material[rows], found.shape[rows], found.stack[rows], strict=True))
    assert cores == begun
    assert MORE_TURNS[-1] == pytest.approx(2.5)
    assert WINDOW_USES[-1] == pytest.approx(1.0)
