"""Specification and rules: base quantities, and every rule declared with unit and meaning."""

from __future__ import annotations

from dataclasses import fields

import pytest
from model_fixtures import DEPOT, ROOFTOP

from models.specification import DesignRules


def test_base_quantities() -> None:
    assert ROOFTOP.rated_current_a == pytest.approx(5000.0 / 230.0)
    assert ROOFTOP.base_impedance_ohm == pytest.approx(230.0**2 / 5000.0)
    assert DEPOT.rated_current_a == pytest.approx(10e3 / (3.0 * 230.0))
    assert DEPOT.base_impedance_ohm == pytest.approx((230.0 * 3.0**0.5) ** 2 / 10e3)


@pytest.mark.parametrize("entry", fields(DesignRules), ids=lambda entry: entry.name)
def test_every_rule_says_what_it_is(entry) -> None:  # type: ignore[no-untyped-def]
    assert len(entry.metadata["meaning"]) > 15
    assert "unit" in entry.metadata
    assert isinstance(entry.default, float)


def test_two_specifications_do_not_share_their_weights() -> None:
    one, other = DEPOT.__class__(**vars(DEPOT)), DEPOT
    assert one == other
    fresh = type(ROOFTOP)(**{name: value for name, value in vars(ROOFTOP).items() if name != "weights"})
    assert fresh.weights is not ROOFTOP.weights
