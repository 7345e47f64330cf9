"""Table of what limits the fronts, by concept and octave of switching frequency."""

from __future__ import annotations

import pandas as pd

from optimizer.report.blocks import Table

MOST_LIMITS = 4


def limits_table(binding: pd.DataFrame) -> Table:
    """The limits that most designs of a front stand at, a row a concept and octave.

    Args:
        binding: rows of binding.csv.
    """
    rows = []
    for (concept, low, high), told in binding.groupby(["concept", "from [kHz]", "to [kHz]"], sort=False):
        first = told.iloc[:MOST_LIMITS]
        limits = "; ".join(
            f"{name} ({share:.0f} %)"
            for name, share in zip(first["limit"], first["designs at it [%]"], strict=True)
        )
        rows.append((str(concept), f"{low:g} to {high:g}", f"{int(told['designs'].iloc[0]):,}", limits))
    return Table(
        ("concept", "octave [kHz]", "designs", "limits, and share of the designs at them"),
        tuple(rows),
        (0.2, 0.12, 0.08, 0.6),
        frozenset([2]),
    )
