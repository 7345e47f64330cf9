"""Constraints and the joining of blocks."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.evaluation import at_least, at_most

VALUE, LIMIT = st.floats(-1e3, 1e3), st.floats(0.01, 1e3)


@given(VALUE, LIMIT)
def test_margin_sign_says_whether_it_is_met(value: float, limit: float) -> None:
    most, least = at_most("a", "", np.array([value]), limit), at_least("b", "", np.array([value]), limit)
    assert (most.margin[0] >= 0.0) == (value <= limit)
    assert (least.margin[0] >= 0.0) == (value >= limit)
    assert most.margin[0] == pytest.approx(-least.margin[0])
    assert (most.sense, least.sense) == ("max", "min")


def test_scale_and_shapes() -> None:
    found = at_most("temperature", "degC", np.array([100.0, 130.0]), 120.0, 80.0)
    assert found.margin == pytest.approx([0.25, -0.125])
    assert found.limit.shape == found.value.shape == (2,)
