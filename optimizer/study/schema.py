"""Every key a study file may hold, table by table: kind, unit, bounds and default.

The starter study explains the same keys to people; a test keeps the two together. Bounds here keep typing
errors out (a milli for a mega); what does not fit together physically is found in `checks`.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, fields
from typing import Any

from models.designs import COOLING
from models.ownership import ENERGY_SHARES, TIME_SHARES, EnergyTerms
from models.specification import GRID_CONNECTED, STAND_ALONE, DesignRules, Specification
from models.uncertainty import SPREAD, TOLERANCE, Uncertainty
from models.waveforms.bridges import BRIDGES
from optimizer.study.ranges import LARGE_POWER_VA, SearchRange, read_ranges
from optimizer.study.table import Choice, Key, Kind, Quantity, Reading, Several, SubTable, Text, Whole

OBJECTIVES = (
    "weighted loss",
    "volume",
    "price",
    "mass",
    "distortion",
    "cost of ownership",
    "rated loss",
    "junction temperature rise",
)
DEFAULT_CLASSES = ("silicon IGBT", "superjunction MOSFET", "SiC MOSFET", "GaN HEMT")
DC_LINKS = ("electrolytic", "film")
LCL, LC, ONLY_L = "LCL", "LC", "L"
SERIES_R, PARALLEL_RC = "series resistor", "parallel R-C"
EUROPEAN, CALIFORNIAN, CUSTOM = "european", "californian", "custom"
RANKINGS = NOMINAL_VALUES, HIGH_VALUES = "nominal", "95 percent"
"""What candidates are ranked by: the models' own values, or those that 95 % of inverters stay below."""
NO_EMISSION_LIMIT = "none"
SIDES = ("lagging", "leading")
DEFAULT_LIMITS = {GRID_CONNECTED: "IEEE 1547-2018", STAND_ALONE: "IEC 62040-3 stand-alone output"}
TABLES = (
    "application",
    "weighting",
    "bridge",
    "filter",
    "objectives",
    "energy",
    "search",
    "rules",
    "uncertainty",
    "catalog",
)
NAME = Text("a text of 1 to 80 characters on one line", r"[^\x00-\x1f\x7f\u2028\u2029]{1,80}")
TOP = (
    Key("name", NAME),
    Key("description", Text(pattern=".*"), ""),
    *(Key(name, SubTable(), None) for name in TABLES),
)
_SHARE = Quantity("", 0.0, 1.0)
_VOLTAGE = Quantity("V", 1.0, 50e3)
_THD = Quantity("", 0.0, 0.5, above=True)
APPLICATION = (
    Key("kind", Choice((GRID_CONNECTED, STAND_ALONE))),
    Key("phases", Choice((1, 3))),
    Key("apparent_power", Quantity("VA", 10.0, 100e6)),
    Key("power_factor_min", Quantity("", 0.0, 1.0, above=True), 0.9),
    Key("power_factor", Quantity("", 0.0, 1.0, above=True), 1.0),
    Key("power_factor_side", Choice(SIDES), SIDES[0]),
    Key("ac_voltage", _VOLTAGE),
    Key("ac_voltage_tolerance", Quantity("", 0.0, 0.5), 0.1),
    Key("line_frequency", Quantity("Hz", 10.0, 1e3)),
    Key("dc_voltage", SubTable(), None),
    Key("ambient", Quantity("degC", -40.0, 85.0), 40.0),
    Key("coolant", Quantity("degC", -40.0, 120.0), 45.0),
    Key("altitude", Quantity("m", -100.0, 5000.0), 1000.0),
    Key("harmonic_limits", Text(), None),
    Key("emission_limit", Text(), NO_EMISSION_LIMIT),
)
SHORT_CIRCUIT = (
    Key("min", Quantity("", 1.0, 1e6), math.inf),
    Key("max", Quantity("", 1.0, 1e6), math.inf),
)
DC_VOLTAGE = (Key("min", _VOLTAGE), Key("nominal", _VOLTAGE), Key("max", _VOLTAGE))
_ASKED = {entry.name: entry.default for entry in fields(Specification)}
STAND_ALONE_ONLY = (
    Key("rectifier_share", _SHARE, _ASKED["rectifier_share"]),
    Key("crest_factor", Quantity("", 1.42, 10.0), _ASKED["crest_factor"]),
    Key("voltage_thd_limit_linear", _THD, _ASKED["voltage_thd_limit_linear"]),
    Key("voltage_thd_limit_rectifier", _THD, _ASKED["voltage_thd_limit_rectifier"]),
)
GRID_CONNECTED_ONLY = (
    Key("short_circuit_ratio", SubTable(), None),
    Key("demand_current", Quantity("A", 0.0), 0.0),
)
WEIGHTING = (Key("scheme", Choice((EUROPEAN, CALIFORNIAN, CUSTOM)), EUROPEAN),)
CUSTOM_WEIGHTING = (
    Key("levels", Several(Quantity("", 0.0, 1.2, above=True)), None),
    Key("weights", Several(_SHARE, repeats=True), None),
)
BRIDGE = (
    Key("kind", Choice(tuple(BRIDGES))),
    Key("compared_with", Several(Choice(tuple(BRIDGES))), ()),
    Key("modulations", Several(Text()), None),
)
FILTER = (
    Key("kind", Choice((LCL, LC, ONLY_L)), LCL),
    Key("damping", Several(Choice((SERIES_R, PARALLEL_RC))), (SERIES_R,)),
)
MINIMISE = (
    Key("minimise", Several(Choice(OBJECTIVES), 2, 5), OBJECTIVES[:3]),
    Key("at_most", SubTable(), None),
)
_SHARE_LIMIT, _COST_LIMIT = Quantity("", 0.0, 1.0, above=True), Quantity("", 0.0, math.inf, above=True)
_LIMITS = {
    "volume": Quantity("m^3", 0.0, 1e4, above=True),
    "mass": Quantity("kg", 0.0, 1e7, above=True),
    "price": _COST_LIMIT,
    "cost of ownership": _COST_LIMIT,
}
AT_MOST = tuple(Key(name, _LIMITS.get(name, _SHARE_LIMIT), None) for name in OBJECTIVES)
_TERMS = EnergyTerms()
_ENERGY_KINDS: dict[str, Kind] = {
    "price_per_kwh": Quantity("", 0.0, 1e6),
    "years": Quantity("", 0.0, 100.0, above=True),
    "hours_a_year": Quantity("", 0.0, 8784.0, above=True),
    "discount_rate": Quantity("", 0.0, 1.0),
    "weights_are": Choice((ENERGY_SHARES, TIME_SHARES)),
}
CURRENCY = "currency units"
ENERGY = (
    *(Key(term.name, _ENERGY_KINDS[term.name], getattr(_TERMS, term.name)) for term in fields(_TERMS)),
    Key(
        "currency", Text("a currency's name or sign of up to 20 characters", r"[^\x00-\x1f]{1,20}"), CURRENCY
    ),
)
SEARCH = (
    Key("device_classes", Several(Text()), DEFAULT_CLASSES),
    Key("core_materials", Several(Text()), ()),
    Key("core_families", Several(Text()), ()),
    Key("conductors", Several(Text()), ()),
    Key("dc_links", Several(Choice(DC_LINKS)), DC_LINKS),
    Key("cooling", Several(Choice(COOLING)), COOLING[:2]),
    Key("population", Whole(8, 10_000), 500),
    Key("generations", Whole(1, 100_000), 170),
    Key("least_gain", Quantity("", 0.0, 1.0), 0.0),
    Key("front_resolution", Quantity("", 0.0, 0.1), 0.001),
    Key("rank_by", Choice(RANKINGS), NOMINAL_VALUES),
    Key("limits_hold", Quantity("", 0.5, 0.999), 0.9),
    Key("ranges", SubTable(), None),
)
CATALOG = (Key("files", Several(Text()), ()),)
LIST_KEYS = frozenset(
    key.name
    for table in (CUSTOM_WEIGHTING, BRIDGE, FILTER, MINIMISE, SEARCH, CATALOG)
    for key in table
    if isinstance(key.kind, Several)
)
"""Keys whose value is a list; a list at any other key makes a batch of cases."""
_RULES_THAT_MAY_BE_ZERO = {"modulation_reserve", "dead_time_compensated", "fan_load_start"}
_RULES_UP_TO_ONE = {
    "modulation_reserve",
    "dead_time_compensated",
    "fan_load_start",
    "saturation_use",
    "inductance_left",
    "gap_share_limit",
    "dc_voltage_use",
    "sink_base_coverage",
    "packing_factor",
}


