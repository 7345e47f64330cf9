"""What must fit together in a study file: one small function per rule, each noting problems in the reading.

A rule whose values are in trouble themselves says nothing: their own problems are noted already.
"""

from __future__ import annotations

import math
from collections.abc import Callable

from models.specification import GRID_CONNECTED, STAND_ALONE
from models.waveforms.bridges import BRIDGES, Bridge, Modulation
from optimizer.errors import InputError, Problem
from optimizer.study.quantity import written
from optimizer.study.ranges import GRID_RATIO, RANGES
from optimizer.study.schema import (
    CUSTOM,
    CUSTOM_WEIGHTING,
    GRID_CONNECTED_ONLY,
    LC,
    LCL,
    ONLY_L,
    STAND_ALONE_ONLY,
    StudyContent,
)
from optimizer.study.table import Choice, Reading, join

WEIGHTS_SUM_TOLERANCE = 1e-6
ROUNDING = 1e-9
"""Relative; a voltage that is exactly enough must not fail by the last digit of a sum."""


def check_content(reading: Reading, content: StudyContent) -> None:
    """Note every problem between values that can each be read."""
    for check in CHECKS:
        check(reading, content)


def phase_voltage(line_voltage_v: float, phases: int) -> float:
    """Return the phase voltage [V] of a study's ac voltage: line-to-line for three phases, else the same."""
    return line_voltage_v / math.sqrt(phases)


def bridges_of(content: StudyContent) -> tuple[str, ...]:
    """Names of the bridges a study compares, its own first; those in trouble are missing."""
    kind = content.bridge.get("kind")
    return (*((kind,) if kind else ()), *content.bridge.get("compared_with", ()))


def chosen_modulations(content: StudyContent) -> tuple[str, ...]:
    """Names of the modulation schemes the search may choose from, in the bridges' order; none where the
    study's are in trouble. Unnamed, they are all that differ at the study's power factor: what follows the
    current clamps at the voltage's peak where that is in phase.
    """
    if "modulations" not in content.bridge:
        return ()
    schemes = [scheme for name in bridges_of(content) for scheme in BRIDGES[name].modulations]
    known = dict.fromkeys(scheme.name for scheme in schemes)
    in_phase = content.application.get("power_factor", 1.0) == 1.0
    differing = (scheme.name for scheme in schemes if not (in_phase and scheme.follows_current))
    names = content.bridge["modulations"] or tuple(differing)
    return tuple(name for name in known if name in names) if set(names) <= set(known) else ()


def _schemes(content: StudyContent, bridge: Bridge) -> list[Modulation]:
    names = chosen_modulations(content)
    return [scheme for scheme in bridge.modulations if scheme.name in names]


def _check_application_keys(reading: Reading, content: StudyContent) -> None:
    kind = content.application.get("kind")
    foreign = {STAND_ALONE: GRID_CONNECTED_ONLY, GRID_CONNECTED: STAND_ALONE_ONLY}.get(kind or "", ())
    for key in foreign:
        if reading.has(join("application", key.name)):
            reading.note(join("application", key.name), f'no such key where application.kind is "{kind}"')


def _check_power_factor(reading: Reading, content: StudyContent) -> None:
    factor, least = content.application.get("power_factor"), content.application.get("power_factor_min")
    if factor is None or least is None or least <= factor:
        return
    place = "application.power_factor_min"
    if reading.has(place):
        reading.note(place, f"at most application.power_factor, {factor:g}", f"{least:g}")


def _check_dc_order(reading: Reading, content: StudyContent) -> None:
    for lower, upper in (("min", "nominal"), ("nominal", "max")):
        low, high = content.dc_voltage.get(lower), content.dc_voltage.get(upper)
        if low is not None and high is not None and low > high:
            expected = f"at least dc_voltage.{lower}, {written(low, 'V')}"
            reading.note(f"application.dc_voltage.{upper}", expected)


def _check_dc_reaches_ac(reading: Reading, content: StudyContent) -> None:
    for name in bridges_of(content):
        _check_bridge_reaches_ac(reading, content, BRIDGES[name])


def _check_bridge_reaches_ac(reading: Reading, content: StudyContent, bridge: Bridge) -> None:
    asked, dc_min = content.application, content.dc_voltage.get("min")
    schemes = _schemes(content, bridge)
    if dc_min is None or not schemes or not {"ac_voltage", "ac_voltage_tolerance", "phases"} <= asked.keys():
        return
    if bridge.phases != asked["phases"]:
        return
    ac_max = asked["ac_voltage"] * (1.0 + asked["ac_voltage_tolerance"])
    best = max(schemes, key=lambda scheme: scheme.linear_limit)
    peak = math.sqrt(2.0) * phase_voltage(ac_max, bridge.phases)
    needed = peak / (bridge.index_base * best.linear_limit)
    if dc_min < needed * (1.0 - ROUNDING):
        reading.note(
            "application.dc_voltage.min",
            f"at least {math.ceil(needed * 10.0) / 10.0:.1f} V: less cannot make the greatest ac voltage, "
            f'{written(ac_max, "V")} rms, with modulation "{best.name}"{_of_bridge(content, bridge)}',
        )


def _of_bridge(content: StudyContent, bridge: Bridge) -> str:
    return f" of the {bridge.name}" if len(bridges_of(content)) > 1 else ""


