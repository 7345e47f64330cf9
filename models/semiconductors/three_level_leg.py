"""What heats the positions of a three-level leg: neutral-point clamped or T-type, roles with parts of their
own.

Outer, inner and clamp positions of the upper half of the leg stand for those of the lower one (half-wave
symmetry). Which switch commutates with which diode, at which voltage, and whose output charge swings along is
read from `leg_commutations`; which position carries the current at which level, from `leg_positions`.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from models.semiconductors.conduction import conduction_law, diode_path, switch_path
from models.semiconductors.packages import Packages
from models.semiconductors.position_heat import NO_HEAT, PositionHeat, recovery_law, stacked, switching_law
from models.semiconductors.switching import (
    LegSwitching,
    dead_time_loss,
    gate_drive_loss,
    leg_switching,
    output_charge,
)
from models.waveforms.leg_commutations import CLAMP, INNER, OUTER, Commutation, leg_commutations
from models.waveforms.leg_positions import LEG_POSITIONS
from models.waveforms.state import WaveformState
from models.waveforms.tables import WaveformTables

Array = NDArray[np.float64]
STANDING_FOR = {OUTER: "1", INNER: "2", CLAMP: "5"}  # the package of each role that is modelled
UPPER, MIDDLE, LOWER = 1.0, 0.5, 0.0
LEAST_PEAK = 1e-9  # A, keeps the ripple's share finite where no current flows


@dataclass(frozen=True)
class _Cells:
    """Over the angle cells of the first half wave (n, p, a): current [A], its deviation at the switching
    instants [A], shares of time at the upper and at the lower rail [-].
    """

    current: Array
    offset: Array
    high: Array
    low: Array


@dataclass(frozen=True)
class _Load:
    """Average [A] and mean-square current [A2] of a position (n, p)."""

    average: Array
    mean_square: Array


@dataclass(frozen=True)
class _Change:
    """A kind of commutation with its losses in the leg's two halves together (n, p)."""

    kind: Commutation
    losses: LegSwitching


def three_level_heat(
    leg_type: str,
    packages: tuple[Packages, ...],
    frequency: Array,
    tables: WaveformTables,
    state: WaveformState,
    dc_voltage: Array,
) -> PositionHeat:
    """Losses of one position of every role (l, n, p).

    Args:
        leg_type: a three-level key of LEG_POSITIONS.
        packages: those of every role, in the order of the result.
        frequency: switching frequency (n,) [Hz].
        tables, state: waveforms at the loss points.
        dc_voltage: (p,) [V].
    """
    place = (state.scheme, state.row, state.weight)
    cells = _Cells(
        tables.cell_currents(state.displacement, state.peak_current),
        tables.read(tables.commutation_offset, *place) * state.ripple_unit[..., None],
        tables.read(tables.high_share, *place),
        tables.read(tables.low_share, *place),
    )
    ripple = 1.0 + 2.0 * state.ripple_mean_square / np.maximum(state.peak_current, LEAST_PEAK) ** 2
    loads = _position_loads(leg_type, cells, ripple)
    by_role = {part.role: part for part in packages}
    changes = _changes(leg_type, by_role, frequency, cells, dc_voltage)
    return stacked([_heat(part, loads, changes, frequency[:, None]) for part in packages])


def _position_loads(leg_type: str, cells: _Cells, ripple: Array) -> dict[str, _Load]:
    """Current of every position by quadrature over the angle cells, both half waves.

    Args:
        leg_type: key of LEG_POSITIONS.
        cells: waveforms over the first half wave.
        ripple: mean square of the current with ripple over that without (n, p) [-].
    """
    outward, inward = np.maximum(cells.current, 0.0), np.maximum(-cells.current, 0.0)
    shares = {UPPER: cells.high, LOWER: cells.low, MIDDLE: 1.0 - cells.high - cells.low}
    count = outward.shape[-1]
    averages, squares = {}, {}
    for sign, size in ((1, outward), (-1, inward)):
        square = size * size
        for level, share in shares.items():
            averages[level, sign] = np.einsum("...a,...a->...", share, size) / count
            squares[level, sign] = np.einsum("...a,...a->...", share, square) / count * ripple
    zero = np.zeros_like(ripple)

    def both_halves(sums: dict[tuple[float, int], Array], conducts: frozenset[tuple[float, int]]) -> Array:
        # in the second half wave levels and current are mirrored
        mirrored = [(UPPER - level, -sign) for level, sign in conducts]
        return 0.5 * sum((sums[entry] for entry in (*conducts, *mirrored)), zero)

    return {
        one.name: _Load(both_halves(averages, one.conducts), both_halves(squares, one.conducts))
        for one in LEG_POSITIONS[leg_type]
    }


