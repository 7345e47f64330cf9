"""Figures as people write them: sensible digits, the unit behind, no exponents."""

from __future__ import annotations

import math
from collections.abc import Iterable
from dataclasses import dataclass

from optimizer.charts.quantities import CURRENCY
from optimizer.objectives import OBJECTIVES

ABOUT_NOTHING = 5e-4
"""Amounts below it are told as zero."""


def figure(value: float, digits: int = 3) -> str:
    """A number to so many significant digits, without exponent, thousands apart by commas.

    Whole digits are never rounded away below `digits`: 1234.5 to three digits is 1,230.
    """
    if not math.isfinite(value):
        return "-"
    if abs(value) < ABOUT_NOTHING:
        return "0"
    exponent = math.floor(math.log10(abs(value)))
    rounded = round(value, digits - 1 - exponent)
    decimals = max(digits - 1 - math.floor(math.log10(abs(rounded))), 0)
    return f"{rounded:,.{decimals}f}"


@dataclass(frozen=True)
class Told:
    """A quantity of a design that words and tables tell.

    Attributes:
        name: of its objective.
        title: what it is called.
        digits: significant digits told; fixed: digits behind the point instead, where not None.
        less, more: what a design is that has less or more of it than another.
        typical_error: of the models, relative [-]; a judgement (`certainty`).
    """

    name: str
    title: str
    digits: int
    less: str
    more: str
    typical_error: float
    fixed: int | None = None

    @property
    def column(self) -> str:
        """Column of front.csv."""
        return OBJECTIVES[self.name].column

    def unit(self, currency: str) -> str:
        """Unit behind its figures."""
        unit = OBJECTIVES[self.name].unit
        return currency if unit == CURRENCY else unit

    def number(self, value: float) -> str:
        """A value of its column without its unit."""
        return figure(value, self.digits) if self.fixed is None else f"{value:.{self.fixed}f}"

    def figure(self, value: float, currency: str) -> str:
        """A value of its column with its unit."""
        return f"{self.number(value)} {self.unit(currency)}"


# Typical errors are judgements: a published analytic method of this kind reports up to 19.5 % of density and
# 0.22 points of efficiency (a sixth of a loss of 1.4 %) against its own prototypes; prices scatter more.
LOSS = Told("weighted loss", "weighted loss", 2, "loses {} less", "loses {} more", 0.2, fixed=2)
RATED_LOSS = Told("rated loss", "loss at rated load", 2, "loses {} less", "loses {} more", 0.2, fixed=1)
VOLUME = Told("volume", "volume", 2, "is {} smaller", "is {} larger", 0.2)
MASS = Told("mass", "mass", 2, "is {} lighter", "is {} heavier", 0.2)
PRICE = Told("price", "price", 3, "costs {} less", "costs {} more", 0.3)
COST = Told(
    "cost of ownership", "price and lost energy", 3, "saves {} over the years", "costs {} more in all", 0.25
)
DISTORTION = Told("distortion", "distortion", 2, "distorts {} less", "distorts {} more", 0.3)
JUNCTION = Told(
    "junction temperature rise",
    "junction temperature rise used",
    2,
    "heats its junctions {} less",
    "heats its junctions {} more",
    0.2,
    fixed=0,
)
TOLD = {entry.name: entry for entry in (LOSS, RATED_LOSS, VOLUME, MASS, PRICE, COST, DISTORTION, JUNCTION)}
ALWAYS = (LOSS, VOLUME, MASS, PRICE, COST)
"""What every design is told by, whatever a study minimises."""


def told_of(objectives: Iterable[str]) -> tuple[Told, ...]:
    """What designs of a study are told by: the usual quantities and its objectives."""
    return tuple(dict.fromkeys((*ALWAYS, *(TOLD[name] for name in objectives))))
