"""The one data set all views share: a record a design, with lists for what has many values."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import ArrayLike, NDArray

from optimizer.charts.quantities import LOSS, VOLUME, Quantity, axis_quantities, component_columns
from optimizer.charts.thinning import SHOWN_PER_CLASS, balanced_row, shown_rows, unit_range
from optimizer.objectives import OBJECTIVES, distortion_column
from optimizer.runs.fronts import Front
from optimizer.study.study import Study

Records = list[dict[str, Any]]
DIGITS = 4
"""Significant digits kept: more than any figure here is worth, and half the size of the page."""
PERCENT, KILO, MICRO = 100.0, 1e3, 1e-6

ROUND = (1.0, 1.5, 2.0, 3.0, 4.0, 6.0, 8.0, 10.0)
WORDS = ("design_id", "concept", "device", "modulation", "cooling")
FIGURES = ("junction_temperature_c", "sink_temperature_c", "loss_rated_w", "parallel", "die_area_mm2")
ENDS_DRAWN = ("mass", "distortion")
"""Objectives whose extremes are always drawn, minimised or not."""
TOLD_TOO = ("cost of ownership",)
"""Objectives that the parallel coordinates show as well."""
DECIDING = (
    Quantity("switching_frequency_khz", "switching frequency", "kHz"),
    Quantity("efficiency_rated_percent", "efficiency at rated load", "%"),
    Quantity("junction_temperature_c", "worst junction", "°C"),
)
"""Axes of the parallel coordinates beside the objectives."""
PLACES = "places"
SIDES = ("inverter_inductor", "grid_inductor")


@dataclass(frozen=True)
class DesignData:
    """What the charts draw.

    Attributes:
        records: one a shown design; the rest describes them.
        total: designs of the whole front by class [-].
        quantities: what an axis can show.
        losses, volumes: breakdown columns.
        constraints: names, in the order of the `margin` lists.
        load_level: of the `efficiency` lists [-].
        balanced: id of the design shown until one is picked.
        axes: what the parallel coordinates show.
        headline: quantities that the picked design is told by.
    """

    records: Records
    total: Mapping[str, int]
    quantities: tuple[Quantity, ...]
    losses: tuple[str, ...]
    volumes: tuple[str, ...]
    constraints: tuple[str, ...]
    load_level: tuple[float, ...]
    balanced: str
    axes: tuple[Quantity, ...]
    headline: tuple[Quantity, ...]

    def shown(self, concept: str) -> int:
        """Designs of a class that are drawn [-]."""
        return sum(record["concept"] == concept for record in self.records)


def significant(values: ArrayLike, digits: int = DIGITS) -> NDArray[np.float64]:
    """Values rounded to significant digits; what is not finite stays."""
    given = np.asarray(values, dtype=float)
    size = np.where(np.isfinite(given) & (given != 0.0), np.abs(given), 1.0)
    exponent = digits - 1 - np.floor(np.log10(size))
    factor = 10.0 ** np.abs(exponent)
    with np.errstate(invalid="ignore"):
        return np.where(exponent >= 0, np.rint(given * factor) / factor, np.rint(given / factor) * factor)


def plain(values: ArrayLike) -> list[Any]:
    """Rounded values as lists for JSON; what is not finite becomes None."""
    rounded = significant(values)
    if np.isfinite(rounded).all():
        return list(rounded.tolist())
    either = rounded.astype(object)
    either[~np.isfinite(rounded)] = None
    return list(either.tolist())


def design_data(study: Study, front: Front, per_class: int = SHOWN_PER_CLASS) -> DesignData:
    """Choose the designs to draw and lay them out.

    Args:
        study: the study.
        front: its fronts.
        per_class: designs of a class drawn at most [-].
    """
    quantities = axis_quantities(study)
    objectives = [OBJECTIVES[name].column for name in study.objectives]
    balanced = balanced_row(front.table, objectives)
    extremes = [OBJECTIVES[name].column for name in dict.fromkeys((*study.objectives, *ENDS_DRAWN))]
    rows = shown_rows(front.table, objectives, extremes, per_class, also=balanced)
    table = front.table.iloc[rows].reset_index(drop=True)
    losses, volumes = component_columns(table, LOSS), component_columns(table, VOLUME)
    named = [str(name) for name in front.margins.columns if name not in ("design_id", "tightest")]
    columns: dict[str, list[Any]] = {name: table[name].tolist() for name in (*WORDS, "overall_front")}
    columns |= _figures(
        study, table, [*losses, *volumes, *(quantity.column for quantity in quantities), *FIGURES]
    )
    columns |= {reach_of(LOSS): _reach(table[losses]), reach_of(VOLUME): _reach(table[volumes])}
    columns |= _builds(table)
    marks = _marks(front.table, study, balanced)
    columns["mark"] = [marks.get(int(row), "") for row in rows]
    told = {OBJECTIVES[name].column for name in (*study.objectives, *ENDS_DRAWN, *TOLD_TOO)}
    axes = (*(quantity for quantity in quantities if quantity.column in told), *DECIDING)
    columns[PLACES] = _places(columns, axes)
    columns["margin"] = plain(PERCENT * front.margins.iloc[rows][named].to_numpy(dtype=float))
    columns["efficiency"] = plain(PERCENT * front.efficiency[rows])
    columns |= _spectra(front, rows)
    columns |= _emission(front, rows)
    return DesignData(
        records=[dict(zip(columns, row, strict=True)) for row in zip(*columns.values(), strict=True)],
        total={
            str(name): int(count) for name, count in front.table["concept"].value_counts(sort=False).items()
        },
        quantities=quantities,
        losses=tuple(losses),
        volumes=tuple(volumes),
        constraints=tuple(named),
        load_level=tuple(front.load_level.tolist()),
        balanced=str(front.table["design_id"].iloc[balanced]),
        axes=axes,
        headline=tuple(quantity for quantity in quantities if quantity.column in extremes),
    )


def _marks(table: pd.DataFrame, study: Study, balanced: int) -> dict[int, str]:
    """Words for the rows of a shortlist: the least of every objective on the overall front, the balanced."""
    rows = np.flatnonzero(table["overall_front"].to_numpy(dtype=bool))
    told: dict[int, list[str]] = {balanced: ["balanced"]}
    for name in study.objectives if len(rows) else ():
        values = table[OBJECTIVES[name].column].to_numpy(dtype=float)[rows]
        told.setdefault(int(rows[values.argmin()]), []).append(f"least {OBJECTIVES[name].title}")
    return {row: ", ".join(words) for row, words in told.items()}


def _places(columns: Mapping[str, list[Any]], axes: Sequence[Quantity]) -> list[list[float]]:
    """Places of every design on the axes of the parallel coordinates, 0 to 1."""
    values = np.array([columns[axis.column] for axis in axes], dtype=float).T
    return list(np.round(unit_range(values), 3).tolist())


def _figures(study: Study, table: pd.DataFrame, as_they_are: Sequence[str]) -> dict[str, list[Any]]:
    scaled = {
        "switching_frequency_khz": table["switching_frequency_hz"] / KILO,
        "inverter_inductance_uh": table["inverter_inductance_h"] / MICRO,
        "grid_inductance_uh": table["grid_inductance_h"] / MICRO,
        "filter_capacitance_uf": table["filter_capacitance_f"] / MICRO,
        "ripple_percent": PERCENT * table["ripple_share"],
        "thd_percent": PERCENT * table[distortion_column(study.specification)],
        "efficiency_rated_percent": PERCENT * table["efficiency_rated"],
    }
    return {name: plain(table[name]) for name in dict.fromkeys(as_they_are)} | {
        name: plain(values) for name, values in scaled.items()
    }


def reach_of(kind: str) -> str:
    """Name of the column that holds where a design's axis of parts ends."""
    return f"{kind}_reach"


