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

LAST_DIGIT = 1e-6
"""Margin that the seven digits of a front.csv may cost a design that stands at its limit [-]."""


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
    table.insert(1, "feasible", np.asarray((margins_of(constraints) >= -LAST_DIGIT).all(-1)).tolist())
    margins = margin_table(constraints).drop(columns="tightest")
    margins.columns = [f"margin: {name}" for name in margins.columns]
    return pd.concat([table, _over_load(result), margins], axis=1)


def _over_load(result: Evaluation) -> pd.DataFrame:
    columns: dict[str, np.ndarray] = {}
    for place, level in enumerate(result.load_level):
        share = f"at_{100.0 * level:.0f}_percent"
        columns[f"efficiency_{share}"] = result.efficiency[:, place]
        columns[f"loss_{share}_w"] = np.sum([part[:, place] for part in result.losses.values()], axis=0)
        columns |= {f"loss_{name}_{share}_w": part[:, place] for name, part in result.losses.items()}
    return pd.DataFrame(columns)


def spectrum_table(study: Study, inverter: Inverter, given: HandDesigns) -> pd.DataFrame:
    """One row a design and line: low orders, then switching sidebands.

    Columns: order and frequency; rms of the bridge's phase voltage [V] (of switching lines); rms over rated
    current or voltage of what the filter puts out [%], and its limit [%].

    Args:
        study, inverter, given: as in `evaluated_table`.
    """
    found = inverter.evaluate(given.designs).distortion
    switched, low = inverter.bridge_lines(given.designs), found.lines.order.shape[1]
    low -= switched.shape[1]
    volts = np.concatenate([np.full((len(switched), low), np.nan), switched], axis=-1)
    shown = np.concatenate([np.ones((len(switched), low), dtype=bool), found.lines.listed[:, low:]], axis=-1)
    limit = np.where(np.isfinite(found.line_limit), 100.0 * found.line_limit, np.nan)
    labels = np.repeat(np.array(given.labels, dtype=object)[:, None], shown.shape[1], axis=1)
    table = pd.DataFrame(
        {
            LABEL: labels[shown],
            "order": found.lines.order[shown],
            "frequency_hz": study.specification.line_frequency_hz * found.lines.order[shown],
            "bridge_voltage_v": volts[shown],
            "output_percent": 100.0 * found.lines.amplitude[shown],
            "limit_percent": limit[shown],
        }
    )
    return table.sort_values([LABEL, "order"], kind="stable", ignore_index=True)


def joined(tables: list[pd.DataFrame]) -> pd.DataFrame:
    """Tables of several bridges in one; what a bridge does not have stays empty."""
    return pd.concat(tables, ignore_index=True)


def written_table(table: pd.DataFrame, kind: str) -> str:
    """The table as text: "csv", or "json" (a list of objects)."""
    if kind == "json":
        return json.dumps(json.loads(table.to_json(orient="records", double_precision=12)), indent=1) + "\n"
    return table.to_csv(index=False, lineterminator="\n")
