"""One call for all waveform quantities of arrays of operating points, exact over the line period.

The search reads the same quantities from `tables`, where the line stands still within a switching period;
this call is the reference it is tested against, and what an engineer calls from a notebook.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.optimize import brentq

from models.waveforms.legs import NATURAL
from models.waveforms.line_currents import commutations, dc_link_current, position_currents
from models.waveforms.line_period import LinePeriod

Array = NDArray[np.float64]


@dataclass(frozen=True)
class PositionArrays:
    """One device position over the operating points: average and rms current [A], blocking voltage [V]."""

    average: Array
    rms: Array
    blocking_voltage: Array


@dataclass(frozen=True)
class OperatingWaveforms:
    """Waveform quantities over the operating points, all of the broadcast shape.

    Attributes:
        periods: the operating points themselves, for spectra and time courses (object array of LinePeriod).
        switching_frequency: carrier frequency taken, a whole multiple of the line frequency [Hz].
        fundamental_peak: of the output voltage, phase one [V]; voltage_thd: its distortion, all harmonics
            [-].
        common_mode_rms: of the legs' mean voltage against the dc midpoint [V].
        ripple_rms, ripple_peak_to_peak: of the phase current [A].
        positions: device position of leg one -> currents and blocking voltage.
        commutation_number: turn-ons of leg one's cells in a line period [-].
        turn_on_sum, turn_off_sum: currents turned on (hard) and off by leg one in a line period [A].
        commutated_voltage: [V].
        dc_mean, dc_capacitor_rms, dc_double_frequency_rms, dc_switching_rms: dc-link currents [A].
        neutral_rms, neutral_third: neutral-point current, rms and peak of its third harmonic [A].
    """

    periods: NDArray[np.object_]
    switching_frequency: Array
    fundamental_peak: Array
    voltage_thd: Array
    common_mode_rms: Array
    ripple_rms: Array
    ripple_peak_to_peak: Array
    positions: dict[str, PositionArrays]
    commutation_number: Array
    turn_on_sum: Array
    turn_off_sum: Array
    commutated_voltage: Array
    dc_mean: Array
    dc_capacitor_rms: Array
    dc_double_frequency_rms: Array
    dc_switching_rms: Array
    neutral_rms: Array
    neutral_third: Array

    def spectrum(self, orders: ArrayLike) -> Array:
        """Peak amplitudes of phase one's output voltage at harmonic orders on a new last axis [V]."""
        wanted = np.asarray(orders)
        rows = [np.abs(one.harmonics(one.output_levels[0], wanted)) for one in self.periods.ravel()]
        return np.reshape(rows, (*self.periods.shape, len(wanted)))

    def common_mode_spectrum(self, orders: ArrayLike) -> Array:
        """Peak amplitudes of the common-mode voltage at harmonic orders on a new last axis [V]."""
        wanted = np.asarray(orders)
        rows = [np.abs(one.harmonics(one.common_mode_levels, wanted)) for one in self.periods.ravel()]
        return np.reshape(rows, (*self.periods.shape, len(wanted)))


