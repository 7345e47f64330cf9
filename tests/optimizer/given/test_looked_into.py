"""The designs that studies/README.md looks into come out as it says."""

from pathlib import Path

import pytest

from models.inverter import Inverter
from optimizer.catalog_listing import read_catalog
from optimizer.given.designs_file import read_designs
from optimizer.given.evaluate import evaluated_table
from optimizer.study.study import Study

STUDIES = Path(__file__).parents[3] / "studies"


@pytest.mark.parametrize(
    ("study", "design", "loss_percent", "litres"),
    [
        ("rooftop_5kw", "rooftop", 1.42, 2.81),
        ("depot_10kw_three_phase", "depot", 1.10, 3.00),
        ("backup_3kva", "backup", 1.88, 1.47),
    ],
)
def test_designs_of_the_text(study, design, loss_percent, litres):
    asked = Study.read(STUDIES / f"{study}.toml")
    inverter = Inverter(asked.specification, read_catalog(asked.catalog_files))
    given = read_designs(STUDIES / "looked_into" / f"{design}.csv", inverter)
    row = evaluated_table(asked, inverter, given).iloc[0]
    assert row.feasible
    assert row.loss_weighted_percent == pytest.approx(loss_percent, abs=0.006)
    assert row.volume_l == pytest.approx(litres, abs=0.006)