def _changes(
    leg_type: str,
    packages: dict[str, Packages],
    frequency: Array,
    cells: _Cells,
    dc_voltage: Array,
) -> list[_Change]:
    """The two kinds of commutation of the leg's upper half; those of the lower half mirror them.

    While reference and current agree in sign the switch towards the rail commutates, else the inner one.
    """
    agreeing = (cells.high >= cells.low) == (cells.current >= 0.0)
    found = []
    for kind in leg_commutations(leg_type):
        if kind.high != UPPER:
            continue
        share = (agreeing if kind.sign > 0 else ~agreeing).astype(float)
        losses = leg_switching(
            packages[kind.switch].dies,
            packages[kind.diode].dies,
            _node_charge(kind, packages, dc_voltage),
            kind.voltage_share * dc_voltage,
            frequency[:, None],
            cells.current,
            cells.offset.copy(),
            share,
        )
        found.append(_Change(kind, losses))
    return found


def _node_charge(kind: Commutation, packages: dict[str, Packages], dc_voltage: Array) -> Array:
    """Output charge that all packages at the switch node exchange in a commutation [C]."""
    total: Array = np.zeros_like(dc_voltage)
    for role, before, after in kind.swings:
        dies = packages[role].dies
        first, second = (
            output_charge(dies.device, share * dc_voltage, dies.area) if share > 0.0 else 0.0
            for share in (before, after)
        )
        total = total + np.abs(second - first)
    return total


def _heat(part: Packages, loads: dict[str, _Load], changes: list[_Change], frequency: Array) -> PositionHeat:
    number, dies, device = STANDING_FOR[part.role], part.dies, part.device
    reverse = loads[f"D{number}"]
    diode = diode_path(device, dies.area)
    freewheel = conduction_law(diode, reverse.average, reverse.mean_square)
    none = np.zeros_like(reverse.average)
    taken = [change.losses for change in changes if change.kind.diode == part.role]
    recovery = recovery_law(dies, 0.5 * sum((one.recovery_hot for one in taken), none))
    common = {
        "freewheel": freewheel,
        "recovery": recovery,
        "resistances": part.resistances,
        "limit_c": device.junction_limit_c,
    }
    if part.role == CLAMP:
        return PositionHeat(
            forward=NO_HEAT, channel=NO_HEAT, switching=NO_HEAT,
            output_charge=none, dead_time=none, gate=none,
            shared=np.zeros((1, 1), dtype=bool), **common,
        )  # fmt: skip
    switch, forward = switch_path(device, dies.area), loads[f"T{number}"]
    driven = [change.losses for change in changes if change.kind.switch == part.role]
    idle = [
        dead_time_loss(device, one.mean_current, one.mean_square, diode.slope, frequency) for one in taken
    ]
    return PositionHeat(
        forward=conduction_law(switch, forward.average, forward.mean_square),
        channel=conduction_law(switch, none, reverse.mean_square),
        switching=switching_law(
            dies,
            0.5 * sum((one.turn_on_hot for one in driven), none),
            0.5 * sum((one.turn_off_hot for one in driven), none),
        ),
        output_charge=0.5 * sum((one.output_charge for one in driven), none),
        dead_time=0.5 * sum(idle, none),
        # each switch changes state in one half wave only, with or without current
        gate=0.5 * gate_drive_loss(device, dies.area, frequency)
        + part.parallel[:, None] * device.gate_unit_power_w,
        shared=device.shared_die,
        **common,
    )
