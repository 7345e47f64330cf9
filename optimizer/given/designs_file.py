"""Designs given by hand: a CSV file with the columns of front.csv that say what a design is made of."""

from __future__ import annotations

import csv
import io
import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from difflib import get_close_matches
from pathlib import Path
from typing import Any

import numpy as np

from models.designs import COOLING, Designs, InductorDesigns
from models.inverter import Inverter
from models.waveforms.leg_commutations import INNER
from optimizer.errors import InputError, Problem
from optimizer.given.left_out import INDUCTOR_PARTS, filled_in, left_out

MOST_ROWS = 1_000_000
INNER_COLUMNS = ("inner_device", "inner_die_area_mm2")  # which only three-level bridges have
LABEL, BRIDGE = "design_id", "bridge"


@dataclass(frozen=True)
class Column:
    """One column of a designs file: its name, how a cell is read, what is expected, and its default where it
    may be left out.
    """

    name: str
    read: Callable[[str], Any]
    expected: str
    default: Any = None


@dataclass(frozen=True)
class HandDesigns:
    """Designs of a file with their labels (the design_id column, or row numbers), and what stands in for what
    the file leaves out.
    """

    labels: tuple[str, ...]
    designs: Designs
    notes: tuple[str, ...] = ()


def columns(inverter: Inverter) -> tuple[Column, ...]:
    """The columns a designs file for this inverter may hold; those without default are required."""
    catalog = inverter.catalog
    return (
        _choice("device", catalog.devices.names),
        _choice("modulation", tuple(scheme.name for scheme in inverter.bridge.modulations)),
        _positive("switching_frequency_hz"),
        _positive("die_area_mm2"),
        _whole("parallel", 1),
        *_inner_columns(inverter),
        _positive("inverter_inductance_h"),
        _positive("grid_inductance_h", zero=True, default=0.0),
        _positive("filter_capacitance_f", zero=True, default=0.0),
        _positive("damping_resistance_ohm", zero=True, default=0.0),
        _positive("damping_capacitance_f", zero=True, default=0.0),
        _choice("dc_link", catalog.dc_link_capacitors.names),
        _choice("cooling", COOLING, default=0),
        _positive("sink_resistance_k_per_w"),
        *_inductor_columns(inverter, "inverter_inductor", None),
        *_inductor_columns(inverter, "grid_inductor", 0),
    )


def _inner_columns(inverter: Inverter) -> tuple[Column, ...]:
    """Columns of the inner positions, which only three-level legs have."""
    if INNER not in inverter.packages.blocking:
        return ()
    device, area = INNER_COLUMNS
    return _choice(device, inverter.catalog.devices.names), _positive(area)


def _inductor_columns(inverter: Inverter, side: str, default: int | None) -> tuple[Column, ...]:
    catalog = inverter.catalog
    return (
        _choice(f"{side}_core_material", catalog.core_materials.names, default),
        _choice(f"{side}_core", catalog.core_shapes.names, default),
        _whole(f"{side}_stack", 1, 1),
        _whole(f"{side}_turns", 1, None if default is None else 1),
        _choice(f"{side}_conductor", catalog.conductors.names, default),
        _positive(f"{side}_copper_area_mm2", default=None if default is None else 1.0),
    )


def _choice(name: str, names: Sequence[str], default: int | None = None) -> Column:
    def read(cell: str) -> int:
        if cell not in names:
            near = get_close_matches(cell, names, n=1, cutoff=0.0)
            raise ValueError(f"; the nearest is {near[0]!r}" if near else "")
        return list(names).index(cell)

    return Column(name, read, f"one of the {len(names)} names that wattfront knows", default)


def _positive(name: str, *, zero: bool = False, default: float | None = None) -> Column:
    def read(cell: str) -> float:
        value = float(cell)
        if not math.isfinite(value) or value < 0.0 or (value == 0.0 and not zero):
            raise ValueError
        return value

    return Column(name, read, "a number of at least 0" if zero else "a number above 0", default)


def _whole(name: str, least: int, default: int | None = None) -> Column:
    def read(cell: str) -> int:
        value = float(cell)
        if not value.is_integer() or not least <= value <= 1e6:
            raise ValueError
        return int(value)

    return Column(name, read, f"a whole number of at least {least}", default)


