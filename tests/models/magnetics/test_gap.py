"""Gap, fringing and roll-off: round trips, limits, monotony."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.constants import mu_0

from models.magnetics.gap import (
    fringing_factor,
    gap_for_inductance,
    gapped_inductance,
    powder_inductance,
    powder_permeability_share,
)

AREA, PATH, MU, BREADTH = (np.array(value) for value in (5e-4, 0.15, 2000.0, 0.04))
GAP_LIMIT = 0.3  # greatest gap over breadth that a study allows by default


@given(st.integers(5, 120), st.floats(1e-5, GAP_LIMIT * 0.04))
def test_gap_gives_the_inductance_back(turns: int, gap: float) -> None:
    """From gap to inductance to gap: the inductance returns within 0.5 % up to the greatest gap allowed."""
    n = np.array(float(turns))
    inductance = gapped_inductance(n, np.array(gap), AREA, PATH, MU, BREADTH)
    again = gap_for_inductance(n, inductance, AREA, PATH, MU, BREADTH)
    assert gapped_inductance(n, again, AREA, PATH, MU, BREADTH) == pytest.approx(float(inductance), rel=5e-3)


def test_no_gap_can_raise_the_inductance() -> None:
    most = gapped_inductance(np.array(20.0), np.array(0.0), AREA, PATH, MU, BREADTH)
    assert gap_for_inductance(np.array(20.0), 1.1 * most, AREA, PATH, MU, BREADTH) < 0.0
    assert gap_for_inductance(np.array(20.0), most, AREA, PATH, MU, BREADTH) == pytest.approx(0.0, abs=1e-12)


@given(st.floats(1e-6, 0.039), st.floats(1.05, 2.0))
def test_inductance_falls_with_the_gap(gap: float, factor: float) -> None:
    one, wider = (
        gapped_inductance(np.array(30.0), np.array(g), AREA, PATH, MU, BREADTH) for g in (gap, factor * gap)
    )
    assert wider < one


@given(st.floats(1e-9, 0.08))
def test_fringing_only_adds(gap: float) -> None:
    assert fringing_factor(np.array(gap), AREA, BREADTH) >= 1.0


def test_small_gap_has_no_fringing() -> None:
    assert fringing_factor(np.array(0.0), AREA, BREADTH) == pytest.approx(1.0, abs=1e-5)


@given(st.floats(1.0, 1e5), st.floats(1.1, 2.5))
def test_permeability_falls_with_the_field(field: float, exponent: float) -> None:
    half = np.array(8e3)
    shares = powder_permeability_share(np.array([0.0, field, 2.0 * field]), half, np.array(exponent))
    assert shares[0] == 1.0
    assert np.all(np.diff(shares) < 0.0)
    assert powder_permeability_share(half, half, np.array(exponent)) == pytest.approx(0.5)


@given(st.integers(1, 200))
def test_powder_at_rest(turns: int) -> None:
    n = np.array(float(turns))
    found = powder_inductance(n, np.array(0.0), AREA, PATH, np.array(60.0), np.array(8e3), np.array(1.5))
    assert found == pytest.approx(mu_0 * 60.0 * turns**2 * 5e-4 / 0.15)


def test_energy_of_a_powder_core_has_a_best_number_of_turns() -> None:
    """At a fixed current more turns raise the inductance at first; deep in roll-off they no longer help."""
    turns = np.linspace(5.0, 4000.0, 400)
    found = powder_inductance(turns, np.array(10.0), AREA, PATH, np.array(60.0), np.array(8e3), np.array(2.5))
    best = int(np.argmax(found))
    assert 0 < best < len(turns) - 1
