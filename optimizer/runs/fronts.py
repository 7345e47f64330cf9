"""From a search's archive to tables: the class fronts and the overall front, one row a design, units in the
names.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import Any

import moocore
import numpy as np
import pandas as pd
from numpy.typing import NDArray

from models.catalog.parts import Catalog
from models.designs import COOLING, Designs, InductorDesigns
from models.evaluation import Constraint, Evaluation
from models.inverter import Inverter
from models.ownership import JOULE_A_KWH
from models.waveforms.leg_commutations import INNER
from optimizer.limits.binding import binding_table
from optimizer.evolution.concept_search import ClassResult
from optimizer.runs.emission_lines import EmissionLines, emission_lines, joined_lines
from optimizer.objectives import OBJECTIVES, distortion_column, margins_of, requirements_of
from optimizer.evolution.populations import SearchResult
from optimizer.prepared import search_space
from optimizer.evolution.ranking import high_figures
from optimizer.space import SearchSpace
from optimizer.study.study import Study
from optimizer.study.schema import HIGH_VALUES

Array = NDArray[np.float64]
SPECTRUM_DIGITS = 4
LITRES = 1e3


@dataclass(frozen=True)
class Front:
    """All Pareto designs of a search.

    Attributes:
        table: one row a design (front.csv).
        margins: one row a design, margins of all constraints [-].
        limits: (name, unit, sense) of the constraints.
        limit_range: least and greatest limit of each over the designs (a junction limit is the device's own).
        efficiency: (n, p) over `load_level` (p,) [-].
        line_order, line_amplitude, line_limit: (n, k) harmonic lines over the base, listed ones; no limit is
            infinite.
        emission: conducted emission; None where the study leaves it out.
        points: places in the search space by concept, in the table's order (n, k).
        binding: what limits the designs by concept and octave of frequency (binding.csv).
    """

    table: pd.DataFrame
    margins: pd.DataFrame
    limits: tuple[tuple[str, str, str], ...]
    limit_range: tuple[tuple[float, float], ...]
    load_level: Array
    efficiency: Array
    line_order: Array
    line_amplitude: Array
    line_limit: Array
    emission: EmissionLines | None
    points: dict[str, Array]
    binding: pd.DataFrame


def front(result: SearchResult) -> Front:
    """Filter the archives, evaluate what is left in full and lay it out.

    Args:
        result: of a search with at least one feasible candidate.
    """
    kept = [
        (found, _class_front(found, result.study.search.front_resolution))
        for found in result.classes
        if len(found.points)
    ]
    objectives = np.concatenate([found.objectives[rows] for found, rows in kept])
    overall = moocore.is_nondominated(objectives)
    parts, spaces = [], []
    for found, rows in kept:
        space = search_space(result.study, found.concept)
        spaces.append(space)
        designs = space.designs(found.points[rows])
        parts.append((space.inverter, designs, space.inverter.evaluate(designs)))
    required = [requirements_of(result.study.at_most, evaluation) for *_, evaluation in parts]
    table = pd.concat(
        [design_table(*part, entries) for part, entries in zip(parts, required, strict=True)],
        ignore_index=True,
    )
    ids = [
        f"{found.concept.initials}-{number:04d}" for found, rows in kept for number in range(1, len(rows) + 1)
    ]
    high = high_columns(result.study, np.concatenate([found.objectives[rows] for found, rows in kept]))
    table = pd.concat([table, pd.DataFrame(high, index=table.index)], axis=1) if high else table
    table.insert(0, "design_id", ids)
    table.insert(1, "concept", np.concatenate([[found.concept.name] * len(rows) for found, rows in kept]))
    table.insert(2, "class_front", True)
    table.insert(3, "overall_front", overall)
    margins = pd.concat([margin_table(entries) for entries in required], ignore_index=True)
    margins.insert(0, "design_id", ids)
    evaluations = [evaluation for *_, evaluation in parts]
    lines = [evaluation.distortion for evaluation in evaluations]
    listed = [np.where(item.lines.listed, item.lines.amplitude, 0.0) for item in lines]
    return Front(
        table=table,
        margins=margins,
        limits=tuple((same[0].name, same[0].unit, same[0].sense) for same in _by_name(required)),
        limit_range=tuple(_range([entry.limit for entry in same]) for same in _by_name(required)),
        load_level=evaluations[0].load_level,
        efficiency=np.concatenate([item.efficiency for item in evaluations]),
        line_order=np.concatenate([item.lines.order for item in lines]),
        line_amplitude=np.concatenate(listed),
        line_limit=np.concatenate([item.line_limit for item in lines]),
        points={found.concept.name: found.points[rows] for found, rows in kept},
        emission=joined_lines([emission_lines(inverter, designs) for inverter, designs, _ in parts]),
        binding=pd.concat(
            [
                binding_table(
                    found.concept.name,
                    space,
                    found.points[rows],
                    designs.switching_frequency_hz,
                    _as_ranked(space, found.points[rows], entries),
                )
                for (found, rows), space, (_, designs, _), entries in zip(
                    kept, spaces, parts, required, strict=True
                )
            ],
            ignore_index=True,
        ),
    )


def _as_ranked(
    space: SearchSpace, points: Array, constraints: tuple[Constraint, ...]
) -> tuple[Constraint, ...]:
    """Requirements with the margins that candidates had to keep in the search."""
    if space.study.search.rank_by != HIGH_VALUES:
        return constraints
    margins = high_figures(space, points, [OBJECTIVES[name] for name in space.study.objectives]).margins
    return tuple(replace(entry, margin=margins[:, place]) for place, entry in enumerate(constraints))


def _class_front(found: ClassResult, resolution: float) -> NDArray[np.int64]:
    """Rows of a class's non-dominated candidates that can be told apart, sorted by the first objective."""
    _, first = np.unique(found.objectives, axis=0, return_index=True)
    rows = first[moocore.is_nondominated(found.objectives[first])]
    rows = rows[distinct_rows(found.objectives[rows], resolution)]
    return rows[np.lexsort(found.objectives[rows].T[::-1])]


def high_columns(study: Study, objectives: Array) -> dict[str, Array]:
    """Columns of what 95 % of inverters stay below, where candidates were ranked by that; none else.

    Args:
        study: the study.
        objectives: what they were ranked by (n, m).
    """
    if study.search.rank_by != HIGH_VALUES:
        return {}
    return {
        f"{OBJECTIVES[name].column}_p95": objectives[:, place] for place, name in enumerate(study.objectives)
    }


def distinct_rows(objectives: Array, resolution: float) -> NDArray[np.int64]:
    """Rows of a front that differ by more than a share of its range, and the best of every objective.

    The range of every objective is divided into boxes; boxes dominated by others drop out, and of a box the
    design nearest its best corner stays (epsilon dominance: Laumanns, Thiele, Deb, Zitzler 2002).

    Args:
        objectives: of non-dominated designs (n, m).
        resolution: size of a box over the range [-]; 0 keeps all.
    """
    if resolution <= 0.0:
        return np.arange(len(objectives))
    low, spread = objectives.min(0), np.ptp(objectives, axis=0)
    places = (objectives - low) / np.where(spread > 0.0, spread, 1.0) / resolution
    boxes = np.floor(places)
    order = np.argsort((places - boxes).sum(-1), kind="stable")
    _, first = np.unique(boxes[order], axis=0, return_index=True)
    nearest = order[first]
    kept = nearest[moocore.is_nondominated(boxes[nearest])]
    return np.union1d(kept, objectives.argmin(0))


def _range(limits: list[Array]) -> tuple[float, float]:
    together = np.concatenate(limits)
    return float(together.min()), float(together.max())


def _by_name(required: list[tuple[Constraint, ...]]) -> list[list[Constraint]]:
    """Constraints of all concepts by name: bridges differ in some."""
    found: dict[str, list[Constraint]] = {}
    for entries in required:
        for entry in entries:
            found.setdefault(entry.name, []).append(entry)
    return list(found.values())


def margin_table(constraints: tuple[Constraint, ...]) -> pd.DataFrame:
    """Margins as a table: a column a constraint [-], and the name of the tightest one."""
    table = pd.DataFrame({entry.name: entry.margin for entry in constraints})
    names = np.array([entry.name for entry in constraints])
    table["tightest"] = names[np.argmin(margins_of(constraints), axis=-1)]
    return table


def design_table(
    inverter: Inverter, designs: Designs, result: Evaluation, constraints: tuple[Constraint, ...]
) -> pd.DataFrame:
    """Designs and their results as a table, columns with unit suffixes.

    Args:
        inverter: the study's inverter.
        designs: candidates (n,).
        result: their evaluation.
        constraints: their requirements, the study's own limits among them.

    Returns:
        n rows; losses `loss_*_w` are at rated load and add up to `loss_rated_w`, volumes `volume_*_l` to
        `volume_l`, masses and prices likewise.
    """
    rated = result.rated
    columns: dict[str, Any] = choices(inverter, designs)
    columns |= {
        "efficiency_rated": result.efficiency[:, rated],
        "efficiency_weighted": result.efficiency_weighted,
        "efficiency_european": result.efficiency_european,
        "efficiency_californian": result.efficiency_californian,
        "loss_weighted_percent": OBJECTIVES["weighted loss"].read(result),
        "loss_rated_w": np.sum([part[:, rated] for part in result.losses.values()], axis=0),
        "volume_l": LITRES * result.volume,
        "filter_volume_l": LITRES * result.filter_volume,
        "mass_kg": result.mass,
        "price": result.price,
        distortion_column(inverter.specification): result.distortion.total,
        "distortion_percent": OBJECTIVES["distortion"].read(result),
        "loss_rated_percent": OBJECTIVES["rated loss"].read(result),
        "junction_rise_percent": OBJECTIVES["junction temperature rise"].read(result),
        "lost_energy_kwh_per_year": result.lost_energy / JOULE_A_KWH,
        "lost_energy_cost": result.lost_energy_cost,
        "cost_of_ownership": OBJECTIVES["cost of ownership"].read(result),
    }
    columns |= {f"loss_{name}_w": part[:, rated] for name, part in result.losses.items()}
    columns |= {f"volume_{name}_l": LITRES * part for name, part in result.volumes.items()}
    columns |= {f"mass_{name}_kg": part for name, part in result.masses.items()}
    columns |= {f"price_{name}": part for name, part in result.prices.items()}
    columns |= result.details
    margins = margins_of(constraints)
    names = np.array([entry.name for entry in constraints])
    columns["tightest_constraint"] = names[np.argmin(margins, axis=-1)]
    columns["tightest_margin"] = margins.min(-1)
    plain = {
        name: np.asarray(column, dtype=object) if isinstance(column, pd.Categorical) else column
        for name, column in columns.items()
    }
    return pd.DataFrame(plain)


def choices(inverter: Inverter, designs: Designs) -> dict[str, Any]:
    """What every candidate is made of, by column name with unit suffix; `optimizer.designs_file` reads it
    back.
    """
    catalog = inverter.catalog
    classes = list(catalog.devices.column("device_class"))
    schemes = [scheme.name for scheme in inverter.bridge.modulations]
    return {
        "device_class": _named(classes, designs.device),
        "device": _named(catalog.devices.names, designs.device),
        "bridge": inverter.bridge.name,
        "modulation": _named(schemes, designs.modulation),
        "switching_frequency_hz": designs.switching_frequency_hz,
        "die_area_mm2": 1e6 * designs.die_area_m2,
        "parallel": designs.parallel,
        **_inner(inverter, designs),
        "inverter_inductance_h": designs.inverter_inductance_h,
        "grid_inductance_h": designs.grid_inductance_h,
        "filter_capacitance_f": designs.filter_capacitance_f,
        "damping_resistance_ohm": designs.damping_resistance_ohm,
        "damping_capacitance_f": designs.damping_capacitance_f,
        "dc_link": _named(catalog.dc_link_capacitors.names, designs.dc_link),
        "cooling": _named(COOLING, designs.cooling),
        "sink_resistance_k_per_w": designs.sink_resistance_k_per_w,
        **_inductor_columns(catalog, "inverter_inductor", designs.inverter_inductor),
        **(
            _inductor_columns(catalog, "grid_inductor", designs.grid_inductor)
            if np.any(designs.grid_inductance_h > 0.0)
            else {}
        ),
    }


def _named(names: Sequence[str], choice: NDArray[np.int64]) -> pd.Categorical:
    """Names of choices, kept once each."""
    known = list(dict.fromkeys(names))
    code = np.array([known.index(name) for name in names])
    return pd.Categorical.from_codes(code[choice], known)


def _inner(inverter: Inverter, designs: Designs) -> dict[str, Any]:
    """What the inner positions of three-level legs are made of."""
    if INNER not in inverter.packages.blocking:
        return {}
    return {
        "inner_device": _named(inverter.catalog.devices.names, designs.inner_device),
        "inner_die_area_mm2": 1e6 * designs.inner_die_area_m2,
    }


def _inductor_columns(catalog: Catalog, side: str, choice: InductorDesigns) -> dict[str, Any]:
    return {
        f"{side}_core_material": _named(catalog.core_materials.names, choice.material),
        f"{side}_core": _named(catalog.core_shapes.names, choice.shape),
        f"{side}_stack": choice.stack,
        f"{side}_turns": choice.turns,
        f"{side}_conductor": _named(catalog.conductors.names, choice.conductor),
        f"{side}_copper_area_mm2": 1e6 * choice.copper_area_m2,
    }
