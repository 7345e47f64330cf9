"""How far the models and the parts may be off: one factor on each phenomenon, and how widely it spreads.

A factor multiplies its phenomenon where that is computed; 1 is the nominal model. All parts of a kind in an
inverter share their factor (they come from one batch, or the error is the model's), and the factors do not
depend on each other.
"""

from __future__ import annotations

from dataclasses import dataclass, field, fields, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray
from scipy.special import ndtri

from models.designs import Designs

Array = NDArray[np.float64]
TOLERANCE, SPREAD = "tolerance", "spread"
"""Laws: evenly between 1 - v and 1 + v; or log-normal, 5 % below 1/(1 + v) and 5 % above 1 + v."""
HIGH = 0.95  # the quantile that a spread's value and the words "95 %" mean
HIGH_NORMAL = float(ndtri(HIGH))
ONE = np.ones(1)


@dataclass(frozen=True, kw_only=True)
class ModelFactors:
    """Factors on the phenomena of a population, each (n,), or (1,) for all alike [-].

    Attributes:
        inverter_inductance, grid_inductance, filter_capacitance: as built over the design's.
        on_state: voltage drop of switches and diodes at a given current.
        switching_energy, recovery_energy, output_charge: loss at a given current and voltage.
        junction_sink_resistance: thermal, junction to heatsink; sink_resistance: heatsink to ambient.
        core_loss, winding_resistance, ripple_copper_loss: of both inductors; the last one for the carrier
            groups only.
        inductor_rise: temperature rise of the inductors at given losses.
        capacitor_loss: series resistance of dc link and ac film; dc_link_life: at given stress.
        dead_time_error: voltage error that control leaves of the dead time.
        emission_level: disturbance voltage before its filter, which is sized for it.
        auxiliary_power: of control and auxiliary supply.
        whole_volume: of the whole at given parts (packing).
        semiconductor_price, other_prices: of the parts.
    """

    inverter_inductance: Array = field(default_factory=lambda: ONE)
    grid_inductance: Array = field(default_factory=lambda: ONE)
    filter_capacitance: Array = field(default_factory=lambda: ONE)
    on_state: Array = field(default_factory=lambda: ONE)
    switching_energy: Array = field(default_factory=lambda: ONE)
    recovery_energy: Array = field(default_factory=lambda: ONE)
    output_charge: Array = field(default_factory=lambda: ONE)
    junction_sink_resistance: Array = field(default_factory=lambda: ONE)
    sink_resistance: Array = field(default_factory=lambda: ONE)
    core_loss: Array = field(default_factory=lambda: ONE)
    winding_resistance: Array = field(default_factory=lambda: ONE)
    ripple_copper_loss: Array = field(default_factory=lambda: ONE)
    inductor_rise: Array = field(default_factory=lambda: ONE)
    capacitor_loss: Array = field(default_factory=lambda: ONE)
    dc_link_life: Array = field(default_factory=lambda: ONE)
    dead_time_error: Array = field(default_factory=lambda: ONE)
    emission_level: Array = field(default_factory=lambda: ONE)
    auxiliary_power: Array = field(default_factory=lambda: ONE)
    whole_volume: Array = field(default_factory=lambda: ONE)
    semiconductor_price: Array = field(default_factory=lambda: ONE)
    other_prices: Array = field(default_factory=lambda: ONE)

    def of(self, rows: slice) -> ModelFactors:
        """The factors of some candidates."""
        if all(len(value) == 1 for value in vars(self).values()):
            return self
        return ModelFactors(
            **{name: value if len(value) == 1 else value[rows] for name, value in vars(self).items()}
        )


NOMINAL = ModelFactors()
FACTORS = tuple(entry.name for entry in fields(ModelFactors))


def as_built(designs: Designs, factors: ModelFactors) -> Designs:
    """The same candidates with the inductances and capacitances that they turn out with."""
    return replace(
        designs,
        inverter_inductance_h=designs.inverter_inductance_h * factors.inverter_inductance,
        grid_inductance_h=designs.grid_inductance_h * factors.grid_inductance,
        filter_capacitance_f=designs.filter_capacitance_f * factors.filter_capacitance,
        damping_capacitance_f=designs.damping_capacitance_f * factors.filter_capacitance,
    )


def entry(default: float, law: str, meaning: str, source: str) -> Any:
    """Declare how widely one factor spreads: its default, its law, what it is, where the value is from."""
    return field(default=default, metadata={"unit": "", "law": law, "meaning": meaning, "source": source})


JUDGEMENT = "judgement"


