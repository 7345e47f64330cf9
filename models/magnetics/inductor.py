"""One filter inductor per candidate: losses, temperature, saturation, gap, size, price."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.parts import Catalog
from models.magnetics.ac_resistance import resistance_ratio
from models.magnetics.build import Build
from models.magnetics.core_loss import bias_factor, line_loss
from models.magnetics.gap import gap_for_inductance, powder_inductance
from models.magnetics.surface_cooling import box_surface, still_air_rise
from models.magnetics.winding import copper_resistivity

Array = NDArray[np.float64]
RATIO_TEMPERATURE_C = 100.0  # copper temperature for skin and proximity ratios
THERMAL_STEPS = 3
NO_ROLLOFF = 1e12  # A/m, half-permeability field that no bias comes near


@dataclass(frozen=True)
class InductorDuty:
    """What an inductor carries. p operating points, m carrier groups.

    Attributes:
        inductance: at peak current (n,) [H].
        peak_current: greatest current, ripple included (n,) [A].
        line_current: line-frequency rms (n, p) [A].
        group_mean_square: ripple current of each carrier group (n, p, m) [A2].
        group_frequency: (n, m) [Hz].
        switched_loss_density: switching-frequency core loss without bias (n, p) [W/m3].
        line_frequency_hz: [Hz].
        ambient_c: air around the inductor [degC].
        rise_factor: temperature rise over that in still air (n,) [-].
    """

    inductance: Array
    peak_current: Array
    line_current: Array
    group_mean_square: Array
    group_frequency: Array
    switched_loss_density: Array
    line_frequency_hz: float
    ambient_c: float
    rise_factor: Array


@dataclass(frozen=True)
class Inductor:
    """Result per candidate (n,), losses and temperature per operating point (n, p).

    Attributes:
        winding_loss, core_loss: [W]; temperature: [degC].
        flux_density: peak [T]; flux_share: over the hot saturation flux density [-].
        inductance_left: inductance at peak current over its initial value [-].
        inductance_share: inductance that the build can reach at peak current (a gapped core: without gap)
            over the required one [-].
        gap: total air gap, 0 for powder [m]; gap_share: over the winding breadth [-].
        window_fill: copper over what the window takes [-]; layer_share: of the window's room that the layers
            take, above 1 they do not fit [-].
        volume: boxed [m3]; mass: [kg]; price: [currency].
        resistance: dc at 20 degC [ohm].
    """

    winding_loss: Array
    core_loss: Array
    temperature: Array
    flux_density: Array
    flux_share: Array
    inductance_left: Array
    inductance_share: Array
    gap: Array
    gap_share: Array
    window_fill: Array
    layer_share: Array
    volume: Array
    mass: Array
    price: Array
    resistance: Array


def inductor(catalog: Catalog, built: Build, duty: InductorDuty, labour: float) -> Inductor:
    """Evaluate the inductors of a population.

    Args:
        catalog: parts (price table).
        built: their builds.
        duty: what they carry.
        labour: winding labour of one inductor [currency].
    """
    material = built.material
    powder = material.kind == "powder"
    gap = gap_for_inductance(
        built.turns, duty.inductance, built.area, built.path, material.initial_permeability, built.breadth
    )
    half_field = np.where(powder, material.rolloff_field_a_per_m, NO_ROLLOFF)
    exponent = np.where(powder, material.rolloff_exponent, 1.0)
    core = (built.area, built.path, material.initial_permeability, half_field, exponent)
    at_peak = powder_inductance(built.turns, duty.peak_current, *core)
    at_rest = powder_inductance(built.turns, np.zeros_like(duty.peak_current), *core)
    flux_per_ampere = duty.inductance / (built.turns * built.area)
    flux = flux_per_ampere * duty.peak_current
    core_loss = _core_loss(built, duty, flux_per_ampere)
    winding_loss, temperature = _winding_loss(built, duty, core_loss)
    return Inductor(
        winding_loss=winding_loss,
        core_loss=core_loss,
        temperature=temperature,
        flux_density=flux,
        flux_share=flux / material.saturation_t,
        inductance_left=np.where(powder, at_peak / at_rest, 1.0),
        inductance_share=at_peak / duty.inductance,
        gap=np.where(powder, 0.0, np.maximum(gap, 0.0)),
        gap_share=np.where(powder, 0.0, gap / built.breadth),
        window_fill=built.window_fill,
        layer_share=built.layers.share,
        volume=built.box_volume,
        mass=built.core_mass + built.copper_mass,
        price=_price(catalog, built, labour),
        resistance=dc_resistance(built, 20.0),
    )


def dc_resistance(built: Build, temperature_c: Array | float) -> Array:
    """Dc resistance of the winding [ohm] at a copper temperature [degC]."""
    length = built.turns * built.turn_length * built.conductor.resistance_factor
    return copper_resistivity(np.asarray(temperature_c)) * length / built.copper_area


def _core_loss(built: Build, duty: InductorDuty, flux_per_ampere: Array) -> Array:
    material = built.material
    line_flux = flux_per_ampere[:, None] * np.sqrt(2.0) * duty.line_current
    major = line_loss(
        material.line_loss_w_per_m3[:, None],
        material.line_loss_exponent[:, None],
        line_flux,
        duty.line_frequency_hz,
    )
    bias = bias_factor(material.bias_loss_factor[:, None], line_flux, material.saturation_t[:, None])
    density = major + duty.switched_loss_density * bias
    return density * (material.loss_factor * built.core_volume)[:, None]


def _winding_loss(built: Build, duty: InductorDuty, core_loss: Array) -> tuple[Array, Array]:
    resistivity = copper_resistivity(np.asarray(RATIO_TEMPERATURE_C))
    ratio = resistance_ratio(built, duty.group_frequency, resistivity)
    ripple = np.einsum("npm,nm->np", duty.group_mean_square, ratio)
    effective = duty.line_current**2 + ripple
    cold = dc_resistance(built, 0.0)[:, None]
    slope = dc_resistance(built, 1.0)[:, None] - cold
    surface = box_surface(built.box_volume)[:, None]
    temperature = np.full(core_loss.shape, duty.ambient_c + 50.0)
    loss = core_loss
    for _ in range(THERMAL_STEPS):
        loss = effective * (cold + slope * np.minimum(temperature, 300.0))
        temperature = duty.ambient_c + duty.rise_factor[:, None] * still_air_rise(loss + core_loss, surface)
    return loss, temperature


def _price(catalog: Catalog, built: Build, labour: float) -> Array:
    material = (
        built.core_mass * built.material.price_per_kg + built.copper_mass * built.conductor.price_per_kg
    )
    return (material + labour) / (1.0 - catalog.cost.wound_part_margin)


def where_present(part: Inductor, present: NDArray[np.bool_], ambient_c: float) -> Inductor:
    """Take out the inductors that a candidate's filter does not have (an LC filter has no grid-side one).

    Args:
        part: results of the whole population.
        present: candidates that have the inductor (n,).
        ambient_c: air around it, which an absent inductor is reported at [degC].

    Returns:
        No loss, size or price for absent ones, every share at its harmless end.
    """
    if present.all():
        return part
    harmless = {"temperature": ambient_c, "inductance_left": 1.0, "inductance_share": ABSENT_SHARE}
    values = {}
    for name, value in vars(part).items():
        mask = present if value.ndim == 1 else present[:, None]
        values[name] = np.where(mask, value, harmless.get(name, 0.0))
    return Inductor(**values)


ABSENT_SHARE = 10.0  # inductance share of an inductor that is not there: far from its limit, and finite
