"""LimitTable: bands, parity, multiples of three; and its TOML form."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.catalog import LimitBand, LimitTable, load_catalog

TABLE = LimitTable(
    name="own",
    basis="rated current",
    bands=(
        LimitBand("odd", 3, 9, 0.04),
        LimitBand("odd", 11, 39, 0.01, over_order=0.1, multiples="not of three"),
        LimitBand("even", 2, 8, 0.02),
    ),
    total_limit=0.05,
    total_name="total",
)


def test_limits_by_band_parity_and_multiples() -> None:
    assert TABLE.limit_of([3, 9, 2, 8]).tolist() == [0.04, 0.04, 0.02, 0.02]
    assert TABLE.limit_of(11) == pytest.approx(0.01 + 0.1 / 11)
    assert np.isinf(TABLE.limit_of([1, 10, 15, 41, 0])).all()


def test_shape_is_kept_and_equals_the_scalar_calls() -> None:
    orders = np.arange(1, 49).reshape(4, 12)
    limits = TABLE.limit_of(orders)
    assert limits.shape == orders.shape
    assert limits.ravel().tolist() == [float(TABLE.limit_of(order)) for order in orders.ravel()]


@given(st.integers(min_value=2, max_value=60))
def test_every_table_gives_positive_limits(order: int) -> None:
    for table in load_catalog().limit_tables:
        assert table.limit_of(order) > 0.0
        assert table.total_limit > 0.0


def test_unknown_table_suggests_the_nearest() -> None:
    with pytest.raises(ValueError, match="the nearest name is 'IEEE 1547-2018'"):
        load_catalog().limit_table("IEEE 1547")


OWN = """
[[limit_tables]]
name = "site agreement"
basis = "demand current"
origin = "contract"
total_limit = 0.04
odd = [{ orders = [2, 10], limit = 0.03 }, { orders = [11, 50], limit = 0.01 }]
even = [{ orders = [2, 50], share_of_odd = 0.25 }]
"""


def test_own_table(tmp_path: Path) -> None:
    path = tmp_path / "own.toml"
    path.write_text(OWN, encoding="utf-8")
    table = load_catalog([path]).limit_table("site agreement")
    assert table.limit_of([3, 11, 2, 10, 12, 50]).tolist() == [0.03, 0.01, 0.0075, 0.0075, 0.0025, 0.0025]
    assert table.origin["table"] == "contract"


@pytest.mark.parametrize(
    ("old", "new", "expected"),
    [
        ('basis = "demand current"', 'basis = "rated curent"', "basis must be one of"),
        ('origin = "contract"', "", "origin is missing"),
        ("total_limit = 0.04", "total_limit = -1", "total_limit must be greater than zero, got -1"),
        ("total_limit", "totl_limit", "unknown key 'totl_limit'"),
        ("limit = 0.03", "limit = -0.03", "needs a limit greater than zero"),
        ("orders = [11, 50]", "orders = [50, 11]", "orders must be [first, last], got [50, 11]"),
        ("share_of_odd = 0.25", "share = 0.25", "unknown key 'share'"),
        ("site agreement", "IEEE 1547-2018", "there is such a table already"),
    ],
)
def test_a_faulty_table_is_refused(tmp_path: Path, old: str, new: str, expected: str) -> None:
    path = tmp_path / "own.toml"
    path.write_text(OWN.replace(old, new), encoding="utf-8")
    with pytest.raises(ValueError, match="own.toml, part") as caught:
        load_catalog([path])
    assert expected in str(caught.value)
