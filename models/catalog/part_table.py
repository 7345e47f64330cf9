"""A table of catalogue parts that hands out columns as arrays."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, field
from difflib import get_close_matches
from typing import Any, Generic, Protocol, TypeVar

import numpy as np
from numpy.typing import NDArray


class Named(Protocol):
    """Anything with a name."""

    @property
    def name(self) -> str:
        """What it is called."""


T = TypeVar("T", bound=Named)


@dataclass(frozen=True)
class PartTable(Generic[T]):
    """Parts of one kind in a fixed order; a design names a part by its index here."""

    parts: tuple[T, ...]
    _columns: dict[str, NDArray[Any]] = field(default_factory=dict, init=False, repr=False, compare=False)

    def __post_init__(self) -> None:
        names = self.names
        twice = sorted({name for name in names if names.count(name) > 1})
        if twice:
            raise ValueError(f"names must be unique in a table, given more than once: {', '.join(twice)}")

    def __len__(self) -> int:
        return len(self.parts)

    def __iter__(self) -> Iterator[T]:
        return iter(self.parts)

    def __getitem__(self, index: int) -> T:
        return self.parts[index]

    @property
    def names(self) -> tuple[str, ...]:
        """Names of the parts, in table order."""
        return tuple(part.name for part in self.parts)

    def index(self, name: str) -> int:
        """Place of the part called `name`.

        Raises
        ------
        ValueError
            If no part has that name; the message holds the nearest name.
        """
        names = self.names
        if name in names:
            return names.index(name)
        near = get_close_matches(name, names, n=1, cutoff=0.0)
        hint = f"; the nearest name is {near[0]!r}" if near else "; the table is empty"
        raise ValueError(f"no part called {name!r}{hint}")

    def column(self, field_name: str) -> NDArray[Any]:
        """One field of every part as a read-only array, made once and kept.

        Returns
        -------
        column : array (n,), or (n, m) for fields that hold a tuple of numbers. Shorter tuples are
            filled up by repeating their last entry, so that no NaN appears. [the field's unit]

        Raises
        ------
        ValueError
            If the parts have no such field.
        """
        if field_name not in self._columns:
            try:
                values = [getattr(part, field_name) for part in self.parts]
            except AttributeError:
                kind = type(self.parts[0]).__name__
                raise ValueError(f"{kind} has no field {field_name!r}") from None
            column = _as_array(values)
            column.setflags(write=False)
            self._columns[field_name] = column
        return self._columns[field_name]

    def select(self, predicate: Callable[[T], bool]) -> NDArray[np.intp]:
        """Indexes of the parts for which `predicate` holds [-]."""
        return np.array([i for i, part in enumerate(self.parts) if predicate(part)], dtype=np.intp)


def _as_array(values: list[Any]) -> NDArray[Any]:
    """Array of a field; tuples of numbers are padded with their last entry, other tuples stay objects."""
    if not values or not isinstance(values[0], tuple):
        return np.array(values)
    if all(isinstance(entry, float) for value in values for entry in value):
        width = max(len(value) for value in values)
        return np.array([value + (value[-1],) * (width - len(value)) for value in values])
    column = np.empty(len(values), dtype=object)
    column[:] = values
    return column
