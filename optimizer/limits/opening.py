"""Where a concept has no feasible design: what the design that misses least misses, and which change of the
study would open the space, found by searching the changed study.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any, TypeAlias

import numpy as np
from numpy.typing import NDArray

from models.specification import Specification
from optimizer.evolution.mating import Members, offspring
from optimizer.evolution.nsga import new_rows
from optimizer.evolution.problem import ClassProblem, violation_of
from optimizer.evolution.screening import quasi_random, rules_of_thumb
from optimizer.evolution.survival import survivors
from optimizer.limits.binding import requirement_words
from optimizer.objectives import requirements_of
from optimizer.space import LOGARITHMIC, SearchSpace
from optimizer.study.concepts import Concept
from optimizer.study.ranges import RANGES
from optimizer.study.values import (
    DC_TOGETHER,
    HIGH,
    LOW,
    RULES,
    StudyValue,
    as_written,
    own_limit,
    range_end,
    space_of,
    specification_values,
)

Array = NDArray[np.float64]
Change: TypeAlias = tuple[StudyValue, float]
"""A value of a study and the farthest value tried for it."""

POOL, BORN, ROUNDS = 64, 192, 14
"""Members and children of a short search, and its generations: with less it misses openings (a judgement)."""
SCREENED, FRESH = 2048, 256
"""Quasi-random designs before the first short search, and before each further one."""
SHARES = (1.0, 0.4, 0.15)
"""Shares of the way to the farthest value that are tried: what eases one requirement may load another."""
STEPS = 7
"""Bisections of a change: the last one moves it by 1/128 of the way to the farthest value tried."""
DIGITS = 3
"""Significant digits of a change, rounded away from the value given."""
EASED = 0.02
"""Share of the violation that a change to its farthest value must take away to be searched at all [-]."""
AT_END = 0.05
"""Distance from the end of a search range within which moving that end is tried [of the axis]."""
MOST_TRIED = 12
"""Changes searched at most, those that ease most first."""

SPECIFIED = {
    "application.apparent_power": (0.25,),
    DC_TOGETHER: (0.6, 1.6),
    "application.ac_voltage": (0.6,),
    "application.ac_voltage_tolerance": (0.0,),
    "application.voltage_thd_limit_linear": (5.0,),
    "application.voltage_thd_limit_rectifier": (5.0,),
}
"""Farthest values tried over the value given [-], judgements of what would still be a like inverter."""
COLDEST_AIR_C, COLDEST_COOLANT_C = -10.0, 5.0
_END_OF: dict[str, Callable[[Specification], tuple[float, ...]]] = {
    "application.dc_voltage.min": lambda spec: (spec.dc_voltage_v,),
    "application.dc_voltage.max": lambda spec: (spec.dc_voltage_v,),
    "application.power_factor_min": lambda spec: (1.0,),
    "application.ambient": lambda spec: (min(COLDEST_AIR_C, spec.ambient_c),),
    "application.coolant": lambda spec: (min(COLDEST_COOLANT_C, spec.coolant_c),),
}
"""Farthest values tried that do not go by the value given."""
EASED_RULES = {
    "modulation_reserve": 0.0, "junction_margin": 0.0, "saturation_use": 1.15, "inductance_left": 0.5,
    "winding_temperature_limit": 1.4, "gap_share_limit": 3.0, "resonance_over_line": 0.3,
    "resonance_over_switching": 1.8, "capacitor_reactive_share": 5.0, "total_inductance_share": 4.0,
    "dc_voltage_use": 1.1, "dc_link_life": 0.1, "emission_margin_db": 0.0, "sink_temperature_limit": 1.4,
    "dc_link_units_limit": 5.0, "sink_base_coverage": 1.6, "sideband_limit": 5.0,
    "voltage_sideband_limit": 5.0,
}  # fmt: skip
"""Design rules that can be eased, and the farthest value tried over the value given [-], judgements."""
OWN_LIMIT_FACTOR = 10.0


@dataclass(frozen=True)
class Miss:
    """A requirement that a design misses: its name, unit, the design's value and the limit; over it [-]."""

    name: str
    unit: str
    value: float
    limit: float
    over: float

    def __str__(self) -> str:
        if self.unit == "yes/no":
            return f"{requirement_words(self.name)}: no"
        unit = f" {self.unit}" if self.unit else ""
        return f"{requirement_words(self.name)}: {self.value:.4g}{unit}, limit {self.limit:.4g}{unit}"


@dataclass(frozen=True)
class Opening:
    """A change of one value of the study.

    Attributes:
        key, unit: of the value; given, needed: what it is, and what it would have to be [unit].
    """

    key: str
    unit: str
    given: float
    needed: float

    def __str__(self) -> str:
        return f"{self.key}: {as_written(self.given, self.unit)} -> {as_written(self.needed, self.unit)}"


