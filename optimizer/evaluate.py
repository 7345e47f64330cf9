"""Evaluation of designs given by hand: every figure and every margin, as one table."""

from __future__ import annotations

import json

import numpy as np
import pandas as pd

from models.evaluation import Evaluation
from models.inverter import Inverter
from optimizer.designs_file import LABEL, HandDesigns
from optimizer.fronts import design_table, margin_table
from optimizer.objectives import margins_of, requirements_of
from optimizer.study import Study


def evaluated_table(study: Study, inverter: Inverter, given: HandDesigns) -> pd.DataFrame:
    """One row a design: what it is, results, losses over load, margins, the harmonic lines that matter.

    Args:
        study: the study (its own limits count).
        inverter: its inverter.
        given: the designs.
    """
    result = inverter.evaluate(given.designs)
    constraints = requirements_of(study.at_most, result)
    table = design_table(inverter, given.designs, result, constraints)
    table.insert(0, LABEL, given.labels)
    table.insert(1, "feasible", np.asarray((margins_of(constraints) >= 0.0).all(-1)).tolist())
    margins = margin_table(constraints).drop(columns="tightest")
    margins.columns = [f"margin: {name}" for name in margins.columns]
    return pd.concat([table, _over_load(result), margins], axis=1)


def _over_load(result: Evaluation) -> pd.DataFrame:
    columns: dict[str, np.ndarray] = {}
    for place, level in enumerate(result.load_level):
        share = f"at_{100.0 * level:.0f}_percent"
        columns[f"efficiency_{share}"] = result.efficiency[:, place]
        columns[f"loss_{share}_w"] = np.sum([part[:, place] for part in result.losses.values()], axis=0)
    return pd.DataFrame(columns)


def written_table(table: pd.DataFrame, kind: str) -> str:
    """The table as text: "csv", or "json" (a list of objects)."""
    if kind == "json":
        return json.dumps(json.loads(table.to_json(orient="records", double_precision=12)), indent=1) + "\n"
    return table.to_csv(index=False, lineterminator="\n")