def bridges_in(path: Path, bridges: Sequence[str]) -> tuple[str, ...]:
    """Bridges that the rows of a designs file name in their column `bridge`; the first one where they name
    none.

    Raises:
        InputError: for names other than `bridges`.
    """
    rows, _ = _rows(path)
    named = [(row.get(BRIDGE) or "").strip() or bridges[0] for row in rows]
    expected = " or ".join(f"{name!r}" for name in bridges)
    problems = [
        Problem(repr(name), expected, key=f"row {number}, {BRIDGE}", file=str(path))
        for number, name in enumerate(named, start=2)
        if name not in bridges
    ]
    if problems:
        raise InputError(*problems)
    return tuple(name for name in bridges if name in named)


def read_designs(
    path: Path, inverter: Inverter, also_known: Sequence[str] = (), own_bridge: str | None = None
) -> HandDesigns:
    """Read the designs of a file for one bridge.

    Args:
        path: CSV with a header; columns as `columns` lists them, in any order. Columns of front.csv that hold
            results are passed over, so that rows of a run can be fed in again.
        inverter: the study's inverter.
        also_known: further column names to pass over.
        own_bridge: bridge of rows that name none; the inverter's where it is left out.

    Raises:
        InputError: with all problems: missing or unknown columns, unreadable cells (row, column, given,
            expected).
    """
    rows, header = _rows(path)
    wanted_bridge = inverter.bridge.name
    numbered = [
        (number, row)
        for number, row in enumerate(rows, start=2)
        if ((row.get(BRIDGE) or "").strip() or own_bridge or wanted_bridge) == wanted_bridge
    ]
    everything = columns(inverter)
    lacking = left_out(header)
    wanted = [column for column in everything if column.name not in lacking]
    problems = _header_problems(path, header, everything, {LABEL, *also_known}, lacking)
    if problems:
        raise InputError(*problems)
    values: dict[str, list[Any]] = {column.name: [] for column in wanted}
    for number, row in numbered:
        for column in wanted:
            cell = (row.get(column.name) or "").strip()
            values[column.name].append(_cell(path, number, column, cell, problems))
        if not problems:
            more = _grid_side_problems(row, header, values)
            problems += [problem.at(str(path), f"row {number}, {problem.key}") for problem in more]
    if problems:
        raise InputError(*problems)
    labels = tuple((row.get(LABEL) or "").strip() or f"row {number}" for number, row in numbered)
    arrays = {name: np.array(column) for name, column in values.items()}
    complete, notes, faults = filled_in(arrays, lacking, inverter)
    if faults:
        raise InputError(*(problem.at(str(path), problem.key) for problem in faults))
    return HandDesigns(labels, _designs(complete), notes)


def _grid_side_problems(
    row: Mapping[str, str], header: Sequence[str], values: Mapping[str, Sequence[Any]]
) -> list[Problem]:
    """A grid-side inductance needs a capacitor before it, and its parts where the file has their columns."""
    inductance, capacitance = values["grid_inductance_h"][-1], values["filter_capacitance_f"][-1]
    if not inductance:
        return []
    problems = []
    if not capacitance:
        expected = "0 where filter_capacitance_f is 0: both are one then, inverter_inductance_h"
        problems.append(Problem(f"{inductance:g}", expected, key="grid_inductance_h"))
    parts = [f"grid_inductor_{part}" for part in INDUCTOR_PARTS]
    if any(name in header for name in parts):
        missing = [name for name in parts if not (row.get(name) or "").strip()]
        expected = "what the grid-side inductor is made of, since it has an inductance"
        problems += [Problem("nothing", expected, key=name) for name in missing]
    return problems


def _rows(path: Path) -> tuple[list[dict[str, str]], list[str]]:
    try:
        text = path.read_text(encoding="utf-8-sig")
    except OSError as trouble:
        raise InputError(
            Problem(f"a file that cannot be read ({trouble.strerror})", "a CSV file", file=str(path))
        ) from trouble
    except UnicodeDecodeError as trouble:
        raise InputError(
            Problem("bytes that are no text", "a CSV file in UTF-8", file=str(path))
        ) from trouble
    reader = csv.DictReader(io.StringIO(text))
    try:
        rows = list(reader)
    except csv.Error as trouble:
        raise InputError(
            Problem(f"text that is no CSV ({trouble})", "a CSV file", file=str(path))
        ) from trouble
    if not rows or len(rows) > MOST_ROWS:
        given = f"{len(rows)} rows" if rows else "no rows"
        raise InputError(Problem(given, f"a header and 1 to {MOST_ROWS:,} designs", file=str(path)))
    return rows, [name for name in reader.fieldnames or [] if name is not None]