@dataclass(frozen=True, kw_only=True)
class Uncertainty:
    """Tolerances of parts and uncertainty of models, shares [-], by the names of `ModelFactors`.

    A study overrides any of them in its [uncertainty] table; 0 takes one out. Of a tolerance the value is
    the half width of an even distribution; of a spread it is what the factor exceeds 1 by in 5 % of cases.
    """

    inverter_inductance: float = entry(
        0.10,
        TOLERANCE,
        "bridge-side inductance (gap, permeability)",
        "parts are sold to 8 to 10 %, from memory",
    )
    grid_inductance: float = entry(0.10, TOLERANCE, "grid-side inductance", "as the bridge-side one's")
    filter_capacitance: float = entry(
        0.10, TOLERANCE, "filter and damping capacitance", "IEC 60062, letter K: 10 %, from memory"
    )
    on_state: float = entry(
        0.15,
        SPREAD,
        "voltage drop of switches and diodes",
        "sheets' greatest over typical values, from memory",
    )
    switching_energy: float = entry(0.30, SPREAD, "turn-on and turn-off energies (layout, gate)", JUDGEMENT)
    recovery_energy: float = entry(0.40, SPREAD, "recovery energy of the diodes", JUDGEMENT)
    output_charge: float = entry(0.20, SPREAD, "loss by output charge", JUDGEMENT)
    junction_sink_resistance: float = entry(
        0.20, SPREAD, "thermal resistance junction to heatsink (interface)", JUDGEMENT
    )
    sink_resistance: float = entry(
        0.15, SPREAD, "thermal resistance heatsink to ambient (convection laws)", JUDGEMENT
    )
    core_loss: float = entry(0.30, SPREAD, "core loss (material, waveform, bias)", JUDGEMENT)
    winding_resistance: float = entry(0.05, SPREAD, "winding resistance (turn length, wire)", JUDGEMENT)
    ripple_copper_loss: float = entry(0.40, SPREAD, "winding loss by ripple current (gap, layers)", JUDGEMENT)
    inductor_rise: float = entry(0.20, SPREAD, "temperature rise of inductors at given loss", JUDGEMENT)
    capacitor_loss: float = entry(0.40, SPREAD, "series resistance of the capacitors", JUDGEMENT)
    dc_link_life: float = entry(
        1.0, SPREAD, "life of the dc link at given stress (1: half to twice)", JUDGEMENT
    )
    dead_time_error: float = entry(0.50, SPREAD, "dead-time voltage error that control leaves", JUDGEMENT)
    emission_level: float = entry(1.0, SPREAD, "conducted emission before its filter (1: 6 dB)", JUDGEMENT)
    auxiliary_power: float = entry(0.20, SPREAD, "power of control and auxiliary supply", JUDGEMENT)
    whole_volume: float = entry(0.15, SPREAD, "volume of the whole at given parts (packing)", JUDGEMENT)
    semiconductor_price: float = entry(0.20, SPREAD, "price of semiconductors", JUDGEMENT)
    other_prices: float = entry(0.20, SPREAD, "price of all other parts", JUDGEMENT)


def factors_at(uncertainty: Uncertainty, probability: Array) -> ModelFactors:
    """Factors whose distribution functions have given values.

    Args:
        uncertainty: how widely they spread.
        probability: (s, k) within 0 to 1, a column a factor in the order of FACTORS [-].
    """
    return ModelFactors(
        **{
            name: _quantile(getattr(uncertainty, name), law_of(name), probability[:, place])
            for place, name in enumerate(FACTORS)
        }
    )


def factors_beside(uncertainty: Uncertainty, deviations: Array) -> ModelFactors:
    """Factors so many standard deviations from their middles.

    Args:
        uncertainty: how widely they spread.
        deviations: (s, k), a column a factor in the order of FACTORS [-].
    """
    found = {}
    for place, name in enumerate(FACTORS):
        value, steps = getattr(uncertainty, name), deviations[:, place]
        if law_of(name) == TOLERANCE:
            found[name] = 1.0 + value / np.sqrt(3.0) * steps  # of an even distribution
        else:
            found[name] = np.exp(np.log1p(value) / HIGH_NORMAL * steps)
    return ModelFactors(**found)


def law_of(name: str) -> str:
    """The law of a factor: TOLERANCE or SPREAD."""
    return str(_LAWS[name])


_LAWS = {one.name: one.metadata["law"] for one in fields(Uncertainty)}


def _quantile(value: float, law: str, probability: Array) -> Array:
    if law == TOLERANCE:
        return 1.0 + value * (2.0 * probability - 1.0)
    return np.asarray(np.exp(np.log1p(value) / HIGH_NORMAL * ndtri(probability)))
