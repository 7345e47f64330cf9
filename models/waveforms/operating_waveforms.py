"""One call for all waveform quantities of arrays of operating points, exact over the line period.

The search reads the same quantities from `tables`, where the line stands still within a switching period;
this call is the reference it is tested against, and what an engineer calls from a notebook.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import ArrayLike, NDArray
from scipy.optimize import brentq

from models.waveforms.bridges import ALL_BRIDGES
from models.waveforms.leg_positions import LEG_POSITIONS
from models.waveforms.legs import NATURAL, SAMPLINGS
from models.waveforms.line_currents import (
    PositionCurrent,
    commutations,
    dc_link_current,
    leg_type_of,
    node_harmonics,
    position_currents,
    rail_currents,
)
from models.waveforms.line_period import LinePeriod

Array = NDArray[np.float64]


@dataclass(frozen=True)
class PositionArrays:
    """One device position over the operating points; all as in `line_currents.PositionCurrent`.

    Attributes:
        average, rms: current over the line period [A]; blocking_voltage: [V].
        turn_on_number, turn_off_number: hard turn-ons and turn-offs of a switch in a line period; of a diode
            the times it takes over from a switch, and its recoveries [-].
        turn_on_sum, turn_off_sum: sums of the currents at these [A].
    """

    average: Array
    rms: Array
    blocking_voltage: Array
    turn_on_number: Array
    turn_off_number: Array
    turn_on_sum: Array
    turn_off_sum: Array


@dataclass(frozen=True)
class OperatingWaveforms:
    """Waveform quantities over the operating points, all of the broadcast shape.

    Output voltage is that of phase one across inductance and load: between the legs of a full bridge, between
    leg and dc midpoint of a half bridge, from leg to the legs' mean of three phases. Ripple is the phase
    current of phase one less its fundamental and its mean: sidebands and harmonics of any order.

    Attributes:
        periods: the operating points themselves, for spectra and time courses (object array of LinePeriod).
        switching_frequency: carrier frequency taken, a whole multiple of the line frequency [Hz].
        fundamental_peak: of the output voltage [V].
        voltage_thd: distortion of the output voltage over its fundamental: all harmonics without end, no dc
            component; infinite without fundamental [-].
        common_mode_rms: of the legs' mean voltage against the dc midpoint [V].
        ripple_rms: over the line period [A]; ripple_peak: greatest magnitude [A].
        ripple_peak_to_peak: greatest within one carrier period, from peak to peak of the carrier or from
            valley to valley; of line-switched schemes within the line period [A].
        positions: device position of the chosen leg -> currents, commutations and blocking voltage.
        commutation_number: turn-ons of the chosen leg's cells in a line period [-].
        hard_number, turn_off_number: level changes with a hard turn-on, and with a turn-off (and soft turn-on
            of the other position's switch) [-].
        turn_on_sum, turn_off_sum: currents turned on (hard) and off by the chosen leg in a line period [A].
        commutated_voltage: of each of them [V].
        dc_mean, dc_capacitor_rms, dc_double_frequency_rms, dc_switching_rms: dc-link currents, as in
            `line_currents.DcLinkCurrent` [A].
        neutral_rms, neutral_third: current of the three-level legs from the neutral point, rms and peak of
            its third harmonic; without the load current that a half bridge returns there [A].
    """

    periods: NDArray[np.object_]
    switching_frequency: Array
    fundamental_peak: Array
    voltage_thd: Array
    common_mode_rms: Array
    ripple_rms: Array
    ripple_peak: Array
    ripple_peak_to_peak: Array
    positions: dict[str, PositionArrays]
    commutation_number: Array
    hard_number: Array
    turn_off_number: Array
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
        """Peak amplitudes of the output voltage at harmonic orders of at least 1 on a new last axis [V]."""
        wanted = _orders(orders)
        return self._stacked(lambda one: np.abs(one.harmonics(one.output_levels[0], wanted)), len(wanted))

    def sidebands(self, carrier_multiple: ArrayLike, sideband: ArrayLike) -> Array:
        """Peak amplitudes of the output voltage at m carrier + n line frequencies on a new last axis [V].

        Args:
            carrier_multiple, sideband: m and n, of equal length or one of them a scalar [-]; an order below 0
                stands for its mirror image, order 0 is an error.
        """
        return self._sidebands(carrier_multiple, sideband, lambda one: one.output_levels[0])

    def common_mode_spectrum(self, orders: ArrayLike) -> Array:
        """Peak amplitudes of the common-mode voltage at harmonic orders of at least 1 on a new last axis
        [V].
        """
        wanted = _orders(orders)
        return self._stacked(lambda one: np.abs(one.harmonics(one.common_mode_levels, wanted)), len(wanted))

    def common_mode_sidebands(self, carrier_multiple: ArrayLike, sideband: ArrayLike) -> Array:
        """Peak amplitudes of the common-mode voltage at m carrier + n line frequencies, as `sidebands`
        [V].
        """
        return self._sidebands(carrier_multiple, sideband, lambda one: one.common_mode_levels)

    def leg_spectrum(self, orders: ArrayLike, leg: int = 0) -> Array:
        """Peak amplitudes of a leg's voltage against the dc midpoint at harmonic orders of at least 1 on a
        new last axis [V].
        """
        wanted = _orders(orders)
        return self._stacked(
            lambda one: np.abs(one.harmonics(one.dc_voltage * one.leg_levels[leg], wanted)), len(wanted)
        )

    def dc_spectrum(self, orders: ArrayLike) -> Array:
        """Peak amplitudes of the positive rail's current at harmonic orders of at least 1 on a new last axis
        [A].
        """
        wanted = _orders(orders)
        return self._stacked(lambda one: node_harmonics(one, rail_currents(one)[0], wanted), len(wanted))

    def local_ripple(self, angle: ArrayLike) -> Array:
        """Peak-to-peak ripple in the window of one carrier period around line angles on a new last axis [A].

        Args:
            angle: middles of the windows, from the zero of the line voltage's reference (k,) [rad].
        """
        middles = np.atleast_1d(np.asarray(angle, dtype=float))
        return self._stacked(lambda one: one.ripple_swing(middles), len(middles))

    def _stacked(self, read: Callable[[LinePeriod], Array], length: int) -> Array:
        rows = [read(one) for one in self.periods.ravel()]
        return np.reshape(np.array(rows, dtype=float), (*self.periods.shape, length))

    def _sidebands(
        self, carrier_multiple: ArrayLike, sideband: ArrayLike, levels: Callable[[LinePeriod], Array]
    ) -> Array:
        multiple, side = np.broadcast_arrays(np.atleast_1d(carrier_multiple), np.atleast_1d(sideband))
        return self._stacked(
            lambda one: np.abs(
                one.harmonics(levels(one), _orders(np.abs(multiple * one.pulse_number + side)))
            ),
            len(multiple),
        )


def _orders(orders: ArrayLike) -> NDArray[np.int64]:
    wanted = np.atleast_1d(np.asarray(orders))
    if np.any(wanted != np.round(wanted)) or np.any(wanted < 1):
        raise ValueError(f"orders {wanted.tolist()}: expected whole numbers of at least 1")
    return wanted.astype(np.int64)


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
    leg: int = 0,
) -> OperatingWaveforms:
    """All waveform quantities of arrays of operating points of one bridge and scheme.

    Time counts from the rising zero of leg one's reference. Carriers are symmetrical triangles whose valley
    stands there unless `carrier_offset` moves it; at a positive reference the valley is the middle of the
    on-state. The pulses of a reference that reaches the carrier's peak, as at M = limit, vanish. With regular
    sampling the fundamental comes late by the sampler's delay; the displacement counts from the fundamental,
    and a leg at line frequency beside a sampled one changes when the sampler first sees the new polarity.

    Args:
        bridge, modulation: names out of `bridges.ALL_BRIDGES`.
        modulation_index: M, without effect on line-switched schemes [-].
        displacement: lag of the fundamental current behind the bridge's fundamental voltage, negative for
            leading [rad].
        dc_voltage: [V].
        inductance: per phase, infinite for no ripple [H].
        switching_frequency: carrier frequency, taken to the nearest whole multiple of the line frequency
            [Hz].
        line_frequency: [Hz].
        current: rms of the fundamental phase current, 0 for the ripple alone [A].
        sampling: "natural", "symmetrical regular" (at carrier peaks) or "asymmetrical regular" (at peaks and
            valleys).
        leg_type: of three-level legs whose bridge leaves it open, "neutral-point clamped" (default) or
            "T-type".
        carrier_offset: carrier angle of the valley at the line voltage's zero [rad].
        conduction_angle: of a quasi-square wave, above 0 to pi [rad].
        leg: the leg whose positions and commutations are given; 1 is the leg at line frequency of the scheme
            of that name [-].

    Returns:
        The quantities, arrays of the broadcast shape.

    Raises:
        ValueError: for unknown names, values out of their range, or M beyond the scheme's limit.
    """
    if bridge not in ALL_BRIDGES:
        raise ValueError(f"bridge {bridge!r}: expected one of {', '.join(ALL_BRIDGES)}")
    circuit = ALL_BRIDGES[bridge]
    circuit.scheme(modulation)
    chosen_type = leg_type_of(circuit, leg_type)
    if sampling not in SAMPLINGS:
        raise ValueError(f"sampling {sampling!r}: expected one of {', '.join(SAMPLINGS)}")
    if leg not in range(len(circuit.voltage_weights)):
        raise ValueError(f"leg {leg} of {bridge}: expected 0 to {len(circuit.voltage_weights) - 1}")
    given = (
        modulation_index, displacement, dc_voltage, inductance, switching_frequency, line_frequency, current,
        carrier_offset, conduction_angle,
    )  # fmt: skip
    arrays = np.broadcast_arrays(*(np.asarray(value, dtype=float) for value in given))
    for name, values in (("switching_frequency", arrays[4]), ("line_frequency", arrays[5])):
        if not np.all((values > 0.0) & (values < np.inf)):
            raise ValueError(f"{name}: expected finite numbers above 0")
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
    read = [_quantities(one, chosen_type, leg) for one in periods]
    shape = arrays[0].shape

    def shaped(values: list[float]) -> Array:
        return np.array(values, dtype=float).reshape(shape)

    held = np.empty(len(periods), dtype=object)
    held[:] = periods
    return OperatingWaveforms(
        periods=held.reshape(shape),
        positions={
            position.name: PositionArrays(
                **{
                    part.name: shaped([getattr(found[position.name], part.name) for _, found in read])
                    for part in fields(PositionArrays)
                }
            )
            for position in LEG_POSITIONS[chosen_type]
        },
        **{
            part.name: shaped([values[part.name] for values, _ in read])
            for part in fields(OperatingWaveforms)
            if part.name not in ("periods", "positions")
        },
    )


def _quantities(
    one: LinePeriod, leg_type: str, leg: int
) -> tuple[dict[str, float], dict[str, PositionCurrent]]:
    """All numbers of one operating point, by their names in `OperatingWaveforms`, and its positions."""
    positions, switched, link = (
        position_currents(one, leg_type, leg), commutations(one, leg), dc_link_current(one)
    )  # fmt: skip
    values = {
        "switching_frequency": one.pulse_number * one.line_frequency,
        "fundamental_peak": one.fundamental_peak,
        "voltage_thd": one.voltage_thd,
        "common_mode_rms": float(np.sqrt(one.widths @ one.common_mode_levels**2)),
        "ripple_rms": one.ripple_rms,
        "ripple_peak": one.ripple_peak,
        "ripple_peak_to_peak": one.ripple_peak_to_peak,
        "commutation_number": switched.number,
        "hard_number": switched.hard_number,
        "turn_off_number": switched.turn_off_number,
        "turn_on_sum": switched.turn_on_sum,
        "turn_off_sum": switched.turn_off_sum,
        "commutated_voltage": switched.voltage,
        "dc_mean": link.mean,
        "dc_capacitor_rms": link.capacitor_rms,
        "dc_double_frequency_rms": link.double_frequency_rms,
        "dc_switching_rms": link.switching_rms,
        "neutral_rms": link.neutral_rms,
        "neutral_third": link.neutral_third,
    }
    one.forget_nodes()
    return values, positions


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
