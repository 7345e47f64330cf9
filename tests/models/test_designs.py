"""Candidates as a struct of arrays."""

from __future__ import annotations

import numpy as np
from model_fixtures import Draw, Spaces


def test_take_picks_rows_through_all_levels(spaces: Spaces, draw: Draw) -> None:
    designs = draw(next(iter(spaces.values())), 12, 1)
    rows = np.array([7, 0, 7])
    taken = designs.take(rows)
    assert len(taken) == 3
    assert np.array_equal(taken.switching_frequency_hz, designs.switching_frequency_hz[rows])
    assert np.array_equal(taken.inverter_inductor.turns, designs.inverter_inductor.turns[rows])
    assert len(designs.take(slice(2, 6))) == 4
