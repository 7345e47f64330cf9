"""The catalogue: the files beside this module, and the user's own on top."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cache
from pathlib import Path
from typing import Any

from models.catalog.limit_reading import limit_tables_of
from models.catalog.part_reader import PartReader
from models.catalog.part_table import PartTable
from models.catalog.parts import Catalog, CostModel, LimitTable
from models.catalog.reading import Problems, RawPart, raw_parts_of_csv, read_toml
from models.catalog.schemas import COST_SCHEMA, SCHEMAS, Schema

_FOLDER = Path(__file__).parent
_TOML_FILES = (
    "devices.toml",
    "clamp_diodes.toml",
    "core_materials.toml",
    "conductors.toml",
    "ac_capacitors.toml",
    "dc_link_capacitors.toml",
    "fans.toml",
    "choke_materials.toml",
    "emission_limits.toml",
    "limits.toml",
    "cost.toml",
)
_SHAPE_FILE = "core_shapes.csv"
_LIMITS, _COST = "limit_tables", "cost"


def load_catalog(extra_files: Sequence[Path] = ()) -> Catalog:
    """The built-in catalogue, with the parts of further TOML files added.

    Parameters
    ----------
    extra_files : files in the format of the built-in ones, read in order. A part may say
        `based_on = "name"` to take what it does not state from another part, and `replaces = true` to
        take the place of a part of the same name; entries under [cost] replace the built-in ones.

    Raises
    ------
    ValueError
        With every fault found: file, part, key, what was given and what is expected.
    """
    return _built_in() if not extra_files else _load(tuple(Path(path) for path in extra_files))


@cache
def _built_in() -> Catalog:
    return _load(())


def _load(extra_files: tuple[Path, ...]) -> Catalog:
    problems = Problems()
    documents = [(path.name, read_toml(path)) for path in (*(_FOLDER / f for f in _TOML_FILES), *extra_files)]
    _check_sections(documents, problems)
    tables = {schema.section: PartTable(_parts(schema, documents, problems)) for schema in SCHEMAS}
    cost = _cost(documents, problems)
    limits = _limits(documents, problems)
    problems.raise_if_any()
    assert cost is not None  # a missing value has been reported as a problem
    return Catalog(**tables, limit_tables=limits, cost=cost)


def _check_sections(documents: Sequence[tuple[str, Mapping[str, Any]]], problems: Problems) -> None:
    known = (*(schema.section for schema in SCHEMAS), _LIMITS, _COST)
    for file, document in documents:
        for section, content in document.items():
            if section not in known:
                problems.messages.append(f"{file}: unknown section {section!r}; known are {', '.join(known)}")
            elif isinstance(content, list) == (section == _COST):
                wanted = "[cost]" if section == _COST else f"[[{section}]]"
                problems.messages.append(f"{file}: section {section!r} must be written {wanted}")


def _raw_parts(section: str, documents: Sequence[tuple[str, Mapping[str, Any]]]) -> list[RawPart]:
    return [
        RawPart(file, entries)
        for file, document in documents
        for entries in document.get(section, [])
        if isinstance(entries, dict)
    ]


def _parts(
    schema: Schema, documents: Sequence[tuple[str, Mapping[str, Any]]], problems: Problems
) -> tuple[Any, ...]:
    raws = _raw_parts(schema.section, documents)
    if schema.section == "core_shapes":
        raws = [*raw_parts_of_csv(_FOLDER / _SHAPE_FILE, schema.plain_fields), *raws]
    return PartReader(schema, problems).read(raws)


def _cost(documents: Sequence[tuple[str, Mapping[str, Any]]], problems: Problems) -> CostModel | None:
    """Cost table; entries of later files replace those of earlier ones."""
    entries: dict[str, Any] = {"name": _COST}
    last = "cost.toml"
    for file, document in documents:
        if isinstance(document.get(_COST), dict):
            entries.update(document[_COST])
            last = file
    parts = PartReader(COST_SCHEMA, problems).read([RawPart(last, entries)])
    return parts[0] if parts else None


def _limits(documents: Sequence[tuple[str, Mapping[str, Any]]], problems: Problems) -> tuple[LimitTable, ...]:
    return limit_tables_of(_raw_parts(_LIMITS, documents), problems)
