"""Whole inverters of a search against measured ones.

The measured side is an open table of grid inverters (parameters of an inverter model fitted to laboratory
tests of whole units) that ships with a solar library; the model functions are that library's. What differs,
and why the front must lie on the upper side of the measured band but not beyond what is possible:

- a front holds the best designs of its search, the table whole product ranges of two decades;
- the measured units hold further conversion stages (a boost converter or a transformer in most of them),
  emission filters, relays, fuses, residual-current monitoring and displays, none of which the models
  contain;
- measured at nominal dc voltage, as computed here; the models' auxiliary power stands for control and gate
  supplies alone.

So the test can tell a model that is wrong in its main losses, in either direction; it cannot confirm tenths
of a per cent.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pandas as pd
import pvlib
import pytest
from numpy.typing import NDArray

from models.specification import CALIFORNIAN_WEIGHTS
from optimizer.evolution.populations import search
from optimizer.runs.fronts import Front, front
from optimizer.study.study import Study

Array = NDArray[np.float64]
TABLE = Path(pvlib.__file__).parent / "data" / "sam-library-cec-inverters-2019-03-05.csv"
STUDY = Path(__file__).parents[2] / "studies" / "rooftop_5kw.toml"
SMALLEST_VA, LARGEST_VA = 4e3, 8e3
QUANTILES = (5, 25, 50, 75, 95)
QUOTED = (
    94.9,
    95.8,
    96.4,
    97.0,
    97.7,
)  # per cent, 4-8 kW: quoted with the open data by those who gave the checks
CEILING = 0.997  # a judgement: above it switches and inductors would have to lose implausibly little


def californian(units: pd.DataFrame) -> Array:
    """Californian weighted efficiency of measured units at nominal dc voltage [-]."""
    names = ("Paco", "Pdco", "Vdco", "Pso", "C0", "C1", "C2", "C3")
    columns = {name: units[name].to_numpy(dtype=float) for name in names}
    columns["Pnt"] = np.zeros(())  # loss at night: of no weight here, and the library wants one value for all
    total = np.zeros(len(units))
    for level, weight in CALIFORNIAN_WEIGHTS.items():
        wanted = level * columns["Paco"]
        low, high = wanted.copy(), 1.5 * columns["Pdco"]
        for _ in range(60):
            middle = 0.5 * (low + high)
            enough = pvlib.inverter.sandia(columns["Vdco"], middle, columns) >= wanted * (1.0 - 1e-12)
            low, high = np.where(enough, low, middle), np.where(enough, middle, high)
        total += weight * wanted / high
    return total


@pytest.fixture(scope="module")
def measured() -> Array:
    """All units of the table between 4 and 8 kW."""
    units = pvlib.pvsystem.retrieve_sam(path=str(TABLE)).T
    rating = units["Paco"].to_numpy(dtype=float)
    return californian(units[(rating >= SMALLEST_VA) & (rating < LARGEST_VA)])


@pytest.fixture(scope="module")
def found() -> Front:
    """The rooftop study's front from a small search."""
    return front(search(Study.read(STUDY).with_effort(40, 30), seed=1, workers=1))


def test_measured_band_is_the_quoted_one(measured: Array) -> None:
    assert len(measured) > 500
    # printed to a tenth of a per cent; where the classes end was not said
    assert 100.0 * np.percentile(measured, QUANTILES) == pytest.approx(QUOTED, abs=0.15)


def test_front_lies_in_the_upper_part_of_the_measured_band(measured: Array, found: Front) -> None:
    values = found.table["efficiency_californian"].to_numpy(dtype=float)
    assert len(values) >= 10
    assert np.all(values >= np.percentile(measured, 5))
    assert np.all(values <= CEILING)
    assert np.median(values) > np.median(measured)


def test_part_load_efficiency_has_the_measured_shape(found: Front) -> None:
    """As in every measured unit: low at 5 % load, where fixed losses rule, highest between a fifth and full
    load.
    """
    best = found.load_level[np.argmax(found.efficiency, axis=-1)]
    assert np.all(best >= 0.2)
    assert np.all(found.efficiency[:, 0] < found.efficiency.max(axis=-1))


def test_power_density_is_of_the_published_order(found: Front) -> None:
    """3.1..13 kW/l were reached by the finalists of an open competition for 2 kW (published, 4 kW/l was
    ordinary there). Designs of 5 kW in natural or forced air that also minimise price and loss must not
    beat its winner; the floor is 0.13 kW/l, what measured wall-mounted units of 40 l come to (common
    practice, no source).
    """
    density = 5.0 / found.table["volume_l"].to_numpy(dtype=float)
    assert np.all(density > 0.13)
    assert np.all(density < 13.0)
