"""What the figures of one design hang on: elasticities to its variables and to the specification."""

from __future__ import annotations

from collections.abc import Iterator, Mapping, Sequence
from dataclasses import dataclass

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from models.evaluation import Evaluation
from optimizer.limits.binding import variable_words
from optimizer.objectives import OBJECTIVES, requirements_of
from optimizer.space import LINEAR, LOGARITHMIC, SearchSpace
from optimizer.study.study import Study
from optimizer.study.values import RULES, StudyValue, energy_price, space_of, specification_values

Array = NDArray[np.float64]

OFFSETS = np.array([-0.05, -0.0375, -0.025, -0.0125, 0.0, 0.0125, 0.025, 0.0375, 0.05])
"""Relative changes at which a design is evaluated: far enough out that whole turns, which step, average
out, near enough that curvature does not count."""
KELVINS = 100.0 * OFFSETS
EVENLY, IN_STEPS = "evenly", "in steps"
STRAIGHT = 0.75
"""Share of the scatter over the offsets that a straight line explains where a figure moves evenly; below it
moves in steps, such as one capacitor more in series: a judgement [-]."""
NOTHING = 1e-9
"""Changes below it are rounding."""
FEWEST = 3
"""Offsets that a slope takes at least."""
DESIGN, SPECIFICATION = "design", "specification"
PERCENT, KELVIN = "1 %", "1 K"
OBJECTIVE, MARGIN = "objective", "margin"
COLUMNS = ("varied", "part of the", "raised by", "figure", "kind", "unit", "change", "moves")
TEMPERATURE_RULES = ("sink_temperature_limit", "winding_temperature_limit", "junction_margin")


@dataclass(frozen=True)
class Varied:
    """One thing that is varied: what it is called, what it is part of, by how much a step raises it, and the
    offsets (s,) [-] or [K] of it, and objectives and margins of the design there by name (s,).
    """

    words: str
    part_of: str
    step: str
    offsets: Array
    objectives: Mapping[str, Array]
    margins: Mapping[str, Array]

    @property
    def axis(self) -> Array:
        """What slopes are taken over: the logarithm of the varied value, or kelvins."""
        return np.log1p(self.offsets) if self.step == PERCENT else self.offsets

    def change(self, values: Array) -> tuple[float, str]:
        """Change of some values with one step, times 100; whether they move evenly or in steps."""
        found = 100.0 * (0.01 if self.step == PERCENT else 1.0) * float(slope(self.axis, values))
        if abs(found) <= NOTHING:
            return 0.0, EVENLY
        return found, EVENLY if straightness(self.axis, values) >= STRAIGHT else IN_STEPS


def slope(offsets: Array, values: Array) -> Array:
    """Least-squares slope of values (s, ...) over offsets (s,): central differences at several distances."""
    centred = offsets - offsets.mean()
    return np.asarray(np.tensordot(centred, values, axes=(0, 0)) / (centred**2).sum())


def straightness(offsets: Array, values: Array) -> float:
    """Share of the variance of values (s,) that a straight line over offsets (s,) explains [-]."""
    whole = float(np.square(values - values.mean()).sum())
    return float(slope(offsets, values)) ** 2 * float(np.square(offsets - offsets.mean()).sum()) / whole


def sensitivities(space: SearchSpace, point: Array) -> pd.DataFrame:
    """Changes of every objective and margin of a design, a row a pair; COLUMNS.

    A step is 1 %, of temperatures 1 K. Objectives change in per cent of their value (elasticities), margins
    in points: per cent of their limit. Along a variable of the design the inductors are built anew and the
    rest stays; along a value of the specification the very same design faces another task, of which only the
    parts that the models size themselves (dc link, emission filter) follow.

    Args:
        space: the concept's search space.
        point: the design's place in it (k,).
    """
    rows: list[tuple[object, ...]] = []
    for one in (*_variables(space, point), *_specified(space, point)):
        head = one.words, one.part_of, one.step
        rows += [
            (*head, name, OBJECTIVE, "%", *one.change(np.log(values)))
            for name, values in one.objectives.items()
            if (values > 0.0).all()
        ]
        rows += [(*head, name, MARGIN, "points", *one.change(values)) for name, values in one.margins.items()]
    return pd.DataFrame(rows, columns=list(COLUMNS))


def _figures(study: Study, results: Sequence[Evaluation]) -> tuple[dict[str, Array], dict[str, Array]]:
    """Objectives and margins of evaluations, one after the other, by name (s,)."""
    objectives = {
        name: np.concatenate([objective.read(result) for result in results])
        for name, objective in OBJECTIVES.items()
    }
    required = [requirements_of(study.at_most, result) for result in results]
    margins = {
        same[0].name: np.concatenate([entry.margin for entry in same]) for same in zip(*required, strict=True)
    }
    return objectives, margins


def _variables(space: SearchSpace, point: Array) -> Iterator[Varied]:
    """The design along each of its continuous variables."""
    for axis, variable in enumerate(space.variables):
        if variable.scale not in (LINEAR, LOGARITHMIC):
            continue
        points = np.repeat(point[None], len(OFFSETS), axis=0)
        if variable.name.endswith("die area"):
            points[:, axis] += np.log1p(OFFSETS) / _die_range(space, point, variable.name)
        else:
            value = variable.value(point[axis : axis + 1]) * (1.0 + OFFSETS)
            points[:, axis] = (
                np.log(value / variable.low) / np.log(variable.high / variable.low)
                if variable.scale == LOGARITHMIC
                else (value - variable.low) / (variable.high - variable.low)
            )
        figures = _figures(space.study, [space.inverter.evaluate(space.designs(points))])
        yield Varied(variable_words(variable.name), DESIGN, PERCENT, OFFSETS, *figures)


def _die_range(space: SearchSpace, point: Array, name: str) -> float:
    """Logarithm of a device's greatest over its least die area [-]."""
    design, devices = space.designs(point[None]), space.inverter.catalog.devices
    device = design.inner_device if name.startswith("inner") else design.device
    low, high = (float(devices.column(f"die_area_{end}_m2")[device][0]) for end in ("min", "max"))
    return float(np.log(high / low))


def specification_varied(study: Study) -> tuple[StudyValue, ...]:
    """Values of the specification that a design is looked at under, with the main temperature limits."""
    return (*specification_values(study), *(RULES[name] for name in TEMPERATURE_RULES), energy_price())


def _specified(space: SearchSpace, point: Array) -> Iterator[Varied]:
    """The design under each value of the specification, varied."""
    design = space.designs(point[None])
    for value in specification_varied(space.study):
        given = value.read(space.study)
        warm = value.unit in ("degC", "K")
        if not warm and given <= 0.0:
            continue
        offsets = KELVINS if warm else OFFSETS
        tried = [value.put(space.study, given + step if warm else given * (1.0 + step)) for step in offsets]
        kept = np.array([_makes_sense(study) for study in tried])
        if kept.sum() < FEWEST:
            continue
        studies = [study for study, sensible in zip(tried, kept, strict=True) if sensible]
        results = [space_of(space, study).inverter.evaluate(design) for study in studies]
        step = KELVIN if warm else PERCENT
        yield Varied(value.title, SPECIFICATION, step, offsets[kept], *_figures(space.study, results))


def _makes_sense(study: Study) -> bool:
    spec = study.specification
    return (
        spec.dc_voltage_min_v <= spec.dc_voltage_v <= spec.dc_voltage_max_v
        and 0.0 < spec.power_factor_min <= abs(spec.power_factor)
    )
