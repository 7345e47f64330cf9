"""How the tables of a study file are read: kinds of values, keys, and a reading that collects every problem.

Nothing here stops at the first trouble: a value that cannot be read is left out of the result and its problem
noted, so that one run of the program tells all that is wrong with a file.
"""

from __future__ import annotations

import difflib
import math
import re
from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Protocol

from optimizer.errors import InputError, Problem
from optimizer.study.quantity import KINDS, expectation, parse, show, written

REQUIRED = object()
"""Default of a key that has none."""


class Kind(Protocol):
    """A kind of value: what is expected, and how it is read."""

    @property
    def expected(self) -> str:
        """What is expected, in words."""

    def read(self, value: Any) -> Any:
        """Return the value as the program uses it; raise InputError with problems that carry no place."""


@dataclass(frozen=True)
class Text:
    """A text that matches a pattern, by default one that is not empty."""

    expected: str = "a text"
    pattern: str = r".+"

    def read(self, value: Any) -> str:
        """Return the text without blanks around it."""
        if not isinstance(value, str) or not re.fullmatch(self.pattern, value.strip(), re.DOTALL):
            raise InputError(Problem(show(value), self.expected))
        return value.strip()


@dataclass(frozen=True)
class Choice:
    """One of a few names (or numbers)."""

    names: tuple[Any, ...]

    @property
    def expected(self) -> str:
        """The names in words."""
        return one_of(self.names)

    def read(self, value: Any) -> Any:
        """Return the name."""
        if not any(type(value) is type(name) and value == name for name in self.names):
            raise InputError(Problem(show(value), self.expected + nearest(value, self.names)))
        return value


@dataclass(frozen=True)
class Whole:
    """A whole number from `least` to `most`."""

    least: int
    most: int

    @property
    def expected(self) -> str:
        """The range in words."""
        return f"a whole number from {self.least} to {self.most}"

    def read(self, value: Any) -> int:
        """Return the number."""
        if not isinstance(value, int) or isinstance(value, bool) or not self.least <= value <= self.most:
            raise InputError(Problem(show(value), self.expected))
        return value


@dataclass(frozen=True)
class Quantity:
    """A quantity in `unit`, from `low` to `high`; `above` leaves the value of `low` itself out."""

    unit: str
    low: float = -math.inf
    high: float = math.inf
    above: bool = False

    @property
    def expected(self) -> str:
        """The range in words, with an example of the unit."""
        return expectation(self.unit)

    def read(self, value: Any) -> float:
        """Return the value [unit]."""
        number = parse(value, self.unit)
        if number < self.low or number > self.high or (self.above and number == self.low):
            kind = KINDS[self.unit][0] if self.unit in KINDS else f"a quantity in {self.unit}"
            raise InputError(Problem(show(value), f"{kind} {self._bounds()}"))
        return number

    def _bounds(self) -> str:
        low = "above" if self.above else "from" if math.isfinite(self.high) else "of at least"
        to = ", at most" if self.above else " to"
        high = f"{to} {written(self.high, self.unit)}" if math.isfinite(self.high) else ""
        return f"{low} {written(self.low, self.unit)}{high}"


@dataclass(frozen=True)
class Several:
    """A list of `least` to `most` values of one kind, none of them twice unless `repeats`."""

    kind: Kind
    least: int = 1
    most: int = 1000
    repeats: bool = False

    @property
    def expected(self) -> str:
        """The count and the kind in words."""
        count = f"at least {self.least}" if self.most == 1000 else f"{self.least} to {self.most}"
        return f"a list of {count}, each {self.kind.expected}"

    def read(self, value: Any) -> tuple[Any, ...]:
        """Return the values; the problem of one of them carries its index as key."""
        if not isinstance(value, list) or not self.least <= len(value) <= self.most:
            raise InputError(Problem(show(value), self.expected))
        values: list[Any] = []
        problems: list[Problem] = []
        for index, item in enumerate(value):
            try:
                values.append(self.kind.read(item))
                if not self.repeats and values[-1] in values[:-1]:
                    problems.append(Problem(f"{show(item)} twice", "each only once", f"[{index}]"))
            except InputError as error:
                problems += [problem.at("", f"[{index}]") for problem in error.problems]
        if problems:
            raise InputError(*problems)
        return tuple(values)


