"""The published values, row by row: test parameters that carry id, status and source, and the row's own
tolerance.
"""

from __future__ import annotations

import json
import math
from pathlib import Path
from typing import Any

import pytest

DATA = Path(__file__).parent / "data"
CHECKS: dict[str, dict[str, Any]] = {
    row["id"]: row for row in json.loads((DATA / "checks.json").read_text(encoding="utf-8"))
}


def starting(*prefixes: str) -> list[str]:
    """Ids that begin with one of the prefixes."""
    return [name for name in CHECKS if name.startswith(prefixes)]


def params(ids: list[str]) -> list[Any]:
    """Rows as test parameters; the test's name shows id, status and source."""
    return [
        pytest.param(CHECKS[name], id=f"{name} ({CHECKS[name]['status']}: {CHECKS[name]['source']})")
        for name in ids
    ]


def assert_meets(row: dict[str, Any], found: float, place: int | None = None) -> None:
    """Hold a value, in the row's unit, against the row with the row's own tolerance."""
    expected = row["expected"] if place is None else row["expected"][place]
    tolerance = row["tolerance"]
    room = tolerance["abs"] if "abs" in tolerance else tolerance["rel"] * abs(expected)
    room = max(room, 1e-12 * abs(expected))  # an exact row still leaves room for rounding
    assert math.isfinite(found)
    assert abs(found - expected) <= room, (
        f"{row['id']}: found {found:.7g}, published {expected:.7g} +- {room:.2g} {row['unit']}; "
        f"{row['source']}"
    )


def lag_of(row: dict[str, Any]) -> float:
    """Lag [rad] of a row's power factor."""
    return math.acos(row["inputs"]["cos_phi"])
