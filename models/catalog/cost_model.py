"""Prices, auxiliary power and packing: the one table a user replaces to cost a concept his own way."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from difflib import get_close_matches

import numpy as np
from numpy.typing import ArrayLike, NDArray


@dataclass(frozen=True)
class CostModel:
    """Price relations of what is not bought as a catalogue part; most are estimates, see `origin`.

    Tuples over a rating are interpolated on log-log scales and held constant beyond their ends.
    """

    rating_va: tuple[float, ...]  # of control_price and housing_price [VA]
    control_price: tuple[float, ...]  # control, sensing, gate supply, connectors [currency]
    housing_price: tuple[float, ...]  # housing, assembly and test [currency]
    auxiliary_rating_va: tuple[float, ...]  # [VA]
    auxiliary_power_w: tuple[float, ...]  # control boards, gate supplies, sensing; no fans [W]
    labour_rating_va: tuple[float, ...]  # rating of the inverter the inductor belongs to [VA]
    inductor_labour: tuple[float, ...]  # winding labour per inductor [currency]
    wound_part_margin: float  # share of the sales price of a wound part [-]
    board_price_per_m2: float  # four-layer printed board [currency/m2]
    board_clearance_m: float  # board and clearance above the tallest part [m]
    heatsink_price_per_kg: float  # cut and drilled profile [currency/kg]
    x_capacitor_price_per_f: float  # emission filter [currency/F]
    y_capacitor_price: float  # 4.7 nF, each [currency]
    choke_price: tuple[float, ...]  # common-mode choke [currency]
    choke_current_a: tuple[float, ...]  # rated rms current that goes with choke_price [A]
    quantity_pieces: tuple[float, ...]  # pieces a year [-]
    quantity_factor: tuple[float, ...]  # on the thousand-piece price [-]
    sales_price_factor: float  # sales price over bill of material [-]
    packing_styles: tuple[str, ...]
    packing_factors: tuple[float, ...]  # sum of component boxes over enclosure [-]
    origin: Mapping[str, str] = field(default_factory=dict, compare=False, repr=False)

    def control_price_at(self, rating_va: ArrayLike) -> NDArray[np.float64]:
        """Price of control, sensing, gate supply and connectors [currency] of a rating [VA]."""
        return _log_interpolated(rating_va, self.rating_va, self.control_price)

    def housing_price_at(self, rating_va: ArrayLike) -> NDArray[np.float64]:
        """Price of housing, assembly and test [currency] of a rating [VA]."""
        return _log_interpolated(rating_va, self.rating_va, self.housing_price)

    def auxiliary_power_at(self, rating_va: ArrayLike) -> NDArray[np.float64]:
        """Running power of control boards, gate supplies and sensing, no fans [W], of a rating [VA]."""
        return _log_interpolated(rating_va, self.auxiliary_rating_va, self.auxiliary_power_w)

    def inductor_labour_at(self, rating_va: ArrayLike) -> NDArray[np.float64]:
        """Winding labour of one inductor [currency] of an inverter of a rating [VA]."""
        return _log_interpolated(rating_va, self.labour_rating_va, self.inductor_labour)

    def choke_price_at(self, current_a: ArrayLike) -> NDArray[np.float64]:
        """Price of a common-mode choke [currency] of a rated rms current [A]."""
        return _log_interpolated(current_a, self.choke_current_a, self.choke_price)

    def quantity_factor_at(self, pieces: ArrayLike) -> NDArray[np.float64]:
        """Factor on the thousand-piece price [-] for a number of pieces a year [-]."""
        return _log_interpolated(pieces, self.quantity_pieces, self.quantity_factor)

    def packing_factor(self, style: str) -> float:
        """Sum of component boxes over enclosure volume [-] of a packing style.

        Raises
        ------
        ValueError
            If the style is not known; the message holds the nearest one.
        """
        if style in self.packing_styles:
            return self.packing_factors[self.packing_styles.index(style)]
        near = get_close_matches(style, self.packing_styles, n=1, cutoff=0.0)[0]
        raise ValueError(f"no packing style called {style!r}; the nearest is {near!r}")


def _log_interpolated(
    at: ArrayLike, points: tuple[float, ...], values: tuple[float, ...]
) -> NDArray[np.float64]:
    """Straight line on log-log scales between points, constant beyond them."""
    return np.exp(np.interp(np.log(np.asarray(at, dtype=float)), np.log(points), np.log(values)))
