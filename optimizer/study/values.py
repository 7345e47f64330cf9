"""Single values of a study, by their place in its file: how each is read from a study and set in one."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass, fields, replace
from typing import Any

from models.inverter import Inverter
from models.specification import STAND_ALONE, DesignRules
from optimizer.space import SearchSpace
from optimizer.study.quantity import written
from optimizer.study.ranges import RANGES, SearchRange
from optimizer.study.study import Study

LITRE = 1e-3
LOW, HIGH = "min", "max"


@dataclass(frozen=True)
class StudyValue:
    """One value of a study.

    Attributes:
        key: its place in the file.
        title: what it is called.
        unit: of the value; "" where dimensionless.
        read: study -> value.
        put: study, value -> the study with that value.
    """

    key: str
    title: str
    unit: str
    read: Callable[[Study], float]
    put: Callable[[Study, float], Study]


def as_written(value: float, unit: str) -> str:
    """A value as a study file would have it."""
    return f"{value / LITRE:.6g} l" if unit == "m^3" else written(value, unit)


def _specified(study: Study, **values: Any) -> Study:
    return replace(study, specification=replace(study.specification, **values))


def _field(name: str, key: str, title: str, unit: str) -> StudyValue:
    return StudyValue(
        key,
        title,
        unit,
        lambda study: float(getattr(study.specification, name)),
        lambda study, value: _specified(study, **{name: value}),
    )


def _scaled(names: tuple[str, ...], key: str, title: str, factor: Callable[[Study], float]) -> StudyValue:
    """Several voltages in proportion, told by the first of them [V]."""

    def put(study: Study, value: float) -> Study:
        spec = study.specification
        ratio = value / factor(study) / getattr(spec, names[0])
        return _specified(study, **{name: ratio * getattr(spec, name) for name in names})

    return StudyValue(
        key, title, "V", lambda study: factor(study) * float(getattr(study.specification, names[0])), put
    )


def _tolerance() -> StudyValue:
    """The ac voltage's tolerance, both ways [-]."""

    def put(study: Study, value: float) -> Study:
        nominal = study.specification.phase_voltage_v
        ends = {
            "phase_voltage_min_v": nominal * (1.0 - value),
            "phase_voltage_max_v": nominal * (1.0 + value),
        }
        return _specified(study, **ends)

    return StudyValue(
        "application.ac_voltage_tolerance",
        "ac voltage tolerance",
        "",
        lambda study: study.specification.phase_voltage_max_v / study.specification.phase_voltage_v - 1.0,
        put,
    )


def _line(study: Study) -> float:
    """Line-to-line over phase voltage [-]."""
    return math.sqrt(study.specification.phases)


AC_VOLTAGES = ("phase_voltage_v", "phase_voltage_min_v", "phase_voltage_max_v")
DC_VOLTAGES = ("dc_voltage_v", "dc_voltage_min_v", "dc_voltage_max_v")
DC_TOGETHER = "application.dc_voltage"
SPECIFICATION = (
    _field("apparent_power_va", "application.apparent_power", "rated power", "VA"),
    _scaled(DC_VOLTAGES, DC_TOGETHER, "dc voltage (all three)", lambda study: 1.0),
    _field("dc_voltage_min_v", "application.dc_voltage.min", "least dc voltage", "V"),
    _field("dc_voltage_max_v", "application.dc_voltage.max", "greatest dc voltage", "V"),
    _scaled(AC_VOLTAGES, "application.ac_voltage", "ac voltage", _line),
    _tolerance(),
    _field("power_factor_min", "application.power_factor_min", "least power factor", ""),
    _field("line_frequency_hz", "application.line_frequency", "line frequency", "Hz"),
    _field("ambient_c", "application.ambient", "ambient temperature", "degC"),
    _field("coolant_c", "application.coolant", "coolant temperature", "degC"),
    _field("altitude_m", "application.altitude", "altitude", "m"),
)
STAND_ALONE_LIMITS = tuple(
    _field(name, f"application.{name}", f"limit on voltage distortion, {load} load", "")
    for name, load in (("voltage_thd_limit_linear", "linear"), ("voltage_thd_limit_rectifier", "rectifier"))
)


def _rule(name: str, unit: str) -> StudyValue:
    return StudyValue(
        f"rules.{name}",
        name.replace("_", " "),
        unit,
        lambda study: float(getattr(study.specification.rules, name)),
        lambda study, value: _specified(study, rules=replace(study.specification.rules, **{name: value})),
    )


RULES = {entry.name: _rule(entry.name, entry.metadata["unit"]) for entry in fields(DesignRules)}


def energy_price() -> StudyValue:
    """Price of a kilowatt-hour [currency]."""
    return StudyValue(
        "energy.price_per_kwh",
        "price of a kilowatt-hour",
        "",
        lambda study: study.specification.energy.price_per_kwh,
        lambda study, value: _specified(
            study, energy=replace(study.specification.energy, price_per_kwh=value)
        ),
    )


def own_limit(objective: str) -> StudyValue:
    """The study's own limit on an objective; SI units."""
    units = {"volume": "m^3", "mass": "kg"}
    return StudyValue(
        f'objectives.at_most."{objective}"' if " " in objective else f"objectives.at_most.{objective}",
        f"the study's own limit on {objective}",
        units.get(objective, ""),
        lambda study: study.at_most[objective],
        lambda study, value: replace(study, at_most={**study.at_most, objective: value}),
    )


def range_end(name: str, end: str) -> StudyValue:
    """An end, LOW or HIGH, of a search range."""
    entry = next(entry for entry in RANGES if entry.name == name)

    def put(study: Study, value: float) -> Study:
        ends = study.search.ranges[name]
        value = round(value) if entry.whole else value
        moved = SearchRange(value, ends.high) if end == LOW else SearchRange(ends.low, value)
        return replace(study, search=replace(study.search, ranges={**study.search.ranges, name: moved}))

    def read(study: Study) -> float:
        ends = study.search.ranges[name]
        return float(ends.low if end == LOW else ends.high)

    words = {LOW: "least", HIGH: "greatest"}[end]
    return StudyValue(
        f"search.ranges.{name}.{end}", f"{words} {name.replace('_', ' ')} searched", entry.unit, read, put
    )


def specification_values(study: Study) -> tuple[StudyValue, ...]:
    """The main values of a study's specification that count for it."""
    alone = study.specification.application == STAND_ALONE
    return (*SPECIFICATION, *(STAND_ALONE_LIMITS if alone else ()))


def space_of(space: SearchSpace, study: Study) -> SearchSpace:
    """The same concept's search space in a changed study."""
    inverter = space.inverter
    specification = study.with_bridge(inverter.specification.bridge).specification
    if specification != inverter.specification:
        inverter = Inverter(specification, inverter.catalog)
    return SearchSpace(study, inverter, space.device_class)
