"""Runs beside each other: fronts on the same axes, what moved, and what was changed in the studies."""

from optimizer.comparison.comparison import Comparison, compare

__all__ = ["Comparison", "compare"]