@dataclass(frozen=True)
class Shortfall:
    """Why a concept has no feasible design.

    Attributes:
        concept: which.
        point: the least-violating design's place in the search space (k,).
        misses: what it misses, the most first.
        openings: changes each of which alone gives a feasible design, the least relative one first.
        together: changes that do so together, where none does alone.
    """

    concept: Concept
    point: Array
    misses: tuple[Miss, ...]
    openings: tuple[Opening, ...]
    together: tuple[Opening, ...]

    def lines(self) -> list[str]:
        """The same in words, a line each."""
        if not self.misses:
            return [
                f"{self.concept.name}: a short search finds a feasible design: search longer (--generations)"
            ]
        told = [f"{self.concept.name}: the design that misses least misses"]
        told += [f"  {miss}" for miss in self.misses]
        if self.openings:
            told.append("  Each of these changes of the study alone would give a feasible design:")
        elif self.together:
            told.append("  No single change tried gives a feasible design; these together would:")
        else:
            told.append("  No change tried gives a feasible design.")
        return told + [f"    {entry}" for entry in self.openings or self.together]

    def entry(self) -> dict[str, Any]:
        """The same for run.json."""
        return {
            "words": self.lines(),
            "misses": [
                {"name": miss.name, "unit": miss.unit, "value": miss.value, "limit": miss.limit}
                for miss in self.misses
            ],
            "opened_by": [_entry(one) for one in self.openings],
            "opened_together_by": [_entry(one) for one in self.together],
        }


def _entry(one: Opening) -> dict[str, Any]:
    return {"key": one.key, "unit": one.unit, "given": one.given, "needed": one.needed}


def shortfall(space: SearchSpace, concept: Concept, nearest: Array, seed: int = 1) -> Shortfall:
    """Find out what a concept misses and what would open its space.

    Args:
        space: its search space.
        concept: which.
        nearest: place of the least-violating design its search has seen (k,).
        seed: of the short searches; the same seed gives the same answer.
    """
    rng = np.random.default_rng([seed, 77])
    pool = _searched(space, nearest[None], rng, SCREENED)
    misses = _misses(space, pool[:1])
    if not misses:
        return Shortfall(concept, pool[0], (), (), ())
    tried = _worth_trying(space, pool)
    found = [
        opening
        for value, farthest in tried[:MOST_TRIED]
        if (opening := _opening(space, pool, [(value, farthest)], rng))
    ]
    openings = sorted((group[0] for group in found), key=_relative)
    together: Sequence[Opening] = ()
    if not openings:
        together = _opening(space, pool, _each_once(tried), rng) or ()
    return Shortfall(concept, pool[0], misses, tuple(openings), tuple(together))


def _relative(opening: Opening) -> float:
    if opening.unit == "degC":
        return abs(opening.needed - opening.given) / 100.0
    size = max(abs(opening.given), 1e-12)
    return abs(math.log(max(opening.needed, 1e-12) / size))


def _each_once(tried: Sequence[Change]) -> list[Change]:
    """One direction of every value, the one that eases more."""
    return list({value.key: (value, farthest) for value, farthest in reversed(tried)}.values())


def _misses(space: SearchSpace, point: Array) -> tuple[Miss, ...]:
    result = space.inverter.evaluate(space.designs(point))
    _, margins = ClassProblem(space).figures(point)
    found = [
        Miss(entry.name, entry.unit, float(entry.value[0]), float(entry.limit[0]), -float(margin))
        for entry, margin in zip(requirements_of(space.study.at_most, result), margins[0], strict=True)
        if margin < 0.0
    ]
    return tuple(sorted(found, key=lambda miss: -miss.over))


def _worth_trying(space: SearchSpace, pool: Array) -> list[Change]:
    """Changes that ease the violation where the pool stands, those that ease most first."""
    before = _violations(space, pool).min()
    found = []
    for value, farthest in _candidates(space, pool[0]):
        if value.key.startswith("search.ranges"):
            found.append((EASED, value, farthest))  # what lies beyond an end only a search can tell
            continue
        after = math.inf
        for share in SHARES:
            changed = _changed(space, [(value, farthest)], share)
            after = min(after, float(_violations(changed, _moved(pool, space, changed)).min()))
        if after < (1.0 - EASED) * before:
            found.append((1.0 - after / before, value, farthest))
    return [(value, farthest) for _, value, farthest in sorted(found, key=lambda entry: -entry[0])]


def _candidates(space: SearchSpace, point: Array) -> Iterator[Change]:
    """Values of the study that can be changed and the farthest value tried."""
    study = space.study
    for name in study.at_most:
        yield own_limit(name), OWN_LIMIT_FACTOR * study.at_most[name]
    for value in specification_values(study):
        given = value.read(study)
        farthest = [factor * given for factor in SPECIFIED.get(value.key, ())]
        farthest += _END_OF[value.key](study.specification) if value.key in _END_OF else ()
        yield from ((value, end) for end in farthest if end != given)
    for name, factor in EASED_RULES.items():
        given = RULES[name].read(study)
        if given > 0.0:
            yield RULES[name], factor * given
    yield from _range_candidates(space, point)


