"""The background of a report: specification, design rules, models' sources, values of the parts used."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import fields
from typing import Any

import pandas as pd

from models.inverter import Inverter
from models.specification import DesignRules
from optimizer.catalog_listing import read_catalog
from optimizer.charts.task import task_words
from optimizer.decision.figures import figure
from optimizer.report.blocks import Table
from optimizer.report.naming import quantity_words, told_value
from optimizer.report.sources import model_sources
from optimizer.study.quantity import written
from optimizer.study.study import Study

DEFAULTS = DesignRules()


def energy_words(study: Study) -> str:
    """On what terms lost energy is counted, in words."""
    terms = study.specification.energy
    return (
        f"{terms.years:g} years, {figure(terms.hours_a_year, 4)} h a year, {_price(terms.price_per_kwh)} "
        f"{study.currency} a kilowatt-hour, {100.0 * terms.discount_rate:g} % interest (annuity factor "
        f"{terms.annuity_factor:.1f}), load weights as {terms.weights_are}"
    )


def _price(value: float) -> str:
    """A price with two digits behind the point, or as many as it has."""
    return f"{value:.2f}" if round(value, 2) == value else f"{value:g}"


def specification_table(study: Study) -> Table:
    """The task as the study states it."""
    search = study.search
    rows = [
        *task_words(study),
        ("conducted emission", study.specification.emission_limit or "left out"),
        ("greatest values wanted", _limits(study)),
        ("terms of lost energy", energy_words(study)),
        ("concepts compared", "; ".join(study.concept_names)),
        ("modulation schemes", ", ".join(search.modulations)),
        ("cooling", ", ".join(search.cooling)),
        ("dc-link capacitors", ", ".join(search.dc_links)),
        ("search", f"{search.generations} generations of {search.population} candidates a concept"),
    ]
    return Table(("what", "asked for"), tuple(rows), (0.26, 0.74), title="Specification")


def _limits(study: Study) -> str:
    units = {"volume": "m^3", "mass": "kg"}
    told = []
    for name, value in study.at_most.items():
        if name == "volume":
            told.append(f"{name} {figure(1e3 * value)} l")
        elif name in ("price", "cost of ownership"):
            told.append(f"{name} {figure(value)} {study.currency}")
        elif name in units:
            told.append(f"{name} {written(value, units[name])}")
        else:
            told.append(f"{name} {figure(100.0 * value)} %")
    return ", ".join(told) or "none"


def rules_table(study: Study) -> Table:
    """The design rules that were used; those a study has changed are marked."""
    rules = study.specification.rules
    rows = []
    for rule in fields(rules):
        value, usual = getattr(rules, rule.name), getattr(DEFAULTS, rule.name)
        unit = rule.metadata["unit"].replace("degC", "°C").replace("^3", "³")
        shown = f"{written(value, '')} {unit}".strip() if "³" in unit else written(value, unit)
        rows.append((rule.metadata["meaning"], shown, "" if value == usual else "set by the study"))
    return Table(("design rule", "value", ""), tuple(rows), (0.66, 0.17, 0.17), title="Design rules")


def sources_table() -> Table:
    """The models and where they come from."""
    return Table(("what is modelled", "published source"), model_sources(), (0.5, 0.5))


def parts_tables(study: Study, designs: pd.DataFrame) -> tuple[Table, ...]:
    """Catalogue values and their origins, one table a part that the designs use."""
    return tuple(_part_table(kind, part) for kind, part in _used(study, designs))


def _used(study: Study, designs: pd.DataFrame) -> Iterator[tuple[str, Any]]:
    catalog = read_catalog(study.catalog_files)
    asked = (
        ("Device", catalog.devices, ("device", "inner_device")),
        (
            "Core material",
            catalog.core_materials,
            ("inverter_inductor_core_material", "grid_inductor_core_material"),
        ),
        ("Core", catalog.core_shapes, ("inverter_inductor_core", "grid_inductor_core")),
        ("Conductor", catalog.conductors, ("inverter_inductor_conductor", "grid_inductor_conductor")),
        ("Dc-link capacitor", catalog.dc_link_capacitors, ("dc_link",)),
    )
    for kind, table, columns in asked:
        names = {str(name) for column in columns if column in designs for name in designs[column].dropna()}
        yield from ((kind, part) for part in table if part.name in names)
    yield "Filter capacitor", Inverter(study.specification, catalog).ac_capacitor


def _part_table(kind: str, part: Any) -> Table:
    rows = []
    for entry in fields(part):
        if entry.name in ("name", "origin"):
            continue
        words, unit, factor = quantity_words(entry.name)
        origin = part.origin.get(entry.name, "")
        rows.append((words, told_value(getattr(part, entry.name), factor), unit, origin))
    return Table(
        ("value", "", "unit", "where it comes from"),
        tuple(rows),
        (0.3, 0.17, 0.1, 0.43),
        frozenset([1]),
        title=f"{kind}: {part.name}",
    )
