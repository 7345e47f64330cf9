"""Capacitors of the ac filter and of the dc link: currents, losses, counts, size, price."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.gathered import Gathered
from models.catalog.parts import AcCapacitor
from models.uncertainty import NOMINAL, ModelFactors

Array = NDArray[np.float64]
RATED_RISE_K = (10.0, 5.0)  # core over air at rated ripple, film, electrolytic [K], common practice
FILM_VOLTAGE_EXPONENT = 7.0  # of the life of metallised film over voltage, common practice, no source
LONGEST_LIFE_H = 1e6  # nobody vouches for more


@dataclass(frozen=True)
class AcFilterCapacitor:
    """Ac filter capacitors of all phases (n,), loss (n, p).

    Attributes:
        loss: [W]; current_share: rms current over what the film takes [-]; volume: [m3]; mass: [kg]; price:
            [currency].
    """

    loss: Array
    current_share: Array
    volume: Array
    mass: Array
    price: Array


def ac_filter_capacitor(
    kind: AcCapacitor,
    phases: int,
    capacitance: Array,
    line_current: Array,
    ripple_mean_square: Array,
    line_frequency_hz: float,
    ripple_frequency: Array,
    greatest_current: Array,
    factors: ModelFactors = NOMINAL,
) -> AcFilterCapacitor:
    """Evaluate the filter capacitors.

    Args:
        kind: capacitor class.
        phases: 1 or 3 [-].
        capacitance: per phase (n,) [F].
        line_current: line-frequency rms current (n, p) [A].
        ripple_mean_square: (n, p) [A2].
        line_frequency_hz: [Hz]; ripple_frequency: (n,) [Hz].
        greatest_current: rms current at its worst operating point (n,) [A].
        factors: on what the models say.

    The dielectric loss is I^2 tan(delta)/(omega C) for each of the two current parts. A filter without
    capacitor has none of all this.
    """
    there = capacitance > 0.0
    c = np.where(there, capacitance, 1.0)[:, None]
    line = np.where(there[:, None], line_current, 0.0) ** 2 / (2.0 * np.pi * line_frequency_hz * c)
    ripple = np.where(there[:, None], ripple_mean_square, 0.0) / (2.0 * np.pi * ripple_frequency[:, None] * c)
    volume = phases * capacitance * kind.volume_m3_per_f
    return AcFilterCapacitor(
        loss=phases * kind.loss_tangent * factors.capacitor_loss[:, None] * (line + ripple),
        current_share=np.where(there, greatest_current, 0.0) / (c[:, 0] * kind.current_a_per_f),
        volume=volume,
        mass=volume * kind.density_kg_m3,
        price=phases * (capacitance * kind.price_per_f + np.where(there, kind.price_fixed, 0.0)),
    )


def slow_ripple_capacitance(current_rms: Array, frequency: float, ripple: float) -> Array:
    """Dc-link capacitance that keeps the low-frequency voltage ripple below a peak-to-peak value [F].

    Args:
        current_rms: low-frequency current of the link, taken as a sine of its lowest order [A].
        frequency: of that order; 0 where the bridge has no such current [Hz].
        ripple: [V].

    Source: energy balance at twice the line frequency, C = P/(omega V_dc dV), Krein, Balog, Mirjafari (2012);
        here from the current I = P/(sqrt 2 V_dc) instead of the power, for any order.
    """
    if frequency == 0.0:
        return np.zeros_like(current_rms)
    return 2.0 * np.sqrt(2.0) * current_rms / (2.0 * np.pi * frequency * ripple)


def switching_ripple_capacitance(current_rms: Array, frequency: Array, ripple: float) -> Array:
    """Dc-link capacitance that keeps the switching ripple below a peak-to-peak voltage [F].

    The capacitor current is taken as a square wave of the same rms at twice the switching frequency, half of
    whose period moves the charge I/(4 f_s): an estimate, exact for a half-on square wave.

    Args:
        current_rms: switching-frequency rms current [A]; frequency: switching frequency [Hz]; ripple: [V].
    """
    return current_rms / (4.0 * frequency * ripple)


@dataclass(frozen=True)
class DcLink:
    """Dc-link bank (n,), loss (n, p): units in series and parallel [-], capacitance [F], loss [W], life [h],
    volume [m3], ...
    """

    series: Array
    parallel: Array
    capacitance: Array
    loss: Array
    ripple_share: Array
    life: Array
    volume: Array
    mass: Array
    price: Array


def dc_link(
    unit: Gathered,
    dc_voltage_max: float,
    dc_voltage: float,
    voltage_use: float,
    balancing_current: float,
    needed: Array,
    slow_rms: Array,
    fast_rms: Array,
    worst: int,
    air_c: float,
    time_share: Array,
    factors: ModelFactors = NOMINAL,
) -> DcLink:
    """Size the bank and evaluate its loss.

    Args:
        unit: catalogue columns of the chosen unit (n,).
        dc_voltage_max, dc_voltage: greatest and nominal dc voltage [V].
        voltage_use: greatest voltage over rating [-].
        balancing_current: through the resistors of series units [A].
        needed: least bank capacitance (n,) [F].
        slow_rms, fast_rms: double-line-frequency and switching-frequency rms current (n, p) [A].
        worst: operating point that sets the ripple current [-].
        air_c: air around the bank [degC].
        time_share: share of the operating time at the first operating points [-].
        factors: on what the models say.
    """
    series = np.ceil(dc_voltage_max / (voltage_use * unit.voltage_rating_v) - 1e-9)
    heating = np.sqrt(slow_rms**2 + (fast_rms / unit.ripple_multiplier_high[:, None]) ** 2)
    for_charge = np.ceil(needed * series / unit.unit_capacitance_f - 1e-9)
    for_ripple = np.ceil(heating[:, worst] / unit.unit_ripple_a - 1e-9)
    parallel = np.maximum(np.maximum(for_charge, for_ripple), 1.0)
    count = series * parallel
    lossy = factors.capacitor_loss
    esr = unit.unit_esr_low_ohm[:, None] * slow_rms**2 + unit.unit_esr_high_ohm[:, None] * fast_rms**2
    balancing = np.where(series > 1.0, balancing_current * dc_voltage, 0.0)
    volume = count * unit.unit_volume_m3
    use = dc_voltage / (series * unit.voltage_rating_v)
    working = heating[:, : len(time_share)] / (parallel * unit.unit_ripple_a)[:, None]
    return DcLink(
        series=series,
        parallel=parallel,
        capacitance=unit.unit_capacitance_f * parallel / series,
        loss=esr * (series / parallel * lossy)[:, None] + balancing[:, None],
        ripple_share=heating[:, worst] / (parallel * unit.unit_ripple_a),
        life=bank_life(unit, working * np.sqrt(lossy)[:, None], use, air_c, time_share)
        * factors.dc_link_life,
        volume=volume,
        mass=volume * unit.density_kg_m3,
        price=count * unit.unit_price,
    )


def bank_life(
    unit: Gathered, ripple_share: Array, voltage_use: Array, air_c: float, time_share: Array
) -> Array:
    """Life of a bank's capacitors by the 10-kelvin rule, with self-heating and (film) voltage [h].

    L = L_0 2^((T_0 - T)/10) (V_0/V)^n with core temperatures T = air + rise (I/I_rated)^2; life used up adds
    over the load levels (linear damage).

    Args:
        unit: catalogue columns (n,).
        ripple_share: ripple current over the rated one (n, p) [-].
        voltage_use: working over rated voltage (n,) [-].
        air_c: [degC].
        time_share: of the load levels, any sum (p,) [-].

    Source: Arrhenius rule of capacitor makers; rise at rated ripple and voltage exponent are common practice,
        no source.
    """
    film = unit.technology == "film"
    rise = np.where(film, *RATED_RISE_K)[:, None]
    core = air_c + rise * ripple_share**2
    warmer = unit.life_temperature_c[:, None] + rise - core
    voltage = np.where(film, np.maximum(voltage_use, 0.1) ** -FILM_VOLTAGE_EXPONENT, 1.0)[:, None]
    hours = unit.rated_life_h[:, None] * 2.0 ** (np.clip(warmer, -200.0, 200.0) / 10.0) * voltage
    share = time_share / time_share.sum()
    return np.minimum(1.0 / (share / hours).sum(-1), LONGEST_LIFE_H)


def in_series(bank: DcLink, count: int) -> DcLink:
    """`count` equal banks in series as one, each of which carries the current it was sized for."""
    if count == 1:
        return bank
    scale = {"series": count, "capacitance": 1.0 / count, "loss": count}
    scale |= dict.fromkeys(("volume", "mass", "price"), count)
    return DcLink(**{name: value * scale.get(name, 1.0) for name, value in vars(bank).items()})
