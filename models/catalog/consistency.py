"""Rules between the values of one part: each returns what is wrong in words, or nothing."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from itertools import pairwise

from models.catalog.derivations import Number

Check = Callable[[Mapping[str, Number]], str]


def _numbers(value: Number) -> tuple[float, ...]:
    return value if isinstance(value, tuple) else (value,)


def below(lower: str, upper: str) -> Check:
    """`lower` is less than `upper`, entry by entry."""

    def check(values: Mapping[str, Number]) -> str:
        pairs = zip(_numbers(values[lower]), _numbers(values[upper]), strict=False)
        wrong = [f"{low:g} and {high:g}" for low, high in pairs if low >= high]
        return f"{lower} must be less than {upper}, got {', '.join(wrong)}" if wrong else ""

    return check


def at_most(lower: str, upper: str) -> Check:
    """`lower` is not greater than `upper`."""

    def check(values: Mapping[str, Number]) -> str:
        (low,), (high,) = _numbers(values[lower]), _numbers(values[upper])
        return f"{lower} must not exceed {upper}, got {low:g} and {high:g}" if low > high else ""

    return check


def rising(name: str) -> Check:
    """Entries rise from first to last."""

    def check(values: Mapping[str, Number]) -> str:
        entries = _numbers(values[name])
        return "" if all(a < b for a, b in pairwise(entries)) else f"{name} must rise, got {entries}"

    return check


def same_length(*names: str) -> Check:
    """Lists have one entry each for the same things."""

    def check(values: Mapping[str, Number]) -> str:
        lengths = [len(_numbers(values[name])) for name in names]
        if len(set(lengths)) == 1:
            return ""
        return f"{', '.join(names)} must have the same number of entries, got {', '.join(map(str, lengths))}"

    return check


def warm_energy(name: str) -> Check:
    """E = E_hot [1 - k (T_hot - T)] stays positive down to 25 C."""
    coefficient, hot = f"{name}_temperature_coefficient_per_k", "energy_hot_c"

    def check(values: Mapping[str, Number]) -> str:
        (k,), (hot_c,) = _numbers(values[coefficient]), _numbers(values[hot])
        if k * (hot_c - 25.0) < 1.0:
            return ""
        return f"{coefficient} {k:g} makes the energy vanish above 25 C with {hot} {hot_c:g}"

    return check
