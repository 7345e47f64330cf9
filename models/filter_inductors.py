"""The two inductors of the output filter: what each carries, handed to the inductor model."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.catalog.parts import Catalog
from models.designs import Designs
from models.magnetics.build import build
from models.magnetics.core_bands import CoreBands
from models.magnetics.core_loss import steinmetz_loss, switched_loss
from models.magnetics.inductor import Inductor, InductorDuty, InductorMaking, inductor, where_present
from models.magnetics.two_nodes import Air
from models.output_filter import LinePhasors
from models.uncertainty import NOMINAL, ModelFactors
from models.waveforms.state import WaveformState
from models.waveforms.tables import GROUP_MULTIPLES, WaveformTables

Array = NDArray[np.float64]
Ints = NDArray[np.int64]


@dataclass(frozen=True)
class Surroundings:
    """What both inductors share: line frequency [Hz], the air around them, how they are made, factors on what
    the models say.
    """

    line_frequency_hz: float
    air: Air
    making: InductorMaking
    factors: ModelFactors = NOMINAL


@dataclass(frozen=True)
class RippleView:
    """Waveform state reduced to the operating points at which ripple losses are computed, then spread over
    points.

    Ripple depends on load only through the small change of the modulation index, so its losses are computed
    at `columns` (rated load at nominal dc voltage, rated load at greatest dc voltage) and taken over to all
    points by `spread`.
    """

    columns: tuple[int, ...]
    spread: NDArray[np.int64]


def bridge_side(
    catalog: Catalog,
    designs: Designs,
    bands: CoreBands,
    tables: WaveformTables,
    state: WaveformState,
    dc_voltage: Array,
    phasors: LinePhasors,
    peak_current: Array,
    view: RippleView,
    around: Surroundings,
) -> Inductor:
    """Evaluate the bridge-side inductor.

    Args:
        catalog, designs, bands, tables, state: what the evaluation works with.
        dc_voltage: over the operating points of `state` (q,) or, where a load takes part of the ripple
            voltage, (n, q) [V].
        phasors: line-frequency phasors at the loss points (n, p).
        peak_current: greatest current, ripple included (n,) [A].
        view: ripple points.
        around: surroundings.
    """
    built = build(catalog, designs.inverter_inductor, around.making.former_wall)
    columns = list(view.columns)
    scheme, row, weight = state.scheme, state.row[:, columns], state.weight[:, columns]
    unit = state.ripple_unit[:, columns]
    groups = tables.read(tables.group_ripple, scheme, row, weight) * (unit * unit)[..., None]
    frequency = designs.switching_frequency_hz
    material = designs.inverter_inductor.material
    shapes = tables.read(tables.core_loss_shape, scheme, row, weight)
    slope = dc_voltage[..., columns] / (built.turns * built.area)[:, None]

    def switched(band: Ints) -> Array:
        shape = np.take_along_axis(shapes, bands.pair[material, band][:, None, None], axis=-1)[..., 0]
        factor, alpha, beta = (
            table[material, band][:, None] for table in (bands.factor, bands.alpha, bands.beta)
        )
        return switched_loss(factor, alpha, beta, shape, slope, frequency[:, None])

    density = bands.blended(material, frequency * tables.main_carrier[designs.modulation], switched)
    return inductor(
        catalog,
        built,
        InductorDuty(
            inductance=designs.inverter_inductance_h,
            peak_current=peak_current,
            line_current=np.abs(phasors.inverter_current),
            group_mean_square=groups[:, view.spread],
            group_frequency=frequency[:, None] * GROUP_MULTIPLES,
            switched_loss_density=density[:, view.spread],
            line_frequency_hz=around.line_frequency_hz,
            air=around.air,
            factors=around.factors,
        ),
        around.making,
    )


def grid_side(
    catalog: Catalog,
    designs: Designs,
    bands: CoreBands,
    tables: WaveformTables,
    phasors: LinePhasors,
    ripple_rms: Array,
    around: Surroundings,
) -> Inductor:
    """Evaluate the grid-side inductor; its ripple is nearly sinusoidal behind the capacitor.

    Args:
        ripple_rms: switching-frequency rms current at the greatest dc voltage (n,) [A]; others as in
            `bridge_side`.
    """
    built = build(catalog, designs.grid_inductor, around.making.former_wall)
    frequency = designs.switching_frequency_hz * tables.main_carrier[designs.modulation]
    material = designs.grid_inductor.material
    turns_area = built.turns * built.area
    peak_flux = np.maximum(designs.grid_inductance_h * np.sqrt(2.0) * ripple_rms / turns_area, 1e-9)

    def sinusoidal(band: Ints) -> Array:
        k, alpha, beta = (table[material, band] for table in (bands.k, bands.alpha, bands.beta))
        return steinmetz_loss(k, alpha, beta, frequency, peak_flux)

    density = bands.blended(material, frequency, sinusoidal)
    points = phasors.output_current.shape[-1]
    current = np.broadcast_to(np.abs(phasors.output_current), (len(frequency), points))
    part = inductor(
        catalog,
        built,
        InductorDuty(
            inductance=np.maximum(designs.grid_inductance_h, 1e-9),
            peak_current=np.sqrt(2.0) * (current.max(-1) + ripple_rms),
            line_current=current,
            group_mean_square=np.repeat(ripple_rms[:, None, None] ** 2, points, axis=1),
            group_frequency=frequency[:, None],
            switched_loss_density=np.repeat(density[:, None], points, axis=1),
            line_frequency_hz=around.line_frequency_hz,
            air=around.air,
            factors=around.factors,
        ),
        around.making,
    )
    return where_present(part, designs.grid_inductance_h > 0.0, around.air.ambient_c)