def operating_waveforms(
    *,
    bridge: str,
    modulation: str,
    modulation_index: ArrayLike,
    displacement: ArrayLike,
    dc_voltage: ArrayLike,
    inductance: ArrayLike,
    switching_frequency: ArrayLike,
    line_frequency: ArrayLike,
    current: ArrayLike,
    sampling: str = NATURAL,
    leg_type: str | None = None,
    carrier_offset: ArrayLike = 0.0,
    conduction_angle: ArrayLike = np.pi,
) -> OperatingWaveforms:
    """All waveform quantities of arrays of operating points of one bridge and scheme.

    Args:
        bridge, modulation: names out of `bridges.ALL_BRIDGES`.
        modulation_index: M [-].
        displacement: lag of the fundamental current behind the bridge's fundamental voltage, negative for
            leading [rad].
        dc_voltage: [V].
        inductance: per phase [H].
        switching_frequency: carrier frequency, taken to the nearest whole multiple of the line frequency
            [Hz].
        line_frequency: [Hz].
        current: rms of the fundamental phase current [A].
        sampling: "natural", "symmetrical regular" or "asymmetrical regular".
        leg_type: of three-level legs, "neutral-point clamped" (default) or "T-type".
        carrier_offset: carrier angle of the valley at the line voltage's zero [rad].
        conduction_angle: of a quasi-square wave [rad].

    Returns:
        The quantities, arrays of the broadcast shape.

    Raises:
        ValueError: for unknown names, values that are not positive, or M beyond the scheme's limit.
    """
    given = (
        modulation_index, displacement, dc_voltage, inductance, switching_frequency, line_frequency, current,
        carrier_offset, conduction_angle,
    )  # fmt: skip
    arrays = np.broadcast_arrays(*(np.asarray(value, dtype=float) for value in given))
    shape = arrays[0].shape
    periods = [
        LinePeriod(
            bridge=bridge,
            modulation=modulation,
            modulation_index=m,
            displacement=phi,
            dc_voltage=v,
            inductance=henry,
            pulse_number=max(round(carrier / line), 1),
            line_frequency=line,
            current=ampere,
            sampling=sampling,
            carrier_offset=offset,
            conduction_angle=conduction,
        )
        for m, phi, v, henry, carrier, line, ampere, offset, conduction in zip(
            *(array.ravel().tolist() for array in arrays), strict=True
        )
    ]
    positions = [position_currents(one, leg_type) for one in periods]
    switched = [commutations(one) for one in periods]
    links = [dc_link_current(one) for one in periods]

    def shaped(values: list[float]) -> Array:
        return np.array(values, dtype=float).reshape(shape)

    held = np.empty(len(periods), dtype=object)
    held[:] = periods
    return OperatingWaveforms(
        periods=held.reshape(shape),
        switching_frequency=shaped([one.pulse_number * one.line_frequency for one in periods]),
        fundamental_peak=shaped([one.fundamental_peak for one in periods]),
        voltage_thd=shaped([one.voltage_thd for one in periods]),
        common_mode_rms=shaped([float(np.sqrt(one.widths @ one.common_mode_levels**2)) for one in periods]),
        ripple_rms=shaped([one.ripple_rms for one in periods]),
        ripple_peak_to_peak=shaped([one.ripple_peak_to_peak for one in periods]),
        positions={
            name: PositionArrays(
                shaped([entry[name].average for entry in positions]),
                shaped([entry[name].rms for entry in positions]),
                shaped([entry[name].blocking_voltage for entry in positions]),
            )
            for name in (positions[0] if positions else {})
        },
        commutation_number=shaped([one.number for one in switched]),
        turn_on_sum=shaped([one.turn_on_sum for one in switched]),
        turn_off_sum=shaped([one.turn_off_sum for one in switched]),
        commutated_voltage=shaped([one.voltage for one in switched]),
        dc_mean=shaped([one.mean for one in links]),
        dc_capacitor_rms=shaped([one.capacitor_rms for one in links]),
        dc_double_frequency_rms=shaped([one.double_frequency_rms for one in links]),
        dc_switching_rms=shaped([one.switching_rms for one in links]),
        neutral_rms=shaped([one.neutral_rms for one in links]),
        neutral_third=shaped([one.neutral_third for one in links]),
    )


def cancelling_conduction_angle(order: int) -> float:
    """Conduction angle of a quasi-square wave without the given odd harmonic, pi (1 - 1/order) [rad].

    The harmonic of order n is (4/(n pi)) sin(n beta/2); the widest angle below pi that makes it vanish is
    returned.
    """
    if order < 3 or order % 2 == 0:
        raise ValueError(f"order {order}: expected an odd order of at least 3")
    return np.pi * (1.0 - 1.0 / order)


def least_distortion_conduction_angle() -> float:
    """Conduction angle of a quasi-square wave of least distortion, the root of tan(beta/2) = beta [rad].

    Distortion grows with beta/sin^2(beta/2); setting its derivative to zero gives the condition.
    """
    return float(brentq(lambda beta: np.tan(0.5 * beta) - beta, 2.0, 3.0))
