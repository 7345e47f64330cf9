"""The electro-thermal fixed point against plain iteration, runaway, and thermal resistance over die area."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from model_fixtures import Draw, Spaces
from numpy.typing import NDArray
from probe_device import device

import models.semiconductors.bridge_losses as bridge_losses_module
from models.semiconductors.junction import RUNAWAY_C, TOLERANCE_K, FixedPoint, junction_to_case, solve

Array = NDArray[np.float64]
Law = Callable[[Array], Array]
PLAIN_STEPS = 300
NEAR_RUNAWAY_C = 135.0


def plain(law: Law, start: Array) -> tuple[Array, NDArray[np.bool_]]:
    """Plain fixed-point steps, and where they have come to rest below the runaway limit."""
    temperature = start
    for _ in range(PLAIN_STEPS):
        temperature = np.minimum(law(temperature), 1000.0)
    return temperature, (np.abs(law(temperature) - temperature) < 1e-3) & (temperature < RUNAWAY_C - 1.0)


def law_of(ambient: float, resistance: float, fixed: float, resistive: float, growth: float) -> Law:
    """One die with a loss that does not depend on temperature and one that grows exponentially."""
    return lambda t: ambient + resistance * (fixed + resistive * np.exp(growth * (t - 25.0)))


@given(
    st.floats(0.0, 60.0),
    st.floats(0.05, 3.0),
    st.floats(0.0, 30.0),
    st.floats(0.0, 40.0),
    st.floats(0.0, 0.008),
)
@settings(max_examples=200)
def test_single_die_against_plain_steps(
    ambient: float, resistance: float, fixed: float, resistive: float, growth: float
) -> None:
    law, start = law_of(ambient, resistance, fixed, resistive, growth), np.full((1, 1), ambient + 30.0)
    exact, rests = plain(law, start)
    found = solve(law, start)
    assert np.all(np.isfinite(found.temperature))
    if rests and exact[0, 0] < NEAR_RUNAWAY_C:
        assert found.converged.all()
    if found.converged.all():
        assert rests.all()
        if exact[0, 0] < NEAR_RUNAWAY_C:
            assert abs(found.temperature - exact).max() < TOLERANCE_K


def test_runaway_is_said_and_finite() -> None:
    law = law_of(45.0, 3.0, 20.0, 40.0, 0.008)
    found = solve(law, np.full((1, 1), 75.0))
    assert not found.converged.any()
    assert np.all(found.temperature <= RUNAWAY_C)


def test_a_candidate_does_not_feel_its_neighbours() -> None:
    resistance = np.array([[0.1], [0.5], [1.2], [2.9]])

    def law(rows: slice) -> Law:
        return lambda t: 40.0 + resistance[rows] * (15.0 + 12.0 * np.exp(0.006 * (t - 25.0)))

    together = solve(law(slice(None)), np.full((4, 1), 70.0))
    for row in range(4):
        alone = solve(law(slice(row, row + 1)), np.full((1, 1), 70.0))
        assert alone.temperature[0, 0] == together.temperature[row, 0]
        assert alone.converged[0, 0] == together.converged[row, 0]


@pytest.fixture
def recorded(monkeypatch: pytest.MonkeyPatch) -> list[tuple[Law, Array, FixedPoint]]:
    """Every fixed point that the loss model asks for: law, start, result."""
    calls: list[tuple[Law, Array, FixedPoint]] = []

    def recording(law: Law, start: Array, **more: Any) -> FixedPoint:
        calls.append((law, start, solve(law, start, **more)))
        return calls[-1][2]

    monkeypatch.setattr(bridge_losses_module, "solve", recording)
    return calls


@pytest.mark.filterwarnings("ignore:overflow:RuntimeWarning")
@pytest.mark.parametrize("seed", [1, 2])
def test_real_candidates_against_plain_steps(
    spaces: Spaces, draw: Draw, recorded: list[tuple[Law, Array, FixedPoint]], seed: int
) -> None:
    """All studies and classes: within 0.1 K wherever both roads find a point; a point that the short road
    misses lies above the junction limit less its margin, so that the candidate is infeasible anyway.
    """
    lost = 0
    for space in spaces.values():
        designs = draw(space, 200, seed)
        space.inverter.evaluate(designs)
        limit = space.inverter.catalog.devices.column("junction_limit_c")[designs.device]
        allowed = limit - space.inverter.specification.rules.junction_margin
        law, start, found = recorded.pop()
        exact, rests = plain(law, start)
        axes = (0, 1, 3)
        rests, converged = rests.all(axis=axes), found.converged.all(axis=axes)
        apart = np.abs(found.temperature - exact).max(axis=axes)
        assert apart[rests & converged].max() < TOLERANCE_K
        assert not np.any(converged & ~rests)
        missed = rests & ~converged
        assert np.all(exact.max(axis=axes)[missed] > allowed[missed])
        lost += int(missed.sum())
    assert lost <= 20  # of 2000


@given(st.floats(1e-6, 1e-3))
def test_thermal_resistance_over_area(area: float) -> None:
    part = device(
        {
            "junction_case_k_m2_per_w": 3e-5,
            "junction_case_reference_area_m2": 1e-4,
            "junction_case_exponent": 0.8,
        }
    )
    one, double = junction_to_case(part, np.array([[area]])), junction_to_case(part, np.array([[2.0 * area]]))
    assert one / double == pytest.approx(2.0**0.8)
    assert junction_to_case(part, np.array([[1e-4]])) == pytest.approx(0.3)
