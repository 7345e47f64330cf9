"""Weights of objectives as a user writes them: "volume=2, price=1"."""

from __future__ import annotations

import math
from collections.abc import Mapping

from optimizer.errors import InputError, Problem
from optimizer.objectives import OBJECTIVES
from optimizer.study.quantity import show
from optimizer.study.table import nearest, one_of

KEY = "--weights"
EXAMPLE = '"volume=2, price=1"'


def read_weights(text: str) -> Mapping[str, float]:
    """Weights by the names of objectives, of which none is negative and not all are zero [-].

    Args:
        text: names and numbers, "=" between them, commas around.

    Raises:
        InputError: with every entry that cannot be read.
    """
    problems, weights = [], {}
    for entry in filter(None, (part.strip() for part in text.split(","))):
        name, _, number = (part.strip() for part in entry.partition("="))
        if name not in OBJECTIVES:
            known = nearest(name, OBJECTIVES) or f": {one_of(OBJECTIVES)}"
            problems.append(Problem(show(name), f"the name of an objective{known}", KEY))
        elif name in weights:
            problems.append(Problem(f"{show(name)} twice", "each only once", KEY))
        else:
            weights[name] = _number(number)
            if not (math.isfinite(weights[name]) and weights[name] >= 0.0):
                expected = f"a number of at least 0 behind {name}="
                problems.append(Problem(show(number) if number else "nothing", expected, KEY))
    if not problems and not any(weights.values()):
        problems.append(Problem(show(text), f"at least one weight above 0, such as {EXAMPLE}", KEY))
    if problems:
        raise InputError(*problems)
    return weights


def _number(text: str) -> float:
    try:
        return float(text)
    except ValueError:
        return math.nan


def written_weights(weights: Mapping[str, float]) -> str:
    """The weights in words; `read_weights` reads them back."""
    return ", ".join(f"{name}={value:g}" for name, value in weights.items())
