"""What the devices, the dc link and the neutral point carry over a line period: exact, ripple included."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.waveforms.bridges import Bridge
from models.waveforms.leg_positions import LEG_POSITIONS, NEUTRAL_POINT_CLAMPED, T_TYPE, Position
from models.waveforms.legs import FULL_TURN, TOUCH
from models.waveforms.line_period import LinePeriod, quadrature

Array = NDArray[np.float64]


HALVINGS = 40  # of the step between two nodes in search of a current's zero


@dataclass(frozen=True)
class PositionCurrent:
    """What one device position of a leg carries and commutates in a line period.

    Attributes:
        average, rms: of its current over the line period [A].
        blocking_voltage: greatest voltage it blocks [V].
        turn_on_number, turn_off_number: level changes at which it takes the current over from blocking, and
            gives it up and blocks then [-]. A switch turns on hard and turns off; a diode takes over from a
            switch that turns off, and recovers under a switch that turns on. A switch that is driven on while
            its antiparallel diode carries the current (soft turn-on) is not counted, nor what joins or leaves
            the path without blocking.
        turn_on_sum, turn_off_sum: sums of the currents at these [A].
    """

    average: float
    rms: float
    blocking_voltage: float
    turn_on_number: int
    turn_off_number: int
    turn_on_sum: float
    turn_off_sum: float


@dataclass(frozen=True)
class Commutations:
    """Switchings of a leg in a line period.

    A three-level leg counts by its two cells: a jump over both levels at once is two commutations of half the
    dc voltage each. The jumps of a clamped reference count where they change the leg's level.

    Attributes:
        number: of turn-ons of its cells, each with one turn-off: half of all level changes [-].
        hard_number: level changes at which a switch turns on hard, into the other position's diode [-].
        turn_off_number: level changes at which a switch turns a current off; the other position's switch
            then turns on soft [-].
        turn_on_sum, turn_off_sum: sums of the currents that switches turn on (hard) and off [A].
        voltage: commutated voltage of each [V].
    """

    number: int
    hard_number: int
    turn_off_number: int
    turn_on_sum: float
    turn_off_sum: float
    voltage: float


def leg_type_of(circuit: Bridge, leg_type: str | None = None) -> str:
    """The leg's type: the bridge's own, or the named three-level one where the bridge leaves it open
    (neutral-point clamped where none is named).

    Raises:
        ValueError: for a type that does not fit the bridge.
    """
    fitting = (circuit.leg_type,) if circuit.leg_type else (NEUTRAL_POINT_CLAMPED, T_TYPE)
    chosen = leg_type or fitting[0]
    if chosen not in fitting:
        raise ValueError(f"leg type {chosen!r} of {circuit.name}: expected {' or '.join(fitting)}")
    return chosen


def leg_current(operation: LinePeriod, leg: int) -> Array:
    """Outward current of a leg at the quadrature nodes [A]."""
    phase, sign = _phase_of(operation, leg)
    return sign * operation.phase_current[phase]


def _phase_of(operation: LinePeriod, leg: int) -> tuple[int, float]:
    """Phase whose current a leg carries, and its sign."""
    return (leg, 1.0) if operation.circuit.phases == 3 else (0, 1.0 if leg == 0 else -1.0)


def _current_at(operation: LinePeriod, leg: int, angle: Array) -> Array:
    phase, sign = _phase_of(operation, leg)
    return sign * (operation.line_current(angle)[phase] + operation.ripple_at(angle)[phase])


def _current_zeros(operation: LinePeriod, leg: int) -> Array:
    """Angles at which a leg's current changes its sign [rad]."""
    angle, value = operation.nodes[0], leg_current(operation, leg)
    place = np.flatnonzero((value[1:] > 0.0) != (value[:-1] > 0.0))
    low, high, positive = angle[place], angle[place + 1], value[place] > 0.0
    for _ in range(HALVINGS if len(place) else 0):
        middle = 0.5 * (low + high)
        same = (_current_at(operation, leg, middle) > 0.0) == positive
        low, high = np.where(same, middle, low), np.where(same, high, middle)
    return 0.5 * (low + high)


def _level_changes(operation: LinePeriod, leg: int) -> tuple[Array, Array, Array]:
    """Angles [rad] at which a leg changes its level, and the levels before and after [-]."""
    lasting = np.flatnonzero(operation.widths * FULL_TURN >= TOUCH)
    after = operation.leg_levels[leg][lasting]
    before = np.roll(after, 1)
    changed = after != before
    return operation.bounds[lasting[changed]], before[changed], after[changed]


