"""Monte Carlo of tolerances against closed forms."""

from dataclasses import fields, replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.stats import lognorm

from models.uncertainty import FACTORS, SPREAD, TOLERANCE, Uncertainty, factors_at, factors_beside, law_of
from optimizer.certainty.tolerance import tolerance, with_bands
from optimizer.objectives import OBJECTIVES
from optimizer.prepared import search_space
from optimizer.runs.fronts import front

SPREADING = [name for name in FACTORS if law_of(name) == SPREAD]
"""What figures go one way with; of an inductance losses have a minimum, whose band ends there."""
NONE = Uncertainty(**{entry.name: 0.0 for entry in fields(Uncertainty)})


@pytest.fixture(scope="module")
def picked(small_search):
    """A design of a small search: its study, inverter, design."""
    found = small_search.classes[2]
    space = search_space(small_search.study, found.concept)
    best = int(np.argmin(found.objectives[:, 0]))
    return small_search.study, space.inverter, space.designs(found.points[best : best + 1])


def of(picked, uncertainty, **changes):
    study, inverter, design = picked
    return tolerance(replace(study, uncertainty=uncertainty), inverter, design, **changes)


def test_without_uncertainty_bands_have_no_width_and_all_limits_hold(picked):
    found = of(picked, NONE, samples=64)
    for band in found.bands.values():
        assert band.low == band.middle == band.high == pytest.approx(band.nominal, rel=1e-12)
        assert band.drivers == ()
    assert found.all_hold == 1.0
    assert set(found.holding.values()) == {1.0}


@settings(max_examples=8)
@given(st.sampled_from(SPREADING), st.floats(0.05, 0.3), st.floats(1.5, 3.0))
def test_bands_widen_with_the_uncertainty(picked, name, value, times):
    narrow, wide = (
        of(picked, replace(NONE, **{name: width}), samples=256) for width in (value, times * value)
    )
    for objective in OBJECTIVES:
        less, more = narrow.bands[objective], wide.bands[objective]
        tiny = 1e-9 * abs(less.nominal)
        assert more.high >= less.high - tiny
        assert more.low <= less.low + tiny


def test_price_of_one_factor_is_the_closed_form(picked):
    """Price = semiconductors times a log-normal factor + the rest: its quantiles are known."""
    study, inverter, design = picked
    spread = 0.5
    found = of(picked, replace(NONE, semiconductor_price=spread), samples=4096)
    switches = float(inverter.evaluate(design).prices["semiconductors"][0])
    rest = found.bands["price"].nominal - switches
    sigma = np.log(1.0 + spread) / 1.6448536269514722  # 95 % quantile of the standard normal, any table
    for quantile, value in ((0.05, "low"), (0.5, "middle"), (0.95, "high")):
        known = rest + switches * lognorm.ppf(quantile, sigma)
        assert getattr(found.bands["price"], value) == pytest.approx(known, rel=2e-3)
    assert found.bands["price"].high == pytest.approx(rest + 1.5 * switches, rel=2e-3)
    assert found.bands["price"].drivers[0] == ("semiconductor_price", pytest.approx(1.0))


def test_a_limit_on_the_price_at_its_median_holds_in_half_of_the_cases(picked):
    study, inverter, design = picked
    nominal = float(inverter.evaluate(design).price[0])
    limited = replace(study, at_most={"price": nominal}), inverter, design
    found = of(limited, replace(NONE, other_prices=0.3), samples=1024)
    assert found.holding["price wanted"] == pytest.approx(0.5, abs=0.01)
    assert found.all_hold <= min(found.holding.values())


def test_the_seed_decides(picked):
    study = picked[0]
    first, again, other = (of(picked, study.uncertainty, samples=256, seed=seed) for seed in (1, 1, 2))
    assert first == again
    assert first != other


def test_laws_of_the_factors():
    """Even distribution of a tolerance; of a spread 5 % above 1 + v, 5 % below 1/(1 + v)."""
    ends = factors_at(Uncertainty(), np.repeat([[0.05], [0.5], [0.95]], len(FACTORS), axis=1))
    for name in FACTORS:
        value = getattr(Uncertainty(), name)
        known = {
            TOLERANCE: (1.0 - 0.9 * value, 1.0, 1.0 + 0.9 * value),
            SPREAD: (1.0 / (1.0 + value), 1.0, 1.0 + value),
        }[law_of(name)]
        assert getattr(ends, name) == pytest.approx(known)
    beside = factors_beside(Uncertainty(), np.zeros((1, len(FACTORS))))
    assert all(getattr(beside, name) == 1.0 for name in FACTORS)


def test_columns_stand_beside_a_front(picked, small_search):
    table = front(small_search).table
    found = of(picked, picked[0].uncertainty, samples=64)
    beside = with_bands(table, {1: found})
    assert len(beside) == len(table)
    assert beside["price_p95"].notna().sum() == 1
    assert beside["price_p95"].iloc[1] == found.bands["price"].high
    assert list(with_bands(beside, {1: found}).columns) == list(beside.columns)
