"""Inductors that the search settled on, against all that the catalogue offers for the same duty.

    python tests/benchmarks/bench_inductors.py [--inductors N] [study ...]

Draws designs from the fronts of the shipped studies and one inductor of each. All else in the design
unchanged, it goes through core materials, shapes, stacks, turns, conductors and copper areas, and counts the
inductors for which some combination that keeps every limit has both 2 % less volume and 2 % less weighted
loss. Larger ones, and those whose dc loss alone is too great, are passed over without evaluation.
"""

from __future__ import annotations

import argparse
import time
from dataclasses import dataclass, replace
from pathlib import Path

import moocore
import numpy as np
from numpy.typing import NDArray

from models.designs import Designs, InductorDesigns, take
from models.evaluation import Evaluation
from models.magnetics.alternatives import alternatives
from models.magnetics.build import build
from models.magnetics.inductor import dc_resistance
from optimizer.evolution.populations import search
from optimizer.objectives import margins_of, requirements_of
from optimizer.prepared import search_space
from optimizer.runs.fronts import distinct_rows
from optimizer.space import SearchSpace
from optimizer.study.study import Study

Array = NDArray[np.float64]
ROOT = Path(__file__).parents[2]
STUDIES = ("rooftop_5kw", "depot_10kw_three_phase", "backup_3kva")
SIDES = {"inverter_inductor": "inverter_inductance_h", "grid_inductor": "grid_inductance_h"}
GAIN = 0.98
BLOCK = 16384


def volume_and_loss(space: SearchSpace, result: Evaluation, side: str) -> tuple[Array, Array]:
    """Boxed volume [m3] and weighted loss [W] of the inductors on a side, all phases."""
    weights = space.inverter.points.weights(space.study.specification.weights)
    loss = result.losses[f"{side}_winding"] + result.losses[f"{side}_core"]
    return result.volumes[side], loss @ weights


def feasible(space: SearchSpace, result: Evaluation) -> NDArray[np.bool_]:
    """Whether every limit is kept."""
    return (margins_of(requirements_of(space.study.at_most, result)) >= 0.0).all(-1)


def with_inductor(design: Designs, side: str, builds: InductorDesigns) -> Designs:
    """The design (1,) once for every build, with the inductor on a side replaced."""
    copies = design.take(np.zeros(len(builds.turns), dtype=np.int64))
    return replace(copies, **{side: builds})


@dataclass(frozen=True)
class Found:
    """Combinations offered and evaluated, how many beat the inductor, the greatest least gain of them [-],
    how many of them cost no more.
    """

    offered: int
    evaluated: int
    beating: int
    gain: float
    no_dearer: int


def against_all(space: SearchSpace, design: Designs, side: str) -> Found:
    """Hold the inductor on one side of a design (1,) against all that the catalogue offers."""
    inverter, spec = space.inverter, space.study.specification
    result = inverter.evaluate(design)
    volume, loss = (float(part[0]) for part in volume_and_loss(space, result, side))
    own = build(inverter.catalog, getattr(design, side), spec.rules.coil_former_wall)
    inductance = float(getattr(design, SIDES[side])[0])
    peak = float((result.details[f"{side}_flux_t"] * own.turns * own.area)[0]) / inductance
    offered = alternatives(space.offer, inductance, peak, GAIN * volume / spec.phases)
    builds = build(inverter.catalog, offered, spec.rules.coil_former_wall)
    levels = inverter.points.load_level[inverter.points.loads]
    mean_square = float(inverter.points.weights(spec.weights) @ (levels * spec.rated_current_a) ** 2)
    direct = spec.phases * dc_resistance(builds, 20.0) * mean_square
    worth = np.flatnonzero(
        (spec.phases * builds.box_volume <= GAIN * volume)
        & (0.9 * direct <= GAIN * loss)  # the grid's voltage and the capacitor's current move it a little
        & (builds.layers.share <= 1.0)
        & (builds.window_fill <= 1.0)
    )
    beating, gain, no_dearer, price = 0, 0.0, 0, float(result.prices[side][0])
    for start in range(0, len(worth), BLOCK):
        other = inverter.evaluate(with_inductor(design, side, take(offered, worth[start : start + BLOCK])))
        volumes, losses = volume_and_loss(space, other, side)
        better = (volumes <= GAIN * volume) & (losses <= GAIN * loss) & feasible(space, other)
        beating += int(better.sum())
        no_dearer += int((better & (other.prices[side] <= price)).sum())
        gains = np.minimum(1.0 - volumes / volume, 1.0 - losses / loss)[better]
        gain = max(gain, float(gains.max(initial=0.0)))
    return Found(len(offered.turns), len(worth), beating, gain, no_dearer)


def drawn(name: str, count: int, rng: np.random.Generator) -> list[tuple[SearchSpace, Designs, str]]:
    """Designs from the fronts of a study's concepts, and a side of each."""
    study = Study.read(ROOT / "studies" / f"{name}.toml")
    found = search(study, seed=1)
    chosen = []
    for place in range(count):
        one = found.classes[place % len(found.classes)]
        space = search_space(study, one.concept)
        members = front_rows(one.objectives, study.search.front_resolution)
        point = one.points[rng.choice(members)][None]
        sides = list(SIDES) if study.search.filter_kind == "LCL" else list(SIDES)[:1]
        chosen.append((space, space.designs(point), sides[place // len(found.classes) % len(sides)]))
    return chosen


def front_rows(objectives: Array, resolution: float) -> NDArray[np.int64]:
    """Members of a front that are told."""
    members = np.flatnonzero(moocore.is_nondominated(objectives))
    return members[distinct_rows(objectives[members], resolution)]


def main(names: list[str], count: int) -> None:
    """Print how many inductors are beaten."""
    rng, started = np.random.default_rng(1), time.perf_counter()
    total, beaten, at_the_price, worst = 0, 0, 0, 0.0
    for name in names:
        for space, design, side in drawn(name, -(-count // len(names)), rng):
            found = against_all(space, design, side)
            total, beaten = total + 1, beaten + (found.beating > 0)
            at_the_price += found.no_dearer > 0
            worst = max(worst, found.gain)
            if found.beating:
                words = (
                    f"{found.beating} better ({found.no_dearer} no dearer), best by {found.gain:.1%} in both"
                )
                print(f"  {name}, {side}: {words} ({found.evaluated:,} of {found.offered:,} evaluated)")
    print(
        f"{beaten} of {total} inductors are beaten by 2 % in volume and loss, the worst by {worst:.1%} "
        f"(goal: none), {at_the_price} of them at no higher price; {time.perf_counter() - started:.0f} s"
    )


if __name__ == "__main__":
    parser = argparse.ArgumentParser(
        description=__doc__, formatter_class=argparse.RawDescriptionHelpFormatter
    )
    parser.add_argument("study", nargs="*", default=list(STUDIES))
    parser.add_argument("--inductors", type=int, default=51)
    chosen = parser.parse_args()
    main(chosen.study, chosen.inductors)
