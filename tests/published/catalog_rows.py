"""Rows of the shared range files by name, their units brought to SI independently of the loader."""

from __future__ import annotations

import json
from pathlib import Path
from typing import Any

DATA = Path(__file__).parent / "data"

# Unit of a row -> factor to SI, typed here and not taken from the loader.
ROW_UNITS = {
    "-": 1.0, "V": 1.0, "C": 1.0, "K/W": 1.0, "1/K": 1.0, "T": 1.0, "W": 1.0, "Pa": 1.0, "h": 1.0, "nC": 1e-9,
    "A/mm2": 1e6, "Ohm mm2": 1e-6, "mOhm cm2": 1e-7, "nJ/(A V)": 1e-9, "uC/A": 1e-6, "nC/A": 1e-9,
    "mOhm nC": 1e-12, "mOhm uJ": 1e-9, "K mm2/W": 1e-6, "us": 1e-6, "mm": 1e-3, "mm2": 1e-6, "cm3": 1e-6,
    "EUR/A": 1.0, "EUR/mm2": 1e6, "EUR": 1.0, "EUR/kg": 1.0, "EUR/uF": 1e6, "EUR/J": 1.0, "EUR/m2": 1.0,
    "kg/m3": 1.0, "g/cm3": 1e3, "W/kg": 1.0, "W/m3 with Hz and T": 1.0, "kW/m3": 1e3, "A/m": 1.0,
    "cm3/uF": 1.0, "A/uF": 1e6, "mA/uF": 1e3, "J/cm3": 1e6, "m3/h": 1.0 / 3600.0, "mohm": 1e-3,
    "dm3": 1e-3, "K/kW": 1e-3, "uC": 1e-6, "J": 1.0, "EUR mOhm": 1e-3, "fraction of E_off": 1.0,
}  # fmt: skip


def _rows() -> dict[tuple[str, str], list[dict[str, Any]]]:
    rows: dict[tuple[str, str], list[dict[str, Any]]] = {}
    for file, group in (("device_ranges.json", "class"), ("passive_ranges.json", "item")):
        for row in json.loads((DATA / file).read_text(encoding="utf-8")):
            key = row[group], f"{row['quantity'].strip()} | {(row['condition'] or '').strip()}"
            rows.setdefault(key, []).append(row)
    return rows


ROWS = _rows()


def row_of(group: str, name: str, unit: str | None = None) -> dict[str, Any]:
    """The one row of a class or item; two rows of one name differ by unit."""
    found = [row for row in ROWS.get((group, name), []) if unit in (None, row["unit"])]
    assert len(found) == 1, f"{len(found)} rows are called {name!r} in {group!r}"
    return found[0]


def limits_si(row: dict[str, Any]) -> tuple[float, float]:
    factor = ROW_UNITS[row["unit"]]
    return row["low"] * factor, row["high"] * factor


def said(row: dict[str, Any]) -> str:
    return f"{row['quantity']} | {row['condition']} [{row['unit']}], {row['status']}, {row['source']}"


def assert_in(value: float, group: str, name: str) -> None:
    row = row_of(group, name)
    low, high = limits_si(row)
    assert low * (1 - 1e-9) <= value <= high * (1 + 1e-9), f"{value:g} outside {low:g}..{high:g}: {said(row)}"
