"""What the page says beside its charts: cautions, help, and how many of the designs it draws."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from typing import Any

from optimizer.charts.design_data import DesignData
from optimizer.study.schema import HIGH_VALUES
from optimizer.study.study import Study

CAUTION = (
    "Early-concept figures from analytic models and representative parts. A dc link stores lethal energy; "
    "standards and licensed practice decide."
)
CAUTIONS = (
    "No design here has been built or verified. Differences of a few percent lie within the spread of parts "
    "and the error of the models: verify a design in the time domain, with the data of the parts you will "
    "buy, before money or safety depends on it.",
    "A margin near zero leaves nothing for tolerances and ageing. Feasible means that the stated limits are "
    "met, not that a standard is.",
)
HELP = (
    "Choose what lies across and upwards, and what the size of the points shows.",
    "Point at the fronts: all views show the nearest design. A click pins it; another click pins another.",
    "Drag a rectangle in the fronts: its designs are the group of the thin lines, the means, the dots over "
    "frequency and the table.",
    "Click a concept in the legend to see it alone; click further concepts to add or remove them.",
    "Click a row of the table to pin its design.",
    "Hold a design with the button, then point at another: both stand side by side below the charts.",
    "Double-click, Escape, or the button let go of group and pin.",
)


def cautions(summary: Mapping[str, Any]) -> tuple[str, ...]:
    """The run's own caution, or the general one, and what to mind when reading the charts."""
    return (str(summary.get("caution") or CAUTION), *CAUTIONS)


def drawn(data: DesignData) -> list[str]:
    """How many designs of each class's front are drawn."""
    shown = {name: data.shown(name) for name in data.total}
    told = ", ".join(f"{name} {shown[name]} of {count}" for name, count in data.total.items())
    if all(shown[name] == count for name, count in data.total.items()):
        return [f"All designs of the fronts are drawn: {told}."]
    return [
        f"Designs drawn of those on the fronts: {told}. The least and greatest of every quantity are always "
        "among them, the rest is spread evenly; front.csv has all."
    ]


def missing(study: Study, data: DesignData, summary: Mapping[str, Any]) -> list[str]:
    """Device classes without any feasible design, and what ruled them out where the run says it."""
    ruled_out: Mapping[str, Sequence[Sequence[Any]]] = summary.get("ruled_out") or {}
    openings: Mapping[str, Mapping[str, Any]] = summary.get("openings") or {}
    told = []
    for name in study.concept_names:
        if name not in data.total:
            reasons = ", ".join(str(entry[0]) for entry in ruled_out.get(name, ()))
            told.append(
                f"No feasible design with {name}"
                + (f": the nearest one misses {reasons}." if reasons else ".")
                + "".join(f" {line.strip()}" for line in openings.get(name, {}).get("words", [])[1:])
            )
    return told


def ranked(study: Study) -> list[str]:
    """What designs were ranked by, where not by the values drawn."""
    if study.search.rank_by != HIGH_VALUES:
        return []
    share = 100.0 * study.search.limits_hold
    return [
        "Ranked by what 95 % of inverters stay below, every limit kept by at least "
        f"{share:g} % of them; what is drawn are nominal values, which a front of these need not bound."
    ]


def origin(summary: Mapping[str, Any]) -> list[str]:
    """Where the page comes from: program, seed, effort."""
    told = []
    if "evaluations" in summary:
        told.append(f"{summary['evaluations']:,} candidates evaluated")
    if "seed" in summary:
        told.append(f"seed {summary['seed']}")
    if "version" in summary:
        told.append(f"wattfront {summary['version']}")
    study = summary.get("study")
    if isinstance(study, Mapping) and "file" in study:
        told.append(f"study file {study['file']}")
    return [", ".join(told) + "."] if told else []
