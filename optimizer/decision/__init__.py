"""From a front to a decision: a few designs picked by stated rules, each told in plain words."""

from optimizer.decision.shortlist import Entry, Shortlist, shortlist

__all__ = ["Entry", "Shortlist", "shortlist"]
