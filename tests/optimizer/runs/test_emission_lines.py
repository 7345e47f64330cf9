"""Emission lines for charts: which groups are shown, and that they belong to the designs."""

from __future__ import annotations

import numpy as np
import pytest

from optimizer.runs.emission_lines import CONSECUTIVE, SPREAD, joined_lines, shown_multiples


@pytest.mark.parametrize("hertz", [8e3, 21e3, 74.9e3, 75e3, 149.9e3, 150e3, 200e3, 1e6])
def test_shown_groups(hertz: float) -> None:
    found = shown_multiples(np.array([hertz]))[0]
    assert len(found) == CONSECUTIVE + SPREAD
    assert found[0] * hertz >= 150e3 * (1.0 - 1e-9)
    assert (found[0] - 1) * hertz < 150e3
    assert np.all(np.diff(found) >= 0)
    assert np.all(np.diff(found[:CONSECUTIVE]) == 1)
    assert found[-1] * hertz <= 30e6 * (1.0 + 1e-9)
    assert found[-1] * hertz > 30e6 - hertz * 1.01


def test_no_lines_of_a_study_without_emission() -> None:
    assert joined_lines([None, None]) is None
