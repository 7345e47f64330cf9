"""Part properties of a whole population: the catalogue's columns, picked by each candidate's part index."""

from __future__ import annotations

from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.catalog.part_table import PartTable


class Gathered:
    """Attribute access to any field of the chosen parts, as arrays of shape (n,) plus `trailing` axes of
    length one.

    `Gathered(catalog.devices, designs.device, 2).junction_limit_c` has the shape (n, 1, 1) and the field's
    unit. Raises ValueError for a field that the parts do not have.
    """

    def __init__(self, table: PartTable[Any], index: NDArray[np.int64], trailing: int = 0) -> None:
        self._table = table
        self._index = index
        self._shape = (*index.shape, *(1,) * trailing)

    def __getattr__(self, name: str) -> NDArray[Any]:
        if name.startswith("_"):
            raise AttributeError(name)
        column = self._table.column(name)[self._index]
        value = column.reshape(self._shape + column.shape[1:])
        self.__dict__[name] = value
        return value
