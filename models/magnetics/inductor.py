"""One filter inductor per candidate: losses, temperature, saturation, gap, size, price."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.parts import Catalog
from models.magnetics.ac_resistance import resistance_ratio
from models.magnetics.build import Build
from models.magnetics.core_loss import bias_factor, line_loss
from models.magnetics.fringing_loss import tape_gap_loss
from models.magnetics.gap import gap_for_inductance, powder_inductance
from models.magnetics.two_nodes import Air, forced_coefficient, nodes, rises
from models.magnetics.winding import copper_resistivity
from models.uncertainty import NOMINAL, ModelFactors

Array = NDArray[np.float64]
RATIO_TEMPERATURE_C = 100.0  # copper temperature for skin and proximity ratios
THERMAL_STEPS = 3
FIRST_RISE = 45.0  # K, at which the first of them takes the heat transfer
HOTTEST_C = 300.0  # up to which copper's resistance is followed
NO_ROLLOFF = 1e12  # A/m, half-permeability field that no bias comes near


@dataclass(frozen=True)
class InductorMaking:
    """How inductors are made, beside what a candidate chooses.

    Attributes:
        labour: winding labour of one inductor [currency].
        former_wall: thickness of coil formers [m].
        largest_gap_section: greatest length of one section of an air gap [m].
        gap_section_price: of every section beyond one a leg [currency].
    """

    labour: float
    former_wall: float
    largest_gap_section: float
    gap_section_price: float


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
        air: around the inductor.
        factors: on what the models say.
    """

    inductance: Array
    peak_current: Array
    line_current: Array
    group_mean_square: Array
    group_frequency: Array
    switched_loss_density: Array
    line_frequency_hz: float
    air: Air
    factors: ModelFactors = NOMINAL


@dataclass(frozen=True)
class Inductor:
    """Result per candidate (n,), losses and temperatures per operating point (n, p).

    Attributes:
        winding_loss, core_loss: [W]; winding_temperature, core_temperature: mean of each [degC].
        flux_density: peak [T]; flux_share: over the hot saturation flux density [-].
        inductance_left: inductance at peak current over its initial value [-].
        inductance_share: inductance that the build can reach at peak current (a gapped core: without gap)
            over the required one [-].
        gap: total air gap, 0 for powder [m]; gap_sections: it is split into, on all legs [-]; gap_share: over
            the winding breadth of all legs [-].
        window_fill: copper over what the window takes [-]; layer_share: of the window's room that the layers
            take, above 1 they do not fit [-].
        volume: boxed [m3]; mass: [kg]; price: [currency].
        resistance: dc at 20 degC [ohm].
    """

    winding_loss: Array
    core_loss: Array
    winding_temperature: Array
    core_temperature: Array
    flux_density: Array
    flux_share: Array
    inductance_left: Array
    inductance_share: Array
    gap: Array
    gap_sections: Array
    gap_share: Array
    window_fill: Array
    layer_share: Array
    volume: Array
    mass: Array
    price: Array
    resistance: Array


def inductor(catalog: Catalog, built: Build, duty: InductorDuty, making: InductorMaking) -> Inductor:
    """Evaluate the inductors of a population.

    Args:
        catalog: parts (price table).
        built: their builds.
        duty: what they carry.
        making: how they are made.
    """
    material = built.material
    powder = material.kind == "powder"
    breadth = built.breadth * built.coils
    gap, sections = gap_for_inductance(
        built.turns,
        duty.inductance,
        built.area,
        built.path,
        material.initial_permeability,
        breadth,
        built.coils,
        making.largest_gap_section,
    )
    gap = np.where(powder, 0.0, gap)
    sections = np.where(powder, 0.0, sections)
    half_field = np.where(powder, material.rolloff_field_a_per_m, NO_ROLLOFF)
    exponent = np.where(powder, material.rolloff_exponent, 1.0)
    core = (built.area, built.path, material.initial_permeability, half_field, exponent)
    at_peak = powder_inductance(built.turns, duty.peak_current, *core)
    at_rest = powder_inductance(built.turns, np.zeros_like(duty.peak_current), *core)
    flux_per_ampere = duty.inductance / (built.turns * built.area)
    flux = flux_per_ampere * duty.peak_current
    core_loss = _core_loss(built, duty, flux_per_ampere, gap)
    winding_loss, rise = _warmed(built, duty, core_loss, _effective_square(built, duty, sections))
    return Inductor(
        winding_loss=winding_loss,
        core_loss=core_loss,
        winding_temperature=duty.air.ambient_c + rise[1],
        core_temperature=duty.air.ambient_c + rise[0],
        flux_density=flux,
        flux_share=flux / material.saturation_t,
        inductance_left=np.where(powder, at_peak / at_rest, 1.0),
        inductance_share=at_peak / duty.inductance,
        gap=np.maximum(gap, 0.0),
        gap_sections=sections,
        gap_share=gap / breadth,
        window_fill=built.window_fill,
        layer_share=built.layers.share,
        volume=built.box_volume,
        mass=built.core_mass + built.copper_mass,
        price=_price(catalog, built, making, sections),
        resistance=dc_resistance(built, 20.0),
    )