def _header_problems(
    path: Path, header: Sequence[str], wanted: Sequence[Column], known: set[str], left_out: Sequence[str]
) -> list[Problem]:
    names = [column.name for column in wanted]
    problems = [
        Problem("no such column", column.expected, key=column.name, file=str(path))
        for column in wanted
        if column.default is None and column.name not in header and column.name not in left_out
    ]
    for name in header:
        if name not in names and name not in known and not _is_result(name):
            near = get_close_matches(name, names, n=1, cutoff=0.0)[0]
            problems.append(
                Problem(f"a column {name!r}", f"a known column (the nearest is {near})", file=str(path))
            )
    return problems


SHORTLIST_COLUMNS = ("role", "rule", "recommended", "words")
"""What a shortlist's file has before the columns of front.csv."""
_RESULT_STARTS = (
    "loss_",
    "volume_",
    "mass_",
    "price",
    "efficiency_",
    "margin",
    "tightest",
    "emission_",
    "distortion_",
    "modulation_index_",
    "cost_",
    "lost_energy_",
    "junction_",
)
_RESULT_NAMES = {
    "concept",
    "filter_volume_l",
    "class_front",
    "overall_front",
    "device_class",
    "bridge",
    "current_thd",
    "voltage_thd",
    "feasible",
    "ripple_peak_to_peak_a",
    "ripple_share",
    "resonance_hz",
    "junction_temperature_c",
    "diode_temperature_c",
    "sink_temperature_c",
    "heatsinks",
    "heat_worst_w",
    "filter_capacitor_current_share",
    "dc_link_capacitance_f",
    "dc_link_series",
    "dc_link_parallel",
    "dc_link_ripple_share",
    "dc_link_life_h",
    "bridge_voltage_rated_v",
    "dc_voltage_needed_v",
    "filter_reactive_share",
    "junction_rise_percent",
    "cost_of_ownership",
    *SHORTLIST_COLUMNS,
}
_RESULT_ENDS = (
    "_flux_t",
    "_gap_m",
    "_gap_sections",
    "_window_fill",
    "_layer_share",
    "_inductance_left",
    "_temperature_c",
    "_resistance_ohm",
    "_p05",
    "_p95",
    "_hold_share",
)


def _is_result(name: str) -> bool:
    return name in _RESULT_NAMES or name.startswith(_RESULT_STARTS) or name.endswith(_RESULT_ENDS)


def _cell(path: Path, number: int, column: Column, cell: str, problems: list[Problem]) -> Any:
    if not cell and column.default is not None:
        return column.default
    try:
        return column.read(cell)
    except ValueError as trouble:
        hint = str(trouble) if str(trouble).startswith(";") else ""
        given = repr(cell) if cell else "nothing"
        problems.append(
            Problem(given, column.expected + hint, key=f"row {number}, {column.name}", file=str(path))
        )
        return column.default or 1


def _designs(values: Mapping[str, Any]) -> Designs:
    return Designs(
        device=values["device"],
        modulation=values["modulation"],
        switching_frequency_hz=values["switching_frequency_hz"],
        die_area_m2=1e-6 * values["die_area_mm2"],
        parallel=values["parallel"],
        inner_device=values.get("inner_device", values["device"]),
        inner_die_area_m2=1e-6 * values.get("inner_die_area_mm2", values["die_area_mm2"]),
        inverter_inductance_h=values["inverter_inductance_h"],
        grid_inductance_h=values["grid_inductance_h"],
        filter_capacitance_f=values["filter_capacitance_f"],
        damping_resistance_ohm=values["damping_resistance_ohm"],
        damping_capacitance_f=values["damping_capacitance_f"],
        inverter_inductor=_inductor(values, "inverter_inductor"),
        grid_inductor=_inductor(values, "grid_inductor"),
        dc_link=values["dc_link"],
        cooling=values["cooling"],
        sink_resistance_k_per_w=values["sink_resistance_k_per_w"],
    )


def _inductor(values: Mapping[str, Any], side: str) -> InductorDesigns:
    return InductorDesigns(
        material=values[f"{side}_core_material"],
        shape=values[f"{side}_core"],
        stack=values[f"{side}_stack"],
        turns=values[f"{side}_turns"],
        conductor=values[f"{side}_conductor"],
        copper_area_m2=1e-6 * values[f"{side}_copper_area_mm2"],
    )