def _reach(parts: pd.DataFrame) -> list[Any]:
    """The next round figure above each design's greatest part: an axis that changes by steps only."""
    greatest = np.maximum(parts.to_numpy(dtype=float).max(-1), 1e-6)
    decade = 10.0 ** np.floor(np.log10(greatest))
    step = np.searchsorted(ROUND, greatest / decade)
    return plain(decade * np.asarray(ROUND)[step])


def _builds(table: pd.DataFrame) -> dict[str, list[Any]]:
    """Both inductors (empty where there is none) and the dc link in words."""
    rows = table.to_dict("records")
    told: dict[str, list[Any]] = {}
    for side in SIDES:
        present = [row.get(f"{side.removesuffix('_inductor')}_inductance_h", 0.0) > 0.0 for row in rows]
        pairs = list(zip(rows, present, strict=True))
        told[f"{side}_core"] = [_core(row, side) if there else "" for row, there in pairs]
        told[f"{side}_build"] = [_build(row, side) if there else "" for row, there in pairs]
    links = [f"{row['dc_link_series'] * row['dc_link_parallel']:.0f} x {row['dc_link']}" for row in rows]
    return told | {"dc_link_build": links}


def _core(row: Mapping[Any, Any], side: str) -> str:
    stack = f"{row[f'{side}_stack']:.0f} x " if row[f"{side}_stack"] > 1 else ""
    return f"{stack}{row[f'{side}_core']}"


def _build(row: Mapping[Any, Any], side: str) -> str:
    return f"{_core(row, side)}, {row[f'{side}_core_material']}, {row[f'{side}_turns']:.0f} turns"


def _spectra(front: Front, rows: NDArray[np.int64]) -> dict[str, list[Any]]:
    """Lists of the harmonic lines that a design has: order, amplitude and limit in percent of the base."""
    lists: dict[str, list[Any]] = {"order": [], "amplitude": [], "limit": []}
    order, amplitude = significant(front.line_order[rows]), significant(PERCENT * front.line_amplitude[rows])
    limit = significant(PERCENT * front.line_limit[rows])
    for present, *lines in zip(amplitude > 0.0, order, amplitude, limit, strict=True):
        for name, values in zip(lists, lines, strict=True):
            lists[name].append(plain(values[present]))
    return lists


def _emission(front: Front, rows: NDArray[np.int64]) -> dict[str, list[Any]]:
    """Lists of the emission lines of each design: MHz and dB over 1 uV, whole decibels; none without a limit.

    The limit itself is the same for all designs and drawn from the catalogue.
    """
    if front.emission is None:
        return {}
    found = front.emission
    return {
        "emission_mhz": plain(found.frequency[rows] / 1e6),
        "emission_bare": np.rint(found.bare[rows]).astype(int).tolist(),
        "emission_left": np.rint(found.left[rows]).astype(int).tolist(),
        "emission_limit": np.round(found.limit[rows], 1).tolist(),
    }
