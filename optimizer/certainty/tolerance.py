"""Tolerances of parts and uncertainty of models, by Monte Carlo on one design."""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
import pandas as pd
from numpy.typing import NDArray
from scipy.stats import rankdata

from models.designs import Designs
from models.inverter import Inverter
from models.uncertainty import FACTORS, Uncertainty, factors_at
from optimizer.evolution.screening import quasi_random
from optimizer.given.evaluate import LAST_DIGIT
from optimizer.objectives import OBJECTIVES, requirements_of
from optimizer.prepared import search_space
from optimizer.study.study import Study

Array = NDArray[np.float64]

SAMPLES = 2048
"""Inverters sampled of a design: a quasi-random sequence, best at a power of two."""
SEED = 20
LOW, MIDDLE, HIGH = 0.05, 0.5, 0.95
FACTOR_WORDS = {
    "inverter_inductance": "bridge-side inductance",
    "on_state": "on-state voltage",
    "dead_time_error": "dead-time error",
    "junction_sink_resistance": "junction-to-heatsink resistance",
    "sink_resistance": "heatsink resistance",
    "ripple_copper_loss": "ripple loss in windings",
    "inductor_rise": "inductors' temperature rise",
    "whole_volume": "packing",
    "semiconductor_price": "semiconductor prices",
    "other_prices": "prices of other parts",
}
"""What factors are called where their name with blanks does not say it."""


@dataclass(frozen=True)
class Band:
    """One figure over the inverters that may come of a design, in its column's unit.

    Attributes:
        nominal: as the models say; low, middle, high: what 5, 50 and 95 % of inverters stay below.
        drivers: factors and the share of the scatter each brings, the greatest first [-].
    """

    nominal: float
    low: float
    middle: float
    high: float
    drivers: tuple[tuple[str, float], ...]


@dataclass(frozen=True)
class Tolerance:
    """A design under tolerances of parts and uncertainty of models.

    Attributes:
        samples: inverters sampled [-].
        bands: by objective.
        holding: by requirement, share of the inverters that keep it [-].
        all_hold: share of the inverters that keep all of them [-].
    """

    samples: int
    bands: Mapping[str, Band]
    holding: Mapping[str, float]
    all_hold: float

    def columns(self) -> dict[str, float]:
        """The same as columns beside a front's: `_p05` and `_p95` behind an objective's, and the share that
        keeps all limits.
        """
        found: dict[str, float] = {}
        for name, band in self.bands.items():
            column = OBJECTIVES[name].column
            found |= {f"{column}_p05": band.low, f"{column}_p95": band.high}
        return found | {HOLDING_COLUMN: self.all_hold}

    def rarest(self) -> list[tuple[str, float]]:
        """Requirements that not all inverters keep, the rarest kept first."""
        return sorted((pair for pair in self.holding.items() if pair[1] < 1.0), key=lambda pair: pair[1])

    def entry(self) -> dict[str, Any]:
        """The same for JSON."""
        return {
            "samples": self.samples,
            "all_limits_hold": self.all_hold,
            "limits_hold": dict(self.holding),
            "bands": {
                name: {
                    "unit": OBJECTIVES[name].unit,
                    "nominal": band.nominal,
                    "p05": band.low,
                    "p50": band.middle,
                    "p95": band.high,
                    "drivers": {factor_words(factor): share for factor, share in band.drivers},
                }
                for name, band in self.bands.items()
            },
        }


HOLDING_COLUMN = "all_limits_hold_share"


def factor_words(name: str) -> str:
    """What a factor of the models is called."""
    return FACTOR_WORDS.get(name, name.replace("_", " "))


def tolerance(
    study: Study, inverter: Inverter, design: Designs, *, samples: int = SAMPLES, seed: int = SEED
) -> Tolerance:
    """Sample the inverters that may come of one design.

    Every factor of `models.uncertainty` is drawn from its own distribution, all at once, by a scrambled Sobol
    sequence; the models are evaluated in full for each sample.

    Args:
        study: gives the limits on objectives and the uncertainties.
        inverter: of the design's bridge.
        design: one candidate (1,).
        samples: inverters [-].
        seed: same seed, same result.
    """
    probability = quasi_random(seed, 0, samples, len(FACTORS))
    held = np.clip(probability, 0.5 / samples, 1.0 - 0.5 / samples)  # a log-normal has no ends
    result = inverter.evaluate(
        design.take(np.zeros(samples, dtype=np.int64)), factors_at(study.uncertainty, held)
    )
    nominal = inverter.evaluate(design)
    ranks = rankdata(held, axis=0)
    moving = _moving(study.uncertainty)
    bands = {}
    for name, objective in OBJECTIVES.items():
        values = objective.read(result)
        low, middle, high = np.quantile(values, (LOW, MIDDLE, HIGH))
        bands[name] = Band(
            float(objective.read(nominal)[0]),
            float(low),
            float(middle),
            float(high),
            _drivers(ranks, values, moving),
        )
    constraints = requirements_of(study.at_most, result)
    kept = np.stack([entry.margin >= -LAST_DIGIT for entry in constraints], axis=-1)
    holding = {entry.name: float(kept[:, place].mean()) for place, entry in enumerate(constraints)}
    return Tolerance(samples, bands, holding, float(kept.all(-1).mean()))


def _moving(uncertainty: Uncertainty) -> list[str]:
    return [name for name in FACTORS if getattr(uncertainty, name) > 0.0]


def _drivers(ranks: Array, values: Array, moving: list[str]) -> tuple[tuple[str, float], ...]:
    """Factors by their share of the sum of squared rank correlations (Spearman 1904), the greatest first."""
    if np.ptp(values) <= 1e-12 * np.abs(values).max():
        return ()
    own = rankdata(values)
    correlation = {name: float(np.corrcoef(ranks[:, FACTORS.index(name)], own)[0, 1]) for name in moving}
    whole = sum(value**2 for value in correlation.values())
    shares = {name: value**2 / whole for name, value in correlation.items()}
    return tuple(sorted(shares.items(), key=lambda pair: -pair[1]))


Sampler = Callable[[int], Tolerance]
"""Position of a design in a front's table -> its tolerance."""


def sampler(study: Study, table: pd.DataFrame, points: Mapping[str, Array]) -> Sampler:
    """What samples designs of a front.

    Args:
        study: the study.
        table: its front.
        points: places of its designs in the search space by concept, in the table's order.
    """

    def of(row: int) -> Tolerance:
        space, design = design_at(study, table, points, row)
        return tolerance(study, space.inverter, design)

    return of


def design_at(
    study: Study, table: pd.DataFrame, points: Mapping[str, Array], row: int
) -> tuple[Any, Designs]:
    """The search space and the design of a row of a front's table."""
    name = str(table["concept"].iloc[row])
    concept = next(concept for concept in study.concepts if concept.name == name)
    space = search_space(study, concept)
    return space, space.designs(points[name][place_of(table, row)][None])


def place_of(table: pd.DataFrame, row: int) -> int:
    """Position of a row among those of its concept [-]."""
    same = table["concept"] == table["concept"].iloc[row]
    return int(same.iloc[:row].sum())


def with_bands(table: pd.DataFrame, found: Mapping[int, Tolerance]) -> pd.DataFrame:
    """A front's table with columns for the bands of some of its rows; empty in all others."""
    bands = pd.DataFrame.from_dict({row: one.columns() for row, one in found.items()}, orient="index")
    bands = bands.set_axis(table.index[bands.index]).reindex(table.index)
    kept = table.drop(columns=[name for name in bands.columns if name in table])
    return pd.concat([kept, bands], axis=1)
