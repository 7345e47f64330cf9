"""Notebook use: what a search from Python offers, and the example that shows it."""

import subprocess
import sys
from pathlib import Path

import pandas as pd
import pytest

from optimizer import front, search
from optimizer.errors import InputError
from optimizer.notebook import Charts, Run

ROOT = Path(__file__).parents[2]


@pytest.fixture(scope="module")
def run(rooftop):
    return search(rooftop.with_effort(24, 30), seed=3, workers=1)


def test_a_search_offers_its_front_as_a_table(run):
    assert isinstance(run.front, pd.DataFrame)
    assert run.front is run.front, "made once"
    assert list(run.margins.design_id) == list(run.front.design_id)
    pd.testing.assert_frame_equal(front(run).table, run.front)


def test_nothing_is_made_before_it_is_asked_for(rooftop):
    found = search(rooftop.with_effort(16, 8), seed=3, workers=1)
    assert set(vars(found)) == {"study", "seed", "classes"}
    _ = found.charts
    assert "fronts" not in vars(found)


def test_its_chart_shows_every_design_of_the_front(run):
    spec = run.charts.front().to_dict()
    assert len(spec["data"]["values"]) == len(run.front)
    assert spec["encoding"]["x"]["field"] == "loss_weighted_percent"
    other = run.charts.front("volume", "cost of ownership").to_dict()
    assert (other["encoding"]["x"]["field"], other["encoding"]["y"]["field"]) == (
        "volume_l",
        "cost_of_ownership",
    )


def test_an_unknown_axis_is_told(run):
    with pytest.raises(InputError, match='given "size", expected one of'):
        run.charts.front("size")


def test_dashboard_and_shortlist(run):
    assert run.charts.dashboard().to_dict()["datasets"]["designs"]
    assert [entry.role for entry in run.shortlist().entries][0] == "balanced"


def test_everything_public_is_there():
    assert {"front", "margins", "evaluated", "charts", "shortlist", "fronts"} <= set(dir(Run))
    assert {"front", "dashboard"} <= set(dir(Charts))


def test_the_example_runs():
    done = subprocess.run(
        [sys.executable, ROOT / "studies" / "from_python.py"],
        cwd=ROOT, env={"PYTHONPATH": str(ROOT), "PATH": "/usr/bin:/bin"},
        capture_output=True, text=True, check=False,
    )  # fmt: skip
    assert done.returncode == 0, done.stderr
    assert "least inductor mass [kg]" in done.stdout
    assert "best by your weights" in done.stdout
