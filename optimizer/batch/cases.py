"""The cases of a study file: a list at a key that takes one value stands for several studies."""

from __future__ import annotations

import copy
import itertools
import math
import re
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any

import tomli_w

from optimizer.errors import InputError, Problem
from optimizer.study.quantity import show
from optimizer.study.schema import LIST_KEYS
from optimizer.study.study import Study, read_bytes, read_toml

MOST_CASES = 500


@dataclass(frozen=True)
class Case:
    """One case of a batch.

    Attributes:
        name: what is particular about it, in words; "" where the study has no lists.
        values: by key path what stands there, as shown.
        study: a study of its own.
    """

    name: str
    values: Mapping[str, str]
    study: Study

    @property
    def folder(self) -> str:
        """Name for its folder: the case's name in letters that every file system takes."""
        return re.sub(r"[^A-Za-z0-9.+-]+", "_", self.name).strip("_")

    def with_effort(self, population: int | None, generations: int | None) -> Case:
        """The same case searched with another effort, as `Study.with_effort`."""
        return replace(self, study=self.study.with_effort(population, generations))


def read_cases(path: Path) -> tuple[Case, ...]:
    """Cases of a study file: the combinations of all lists, the last key changing fastest; one without lists.

    Raises:
        InputError: as `Study.read`, for every case; for lists that are empty, hold a value twice or make more
            than MOST_CASES cases.
    """
    raw = read_bytes(path)
    content = read_toml(path, raw)
    axes = dict(_lists(content, ()))
    if not axes:
        return (Case("", {}, Study.of_bytes(path, raw)),)
    _check(path, axes)
    cases, problems = [], dict[Problem, None]()
    for chosen in itertools.product(*axes.values()):
        values = {".".join(key): _shown(value) for key, value in zip(axes, chosen, strict=True)}
        name = ", ".join(f"{_short(key)} {value}" for key, value in values.items())
        one = copy.deepcopy(content)
        for key, value in zip(axes, chosen, strict=True):
            _set(one, key, value)
        try:
            cases.append(Case(name, values, Study.of_bytes(path, tomli_w.dumps(one).encode())))
        except InputError as trouble:
            problems |= dict.fromkeys(trouble.problems)
    if problems:
        raise InputError(*problems)
    return tuple(cases)


def _lists(table: Mapping[str, Any], place: tuple[str, ...]) -> Iterator[tuple[tuple[str, ...], list[Any]]]:
    for name, value in table.items():
        if isinstance(value, dict):
            yield from _lists(value, (*place, name))
        elif isinstance(value, list) and name not in LIST_KEYS:
            yield (*place, name), value


def _check(path: Path, axes: Mapping[tuple[str, ...], list[Any]]) -> None:
    problems = []
    for key, values in axes.items():
        if not values:
            problems.append(
                Problem("an empty list", "one value, or a list of cases", ".".join(key), str(path))
            )
        for place, value in enumerate(values):
            if value in values[:place]:
                given = f"{show(value)} twice"
                problems.append(Problem(given, "each case once", f"{'.'.join(key)}[{place}]", str(path)))
    count = math.prod(len(values) for values in axes.values())
    if count > MOST_CASES:
        keys = ", ".join(".".join(key) for key in axes)
        problems.append(
            Problem(f"{count} cases by the lists at {keys}", f"at most {MOST_CASES}", file=str(path))
        )
    if problems:
        raise InputError(*problems)


def _shown(value: Any) -> str:
    """A value in few words; of a table its nominal value, or all of it."""
    if isinstance(value, dict):
        return _shown(value["nominal"]) if "nominal" in value else ", ".join(map(_shown, value.values()))
    return str(value)


def _short(key: str) -> str:
    return key.rpartition(".")[2].replace("_", " ")


def _set(table: dict[str, Any], key: tuple[str, ...], value: Any) -> None:
    for name in key[:-1]:
        table = table[name]
    table[key[-1]] = value
