"""Tables as CSV: numbers of DIGITS significant digits, quoted only where needed."""

from __future__ import annotations

import io

import numpy as np
import pandas as pd
import pyarrow as pa
from numpy.typing import NDArray
from pyarrow import csv

DIGITS = 7


def csv_bytes(table: pd.DataFrame) -> bytes:
    """A table as CSV in UTF-8, without its index."""
    columns = {str(name): _column(table[name]) for name in table.columns}
    text = io.BytesIO()
    csv.write_csv(pa.table(columns), text, csv.WriteOptions(quoting_style="needed"))
    return text.getvalue()


def _column(values: pd.Series) -> pa.Array:
    if values.dtype == np.float64:
        return pa.array(significant(values.to_numpy()), from_pandas=True)
    if isinstance(values.dtype, pd.CategoricalDtype):
        return pa.array(values).cast(pa.string())
    if values.dtype == bool:
        return pa.array(np.where(values, "True", "False"))
    if values.dtype == object or pd.api.types.is_string_dtype(values.dtype):
        return pa.array(values.astype(str)).dictionary_encode().cast(pa.string())
    return pa.array(values)


def significant(values: NDArray[np.float64]) -> NDArray[np.float64]:
    """Values rounded to DIGITS significant digits."""
    size = np.abs(values)
    exponent = DIGITS - 1 - np.floor(np.log10(np.where(size > 0.0, size, 1.0)))
    factor = 10.0 ** np.abs(exponent)
    return np.where(exponent >= 0, np.rint(values * factor) / factor, np.rint(values / factor) * factor)
