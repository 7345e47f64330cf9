"""Catalogue files as they stand: TOML sections and CSV rows, and the list of what is wrong with them."""

from __future__ import annotations

import csv
import tomllib
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, field
from difflib import get_close_matches
from pathlib import Path
from typing import Any


@dataclass(frozen=True)
class RawPart:
    """A part as a file states it."""

    file: str
    entries: Mapping[str, Any]

    @property
    def name(self) -> str:
        """Its name, as far as the file gives one."""
        return str(self.entries.get("name", "(no name)"))


@dataclass
class Problems:
    """Everything found wrong so far, so that one error can report all of it."""

    messages: list[str] = field(default_factory=list)

    def add(self, raw: RawPart, message: str) -> None:
        """Note what is wrong with a part."""
        self.messages.append(f"{raw.file}, part {raw.name!r}: {message}")

    def raise_if_any(self) -> None:
        """Raise one ValueError with every message, if there is one."""
        if self.messages:
            raise ValueError("catalogue: " + "\n".join(self.messages))


def read_toml(path: Path) -> dict[str, Any]:
    """Content of a TOML file.

    Raises
    ------
    ValueError
        If the file is missing or no TOML, naming the file.
    """
    try:
        return tomllib.loads(path.read_text(encoding="utf-8"))
    except FileNotFoundError:
        raise ValueError(f"catalogue: {path.name}: no such file ({path})") from None
    except (tomllib.TOMLDecodeError, UnicodeDecodeError) as error:
        raise ValueError(f"catalogue: {path.name}: not readable as TOML: {error}") from error


def raw_parts_of_csv(path: Path, plain: Mapping[str, type]) -> list[RawPart]:
    """Rows of a CSV file, one part a row; its column `origin` speaks for all values of the row."""
    with path.open(newline="", encoding="utf-8") as lines:
        rows = list(csv.DictReader(lines))
    return [RawPart(path.name, _entries_of_row(row, plain)) for row in rows]


def _entries_of_row(row: Mapping[str, str], plain: Mapping[str, type]) -> dict[str, Any]:
    entries: dict[str, Any] = {"name": row["name"]}
    for key, text in row.items():
        if key in plain:
            entries[key] = _plain_of(text, plain[key])
        elif key not in ("name", "origin"):
            entries[key] = {"value": float(text), "origin": row["origin"]}
    return entries


def _plain_of(text: str, kind: type) -> Any:
    """Word, count or yes/no of a CSV cell; what does not fit stays a text and is reported later."""
    if kind is bool and text in ("true", "false"):
        return text == "true"
    return int(text) if kind is int and text.isdigit() else text


def nearest_hint(key: str, known: Iterable[str]) -> str:
    """Hint with the nearest of the known keys, to end a message with."""
    near = get_close_matches(key, list(known), n=1, cutoff=0.0)
    return f"; the nearest known is {near[0]!r}" if near else ""
