"""Gap, fringing and roll-off: round trips, limits, monotony."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.constants import mu_0

from models.magnetics.gap import (
    fringing_factor,
    gap_for_inductance,
    gapped_inductance,
    powder_inductance,
    powder_permeability_share,
)

AREA, PATH, MU, BREADTH = (np.array(value) for value in (5e-4, 0.15, 2000.0, 0.04))
ONE, UNSPLIT = np.array(1.0), 1.0
GAP_LIMIT = 0.3  # greatest gap over breadth that a study allows by default


def whole_gap(turns: NDArray[np.float64], inductance: NDArray[np.float64]) -> NDArray[np.float64]:
    """The gap in one section, however long."""
    return gap_for_inductance(turns, inductance, AREA, PATH, MU, BREADTH, ONE, UNSPLIT)[0]


@given(st.integers(5, 120), st.floats(1e-5, GAP_LIMIT * 0.04))
def test_gap_gives_the_inductance_back(turns: int, gap: float) -> None:
    """From gap to inductance to gap: the inductance returns within 0.5 % up to the greatest gap allowed."""
    n = np.array(float(turns))
    inductance = gapped_inductance(n, np.array(gap), AREA, PATH, MU, BREADTH, ONE)
    again = whole_gap(n, inductance)
    assert gapped_inductance(n, again, AREA, PATH, MU, BREADTH, ONE) == pytest.approx(
        float(inductance), rel=5e-3
    )


def test_no_gap_can_raise_the_inductance() -> None:
    most = gapped_inductance(np.array(20.0), np.array(0.0), AREA, PATH, MU, BREADTH, ONE)
    assert whole_gap(np.array(20.0), 1.1 * most) < 0.0
    assert whole_gap(np.array(20.0), most) == pytest.approx(0.0, abs=1e-12)


@given(st.floats(1e-6, 0.039), st.floats(1.05, 2.0))
def test_inductance_falls_with_the_gap(gap: float, factor: float) -> None:
    one, wider = (
        gapped_inductance(np.array(30.0), np.array(g), AREA, PATH, MU, BREADTH, ONE)
        for g in (gap, factor * gap)
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


@example(5, 0.004016310083384779, 0.004, 1.0)  # a section more at the last step
@given(
    st.integers(5, 120), st.floats(1e-4, GAP_LIMIT * 0.04), st.floats(5e-4, 4e-3), st.sampled_from([1.0, 2.0])
)
def test_long_gaps_are_split(turns: int, gap: float, largest: float, legs: float) -> None:
    """No section is longer than allowed, none could be spared, the inductance comes back."""
    n, leg = np.array(float(turns)), np.array(legs)
    breadth = BREADTH * leg
    inductance = gapped_inductance(n, np.array(gap), AREA, PATH, MU, breadth, leg)
    found, sections = gap_for_inductance(n, inductance, AREA, PATH, MU, breadth, leg, largest)
    assert found / sections <= largest * (1.0 + 5e-3)  # counted before the last digits of the gap are known
    assert sections % legs == 0.0
    back = gapped_inductance(n, found, AREA, PATH, MU, breadth, sections)
    assert back == pytest.approx(float(inductance), rel=5e-3)
    assert sections == legs or gap / (sections - legs) > 0.9 * largest


def test_split_gap_fringes_less() -> None:
    """Sections of a third each: the fringing of each counts alone, so the same gap gives less inductance."""
    one, three = (
        float(gapped_inductance(np.array(30.0), np.array(6e-3), AREA, PATH, MU, BREADTH, np.array(count)))
        for count in (1.0, 3.0)
    )
    gap, root = 6e-3, np.sqrt(5e-4)
    whole = 1.0 + gap / root * np.log(2.0 * 0.04 / gap)
    split = 1.0 + gap / 3.0 / root * np.log(2.0 * 0.04 / gap)
    iron = 0.15 / 2000.0
    assert three / one == pytest.approx((gap / whole + iron) / (gap / split + iron))
