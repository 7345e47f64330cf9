"""Cost of the losses: annuity, hours at each load level, lost energy."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from models.ownership import (
    ENERGY_SHARES,
    TIME_SHARES,
    EnergyTerms,
    annuity_factor,
    hour_shares,
    lost_energy,
    lost_energy_cost,
)
from models.specification import EUROPEAN_WEIGHTS

rates = st.floats(1e-6, 0.5)
spans = st.floats(0.5, 60.0)


@given(rate=rates, years=spans)
def test_a_later_unit_counts_less_than_one_paid_now(rate, years):
    assert 0.0 < annuity_factor(rate, years) < years


@given(rate=rates, years=st.integers(1, 60))
def test_the_factor_is_the_sum_of_the_single_payments(rate, years):
    single = sum((1.0 + rate) ** -year for year in range(1, years + 1))
    assert annuity_factor(rate, years) == pytest.approx(single, rel=1e-9)


def test_without_interest_every_year_counts_in_full():
    assert annuity_factor(0.0, 15.0) == 15.0
    assert annuity_factor(1e-12, 15.0) == pytest.approx(15.0)


def test_hours_of_a_load_that_gives_half_its_energy_at_full_and_half_at_quarter_load():
    # by hand: the quarter load lasts four times as long
    assert hour_shares({0.25: 0.5, 1.0: 0.5}, ENERGY_SHARES) == pytest.approx({0.25: 0.8, 1.0: 0.2})
    assert hour_shares({0.25: 0.5, 1.0: 0.5}, TIME_SHARES) == {0.25: 0.5, 1.0: 0.5}


def test_european_weights_as_energy_are_a_central_european_year():
    """Mean load over operating hours: about 1000 to 1200 full-load hours in some 4000 daylight hours
    (common practice for central Europe, no source); read as time shares they would be nearly half load.
    """
    mean = {
        kind: sum(level * share for level, share in hour_shares(EUROPEAN_WEIGHTS, kind).items())
        for kind in (ENERGY_SHARES, TIME_SHARES)
    }
    assert 1000.0 / 4000.0 <= mean[ENERGY_SHARES] <= 1250.0 / 4000.0
    assert mean[TIME_SHARES] > 0.45


@given(
    loss=st.lists(st.floats(0.0, 1e4), min_size=6, max_size=6),
    kind=st.sampled_from([ENERGY_SHARES, TIME_SHARES]),
)
def test_lost_energy_lies_between_the_least_and_the_greatest_loss(loss, kind):
    terms = EnergyTerms(hours_a_year=1000.0, weights_are=kind)
    level = np.array(sorted(EUROPEAN_WEIGHTS))
    energy = lost_energy(np.array([loss]), level, EUROPEAN_WEIGHTS, terms) / 3.6e6
    assert min(loss) * (1.0 - 1e-9) <= energy[0] <= max(loss) * (1.0 + 1e-9)


def test_by_hand_over_one_year():
    # 100 W for 0.2 and 30 W for 0.8 of 5000 h: 44 W mean, 220 kWh; at 0.30 and no interest, 10 years: 660
    terms = EnergyTerms(price_per_kwh=0.30, years=10.0, hours_a_year=5000.0, discount_rate=0.0)
    loss, level = np.array([[30.0, 55.0, 100.0]]), np.array([0.25, 0.5, 1.0])
    energy = lost_energy(loss, level, {0.25: 0.5, 1.0: 0.5}, terms)
    assert energy == pytest.approx([220.0 * 3.6e6])
    assert lost_energy_cost(energy, terms) == pytest.approx([660.0])


@given(efficiency=st.lists(st.floats(0.8, 0.999), min_size=6, max_size=6))
def test_energy_shares_make_the_lost_over_the_delivered_energy_a_weighted_mean(efficiency):
    """sum w_i (1/eta_i - 1): what the weights of a weighted efficiency mean."""
    level = np.array(sorted(EUROPEAN_WEIGHTS))
    weight = np.array([EUROPEAN_WEIGHTS[entry] for entry in level])
    loss = 5e3 * level * (1.0 / np.array(efficiency) - 1.0)
    terms = EnergyTerms(hours_a_year=4000.0)
    lost = lost_energy(loss[None], level, EUROPEAN_WEIGHTS, terms)[0] / 3.6e6
    hours = 4000.0 * (weight / level) / (weight / level).sum()
    delivered = 5.0 * float(hours @ level)
    assert lost / delivered == pytest.approx(float(weight @ (1.0 / np.array(efficiency) - 1.0)))