def dc_resistance(built: Build, temperature_c: Array | float) -> Array:
    """Dc resistance of the winding [ohm] at a copper temperature [degC]."""
    length = built.turns * built.turn_length * built.conductor.resistance_factor
    return copper_resistivity(np.asarray(temperature_c)) * length / built.copper_area


def _core_loss(built: Build, duty: InductorDuty, flux_per_ampere: Array, gap: Array) -> Array:
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
    loss = density * (material.loss_factor * built.core_volume)[:, None]
    taped = np.flatnonzero(built.strip_width > 0.0)
    if taped.size:
        swings = np.einsum("npm,nm->np", duty.group_mean_square[taped], duty.group_frequency[taped])
        squares = 2.0 * flux_per_ampere[taped, None] ** 2 * swings
        squares += duty.line_frequency_hz * line_flux[taped] ** 2
        across, length = built.strip_width[taped, None], np.maximum(gap, 0.0)[taped, None]
        loss[taped] += tape_gap_loss(across, length, squares)
    return loss * duty.factors.core_loss[:, None]


def _effective_square(built: Build, duty: InductorDuty, sections: Array) -> Array:
    """Square of the current that would lose as much in the dc resistance (n, p) [A2]."""
    resistivity = copper_resistivity(np.asarray(RATIO_TEMPERATURE_C))
    ratio = resistance_ratio(built, duty.group_frequency, resistivity, sections)
    ratio = ratio * duty.factors.ripple_copper_loss[:, None]
    return duty.line_current**2 + np.einsum("npm,nm->np", duty.group_mean_square, ratio)


def _warmed(built: Build, duty: InductorDuty, core_loss: Array, effective: Array) -> tuple[Array, Array]:
    """Winding loss [W] at the copper's temperature; rise of core and winding over the air (2, n, p) [K]."""
    at_0, at_1 = (dc_resistance(built, degrees) * duty.factors.winding_resistance for degrees in (0.0, 1.0))
    cold = at_0[:, None]
    slope = at_1[:, None] - cold
    contact = built.breadth * built.coils * built.inner_length
    parts = nodes(
        built.box_volume, built.winding_surface_share, contact, built.clearance, built.layers.height
    )
    forced = forced_coefficient(duty.air, parts.length)
    hotter = duty.factors.inductor_rise[:, None]
    rise = np.full((2, *core_loss.shape), FIRST_RISE)
    loss = core_loss
    for _ in range(THERMAL_STEPS):
        copper_c = np.minimum(duty.air.ambient_c + rise[1], HOTTEST_C)
        loss = effective * (cold + slope * copper_c)
        rise = rises(parts, duty.air, forced, (core_loss, loss), rise) * hotter
    return loss, rise


def _price(catalog: Catalog, built: Build, making: InductorMaking, sections: Array) -> Array:
    material = (
        built.core_mass * built.material.price_per_kg + built.copper_mass * built.conductor.price_per_kg
    )
    further = np.maximum(sections - built.coils, 0.0) * making.gap_section_price
    return (material + making.labour + further) / (1.0 - catalog.cost.wound_part_margin)


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
    harmless = {
        "winding_temperature": ambient_c,
        "core_temperature": ambient_c,
        "inductance_left": 1.0,
        "inductance_share": ABSENT_SHARE,
    }
    values = {}
    for name, value in vars(part).items():
        mask = present if value.ndim == 1 else present[:, None]
        values[name] = np.where(mask, value, harmless.get(name, 0.0))
    return Inductor(**values)


ABSENT_SHARE = 10.0  # inductance share of an inductor that is not there: far from its limit, and finite
