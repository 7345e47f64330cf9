"""What limits the fronts: for every concept and octave of switching frequency the requirements and ends of
search ranges at which its designs stand.
"""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from models.evaluation import Constraint
from optimizer.space import WHOLE, SearchSpace, Variable
from optimizer.study.quantity import written
from optimizer.study.ranges import RANGES

Array = NDArray[np.float64]

WANTED = " wanted"
"""What the names of a study's own limits on objectives end with."""
BINDING = 0.05
"""Margin below which a requirement counts as limiting: about the spread of parts, a judgement [-]."""
AT_END = 0.01
"""Distance from the end of a search range at which a variable counts as standing there [of the axis]."""
TOLD_SHARE = 0.05
"""Share of a band's designs that a limit must hold to be told: a judgement [-]."""
UNMOVED = 1e-6
"""Spread of margins over a concept's front below which no choice of the designer moves them [-]."""
SIZED = ("distance from emission limit",)
"""Requirements for which a part is sized until it just meets them: near zero by construction, they show in
that part's volume, and come last."""
HERTZ = 1e3
COLUMNS = (
    "concept",
    "from [kHz]",
    "to [kHz]",
    "designs",
    "place",
    "limit",
    "kind",
    "designs at it [%]",
    "least margin [%]",
    "median margin [%]",
)

COST, BRIDGE, HEAT, MAGNETICS, QUALITY, FILTER, EMISSION, RANGE = (
    "the study's own limits",
    "bridge",
    "heat",
    "inductors",
    "distortion",
    "filter and dc link",
    "conducted emission",
    "end of a search range",
)
KINDS = (COST, BRIDGE, HEAT, MAGNETICS, QUALITY, FILTER, EMISSION, RANGE)
_PATTERNS = {
    COST: (WANTED,),
    EMISSION: ("emission",),
    MAGNETICS: ("inductor",),
    BRIDGE: ("modulation index", "dc voltage", "greatest"),
    HEAT: ("junction", "heatsink", "runaway"),
    QUALITY: ("distortion", "harmonic", "voltage line"),
}
VARIABLES = {
    "switching_frequency": "switching frequency",
    "parallel": "packages in parallel",
    "die area": "die area",
    "inner die area": "die area of the inner positions",
    "ripple": "ripple current",
    "grid_inductance_ratio": "grid-side over bridge-side inductance",
    "filter_capacitance_share": "filter capacitance",
    "damping": "damping resistance",
    "sink_resistance": "heatsink resistance",
    "core size": "{} core size",
    "flux use": "{} flux density used",
    "window use": "{} winding window used",
}
"""What the variables of the search are called; {} is the inductor's side."""
SIDES = {"inverter": "inverter-side", "grid": "grid-side"}
_OF_DEVICE = ("die area", "inner die area")
_RANGE_OF = {"core size": "core_size_factor", "flux use": "flux_use", "window use": "window_use"}
_ENTRIES = {entry.name: entry for entry in RANGES}


@dataclass(frozen=True)
class Limit:
    """One limit over a concept's front.

    Attributes:
        name: in words.
        kind: one of KINDS.
        held: which designs stand at it (n,).
        margin: distance to it (n,) [-]; NaN for ends of search ranges.
        last: whether it is told after all others.
    """

    name: str
    kind: str
    held: NDArray[np.bool_]
    margin: Array
    last: bool = False


def kind_of(requirement: str) -> str:
    """The kind of a requirement by its name, one of KINDS."""
    for kind, patterns in _PATTERNS.items():
        if any(pattern in requirement for pattern in patterns):
            return kind
    return FILTER


def limits(space: SearchSpace, points: Array, constraints: Sequence[Constraint]) -> list[Limit]:
    """All limits that designs of a front can stand at.

    Requirements whose margin no design moves are left out: they bind the specification, not the front.

    Args:
        space: the concept's search space.
        points: its front (n, k).
        constraints: its requirements (n,).
    """
    found = [
        Limit(
            requirement_words(entry.name),
            kind_of(entry.name),
            entry.margin < BINDING,
            entry.margin,
            entry.name in SIZED,
        )
        for entry in constraints
        if len(points) == 1 or np.ptp(entry.margin) > UNMOVED
    ]
    return [*found, *range_ends(space, points)]


def requirement_words(name: str) -> str:
    """What a requirement is called in a sentence."""
    return f"the study's own limit on {name.removesuffix(WANTED)}" if name.endswith(WANTED) else name


def range_ends(space: SearchSpace, points: Array) -> Iterator[Limit]:
    """Ends of search ranges that a study, or a larger part, could move, and which designs stand there."""
    nothing = np.full(len(points), np.nan)
    for axis, variable in enumerate(space.variables):
        if variable.parts and variable.scale != WHOLE:
            continue
        near = AT_END + (0.5 / variable.parts if variable.parts else 0.0)
        for end, held in (("least", points[:, axis] <= near), ("greatest", points[:, axis] >= 1.0 - near)):
            if variable.high > variable.low and (name := _end_words(variable, end)):
                yield Limit(name, RANGE, held, nothing)


def variable_words(name: str) -> str:
    """What a variable of the search is called."""
    side, _, rest = name.partition(" ")
    return VARIABLES[rest].format(SIDES[side]) if side in SIDES else VARIABLES[name]


def _end_words(variable: Variable, end: str) -> str:
    """The end of a range in words; "" for one that no study may move."""
    words = variable_words(variable.name)
    if variable.name in _OF_DEVICE:
        return f"{words} at the {end} there is"
    entry = _ENTRIES[_RANGE_OF.get(variable.name.partition(" ")[2], variable.name)]
    value = variable.low if end == "least" else variable.high
    if np.isclose(value, entry.hard_bounds[0 if end == "least" else 1]):
        return ""
    return f"{words} at the {end} searched ({written(value, entry.unit)})"


def octave(frequency: Array) -> Array:
    """The octave of 1 kHz that a frequency [Hz] lies in [-]; 16 kHz begins the fifth."""
    return np.floor(np.log2(frequency / HERTZ) + 1e-12)


def binding_table(
    concept: str, space: SearchSpace, points: Array, frequency: Array, constraints: Sequence[Constraint]
) -> pd.DataFrame:
    """What limits a concept's front, a row an octave and limit, those that most designs stand at first.

    Args:
        concept: its name.
        space: its search space.
        points: its front (n, k).
        frequency: switching frequencies (n,) [Hz].
        constraints: requirements (n,).
    """
    found, bands = limits(space, points, constraints), octave(frequency)
    rows = []
    for band in np.unique(bands):
        inside = bands == band
        held = [(entry, float(entry.held[inside].mean())) for entry in found]
        told = sorted(
            (pair for pair in held if pair[1] >= TOLD_SHARE), key=lambda pair: (pair[0].last, -pair[1])
        )
        for place, (entry, share) in enumerate(told, start=1):
            margin = 100.0 * entry.margin[inside]
            row = (concept, 2.0**band, 2.0 ** (band + 1.0), int(inside.sum()), place, entry.name, entry.kind)
            rows.append((*row, 100.0 * share, margin.min(), np.median(margin)))
    return pd.DataFrame(rows, columns=list(COLUMNS))