def position_currents(
    operation: LinePeriod, leg_type: str | None = None, leg: int = 0
) -> dict[str, PositionCurrent]:
    """Currents and commutations of every device position of a leg.

    Args:
        operation: the operating point.
        leg_type: of three-level legs whose bridge leaves it open, "neutral-point clamped" or "T-type".
        leg: which leg [-].

    Raises:
        ValueError: for a leg type that does not fit the bridge.
    """
    positions = LEG_POSITIONS[leg_type_of(operation.circuit, leg_type)]
    # pieces end where the current changes its sign: all integrands are smooth within
    bounds = np.unique(np.concatenate([operation.bounds, _current_zeros(operation, leg)]))
    angle, weight, piece = quadrature(bounds)
    interval = np.searchsorted(operation.bounds, bounds[:-1], side="right") - 1
    level = operation.leg_levels[leg][interval[piece]]
    current = _current_at(operation, leg, angle)
    changes, before, after = _level_changes(operation, leg)
    switched = _current_at(operation, leg, changes)

    def loaded(position: Position) -> PositionCurrent:
        carried = position.carries(level, current)
        earlier, later = position.carries(before, switched), position.carries(after, switched)
        taken = later[(earlier == 0.0) & position.blocks(before)]
        given = earlier[(later == 0.0) & position.blocks(after)]
        taken, given = taken[taken > 0.0], given[given > 0.0]
        return PositionCurrent(
            average=float(carried @ weight),
            rms=float(np.sqrt(carried**2 @ weight)),
            blocking_voltage=position.blocking_share * operation.dc_voltage,
            turn_on_number=int(np.count_nonzero(taken)),
            turn_off_number=int(np.count_nonzero(given)),
            turn_on_sum=float(taken.sum()),
            turn_off_sum=float(given.sum()),
        )

    return {position.name: loaded(position) for position in positions}


def commutations(operation: LinePeriod, leg: int = 0) -> Commutations:
    """Currents that a leg's switches turn on and off in a line period.

    A cell's turn-on with outward current is a hard turn-on of its upper switch; with inward current the lower
    switch turns off instead, and the upper one turns on without current.

    Args:
        operation: the operating point; leg: which leg [-].
    """
    hard, off, number = [np.zeros(0)], [np.zeros(0)], 0
    for cell in operation.cells[leg]:
        rising, falling = (
            _current_at(operation, leg, angles) for angles in (cell.turn_on_angles, cell.turn_off_angles)
        )
        hard += [rising[rising > 0.0], -falling[falling < 0.0]]
        off += [-rising[rising < 0.0], falling[falling > 0.0]]
        number += len(rising)
    turned_on, turned_off = np.concatenate(hard), np.concatenate(off)
    return Commutations(
        number=number,
        hard_number=len(turned_on),
        turn_off_number=len(turned_off),
        turn_on_sum=float(turned_on.sum()),
        turn_off_sum=float(turned_off.sum()),
        voltage=operation.dc_voltage / (operation.circuit.levels - 1),
    )


@dataclass(frozen=True)
class DcLinkCurrent:
    """Current of the dc link with a source of constant current [A].

    Attributes:
        mean: drawn from the source.
        capacitor_rms: of the dc-link capacitor; of three-level bridges of each of the two halves, whose
            current is the rail's less its mean.
        double_frequency_rms: its part at twice the line frequency.
        switching_rms: all the rest. In three-level bridges that includes further low multiples of the line
            frequency (a half bridge: the line frequency itself; three phases: the third).
        neutral_rms, neutral_third: current drawn from the neutral point by three-level legs, rms and peak of
            its third harmonic; without the load current that a half bridge returns there.
    """

    mean: float
    capacitor_rms: float
    double_frequency_rms: float
    switching_rms: float
    neutral_rms: float
    neutral_third: float


def rail_currents(operation: LinePeriod) -> tuple[Array, Array]:
    """Currents that all legs together draw from the positive rail and from the neutral point, at the
    quadrature nodes [A].
    """
    levels = operation.leg_levels[:, operation.nodes[2]]
    currents = np.array([leg_current(operation, leg) for leg in range(len(levels))])
    return np.sum(currents * (levels == 1.0), axis=0), np.sum(currents * (levels == 0.5), axis=0)


def dc_link_current(operation: LinePeriod) -> DcLinkCurrent:
    """Currents of positive rail and neutral point.

    Three-level: the capacitor between positive rail and neutral point takes the rail current less its mean.
    """
    weight = operation.nodes[1]
    rail, neutral = rail_currents(operation)
    mean = float(rail @ weight)
    square = float(rail**2 @ weight) - mean**2
    slow = 0.5 * float(node_harmonics(operation, rail, np.array([2]))[0]) ** 2
    return DcLinkCurrent(
        mean=mean,
        capacitor_rms=float(np.sqrt(max(square, 0.0))),
        double_frequency_rms=float(np.sqrt(slow)),
        switching_rms=float(np.sqrt(max(square - slow, 0.0))),
        neutral_rms=float(np.sqrt(neutral**2 @ weight)),
        neutral_third=float(node_harmonics(operation, neutral, np.array([3]))[0]),
    )


def node_harmonics(operation: LinePeriod, values: Array, orders: NDArray[np.int64]) -> Array:
    """Peak amplitudes of a current given at the quadrature nodes, at orders of at least 1 [A].

    Up to about the twentieth carrier multiple: an interval has four nodes.
    """
    angle, weight, _ = operation.nodes
    return 2.0 * np.abs(np.exp(-1j * np.outer(orders, angle)) @ (values * weight))
