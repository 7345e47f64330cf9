"""What the devices, the dc link and the neutral point carry over a line period: exact, ripple included."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.waveforms.leg_positions import LEG_POSITIONS, NEUTRAL_POINT_CLAMPED, T_TYPE, TWO_LEVEL, Position
from models.waveforms.legs import Cell
from models.waveforms.line_period import LinePeriod

Array = NDArray[np.float64]


@dataclass(frozen=True)
class PositionCurrent:
    """Current of one device position of leg one: average and rms [A], and the voltage it must block [V]."""

    average: float
    rms: float
    blocking_voltage: float


@dataclass(frozen=True)
class Commutations:
    """Switchings of leg one in a line period.

    Attributes:
        number: of turn-ons of its cells, each with one turn-off [-].
        turn_on_sum, turn_off_sum: sums of the currents that switches turn on (hard) and off [A].
        voltage: commutated voltage [V].
    """

    number: int
    turn_on_sum: float
    turn_off_sum: float
    voltage: float


def leg_type_of(operation: LinePeriod, leg_type: str | None = None) -> str:
    """The leg's type: two-level, or the named three-level one (neutral-point clamped where none is named).

    Raises:
        ValueError: for a type that does not fit the bridge.
    """
    fitting = (TWO_LEVEL,) if operation.circuit.levels == 2 else (NEUTRAL_POINT_CLAMPED, T_TYPE)
    chosen = leg_type or fitting[0]
    if chosen not in fitting:
        raise ValueError(f"leg type {chosen!r} on {operation.bridge}: expected {' or '.join(fitting)}")
    return chosen


def leg_current(operation: LinePeriod, leg: int) -> Array:
    """Outward current of a leg at the quadrature nodes [A]."""
    if operation.circuit.phases == 3:
        return operation.phase_current[leg]
    return operation.phase_current[0] * (1.0 if leg == 0 else -1.0)


def position_currents(
    operation: LinePeriod, leg_type: str | None = None, leg: int = 0
) -> dict[str, PositionCurrent]:
    """Average and rms current of every device position of a leg.

    Args:
        operation: the operating point.
        leg_type: of three-level legs, "neutral-point clamped" or "T-type".
        leg: which leg [-].
    """
    _, weight, interval = operation.nodes
    level, current = operation.leg_levels[leg][interval], leg_current(operation, leg)

    def loaded(position: Position) -> PositionCurrent:
        carried = position.carries(level, current)
        return PositionCurrent(
            average=float(carried @ weight),
            rms=float(np.sqrt(carried**2 @ weight)),
            blocking_voltage=position.blocking_share * operation.dc_voltage,
        )

    return {position.name: loaded(position) for position in LEG_POSITIONS[leg_type_of(operation, leg_type)]}


def commutations(operation: LinePeriod, leg: int = 0) -> Commutations:
    """Currents that a leg's switches turn on and off in a line period.

    A cell's turn-on with outward current is a hard turn-on of its upper switch; with inward current the lower
    switch turns off instead, and the upper one turns on without current.
    """
    turn_on, turn_off, number = 0.0, 0.0, 0
    for cell in operation.cells[leg]:
        rising, falling = (_current_at(operation, leg, angles) for angles in _edges(cell))
        turn_on += float(np.sum(np.maximum(rising, 0.0)) + np.sum(np.maximum(-falling, 0.0)))
        turn_off += float(np.sum(np.maximum(-rising, 0.0)) + np.sum(np.maximum(falling, 0.0)))
        number += len(rising)
    levels = operation.circuit.levels
    return Commutations(number, turn_on, turn_off, operation.dc_voltage / (levels - 1))


def _edges(cell: Cell) -> tuple[Array, Array]:
    return cell.turn_on_angles, cell.turn_off_angles


def _current_at(operation: LinePeriod, leg: int, angles: Array) -> Array:
    place = np.searchsorted(operation.bounds, angles - 1e-12)
    phase, sign = (leg, 1.0) if operation.circuit.phases == 3 else (0, 1.0 if leg == 0 else -1.0)
    return sign * (operation.line_current(angles)[phase] + operation.ripple_at_bounds[phase, place])


@dataclass(frozen=True)
class DcLinkCurrent:
    """Current of the dc link with a smooth source [A].

    Attributes:
        mean: drawn from the source.
        capacitor_rms: of the dc-link capacitor (three-level: of each of the two halves).
        double_frequency_rms: its part at twice the line frequency.
        switching_rms: the rest.
        neutral_rms, neutral_third: neutral-point current of three-level legs, rms and peak of its third
            harmonic.
    """

    mean: float
    capacitor_rms: float
    double_frequency_rms: float
    switching_rms: float
    neutral_rms: float
    neutral_third: float


def dc_link_current(operation: LinePeriod) -> DcLinkCurrent:
    """Currents of positive rail and neutral point.

    Three-level: the capacitor between positive rail and neutral point takes the rail current less its mean.
    """
    angle, weight, interval = operation.nodes
    levels = operation.leg_levels[:, interval]
    currents = np.array([leg_current(operation, leg) for leg in range(len(levels))])
    rail = np.sum(currents * (levels == 1.0), axis=0)
    neutral = np.sum(currents * (levels == 0.5), axis=0)
    mean = float(rail @ weight)
    square = float(rail**2 @ weight) - mean**2
    slow = abs(2.0 * np.sum(rail * weight * np.exp(-2j * angle))) ** 2 / 2.0
    third = abs(2.0 * np.sum(neutral * weight * np.exp(-3j * angle)))
    return DcLinkCurrent(
        mean=mean,
        capacitor_rms=float(np.sqrt(max(square, 0.0))),
        double_frequency_rms=float(np.sqrt(slow)),
        switching_rms=float(np.sqrt(max(square - slow, 0.0))),
        neutral_rms=float(np.sqrt(neutral**2 @ weight)),
        neutral_third=float(third),
    )
