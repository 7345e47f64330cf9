"""Harmonic limit tables of the catalogue against the published checks."""

from __future__ import annotations

import json
import re
from pathlib import Path
from typing import Any

import numpy as np
import pytest

from models.catalog import load_catalog

DATA = Path(__file__).parent / "data"
CAT = load_catalog()
CHECKS = {check["id"]: check for check in json.loads((DATA / "checks.json").read_text(encoding="utf-8"))}


@pytest.mark.parametrize(
    ("check", "table"),
    [
        ("LIM-519-lt20", "IEEE 519-2022 Isc/IL below 20"),
        ("LIM-519-20-50", "IEEE 519-2022 Isc/IL 20 to 50"),
        ("LIM-519-50-100", "IEEE 519-2022 Isc/IL 50 to 100"),
        ("LIM-519-100-1000", "IEEE 519-2022 Isc/IL 100 to 1000"),
        ("LIM-519-gt1000", "IEEE 519-2022 Isc/IL above 1000"),
    ],
)
def test_ieee_519(check: str, table: str) -> None:
    """Odd limits per range, total, and the even shares of the 2022 notes (page and memory)."""
    limits = CAT.limit_table(table)
    *bands, total = (x / 100.0 for x in CHECKS[check]["expected"])
    for first, last, expected in zip((3, 11, 17, 23, 35), (9, 15, 21, 33, 49), bands, strict=True):
        assert limits.limit_of(np.arange(first, last + 1, 2)) == pytest.approx(expected)
    assert limits.total_limit == pytest.approx(total)
    low, high = np.array(CHECKS["LIM-519-even"]["expected"]) / 100.0
    assert limits.limit_of([2, 4, 6]) == pytest.approx(low * bands[0])
    assert limits.limit_of([8, 10]) == pytest.approx(high * bands[0])
    assert limits.limit_of([12, 18, 24, 36, 50]) == pytest.approx(high * np.array(bands)[[1, 2, 3, 4, 4]])


def test_ieee_1547() -> None:
    """IEEE 1547-2018 Tables 26 and 27 (from memory)."""
    limits = CAT.limit_table("IEEE 1547-2018")
    odd = np.array(CHECKS["LIM-1547-odd"]["expected"]) / 100.0
    assert limits.limit_of([3, 9, 11, 15, 17, 21, 23, 33, 35, 49]) == pytest.approx(np.repeat(odd, 2))
    even = [float(text) / 100.0 for text in CHECKS["LIM-1547-even"]["expected"][:3]]
    assert limits.limit_of([2, 4, 6]) == pytest.approx(even)
    assert limits.limit_of([8, 12, 18, 24, 36]) == pytest.approx(odd)
    assert limits.total_limit == pytest.approx(CHECKS["LIM-1547-trd"]["expected"] / 100.0)
    assert limits.basis == "rated current"


CLASS_A = [check for name, check in CHECKS.items() if re.fullmatch(r"LIM-3-2-\d\d", name)]


@pytest.mark.parametrize("check", CLASS_A, ids=lambda check: check["id"])
def test_iec_61000_3_2_class_a(check: dict[str, Any]) -> None:
    limits = CAT.limit_table("IEC 61000-3-2 class A")
    assert limits.basis == "absolute ampere"
    found = limits.limit_of(check["inputs"]["h"])
    assert found == pytest.approx(check["expected"], abs=check["tolerance"]["abs"]), check["source"]


@pytest.mark.parametrize("ratio", [33, 120])
def test_iec_61000_3_12(ratio: int) -> None:
    """IEC 61000-3-12 Table 3 (from memory): orders 5, 7, 11, 13 and the total."""
    limits = CAT.limit_table(f"IEC 61000-3-12 balanced three-phase Rsce {ratio}")
    expected = np.array(CHECKS[f"LIM-3-12-{ratio}"]["expected"]) / 100.0
    assert limits.limit_of([5, 7, 11, 13]) == pytest.approx(expected[:4])
    assert limits.total_limit == pytest.approx(expected[4])


def test_voltage_compatibility_levels() -> None:
    """IEC 61000-2-2 (from memory): 2.27 % x 17/n - 0.27 %, and 0.25 % x 10/n + 0.25 % for even orders."""
    limits = CAT.limit_table("IEC 62040-3 stand-alone output")
    orders = np.array([17, 19, 23, 25, 49])
    assert limits.limit_of(orders) == pytest.approx((2.27 * 17.0 / orders - 0.27) / 100.0, rel=1e-3)
    even = np.array([10, 12, 50])
    assert limits.limit_of(even) == pytest.approx((0.25 * 10.0 / even + 0.25) / 100.0)
    assert limits.limit_of([27, 33, 39, 45]) == pytest.approx(0.002)
    assert limits.total_limit == pytest.approx(0.08)


def test_supply_voltage_characteristics() -> None:
    """EN 50160, low voltage (from memory): orders 3, 5, 7, 11, 13 and the total."""
    limits = CAT.limit_table("EN 50160 supply voltage")
    assert limits.limit_of([3, 5, 7, 11, 13]) == pytest.approx([0.05, 0.06, 0.05, 0.035, 0.03])
    assert limits.limit_of([2, 4]) == pytest.approx([0.02, 0.01])
    assert limits.total_limit == pytest.approx(0.08)
