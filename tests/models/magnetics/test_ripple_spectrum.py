"""Winding loss of the ripple by carrier groups against a Fourier sum over every line of the exact current.

The models take the mean square current of six carrier groups, each at its group's own frequency, and of all
others together. The exact sum comes from the edges of one switched line period (`oracle`), line by line up to
sixty carriers; what lies beyond would add 0.3 to 1 % where the loss goes with the square of frequency.
"""

from __future__ import annotations

import sys
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

from models.catalog import Catalog
from models.designs import InductorDesigns
from models.magnetics.ac_resistance import resistance_ratio
from models.magnetics.build import Build, build
from models.waveforms.bridges import BRIDGES
from models.waveforms.tables import GROUP_MULTIPLES, waveform_tables

sys.path.insert(0, str(Path(__file__).parents[1] / "waveforms"))
from oracle import SCHEMES, TURN, LinePeriod

Array = NDArray[np.float64]
CARRIER_HZ = 20e3
RESISTIVITY = np.array(2.2e-8)
CARRIERS = 60
RATIO = 123
BRIDGE_OF = {scheme.name: bridge.name for bridge in BRIDGES.values() for scheme in bridge.modulations}


def windings(catalog: Catalog) -> Build:
    """Litz, thin and thick wire, foil on one E core."""
    kinds = [part.kind for part in catalog.conductors]
    names = catalog.conductors.names
    conductor = [names.index("litz 0.2 mm"), kinds.index("round"), kinds.index("round"), kinds.index("foil")]
    same = np.ones(4, dtype=np.int64)
    return build(
        catalog,
        InductorDesigns(
            material=0 * same,
            shape=catalog.core_shapes.index("E65/32/27") * same,
            stack=same,
            turns=30 * same,
            conductor=np.array(conductor),
            copper_area_m2=np.array([4e-6, 0.5e-6, 4e-6, 4e-6]),
        ),
        1.5e-3,
    )


def exact_lines(name: str, index: float, ratio: int) -> tuple[Array, Array]:
    """Orders and mean squares of the ripple current's lines [(V_dc/(L f_s))^2]."""
    period = LinePeriod(SCHEMES[name], index, ratio)
    order = np.arange(2, CARRIERS * ratio)
    bounds, level = period.edges, period.voltage()
    turned = np.exp(-1j * order[:, None] * bounds)
    voltage = (turned[:, :-1] - turned[:, 1:]) @ level / (1j * order * TURN)
    return order, 2.0 * np.abs(voltage * ratio / (TURN * order)) ** 2


@pytest.mark.parametrize("name", SCHEMES)
@pytest.mark.parametrize("index", [0.5, 0.9])
def test_carrier_groups_against_the_fourier_sum(catalog: Catalog, name: str, index: float) -> None:
    order, square = exact_lines(name, index, RATIO)
    built = windings(catalog)
    count = len(built.turns)
    lines = np.broadcast_to(order * CARRIER_HZ / RATIO, (count, len(order)))
    expected = resistance_ratio(built, lines, RESISTIVITY, np.ones(count)) @ square
    tables = waveform_tables(BRIDGE_OF[name])
    scheme = np.array([BRIDGES[BRIDGE_OF[name]].modulation_index(name)])
    groups = tables.read(tables.group_ripple, scheme, *tables.position(np.array([index])))[0]
    frequency = np.broadcast_to(CARRIER_HZ * GROUP_MULTIPLES, (count, len(groups)))
    found = resistance_ratio(built, frequency, RESISTIVITY, np.ones(count)) @ groups
    assert found == pytest.approx(expected, rel=0.02)
