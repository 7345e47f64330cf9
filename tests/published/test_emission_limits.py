"""Limits of conducted emission against the published rows: CISPR 11 and 32; sources stand in the rows."""

from __future__ import annotations

import json
from pathlib import Path

import pytest

from models.catalog import load_catalog

DATA = Path(__file__).parent / "data"
CHECKS = {check["id"]: check for check in json.loads((DATA / "checks.json").read_text(encoding="utf-8"))}
LIMITS = load_catalog().emission_limits
CLASS_B = ("CISPR 11 class B", "CISPR 32 class B")
CLASS_A = ("CISPR 11 class A up to 20 kVA", "CISPR 32 class A")
LARGE = ("CISPR 11 class A above 20 kVA",)

ROWS = [
    ("LIM-CISPR-A_0.15-0.5_MHz_QP-AV", CLASS_A, 0.3),
    ("LIM-CISPR-A_0.5-30_MHz_QP-AV", CLASS_A, 10.0),
    ("LIM-CISPR-B_0.5-5_MHz_QP-AV", CLASS_B, 1.0),
    ("LIM-CISPR-B_5-30_MHz_QP-AV", CLASS_B, 10.0),
    ("LIM-CISPR-B_at_0.15_MHz_QP-AV", CLASS_B, 0.15),
    ("LIM-CISPR-B_at_0.5_MHz_QP-AV", CLASS_B, 0.5),
    ("LIM-CISPR-Bint-0.2", CLASS_B, 0.2),
    ("LIM-CISPR-Bint-0.3", CLASS_B, 0.3),
    ("LIM-CISPR11-0.15-0.5_MHz", LARGE, 0.3),
    ("LIM-CISPR11-0.5-5_MHz", LARGE, 1.0),
    ("LIM-CISPR11-at_5_MHz", LARGE, 5.0),
    ("LIM-CISPR11-at_30_MHz", LARGE, 30.0),
]


@pytest.mark.parametrize(("row", "names", "mhz"), ROWS, ids=[row for row, _, _ in ROWS])
def test_quasi_peak_and_average_limits(row: str, names: tuple[str, ...], mhz: float) -> None:
    quasi_peak, average = CHECKS[row]["expected"]
    tolerance = max(CHECKS[row]["tolerance"]["abs"], 1e-6)
    for name in names:
        limit = LIMITS[LIMITS.index(name)]
        assert float(limit.quasi_peak_at(1e6 * mhz)) == pytest.approx(quasi_peak, abs=tolerance)
        assert float(limit.average_at(1e6 * mhz)) == pytest.approx(average, abs=tolerance)


def test_nothing_is_limited_below_150_khz() -> None:
    for limit in LIMITS:
        assert limit.quasi_peak_at([149e3, 31e6]) == pytest.approx([float("inf"), float("inf")])
