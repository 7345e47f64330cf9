"""What the search may vary, from where to where."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from optimizer.study.table import Key, Kind, Quantity, Reading, SubTable, Whole

GRID_RATIO = "grid_inductance_ratio"
LARGE_POWER_VA = 20e3


@dataclass(frozen=True)
class SearchRange:
    """From where to where a quantity is searched.

    Attributes:
        low, high: least and greatest value, in the unit the range is declared with.
    """

    low: float
    high: float


@dataclass(frozen=True)
class RangeEntry:
    """One quantity of the search, as [search.ranges] knows it.

    Attributes:
        name: its key.
        unit: unit of its values; "" where dimensionless.
        default: the range where the study names none, as a study would write it.
        hard_bounds: what no study may leave; below and above the models say nothing sensible.
        meaning: what it is.
        whole: whether it takes whole numbers only.
        growth: exponents of the power over LARGE_POWER_VA by which the default's ends go on above it [-].
    """

    name: str
    unit: str
    default: tuple[str | float, str | float]
    hard_bounds: tuple[float, float]
    meaning: str
    whole: bool = False
    growth: tuple[float, float] = (0.0, 0.0)

    @property
    def kind(self) -> Kind:
        """How an end of the range is read."""
        low, high = self.hard_bounds
        return Whole(int(low), int(high)) if self.whole else Quantity(self.unit, low, high)

    def default_at(self, apparent_power_va: float) -> tuple[float, float]:
        """The default range of an inverter of a rated power [VA]."""
        over = max(apparent_power_va / LARGE_POWER_VA, 1.0)
        least, most = self.hard_bounds
        ends = (
            min(max(float(self.kind.read(end)) * over**exponent, least), most)
            for end, exponent in zip(self.default, self.growth, strict=True)
        )
        low, high = (round(end) if self.whole else end for end in ends)
        return low, high


# Judgement values for early concept work: where designs of 1..20 kVA are usually found, with room around, and
# how these places move with the power above.
RANGES = (
    RangeEntry(
        "switching_frequency",
        "Hz",
        ("8 kHz", "200 kHz"),
        (1e3, 1e6),
        "carrier frequency of one leg; from lower on above 20 kVA",
        growth=(-0.5, 0.0),
    ),
    RangeEntry(
        "parallel",
        "",
        (1, 3),
        (1, 8),
        "packages in parallel per switch position; more above 20 kVA",
        whole=True,
        growth=(0.0, 0.4),
    ),
    RangeEntry("ripple", "", (0.08, 0.8), (0.01, 2.0), "peak-to-peak ripple over rated peak current"),
    RangeEntry(
        GRID_RATIO, "", (0.02, 1.0), (1e-3, 10.0), "grid-side over inverter-side inductance, not for LC"
    ),
    RangeEntry(
        "filter_capacitance_share",
        "",
        (0.003, 0.08),
        (1e-4, 0.5),
        "capacitor reactive power over rated power",
    ),
    RangeEntry(
        "damping",
        "",
        (0.05, 1.5),
        (1e-3, 10.0),
        "damping resistance over the capacitor's reactance at resonance",
    ),
    RangeEntry(
        "sink_resistance",
        "K/W",
        ("0.05 K/W", "3 K/W"),
        (0.0005, 20.0),
        "heatsink to ambient; above 20 kVA less, by the power",
        growth=(-1.0, -1.0),
    ),
    RangeEntry("core_size_factor", "", (0.8, 6.0), (0.5, 20.0), "core area product over the least needed"),
    RangeEntry("flux_use", "", (0.3, 1.0), (0.05, 1.0), "share of the allowed flux density used"),
    RangeEntry("window_use", "", (0.3, 1.0), (0.05, 1.0), "share of the allowed copper fill used"),
)


def read_ranges(reading: Reading, apparent_power_va: float) -> Mapping[str, SearchRange]:
    """Ranges of a study, its own or those usual at its power [VA]."""
    place = "search.ranges"
    reading.table(place, tuple(Key(entry.name, SubTable(), None) for entry in RANGES))
    ranges = {}
    for entry in RANGES:
        low, high = entry.default_at(apparent_power_va)
        keys = (Key("min", entry.kind, low), Key("max", entry.kind, high))
        ends = reading.table(f"{place}.{entry.name}", keys)
        if len(ends) == 2:
            ranges[entry.name] = SearchRange(ends["min"], ends["max"])
    return ranges
