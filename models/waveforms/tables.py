"""Waveform quantities of all schemes of a bridge, tabulated once over the modulation index.

Normalised by V_dc, L and f_s they depend on the modulation index alone, so a population reads them by index
arithmetic on a uniform grid instead of solving each candidate's switching periods again.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.typing import NDArray

from models.waveforms.bridges import BRIDGES, Bridge, Modulation
from models.waveforms.dc_link_current import rail_moments
from models.waveforms.device_currents import level_shares, reference_harmonics
from models.waveforms.spectrum import ANGLE_SAMPLES, CARRIER_GROUPS, sidebands
from models.waveforms.switching_period import switching_periods

Array = NDArray[np.float64]
Ints = NDArray[np.int64]
INDEX_POINTS = 99
INDEX_MAX = 98.0 / 84.0  # puts both linear limits, 1 and 2/sqrt(3) = 96.995/84, on grid points
PEAK_ANGLES = 361  # angles over half a line period at which the greatest ripple is sought
ANGLE_CELLS = 18  # a multiple of 6, so that 30 degree sectors end at cell bounds
FINE = 6  # samples per cell for means and maxima
SIDEBAND_COUNT = 24
GROUPS_BEYOND = (
    11.0  # multiple at which all groups beyond the listed ones count together: mean of m^2 weighted
)
# by V^2/m^2 of voltages that fall as 1/m. Where the winding loss goes with frequency squared it drops out.
GROUP_MULTIPLES = np.array([*range(1, CARRIER_GROUPS + 1), GROUPS_BEYOND], dtype=float)


@dataclass(frozen=True)
class WaveformTables:
    """Tables of one bridge; axes: s scheme, i modulation index, a angle over half the line period, k
    sideband.

    Attributes:
        angle: middles of equal cells over 0..pi [rad].
        linear_limit: (s,) greatest modulation index [-].
        peak_ripple: (s, i) greatest peak-to-peak ripple over the line period [V_dc/(L f_s)].
        ripple_mean_square: (s, i) mean square ripple [(V_dc/(L f_s))^2].
        commutation_offset: (s, i, a) turn-on happens at |i| - offset, turn-off at |i| + offset [V_dc/(L
            f_s)].
        switching_share: (s, a) 1 where the leg switches at the carrier frequency, 0 where it is clamped [-].
        error_legs: (s,) legs whose dead-time errors add in the filter voltage, times their commutated voltage
            over V_dc [-].
        leg_switching: (s, l) 1 for modelled legs that switch at the carrier frequency [-].
        reference_constant, reference_slope: (s, l, order) leg reference harmonics U = constant + M slope,
            seen from the leg's own current [-].
        high_share, low_share: (s, i, a) share of time that leg one stands at the upper and at the lower rail
            [-].
        rail_slow, rail_fast: (s, i, 3) moments of the positive rail's current, see `dc_link_current` [-].
        sideband_carrier, sideband_line: (s, k) multiples m and n [-].
        sideband_listed: (s, k) false for the rest lines of carrier groups [-].
        sideband_amplitude: (s, i, k) peak of the filter voltage [V_dc].
        group_ripple: (s, i, g) mean square ripple current of the carrier groups of GROUP_MULTIPLES [(V_dc/(L
            f_s))^2].
        main_carrier: (s,) carrier multiple that carries most of the ripple [-].
        core_loss_shape: (s, i, exponent pair) mean iGSE shape integral for `exponents` [-].
        exponents: the (alpha, beta) pairs.
    """

    angle: Array
    linear_limit: Array
    peak_ripple: Array
    ripple_mean_square: Array
    commutation_offset: Array
    switching_share: Array
    error_legs: Array
    leg_switching: Array
    reference_constant: NDArray[np.complex128]
    reference_slope: NDArray[np.complex128]
    high_share: Array
    low_share: Array
    rail_slow: Array
    rail_fast: Array
    sideband_carrier: Array
    sideband_line: Array
    sideband_listed: NDArray[np.bool_]
    sideband_amplitude: Array
    group_ripple: Array
    main_carrier: Array
    core_loss_shape: Array
    exponents: tuple[tuple[float, float], ...]

    def position(self, modulation_index: Array) -> tuple[Ints, Array]:
        """Lower grid row and weight of the upper one for modulation indexes of any shape [-]."""
        scaled = np.clip(modulation_index * ((INDEX_POINTS - 1) / INDEX_MAX), 0.0, INDEX_POINTS - 1.000001)
        row = scaled.astype(np.int64)
        return row, scaled - row

    def cell_currents(self, displacement: Array, peak: Array) -> Array:
        """Current of leg one at the middles of the angle cells (n, q, a) [A].

        Args:
            displacement: current lag (n, q) [rad].
            peak: of the current (n, q) [A].
        """
        parts = np.stack([np.cos(displacement), -np.sin(displacement)], axis=-1)
        parts *= peak[..., None]
        waves = np.stack([np.sin(self.angle), np.cos(self.angle)])
        return (parts.reshape(-1, 2) @ waves).reshape(*parts.shape[:-1], -1)

    @staticmethod
    def read(table: Array, scheme: Ints, row: Ints, weight: Array) -> Array:
        """Interpolate `table` (s, i, ...) at (scheme, row + weight); table's trailing axes are appended."""
        rows = table.reshape(-1, *table.shape[2:])
        place = scheme * table.shape[1] + row
        lower = rows.take(place, axis=0)
        value = rows.take(place + 1, axis=0)
        value -= lower
        value *= weight.reshape(weight.shape + (1,) * (lower.ndim - weight.ndim))
        value += lower
        return value


