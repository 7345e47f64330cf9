"""Fixtures shared with other folders of tests."""

from model_fixtures import catalog, draw, inverter, spaces, studies

__all__ = ["catalog", "draw", "inverter", "spaces", "studies"]