def _rule(name: str, unit: str, default: float) -> Key:
    above_zero = unit == "" and name not in _RULES_THAT_MAY_BE_ZERO
    return Key(name, Quantity(unit, 0.0, 1.0 if name in _RULES_UP_TO_ONE else math.inf, above_zero), default)


_DEFAULTS = DesignRules()
RULES = tuple(
    _rule(rule.name, rule.metadata["unit"], getattr(_DEFAULTS, rule.name)) for rule in fields(_DEFAULTS)
)

WIDEST = {TOLERANCE: 0.9, SPREAD: 10.0}
"""Greatest value of an uncertainty by its law: a part must stay above nothing."""
UNCERTAINTY = tuple(
    Key(one.name, Quantity("", 0.0, WIDEST[one.metadata["law"]]), getattr(Uncertainty(), one.name))
    for one in fields(Uncertainty)
)


@dataclass(frozen=True)
class StudyContent:
    """The values of a study file in SI units, table by table; a value in trouble is missing.

    Attributes:
        top, application, dc_voltage, short_circuit_ratio, weighting, bridge, objectives, at_most, energy,
            search, rules, uncertainty, catalog: tables by key.
        filter: kind and damping.
        ranges: search ranges by name.
    """

    top: Mapping[str, Any]
    application: Mapping[str, Any]
    dc_voltage: Mapping[str, float]
    short_circuit_ratio: Mapping[str, float]
    weighting: Mapping[str, Any]
    bridge: Mapping[str, Any]
    filter: Mapping[str, Any]
    objectives: tuple[str, ...]
    at_most: Mapping[str, float]
    energy: Mapping[str, Any]
    search: Mapping[str, Any]
    ranges: Mapping[str, SearchRange]
    rules: Mapping[str, float]
    uncertainty: Mapping[str, float]
    catalog: Mapping[str, Any]


