"""The task in words."""

import pytest

from optimizer.charts.task import task_words
from optimizer.study.study import Study


@pytest.mark.parametrize(
    ("name", "told"),
    [
        (
            "rooftop_5kw",
            {
                "rated power": "5 kVA, single phase, grid-connected",
                "ac voltage": "230 V (207 to 253 V), 50 Hz",
                "dc voltage": "400 V (360 to 450 V)",
                "distortion limits": "IEEE 1547-2018",
                "air": "45 °C at 1000 m",
            },
        ),
        (
            "depot_10kw_three_phase",
            {
                "rated power": "10 kVA, three phases, grid-connected",
                "ac voltage": "400 V line to line (360 to 440 V), 50 Hz",
                "weighting of the loss": "5 % at 10, 15 % at 30, 30 % at 60, 50 % at 100 % load",
            },
        ),
        (
            "backup_3kva",
            {
                "bridge": "single-phase full bridge, LC filter",
                "distortion limits": "voltage 3 % at a linear, 8 % at a rectifier load",
                "minimised": "weighted loss, volume, distortion",
            },
        ),
    ],
)
def test_figures_are_those_of_the_study_file(name, told, rooftop):
    words = dict(task_words(Study.read(rooftop.path.parent / f"{name}.toml")))
    assert told.items() <= words.items()
