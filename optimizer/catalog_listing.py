"""The catalogue as a user sees it: read with clear faults, listed with the origin of every value."""

from __future__ import annotations

import json
from collections.abc import Iterable, Sequence
from dataclasses import fields
from difflib import get_close_matches
from pathlib import Path
from typing import Any

from models.catalog import load_catalog
from models.catalog.part_table import PartTable
from models.catalog.parts import Catalog
from optimizer.errors import InputError, PartsError, Problem

KINDS = (
    "devices",
    "clamp_diodes",
    "core_materials",
    "core_shapes",
    "conductors",
    "ac_capacitors",
    "dc_link_capacitors",
    "fans",
    "choke_materials",
    "emission_limits",
)


def read_catalog(files: Sequence[Path]) -> Catalog:
    """The catalogue with a user's part files on top.

    Raises:
        PartsError: with every fault found in the files.
    """
    try:
        return load_catalog(files)
    except (ValueError, OSError) as trouble:
        raise PartsError(str(trouble)) from trouble


def listing(kind: str | None, files: Sequence[Path], *, as_json: bool) -> str:
    """Text or JSON of the catalogue: all kinds by name, or one kind with all values and origins.

    Args:
        kind: one of KINDS, or None for an overview.
        files: a user's part files, checked and listed too.
        as_json: JSON instead of text.

    Raises:
        InputError: for an unknown kind; PartsError: for faults in the files.
    """
    catalog = read_catalog(files)
    if kind is None:
        names = {name: list(getattr(catalog, name).names) for name in KINDS}
        names["limit_tables"] = [table.name for table in catalog.limit_tables]
        return _json(names) if as_json else "".join(_overview(names))
    if kind not in KINDS:
        near = get_close_matches(kind, KINDS, n=1, cutoff=0.0)[0]
        raise InputError(
            Problem(repr(kind), f"one of {', '.join(KINDS)} (the nearest is {near})", key="--kind")
        )
    table: PartTable[Any] = getattr(catalog, kind)
    parts = [_part(part) for part in table]
    return _json(parts) if as_json else "".join(_described(parts))


def _json(content: object) -> str:
    return json.dumps(content, indent=1, default=str) + "\n"


def _overview(names: dict[str, list[str]]) -> Iterable[str]:
    for kind, entries in names.items():
        yield f"{kind} ({len(entries)})\n"
        yield "".join(f"  {entry}\n" for entry in entries)
    yield "Values are representative of a class, not of a part one can order. All values: --kind KIND\n"


def _part(part: Any) -> dict[str, Any]:
    values = {}
    for entry in fields(part):
        if entry.name not in ("name", "origin"):
            values[entry.name] = {"value": getattr(part, entry.name)}
            origin = getattr(part, "origin", {}).get(entry.name)
            if origin:
                values[entry.name]["origin"] = origin
    return {"name": part.name, "values": values}


def _described(parts: list[dict[str, Any]]) -> Iterable[str]:
    for part in parts:
        yield f"{part['name']}\n"
        for name, entry in part["values"].items():
            value = entry["value"]
            shown = f"{value:.6g}" if isinstance(value, float) else str(value)
            yield f"  {name:44} {shown:>14}  {entry.get('origin', '')}".rstrip() + "\n"