def read_content(reading: Reading) -> StudyContent:
    """Return all values of a study file; problems are noted in the reading."""
    top = reading.table("", TOP)
    application = reading.table("application", APPLICATION + STAND_ALONE_ONLY + GRID_CONNECTED_ONLY)
    return StudyContent(
        top=top,
        application=application,
        dc_voltage=reading.table("application.dc_voltage", DC_VOLTAGE),
        short_circuit_ratio=reading.table("application.short_circuit_ratio", SHORT_CIRCUIT),
        weighting=reading.table("weighting", WEIGHTING + CUSTOM_WEIGHTING),
        bridge=reading.table("bridge", BRIDGE),
        filter=reading.table("filter", FILTER),
        objectives=reading.table("objectives", MINIMISE).get("minimise", ()),
        at_most=_stated(reading.table("objectives.at_most", AT_MOST)),
        energy=reading.table("energy", ENERGY),
        search=reading.table("search", SEARCH),
        ranges=read_ranges(reading, application.get("apparent_power", LARGE_POWER_VA)),
        rules=reading.table("rules", RULES),
        uncertainty=reading.table("uncertainty", UNCERTAINTY),
        catalog=reading.table("catalog", CATALOG),
    )


def _stated(values: Mapping[str, Any]) -> dict[str, float]:
    return {name: value for name, value in values.items() if value is not None}
