"""Annuity factors against the interest tables that engineering-economics textbooks print."""

import pytest

from models.ownership import annuity_factor

# (P/A, i, n), discrete compounding, from memory of the tables in Park, Contemporary Engineering Economics
TABLE = [(0.05, 10, 7.7217), (0.05, 15, 10.3797), (0.08, 20, 9.8181), (0.10, 10, 6.1446), (0.12, 5, 3.6048)]


@pytest.mark.parametrize(("rate", "years", "printed"), TABLE)
def test_uniform_series_present_worth(rate, years, printed):
    assert annuity_factor(rate, years) == pytest.approx(printed, abs=6e-5)
