"""The neighbourhood of one design of a run: sensitivities and tolerances, for people and programs."""

from __future__ import annotations

import json
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

import numpy as np
import pandas as pd
from numpy.typing import NDArray

from optimizer.audit.audited_run import stored_points
from optimizer.certainty.sensitivity import MARGIN, sensitivities
from optimizer.certainty.tolerance import Tolerance, design_at, place_of, tolerance
from optimizer.decision import Shortlist, shortlist
from optimizer.errors import InputError, Problem
from optimizer.runs.run_folder import write_whole
from optimizer.runs.stored_run import StoredRun

Array = NDArray[np.float64]
FOLDER = "neighbourhood"


@dataclass(frozen=True)
class Neighbourhood:
    """What surrounds a design.

    Attributes:
        chosen: a shortlist whose only entries are those of the design.
        row: of the design in the front's table [-].
        effects: `sensitivity.COLUMNS`.
        tolerance: of the design.
    """

    chosen: Shortlist
    row: int
    effects: pd.DataFrame
    tolerance: Tolerance

    @property
    def design_id(self) -> str:
        """What the design is called."""
        return str(self.chosen.table["design_id"].iloc[self.row])


def neighbourhood(run: StoredRun, design: str | None = None) -> Neighbourhood:
    """Look around a design of a run.

    Args:
        run: the run.
        design: its id, or what the shortlist picks it for; None for the recommended one.

    Raises:
        InputError: for a design that the run does not have.
    """
    points = stored_points(run)
    picked = shortlist(run.study, run.table, run.margins)
    row = picked.recommended if design is None else _row_of(run, picked, design)
    return around(run, picked, row, points)


def around(run: StoredRun, picked: Shortlist, row: int, points: Mapping[str, Array]) -> Neighbourhood:
    """Look around the design of a row of the front's table."""
    space, of_row = design_at(run.study, run.table, points, row)
    point = points[str(run.table["concept"].iloc[row])][place_of(run.table, row)]
    return Neighbourhood(
        picked, row, sensitivities(space, point), tolerance(run.study, space.inverter, of_row)
    )


def _row_of(run: StoredRun, picked: Shortlist, design: str) -> int:
    ids = list(run.table["design_id"].astype(str))
    if design in ids:
        return ids.index(design)
    roles = {entry.role: entry.row for entry in picked.entries}
    if design in roles:
        return roles[design]
    expected = f"an id of front.csv, such as {ids[picked.recommended]}, or one of {', '.join(roles)}"
    raise InputError(Problem(json.dumps(design), expected, key="--design"))


def as_json(found: Neighbourhood) -> str:
    """All of it as JSON."""
    content = {
        "design": found.design_id,
        "sensitivities": json.loads(found.effects.to_json(orient="records", double_precision=10)),
        "tolerances": found.tolerance.entry(),
    }
    return json.dumps(content, indent=1, ensure_ascii=False) + "\n"


def as_csv(found: Neighbourhood) -> str:
    """The sensitivities as CSV."""
    return str(found.effects.to_csv(index=False, lineterminator="\n", float_format="%.6g"))


def write_neighbourhood(found: Neighbourhood, folder: Path) -> list[Path]:
    """Write page, CSV and JSON into a folder, which is made where it is not there; return the files.

    Raises:
        InputError: where the folder is a file or cannot be made.
    """
    from optimizer.certainty.page import neighbourhood_page

    if folder.exists() and not folder.is_dir():
        raise InputError(Problem("a file", "a folder", key="--out", file=str(folder)))
    made = {"html": neighbourhood_page(found), "csv": as_csv(found), "json": as_json(found)}
    try:
        folder.mkdir(parents=True, exist_ok=True)
    except OSError as trouble:
        given = f"a folder that cannot be made ({trouble.strerror})"
        raise InputError(Problem(given, "a folder to write to", key="--out", file=str(folder))) from trouble
    paths = [folder / f"{found.design_id}.{suffix}" for suffix in made]
    for path, content in zip(paths, made.values(), strict=True):
        write_whole(path, content)
    return paths


def tightest(found: Neighbourhood, count: int) -> list[str]:
    """Requirements of the design with the least margins that something moves, the tightest first."""
    margins = dict(found.chosen.margins.iloc[found.row])
    moved = found.effects[(found.effects["kind"] == MARGIN) & (found.effects["change"].abs() > 1e-9)]
    names = [str(name) for name in dict.fromkeys(moved["figure"]) if name in margins]
    return sorted(names, key=lambda name: float(margins[name]))[:count]