def _range_candidates(space: SearchSpace, point: Array) -> Iterator[Change]:
    for entry in RANGES:
        if entry.name not in space.axis:
            continue
        place, parts = point[space.axis[entry.name]], space.parts[space.axis[entry.name]]
        near = AT_END + (0.5 / parts if parts else 0.0)
        low, high = (range_end(entry.name, end) for end in (LOW, HIGH))
        if place <= near and low.read(space.study) > entry.hard_bounds[0]:
            yield low, entry.hard_bounds[0]
        if place >= 1.0 - near and high.read(space.study) < entry.hard_bounds[1]:
            yield high, entry.hard_bounds[1]


def _opening(
    space: SearchSpace, pool: Array, changes: Sequence[Change], rng: np.random.Generator
) -> list[Opening] | None:
    """The least share of some changes together that opens the space, rounded away from what is given."""
    tried = ((share, _feasible_at(space, (pool, space), changes, share, rng)) for share in SHARES)
    high, known = next(((share, found) for share, found in tried if found), (0.0, None))
    if known is None:
        return None
    low = 0.0
    for _ in range(STEPS):
        middle = 0.5 * (low + high)
        found = _feasible_at(space, known, changes, middle, rng)
        low, high, known = (low, middle, found) if found else (middle, high, known)
    return [
        Opening(
            value.key,
            value.unit,
            value.read(space.study),
            _rounded(_between(space, value, farthest, high), space, value, farthest),
        )
        for value, farthest in changes
    ]


def _between(space: SearchSpace, value: StudyValue, farthest: float, share: float) -> float:
    """A value moved by a share of its way to the farthest one, evenly on a logarithmic scale where it can."""
    given = value.read(space.study)
    logarithmic = value.unit != "degC" and given > 0.0 and farthest > 0.0
    between = given * (farthest / given) ** share if logarithmic else given + share * (farthest - given)
    return value.read(value.put(space.study, between))  # whole numbers stay so


def _changed(space: SearchSpace, changes: Sequence[Change], share: float) -> SearchSpace:
    """The space with changes made by a share of their way to the farthest value."""
    study = space.study
    for value, farthest in changes:
        study = value.put(study, _between(space, value, farthest, share))
    return space_of(space, study)


def _rounded(needed: float, space: SearchSpace, value: StudyValue, farthest: float) -> float:
    """A needed value to DIGITS digits, rounded away from the given one, the farthest at most."""
    given = value.read(space.study)
    step = 10.0 ** (math.floor(math.log10(max(abs(needed), 1e-9))) - DIGITS + 1)
    if needed > given:
        return min(float(f"{math.ceil(needed / step) * step:.9g}"), farthest)
    return max(float(f"{math.floor(needed / step) * step:.9g}"), farthest)


def _feasible_at(
    space: SearchSpace,
    known: tuple[Array, SearchSpace],
    changes: Sequence[Change],
    share: float,
    rng: np.random.Generator,
) -> tuple[Array, SearchSpace] | None:
    """Designs of a changed study, a feasible one first, and its space; None where the short search has none.

    Args:
        space: of the study as it is.
        known: designs to begin with and the space that their places are of.
        changes, share: what is changed, and how far.
        rng: random numbers.
    """
    changed = _changed(space, changes, share)
    found = _searched(changed, _moved(*known, changed), rng)
    return (found, changed) if _violations(changed, found[:1])[0] <= 0.0 else None


def _moved(points: Array, before: SearchSpace, after: SearchSpace) -> Array:
    """The same values in the axes of another study's ranges."""
    moved = points.copy()
    for axis, (old, new) in enumerate(zip(before.variables, after.variables, strict=True)):
        if (old.low, old.high) == (new.low, new.high) or new.high <= new.low:
            continue
        value = old.value(points[:, axis])
        if new.parts:
            moved[:, axis] = (value - new.low + 0.5) / new.parts
        elif new.scale == LOGARITHMIC:
            moved[:, axis] = np.log(value / new.low) / np.log(new.high / new.low)
        else:
            moved[:, axis] = (value - new.low) / (new.high - new.low)
    return after.repaired(moved)


def _violations(space: SearchSpace, points: Array) -> Array:
    _, margins = ClassProblem(space).figures(points)
    return violation_of(margins)


def _searched(space: SearchSpace, start: Array, rng: np.random.Generator, screened: int = FRESH) -> Array:
    """A short search for less violation; the pool it ends with, the least violating first."""
    problem = ClassProblem(space)
    quasi = quasi_random(int(rng.integers(2**31)), 0, screened, len(space.variables))
    points = space.repaired(np.concatenate([start, rules_of_thumb(space), quasi]))
    values, violation = problem.assess(points)
    for _ in range(ROUNDS):
        kept, rank, crowding = survivors(values, violation, POOL)
        points, values, violation = points[kept], values[kept], violation[kept]
        if violation.min() <= 0.0:
            break
        members = Members(points, values, violation, rank, crowding)
        born = new_rows(space.repaired(offspring(rng, members, space.axes, BORN)), points)
        added, missing = problem.assess(born)
        points, values = np.concatenate([points, born]), np.concatenate([values, added])
        violation = np.concatenate([violation, missing])
    order = np.argsort(violation, kind="stable")[:POOL]
    return points[order]
