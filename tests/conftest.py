"""Fixtures shared by all tests: the shipped studies and one small search."""

from __future__ import annotations

from pathlib import Path

import pytest
from hypothesis import settings

from optimizer.evolution.populations import SearchResult, search
from optimizer.prepared import prepared_inverter
from optimizer.runs.run import run_search
from optimizer.runs.stored_run import StoredRun, read_run
from optimizer.study.study import Study

settings.register_profile("untimed", deadline=None)  # speed is never tested by time
settings.load_profile("untimed")

STUDIES = Path(__file__).parents[1] / "studies"


@pytest.fixture(scope="session")
def rooftop() -> Study:
    """The rooftop study as shipped."""
    return Study.read(STUDIES / "rooftop_5kw.toml")


@pytest.fixture(scope="session")
def small_search(rooftop: Study) -> SearchResult:
    """A small search of the rooftop study, in this process."""
    prepared_inverter(rooftop)
    return search(rooftop.with_effort(40, 40), seed=3, workers=1)


@pytest.fixture(scope="session")
def stored(rooftop: Study, tmp_path_factory: pytest.TempPathFactory) -> StoredRun:
    """A small run of the rooftop study, written and read back."""
    folder = tmp_path_factory.mktemp("stored") / "rooftop"
    run_search(rooftop.with_effort(40, 40), folder, seed=3, workers=1)
    return read_run(folder)
