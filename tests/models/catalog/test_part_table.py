"""PartTable: columns, names and selection."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
import pytest

from models.catalog import PartTable


@dataclass(frozen=True)
class Bolt:
    name: str
    length_m: float
    zinc: bool
    threads_m: tuple[float, ...] = (0.001,)
    uses: tuple[str, ...] = ()


BOLTS = PartTable(
    (
        Bolt("short", 0.01, True, (0.001, 0.002), ("case",)),
        Bolt("middle", 0.02, False, (0.003,), ("case", "bus bar")),
        Bolt("long", 0.04, True),
    )
)


def test_length_order_and_access() -> None:
    assert len(BOLTS) == 3
    assert [bolt.name for bolt in BOLTS] == list(BOLTS.names) == ["short", "middle", "long"]
    assert BOLTS[1].name == "middle"
    assert all(BOLTS.index(bolt.name) == place for place, bolt in enumerate(BOLTS))


def test_unknown_name_suggests_the_nearest() -> None:
    with pytest.raises(ValueError, match="no part called 'midle'; the nearest name is 'middle'"):
        BOLTS.index("midle")
    with pytest.raises(ValueError, match="the table is empty"):
        PartTable[Bolt](()).index("short")


def test_column_is_made_once_and_cannot_be_written() -> None:
    column = BOLTS.column("length_m")
    assert column.dtype == np.float64
    assert column.tolist() == [0.01, 0.02, 0.04]
    assert BOLTS.column("length_m") is column
    with pytest.raises(ValueError, match="read-only"):
        column[0] = 1.0


def test_columns_of_words_flags_and_tuples() -> None:
    assert BOLTS.column("zinc").dtype == np.bool_
    assert BOLTS.column("name").tolist() == ["short", "middle", "long"]
    padded = BOLTS.column("threads_m")
    assert padded.tolist() == [[0.001, 0.002], [0.003, 0.003], [0.001, 0.001]]
    assert BOLTS.column("uses").tolist() == [("case",), ("case", "bus bar"), ()]


def test_unknown_field() -> None:
    with pytest.raises(ValueError, match="Bolt has no field 'width_m'"):
        BOLTS.column("width_m")


def test_selection_gives_indexes() -> None:
    chosen = BOLTS.select(lambda bolt: bolt.zinc)
    assert chosen.tolist() == [0, 2]
    assert BOLTS.column("length_m")[chosen].tolist() == [0.01, 0.04]
    assert BOLTS.select(lambda bolt: bolt.length_m > 1.0).dtype == np.intp


def test_names_must_differ() -> None:
    with pytest.raises(ValueError, match="more than once: short"):
        PartTable((BOLTS[0], BOLTS[0]))
