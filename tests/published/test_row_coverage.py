"""No published row is dropped in silence: tested here, tested in a named other module, or on the list of
later rows.
"""

from __future__ import annotations

from pathlib import Path

import pytest
import test_dc_link
import test_device_currents
import test_magnetics
import test_output_filter
import test_waveforms
import test_weighted_efficiency
from check_rows import CHECKS
from later_rows import ELSEWHERE, GROUPS, LATER, LIMITS

MODULES = (
    test_waveforms,
    test_device_currents,
    test_dc_link,
    test_magnetics,
    test_output_filter,
    test_weighted_efficiency,
)
NAMED_ELSEWHERE = {
    row
    for row in CHECKS
    for name in ELSEWHERE
    if row == name or (name.endswith("-") and row.startswith(name))
}
OURS = {name for name, row in CHECKS.items() if row["group"] in GROUPS} | set(LIMITS)


def test_every_row_is_tested_or_on_the_list() -> None:
    tested = set().union(*(module.TESTED for module in MODULES))
    assert OURS - tested - set(LATER) - NAMED_ELSEWHERE == set()
    assert tested - OURS == set()


def test_no_row_is_both_tested_and_on_the_list() -> None:
    tested = set().union(*(module.TESTED for module in MODULES))
    assert tested & set(LATER) == set()
    assert set(LATER) & NAMED_ELSEWHERE == set()
    assert tested & NAMED_ELSEWHERE == set()
    assert set(LATER) <= OURS


def test_every_later_row_says_why() -> None:
    assert all(len(reason) > 20 for reason in LATER.values())


@pytest.mark.parametrize(("name", "module"), ELSEWHERE.items(), ids=ELSEWHERE)
def test_rows_tested_elsewhere_are_named_there(name: str, module: str) -> None:
    assert f'"{name}"' in (Path(__file__).parent / module).read_text(encoding="utf-8")
