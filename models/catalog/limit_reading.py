"""From the TOML form of a harmonic limit table to `LimitTable`."""

from __future__ import annotations

import math
from collections.abc import Iterable, Mapping
from typing import Any

from models.catalog.limits import LimitBand, LimitTable
from models.catalog.reading import Problems, RawPart

BASES = ("rated current", "demand current", "absolute ampere", "fundamental voltage")
_TABLE_KEYS = (
    "name", "basis", "origin", "total_limit", "total_name", "odd", "even", "replaces",
    "current_range_a", "ratio_range", "phases",
)  # fmt: skip
_BAND_KEYS = ("orders", "limit", "over_order", "multiples", "share_of_odd")
_MULTIPLES = ("any", "of three", "not of three")


def limit_tables_of(raws: Iterable[RawPart], problems: Problems) -> tuple[LimitTable, ...]:
    """Limit tables in file order; faults are added to `problems`."""
    tables: dict[str, LimitTable] = {}
    for raw in raws:
        before = len(problems.messages)
        _check_table(raw, problems)
        if raw.name in tables and raw.entries.get("replaces") is not True:
            problems.add(raw, "there is such a table already; rename it, or say replaces = true")
        if len(problems.messages) == before:
            tables[raw.name] = _table(raw)
    return tuple(tables.values())


def _check_table(raw: RawPart, problems: Problems) -> None:
    entries = raw.entries
    for key in entries:
        if key not in _TABLE_KEYS:
            problems.add(raw, f"unknown key {key!r}; known are {', '.join(_TABLE_KEYS)}")
    for key in ("name", "basis", "origin"):
        if not isinstance(entries.get(key), str) or not entries[key].strip():
            problems.add(raw, f"{key} is missing, or not a text")
    if entries.get("basis") not in BASES:
        problems.add(raw, f"basis must be one of {', '.join(map(repr, BASES))}, got {entries.get('basis')!r}")
    if not _is_positive(entries.get("total_limit", math.inf)):
        problems.add(raw, f"total_limit must be greater than zero, got {entries['total_limit']!r}")
    for key in ("current_range_a", "ratio_range"):
        ends = entries.get(key, [0.0, 1.0])
        if not (isinstance(ends, list) and len(ends) == 2 and 0.0 <= ends[0] < ends[1]):
            problems.add(raw, f"{key} must be [above, up to], got {ends!r}")
    if entries.get("phases", 0) not in (0, 1, 3):
        problems.add(raw, f"phases must be 1 or 3, got {entries['phases']!r}")
    for parity in ("odd", "even"):
        for band in entries.get(parity, []):
            _check_band(raw, parity, band, problems)


def _check_band(raw: RawPart, parity: str, band: Mapping[str, Any], problems: Problems) -> None:
    for key in band:
        if key not in _BAND_KEYS:
            problems.add(raw, f"{parity} band: unknown key {key!r}; known are {', '.join(_BAND_KEYS)}")
    orders = band.get("orders")
    if not (isinstance(orders, list) and len(orders) == 2 and 0 < orders[0] <= orders[1]):
        problems.add(raw, f"{parity} band: orders must be [first, last], got {orders!r}")
    if band.get("multiples", "any") not in _MULTIPLES:
        problems.add(raw, f"{parity} band {orders}: multiples must be one of {', '.join(_MULTIPLES)}")
    if not any(_is_positive(band.get(key)) for key in ("limit", "over_order", "share_of_odd")):
        problems.add(raw, f"{parity} band {orders}: needs a limit greater than zero")


def _is_positive(value: Any) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool) and value > 0.0


def _table(raw: RawPart) -> LimitTable:
    entries = raw.entries
    odd = [_band("odd", band) for band in entries.get("odd", [])]
    even = [
        made
        for band in entries.get("even", [])
        for made in (_shares(band, odd) if "share_of_odd" in band else [_band("even", band)])
    ]
    return LimitTable(
        name=raw.name,
        basis=entries["basis"],
        bands=(*odd, *even),
        total_limit=float(entries.get("total_limit", math.inf)),
        total_name=str(entries.get("total_name", "")),
        current_range_a=_ends(entries.get("current_range_a")),
        ratio_range=_ends(entries.get("ratio_range")),
        phases=int(entries.get("phases", 0)),
        origin={"table": entries["origin"]},
    )


def _ends(given: list[float] | None) -> tuple[float, float]:
    return (float(given[0]), float(given[1])) if given else (0.0, math.inf)


def _band(parity: Any, band: Mapping[str, Any]) -> LimitBand:
    first, last = band["orders"]
    return LimitBand(
        parity,
        int(first),
        int(last),
        float(band.get("limit", 0.0)),
        float(band.get("over_order", 0.0)),
        band.get("multiples", "any"),
    )


def _shares(band: Mapping[str, Any], odd: Iterable[LimitBand]) -> list[LimitBand]:
    """Even bands as a share of the odd limit of the range they lie in."""
    first, last = band["orders"]
    share = float(band["share_of_odd"])
    return [
        LimitBand("even", max(first, o.order_min), min(last, o.order_max), share * o.constant)
        for o in odd
        if o.order_max >= first and o.order_min <= last
    ]
