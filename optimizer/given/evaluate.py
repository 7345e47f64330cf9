"""Evaluation of designs given by hand: every figure and every margin, as one table."""

from __future__ import annotations

import json

import numpy as np
import pandas as pd

from models.evaluation import Evaluation
from models.inverter import Inverter
from optimizer.given.designs_file import LABEL, HandDesigns
from optimizer.objectives import margins_of, requirements_of
from optimizer.runs.fronts import design_table, margin_table
from optimizer.study.study import Study

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
    """One row a design and line: the fundamental, low orders, switching sidebands.

    Columns: order and frequency; rms per phase of bridge voltage, current of the bridge-side inductor,
    current and voltage of grid or load; what the distortion limits look at, over rated current (grid) or
    rated voltage of the worst load (stand-alone) [%], and its limit [%].

    Args:
        study, inverter, given: as in `evaluated_table`.
    """
    lines = inverter.spectrum(given.designs)
    held = inverter.evaluate(given.designs).distortion
    none = np.full((len(given.designs), 1), np.nan)
    limit = np.where(np.isfinite(held.line_limit), 100.0 * held.line_limit, np.nan)
    labels = np.repeat(np.array(given.labels, dtype=object)[:, None], lines.order.shape[1], axis=1)
    columns = {
        LABEL: labels,
        "order": lines.order,
        "frequency_hz": study.specification.line_frequency_hz * lines.order,
        "bridge_voltage_v": lines.bridge_voltage,
        "inverter_current_a": lines.inverter_current,
        "output_current_a": lines.output_current,
        "output_voltage_v": lines.output_voltage,
        "output_percent": np.concatenate([none, 100.0 * held.lines.amplitude], axis=-1),
        "limit_percent": np.concatenate([none, limit], axis=-1),
    }
    table = pd.DataFrame({name: values[lines.listed] for name, values in columns.items()})
    table["place"] = np.repeat(np.arange(len(given.labels)), lines.listed.sum(-1))
    table = table.sort_values(["place", "order"], kind="stable", ignore_index=True)
    return table.drop(columns="place")


def joined(tables: list[pd.DataFrame]) -> pd.DataFrame:
    """Tables of several bridges in one; what a bridge does not have stays empty."""
    return pd.concat(tables, ignore_index=True)


def written_table(table: pd.DataFrame, kind: str) -> str:
    """The table as text: "csv", or "json" (a list of objects)."""
    if kind == "json":
        return json.dumps(json.loads(table.to_json(orient="records", double_precision=12)), indent=1) + "\n"
    return table.to_csv(index=False, lineterminator="\n")
