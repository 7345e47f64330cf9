"""Fixtures of the tests of the models and of the published checks. Building all of them takes under a
second.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray

from models.catalog import Catalog, load_catalog
from models.designs import Designs
from models.inverter import Inverter
from models.specification import GRID_CONNECTED, STAND_ALONE, Specification
from optimizer.space import SearchSpace
from optimizer.study.study import Study

__all__ = ["BACKUP", "DEPOT", "ROOFTOP", "Draw", "Spaces", "catalog", "draw", "inverter", "spaces", "studies"]

STUDIES = Path(__file__).parents[1] / "studies"
ROOFTOP = Specification(
    application=GRID_CONNECTED,
    phases=1,
    apparent_power_va=5000.0,
    power_factor_min=0.9,
    phase_voltage_v=230.0,
    phase_voltage_min_v=207.0,
    phase_voltage_max_v=253.0,
    line_frequency_hz=50.0,
    dc_voltage_min_v=370.0,
    dc_voltage_v=400.0,
    dc_voltage_max_v=450.0,
    ambient_c=45.0,
    altitude_m=1000.0,
    bridge="single-phase full bridge",
)
DEPOT = replace(
    ROOFTOP,
    phases=3,
    apparent_power_va=10e3,
    dc_voltage_min_v=640.0,
    dc_voltage_v=700.0,
    dc_voltage_max_v=800.0,
    bridge="three-phase six-switch bridge",
)
BACKUP = replace(
    ROOFTOP,
    application=STAND_ALONE,
    apparent_power_va=3000.0,
    rectifier_share=0.5,
    crest_factor=2.5,
    ambient_c=40.0,
)

Draw = Callable[[SearchSpace, int, int], Designs]
Spaces = dict[tuple[str, str], SearchSpace]


@pytest.fixture(scope="session")
def catalog() -> Catalog:
    return load_catalog()


@pytest.fixture(scope="session")
def studies() -> dict[str, Study]:
    """The shipped studies by file name."""
    return {path.stem: Study.read(path) for path in sorted(STUDIES.glob("*.toml"))}


@pytest.fixture(scope="session")
def inverter(catalog: Catalog) -> Inverter:
    """A rooftop inverter whose specification is built in Python."""
    return Inverter(ROOFTOP, catalog)


@pytest.fixture(scope="session")
def spaces(studies: dict[str, Study], catalog: Catalog) -> Spaces:
    """Search spaces by study and device class."""
    found = {}
    for name, study in studies.items():
        inverter = Inverter(study.specification, catalog)
        for device_class in study.search.device_classes:
            found[name, device_class] = SearchSpace(study, inverter, device_class)
    return found


@pytest.fixture(scope="session")
def draw() -> Draw:
    """Random candidates of a space: (space, count, seed) -> designs."""

    def drawn(space: SearchSpace, count: int, seed: int) -> Designs:
        points: NDArray[np.float64] = np.random.default_rng(seed).random((count, len(space.variables)))
        return space.designs(space.repaired(points))

    return drawn