@lru_cache(maxsize=8)
def waveform_tables(
    bridge_name: str, exponents: tuple[tuple[float, float], ...] = (), displacement: float = 0.0
) -> WaveformTables:
    """Build the tables of a bridge for the given core-loss exponent pairs.

    Args:
        bridge_name: a key of BRIDGES.
        exponents: Steinmetz (alpha, beta) pairs to prepare [-].
        displacement: lag of the current that schemes follow which do so [rad].

    Raises:
        KeyError: for an unknown bridge.
    """
    bridge = BRIDGES[bridge_name]
    rows = [_scheme_rows(bridge, scheme.at(displacement), exponents) for scheme in bridge.modulations]
    stacked = {key: np.stack([row[key] for row in rows]) for key in rows[0]}
    angle = np.pi * (np.arange(ANGLE_CELLS) + 0.5) / ANGLE_CELLS
    limits = np.array([scheme.linear_limit for scheme in bridge.modulations])
    return WaveformTables(angle=angle, linear_limit=limits, exponents=exponents, **stacked)


def _scheme_rows(
    bridge: Bridge, scheme: Modulation, exponents: tuple[tuple[float, float], ...]
) -> dict[str, NDArray]:
    index = np.linspace(0.0, INDEX_MAX, INDEX_POINTS)
    fine_count = ANGLE_CELLS * FINE
    angle = np.pi * (np.arange(fine_count) + 0.5) / fine_count
    usable = np.minimum(index, scheme.linear_limit)
    period = switching_periods(bridge, scheme, angle, usable[:, None])
    share = _cell_means(1.0 - (_at_rail(period.duty[-1, :, 0]) & _at_rail(period.duty[1, :, 0])))
    high, low = level_shares(bridge, scheme.references(*np.broadcast_arrays(angle, usable[:, None]))[..., 0])
    shapes = [period.loss_shape(alpha, beta).mean(-1) for alpha, beta in exponents]
    spectrum = sidebands(bridge, scheme, usable, period.voltage_mean_square.mean(-1), SIDEBAND_COUNT)
    slow, fast = rail_moments(bridge, scheme, usable)
    constant, slope = _leg_references(bridge, scheme)
    beyond = 0.5 * spectrum.amplitude[:, -1:] ** 2
    group_ripple = np.hstack([spectrum.group_mean_square, beyond]) / (2.0 * np.pi * GROUP_MULTIPLES) ** 2
    return {
        "peak_ripple": _peak_ripple(bridge, scheme, usable),
        "ripple_mean_square": period.mean_square.mean(-1),
        "commutation_offset": _cell_means(-period.flux_at_turn_on(0)),
        "switching_share": share,
        "error_legs": np.array(_error_legs(bridge, scheme)),
        "leg_switching": np.array([float(scheme.switching_legs[leg]) for leg in bridge.modelled_legs]),
        "reference_constant": constant,
        "reference_slope": slope,
        "high_share": _cell_means(high),
        "low_share": _cell_means(low),
        "rail_slow": slow,
        "rail_fast": fast,
        "sideband_carrier": spectrum.carrier_multiple,
        "sideband_line": spectrum.line_multiple,
        "sideband_listed": spectrum.listed,
        "sideband_amplitude": spectrum.amplitude,
        "group_ripple": group_ripple,
        "main_carrier": np.array(GROUP_MULTIPLES[np.argmax(group_ripple.mean(0))]),
        "core_loss_shape": np.stack(shapes, axis=-1) if shapes else np.zeros((INDEX_POINTS, 0)),
    }


def _error_legs(bridge: Bridge, scheme: Modulation) -> float:
    """Of three phases only the own leg counts: with the star point's share of the others, orders that are no
    multiples of three add up to the own leg's error.
    """
    legs = 1.0 if bridge.phases == 3 else float(sum(scheme.switching_legs))
    return legs / (bridge.levels - 1)


def _peak_ripple(bridge: Bridge, scheme: Modulation, index: Array) -> Array:
    angle = np.linspace(0.0, np.pi, PEAK_ANGLES)
    return switching_periods(bridge, scheme, angle, index[:, None]).peak_to_peak.max(-1)


def _cell_means(fine: NDArray[np.floating]) -> Array:
    return fine.reshape(*fine.shape[:-1], ANGLE_CELLS, FINE).mean(-1)


def _at_rail(duty: Array) -> NDArray[np.bool_]:
    return (duty >= 1.0 - 1e-12) | (duty <= 1e-12)


def _leg_references(bridge: Bridge, scheme: Modulation) -> tuple[NDArray, NDArray]:
    angle = 2.0 * np.pi * (np.arange(ANGLE_SAMPLES) + 0.5) / ANGLE_SAMPLES
    legs, signs = list(bridge.modelled_legs), np.array(bridge.current_sign)[:, None]
    low, high = (
        reference_harmonics(signs * scheme.references(angle, np.full_like(angle, level))[:, legs].T)
        for level in (0.25, 0.75)
    )
    slope = 2.0 * (high - low)
    return _without_noise(low - 0.25 * slope), _without_noise(slope)


def _without_noise(harmonics: NDArray[np.complex128]) -> NDArray[np.complex128]:
    """Set to zero what the transform's rounding left in components that symmetry forbids [-]."""
    real, imag = (np.where(np.abs(part) < 1e-12, 0.0, part) for part in (harmonics.real, harmonics.imag))
    return real + 1j * imag