@dataclass(frozen=True)
class SubTable:
    """A table of keys of its own, read later: here only that it is a table."""

    expected: str = "a table"

    def read(self, value: Any) -> Mapping[str, Any]:
        """Return the table."""
        if not isinstance(value, dict):
            raise InputError(Problem(show(value), self.expected))
        return value


@dataclass(frozen=True)
class Key:
    """One key of a table: its name, the kind of its value and its default."""

    name: str
    kind: Kind
    default: Any = REQUIRED


@dataclass
class Reading:
    """A study file being read: where it lies, what it holds, and the problems found so far.

    Attributes:
        path, content: of the file.
        problems: found so far.
        parts: copies of the parts files it names, in its order; None where they lie beside it as it says.
    """

    path: Path
    content: Mapping[str, Any]
    problems: list[Problem] = field(default_factory=list)
    parts: Sequence[Path] | None = None

    def parts_file(self, index: int, name: str) -> Path:
        """Return where the parts file of this index and name lies."""
        if self.parts is None or index >= len(self.parts):
            return self.path.parent / name
        return self.parts[index]

    def table(self, place: str, keys: Iterable[Key]) -> dict[str, Any]:
        """Return the values of a table's keys, defaults included; a value in trouble is left out.

        Args:
            place: key path of the table, such as `application.dc_voltage`; "" for the whole file.
            keys: the keys the table knows.
        """
        content = self._find(place)
        around = self._find(place.rpartition(".")[0])
        if any(part is not None and not isinstance(part, dict) for part in (content, around)):
            return {}  # noted already: the table around it is read first
        known, content = {key.name: key for key in keys}, content or {}
        for name in content:
            if name not in known:
                hint = nearest(name, known) or f": {one_of(known)}"
                self.note(join(place, name), f"a known key{hint}", "an unknown key")
        values = {name: self._value(join(place, name), key, content) for name, key in known.items()}
        return {name: value for name, value in values.items() if value is not REQUIRED}

    def note(self, key: str, expected: str, given: str | None = None) -> None:
        """Note a problem of a key; `given` is what stands there unless said otherwise."""
        found = self._find(key)
        shown = given or ("nothing" if found is None else show(found))
        self.problems.append(Problem(shown, expected, key, str(self.path)))

    def has(self, key: str) -> bool:
        """Return whether the file itself holds the key."""
        return self._find(key) is not None

    def raise_problems(self) -> None:
        """Raise InputError with all problems noted, if there are any."""
        if self.problems:
            raise InputError(*self.problems)

    def _value(self, place: str, key: Key, content: Mapping[str, Any]) -> Any:
        if key.name not in content:
            if key.default is REQUIRED:
                self.note(place, key.kind.expected, "nothing")
            return key.default
        try:
            return key.kind.read(content[key.name])
        except InputError as error:
            self.problems += [problem.at(str(self.path), place + problem.key) for problem in error.problems]
            return REQUIRED

    def _find(self, place: str) -> Any:
        found: Any = self.content
        for part in place.split(".") if place else ():
            found = found.get(part) if isinstance(found, dict) else None
        return found


def join(place: str, name: str) -> str:
    """Return the key path of a key in a table."""
    return f"{place}.{name}" if place else name


def one_of(names: Iterable[str]) -> str:
    """Return names as a choice in words."""
    return "one of " + ", ".join(show(name) for name in names)


def nearest(name: object, known: Iterable[object]) -> str:
    """Return the known name nearest to a given one as a hint in brackets; "" where none is near."""
    by_lower = {str(candidate).lower(): candidate for candidate in known}
    near = difflib.get_close_matches(str(name).lower(), by_lower, n=1, cutoff=0.5)
    return f" (nearest: {show(by_lower[near[0]])})" if near else ""