def _check_bridge(reading: Reading, content: StudyContent) -> None:
    kind, phases = content.bridge.get("kind"), content.application.get("phases")
    if kind is None:
        return
    others = content.bridge.get("compared_with", ())
    places = ("bridge.kind", *(f"bridge.compared_with[{index}]" for index in range(len(others))))
    for place, name in zip(places, (kind, *others), strict=True):
        if phases is not None and BRIDGES[name].phases != phases:
            fitting = [other.name for other in BRIDGES.values() if other.phases == phases]
            names = " or ".join(f'"{fit}"' for fit in fitting)
            reading.note(place, f"{names} where application.phases is {phases}")
        elif place != "bridge.kind" and name == kind:
            reading.note(place, "a bridge other than bridge.kind")
        elif chosen_modulations(content) and not _schemes(content, BRIDGES[name]):
            own = " or ".join(f'"{scheme.name}"' for scheme in BRIDGES[name].modulations)
            reading.note("bridge.modulations", f"{own} among them, for the {name}")
    known = Choice(
        tuple(dict.fromkeys(scheme.name for name in (kind, *others) for scheme in BRIDGES[name].modulations))
    )
    for index, name in enumerate(content.bridge.get("modulations") or ()):
        try:
            known.read(name)
        except InputError as error:
            place = f"bridge.modulations[{index}]"
            reading.problems += [problem.at(str(reading.path), place) for problem in error.problems]


def _check_weighting(reading: Reading, content: StudyContent) -> None:
    scheme = content.weighting.get("scheme")
    for key in CUSTOM_WEIGHTING:
        place = join("weighting", key.name)
        if scheme == CUSTOM and not reading.has(place):
            reading.note(place, f'{key.kind.expected}, where weighting.scheme is "{CUSTOM}"')
        elif scheme not in (None, CUSTOM) and reading.has(place):
            reading.note(place, f'no such key where weighting.scheme is "{scheme}"')
    levels, weights = content.weighting.get("levels"), content.weighting.get("weights")
    if scheme != CUSTOM or levels is None or weights is None:
        return
    if len(levels) != len(weights):
        expected = f"as many as weighting.levels, {len(levels)}"
        reading.note("weighting.weights", expected, f"{len(weights)} weights")
    elif abs(math.fsum(weights) - 1.0) > WEIGHTS_SUM_TOLERANCE:
        reading.note("weighting.weights", "a sum of 1", f"a sum of {math.fsum(weights):.7g}")


def _check_filter(reading: Reading, content: StudyContent) -> None:
    kind = content.filter.get("kind", LCL)
    if kind == LC and content.application.get("kind") == GRID_CONNECTED:
        reading.note("filter.kind", f'"LCL" or "L" where application.kind is "{GRID_CONNECTED}"')
    for name in unused_ranges(kind):
        if reading.has(f"search.ranges.{name}"):
            reading.note(f"search.ranges.{name}", f'no such key where filter.kind is "{kind}"')
    if kind == ONLY_L and reading.has("filter.damping"):
        reading.note("filter.damping", f'no such key where filter.kind is "{kind}"')


def unused_ranges(filter_kind: str) -> tuple[str, ...]:
    """Search ranges that a kind of filter has no use for."""
    without_grid_side = (GRID_RATIO,) if filter_kind != LCL else ()
    return (
        (*without_grid_side, "filter_capacitance_share", "damping")
        if filter_kind == ONLY_L
        else without_grid_side
    )


def _check_grid(reading: Reading, content: StudyContent) -> None:
    low, high = content.short_circuit_ratio.get("min"), content.short_circuit_ratio.get("max")
    if low is not None and high is not None and low > high:
        reading.note(
            "application.short_circuit_ratio.min", f"at most application.short_circuit_ratio.max, {high:g}"
        )


def _check_ranges(reading: Reading, content: StudyContent) -> None:
    for entry in RANGES:
        ends = content.ranges.get(entry.name)
        if ends is None or ends.low < ends.high or (entry.whole and ends.low == ends.high):
            continue
        low, high = written(ends.low, entry.unit), written(ends.high, entry.unit)
        given = f"min {low}, max {high}"
        reading.note(f"search.ranges.{entry.name}", "a min below the max", given)


def _check_room_for_resonance(reading: Reading, content: StudyContent) -> None:
    line, ends = content.application.get("line_frequency"), content.ranges.get("switching_frequency")
    above, below = (content.rules.get(name) for name in ("resonance_over_line", "resonance_over_switching"))
    if line is None or ends is None or above is None or below is None:
        return
    needed = line * above / below
    if ends.high < needed:
        reading.note(
            "search.ranges.switching_frequency.max",
            f"at least {written(needed, 'Hz')}: below it the rules resonance_over_line, {above:g}, and "
            f"resonance_over_switching, {below:g}, leave the filter's resonance no room",
            written(ends.high, "Hz"),
        )


def _check_catalog_files(reading: Reading, content: StudyContent) -> None:
    for index, name in enumerate(content.catalog.get("files", ())):
        if not reading.parts_file(index, name).is_file():
            where = "a parts file there is, its path relative to the study file"
            problem = Problem(f'"{name}"', where, f"catalog.files[{index}]", str(reading.path))
            reading.problems.append(problem)


CHECKS: tuple[Callable[[Reading, StudyContent], None], ...] = (
    _check_application_keys,
    _check_power_factor,
    _check_dc_order,
    _check_dc_reaches_ac,
    _check_bridge,
    _check_weighting,
    _check_filter,
    _check_grid,
    _check_ranges,
    _check_room_for_resonance,
    _check_catalog_files,
)
