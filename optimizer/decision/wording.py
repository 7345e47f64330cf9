"""A design in plain words: what it is, how it stands beside another, what limits it, how sure one can be."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from typing import Any

import pandas as pd

from optimizer.certainty.tolerance import Tolerance, factor_words
from optimizer.decision.figures import LOSS, Told, figure
from optimizer.limits.binding import BINDING, requirement_words

KILO, MICRO, PERCENT = 1e3, 1e-6, 100.0
TELLING = 0.01
"""Relative difference below which two designs are told as equal."""
NOTHING_LEFT = 5e-4
"""Margin below which nothing is left."""
MOST_LIMITS = 3
ALMOST_ALL = 0.99
RESERVE_WANTED = 0.9
"""Share of inverters that should keep every limit, a judgement [-]."""
Row = Mapping[Any, Any]


def listed(words: Iterable[str]) -> str:
    """Words with commas, and "and" before the last."""
    *first, last = list(words) or [""]
    return f"{', '.join(first)} and {last}" if first else last


def headline(row: Row) -> str:
    """Class, modulation and frequency: what a design is called in a line."""
    return f"{row['concept']}, {row['modulation']}, {figure(row['switching_frequency_hz'] / KILO)} kHz"


def what_it_is(row: Row) -> str:
    """A sentence about class, bridge, modulation, frequency, filter and cooling."""
    return (
        f"{_capital(row['device'])} in a {row['bridge']}, {row['modulation']} at "
        f"{figure(row['switching_frequency_hz'] / KILO)} kHz; {filter_words(row)}; {_cooling(row)}."
    )


def filter_words(row: Row) -> str:
    """The output filter from the bridge outwards."""
    parts = [f"{figure(row['inverter_inductance_h'] / MICRO)} µH"]
    if row["filter_capacitance_f"] > 0.0:
        parts.append(f"{figure(row['filter_capacitance_f'] / MICRO)} µF")
    if row.get("grid_inductance_h", 0.0) > 0.0:
        parts.append(f"{figure(row['grid_inductance_h'] / MICRO)} µH")
    kind = {1: "L", 2: "LC", 3: "LCL"}[len(parts)]
    return f"{kind} filter of {listed(parts)}"


def _cooling(row: Row) -> str:
    kind = str(row["cooling"])
    return kind if kind == "cold plate" else f"{kind} cooling"


def _capital(text: object) -> str:
    words = str(text)
    return words[:1].upper() + words[1:]


def beside(row: Row, other: Row, told: Iterable[Told], currency: str, name: str) -> str:
    """A sentence about what a design gains and what it costs against another one.

    Args:
        row, other: of a front's table.
        told: what they are compared by.
        currency: of prices.
        name: what the other one is called.
    """
    gains: list[str] = []
    costs: list[str] = []
    for entry in told:
        mine, theirs = float(row[entry.column]), float(other[entry.column])
        change = mine - theirs
        if abs(change) < TELLING * max(abs(theirs), 1e-12):
            continue
        words = entry.less if change < 0.0 else entry.more
        (gains if change < 0.0 else costs).append(words.format(_amount(entry, change, theirs, currency)))
    if not gains and not costs:
        return f"It is as good as {name} in all of it."
    if not costs:
        return f"Against {name} it {listed(gains)}."
    if not gains:
        return f"Against {name} it {listed(costs)}, and gains nothing of what is told here."
    return f"Against {name} it {listed(gains)}, but {listed(costs)}."


def _amount(entry: Told, change: float, reference: float, currency: str) -> str:
    size = abs(change)
    if entry.unit(currency) == "%":
        return f"{figure(size, 2)} points"
    return f"{figure(size, 2)} {entry.unit(currency)} ({figure(PERCENT * size / abs(reference), 2)} %)"


def tightest(margins: Row | pd.Series, count: int = MOST_LIMITS) -> list[tuple[str, float]]:
    """The requirements with the least margins [-], the tightest first.

    Args:
        margins: a row of margins.csv.
        count: how many at most [-].
    """
    found = [
        (str(name), float(value))
        for name, value in dict(margins).items()
        if isinstance(value, int | float) and value == value
    ]
    return sorted(found, key=lambda entry: entry[1])[:count]


def margin_words(margin: float) -> str:
    """How much of a margin is left [-]."""
    return "nothing left" if margin < NOTHING_LEFT else f"{figure(PERCENT * margin, 2)} % left"


def limited_by(margins: Row | pd.Series) -> str:
    """A sentence about the requirements that bind."""
    found = tightest(margins)
    binding = [entry for entry in found if entry[1] < BINDING] or found[:1]
    told = (f"{requirement_words(name)} ({margin_words(margin)})" for name, margin in binding)
    return f"Limited by {listed(told)}."


def limits_kept(found: Tolerance) -> str:
    """Sentences about how many inverters of a design keep all limits, and where its scatter comes from."""
    share = f"{_percent(found.all_hold)} of inverters built so keep every limit"
    rarest = [entry for entry in found.rarest()[:MOST_LIMITS] if entry[1] < ALMOST_ALL]
    if rarest:
        told = (f"{requirement_words(name)} ({_percent(kept)})" for name, kept in rarest)
        share += f"; least often kept: {listed(told)}"
    if found.all_hold < RESERVE_WANTED:
        share += ". As designs of a front do, it stands at its limits: leave reserve before building it"
    drivers = found.bands[LOSS.name].drivers[:2]
    hangs = listed(f"{factor_words(name)} ({_percent(value)})" for name, value in drivers)
    return f"{share}." + (f" The scatter of its loss comes most from {hangs}." if drivers else "")


def _percent(share: float) -> str:
    if ALMOST_ALL < share < 1.0:
        return f"over {PERCENT * ALMOST_ALL:.0f} %"
    return "under 1 %" if 0.0 < share < 1.0 - ALMOST_ALL else f"{PERCENT * share:.0f} %"


def how_sure(row: Row, told: Iterable[Told], currency: str) -> str:
    """A sentence about how far the figures may be off: tolerance bands where the front has them, else the
    models' typical error.

    Bands are columns ending in _p05 and _p95: what 5 and 95 % of the cases stay below.
    """
    bands, typical = [], []
    for entry in told:
        low, high = row.get(f"{entry.column}_p05"), row.get(f"{entry.column}_p95")
        if low is not None and high is not None and low == low and high == high:
            first, last = entry.number(float(low)), entry.figure(float(high), currency)
            span = f"about {last}" if entry.number(float(high)) == first else f"{first} to {last}"
            bands.append(f"{entry.title} {span}")
        else:
            error = entry.typical_error * abs(float(row[entry.column]))
            value = entry.figure(float(row[entry.column]), currency)
            typical.append(f"{entry.title} {value} give or take {figure(error, 1)}")
    told_bands = f"In nine of ten cases {listed(bands)}. " if bands else ""
    told_typical = f"By the models' typical error {listed(typical)}." if typical else ""
    return (told_bands + told_typical).strip()
