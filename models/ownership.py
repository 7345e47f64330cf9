"""What the losses cost over the years of use: lost energy over the load histogram, and its present value."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
SECONDS_AN_HOUR, JOULE_A_KWH = 3600.0, 3.6e6
ENERGY_SHARES, TIME_SHARES = "energy shares", "time shares"


def _term(default: Any, unit: str, meaning: str) -> Any:
    return field(default=default, metadata={"unit": unit, "meaning": meaning})


@dataclass(frozen=True, kw_only=True)
class EnergyTerms:
    """On what terms lost energy is paid for; a study overrides any of them in its [energy] table.

    The defaults are judgement values, no source: a mid-latitude daylight year, a retail price, a usual term.
    """

    price_per_kwh: float = _term(0.20, "", "price of a kilowatt-hour [currency]")
    years: float = _term(15.0, "", "years of use that count")
    hours_a_year: float = _term(4000.0, "", "hours a year in operation, over which the load is spread")
    discount_rate: float = _term(0.05, "", "interest a year by which later costs count less")
    weights_are: str = _term(
        ENERGY_SHARES, "", f'what the load weights are: "{ENERGY_SHARES}" or "{TIME_SHARES}"'
    )

    @property
    def annuity_factor(self) -> float:
        """Present value of one currency unit paid at the end of every year [-]."""
        return annuity_factor(self.discount_rate, self.years)


def annuity_factor(rate: float, years: float) -> float:
    """Present value of 1 paid at the end of each of `years` years at an interest rate (1 - (1 + r)^-n)/r [-].

    Source: Short, Packey, Holt (1995), A Manual for the Economic Evaluation of Energy Efficiency and
        Renewable Energy Technologies, uniform present value factor.
    """
    return years if rate == 0.0 else -math.expm1(-years * math.log1p(rate)) / rate


def hour_shares(weights: Mapping[float, float], weights_are: str) -> dict[float, float]:
    """Share of the operating hours spent at each load level [-].

    A weighted efficiency sum(w_i eta_i) is the yield over the energy taken in where w_i is the share of that
    energy, so that level p_i lasts for w_i/p_i of the hours (its loss neglected beside its power). Weights
    may be meant as shares of the time instead, which they then are as they stand.

    Args:
        weights: load level over rated power -> weight [-].
        weights_are: ENERGY_SHARES or TIME_SHARES.

    Source: Bletterie et al. (2008), "Redefinition of the European efficiency": weights from the distribution
        of the yearly yield.
    """
    parts = {
        level: weight / (level if weights_are == ENERGY_SHARES else 1.0) for level, weight in weights.items()
    }
    whole = math.fsum(parts.values())
    return {level: part / whole for level, part in parts.items()}


def lost_energy(loss: Array, load_level: Array, weights: Mapping[float, float], terms: EnergyTerms) -> Array:
    """Energy lost in a year: loss at each load level times its hours (n,) [J].

    Args:
        loss: whole loss (n, p) [W] over `load_level` (p,) [-], which holds every weighted level.
        weights: load level -> weight [-].
        terms: hours a year, and what the weights are.
    """
    shares = hour_shares(weights, terms.weights_are)
    share = np.array([shares.get(float(level), 0.0) for level in load_level])
    return np.asarray(loss @ share * terms.hours_a_year * SECONDS_AN_HOUR)


def lost_energy_cost(energy: Array, terms: EnergyTerms) -> Array:
    """Present value of the energy lost over the years of use [currency].

    Args:
        energy: lost in a year [J].
        terms: price, years and interest.
    """
    return energy / JOULE_A_KWH * terms.price_per_kwh * terms.annuity_factor
