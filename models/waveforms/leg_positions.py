"""Which device of a leg carries the current, and which voltage it blocks, at every level.

A leg is described by the potentials its nodes take at each output level (0, 1/2, 1 of V_dc) and by the
devices that conduct for either sign of the current; blocking voltages follow from the potentials. Sources:
Nabae, Takahashi, Akagi (1981) for the neutral-point clamped leg; Schweizer & Kolar (2013) for the T-type leg.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
TWO_LEVEL, NEUTRAL_POINT_CLAMPED, T_TYPE = "two-level", "neutral-point clamped", "T-type"


@dataclass(frozen=True)
class Position:
    """A device position of a leg.

    Attributes:
        name: switch (T...), its antiparallel diode (D...) or clamp diode.
        conducts: (level, sign of the outward current) pairs at which it carries the current.
        ends: potentials at its two ends over V_dc, by level.
    """

    name: str
    conducts: frozenset[tuple[float, int]]
    ends: dict[float, tuple[float, float]]

    @property
    def blocking_share(self) -> float:
        """Greatest voltage it blocks over V_dc: the greatest difference of its ends' potentials [-]."""
        return max(abs(upper - lower) for upper, lower in self.ends.values())

    def carries(self, level: Array, current: Array) -> Array:
        """The current it carries at given leg levels [-] and outward currents [A]; magnitudes [A]."""
        share = np.zeros(np.broadcast(level, current).shape)
        for step, sign in self.conducts:
            share = share + ((level == step) & (np.sign(current) == sign))
        return share * np.abs(current)

    def blocks(self, level: Array) -> NDArray[np.bool_]:
        """Whether its ends differ in potential at given leg levels [-]."""
        found = np.zeros(np.shape(level), dtype=np.bool_)
        for step, (upper, lower) in self.ends.items():
            found |= (level == step) & (upper != lower)
        return found


def _position(
    name: str, conducts: set[tuple[float, int]], upper: dict[float, float], lower: dict[float, float]
) -> Position:
    return Position(name, frozenset(conducts), {level: (upper[level], lower[level]) for level in upper})


def _rail(value: float, levels: tuple[float, ...]) -> dict[float, float]:
    return dict.fromkeys(levels, value)


def _two_level() -> tuple[Position, ...]:
    levels = (0.0, 1.0)
    output = {level: level for level in levels}
    top, bottom = _rail(1.0, levels), _rail(0.0, levels)
    return (
        _position("T1", {(1.0, 1)}, top, output),
        _position("D1", {(1.0, -1)}, top, output),
        _position("T2", {(0.0, -1)}, output, bottom),
        _position("D2", {(0.0, 1)}, output, bottom),
    )


def _neutral_point_clamped() -> tuple[Position, ...]:
    levels = (0.0, 0.5, 1.0)
    output = {level: level for level in levels}
    top, bottom, neutral = (_rail(value, levels) for value in (1.0, 0.0, 0.5))
    upper = {
        0.0: 0.5,
        0.5: 0.5,
        1.0: 1.0,
    }  # node between T1 and T2: held at the neutral point unless T1 is on
    lower = {0.0: 0.0, 0.5: 0.5, 1.0: 0.5}  # node between T3 and T4, likewise
    return (
        _position("T1", {(1.0, 1)}, top, upper),
        _position("D1", {(1.0, -1)}, top, upper),
        _position("T2", {(1.0, 1), (0.5, 1)}, upper, output),
        _position("D2", {(1.0, -1)}, upper, output),
        _position("T3", {(0.0, -1), (0.5, -1)}, output, lower),
        _position("D3", {(0.0, 1)}, output, lower),
        _position("T4", {(0.0, -1)}, lower, bottom),
        _position("D4", {(0.0, 1)}, lower, bottom),
        _position("D5", {(0.5, 1)}, upper, neutral),
        _position("D6", {(0.5, -1)}, neutral, lower),
    )


def _t_type() -> tuple[Position, ...]:
    levels = (0.0, 0.5, 1.0)
    output = {level: level for level in levels}
    top, bottom, neutral = (_rail(value, levels) for value in (1.0, 0.0, 0.5))
    # the two midpoint switches stand in series, common emitter: which blocks depends on the output's side
    middle = {0.0: 0.0, 0.5: 0.5, 1.0: 0.5}
    return (
        _position("T1", {(1.0, 1)}, top, output),
        _position("D1", {(1.0, -1)}, top, output),
        _position("T2", {(0.5, 1)}, neutral, middle),
        _position("D2", {(0.5, -1)}, neutral, middle),
        _position("T3", {(0.5, -1)}, output, middle),
        _position("D3", {(0.5, 1)}, output, middle),
        _position("T4", {(0.0, -1)}, output, bottom),
        _position("D4", {(0.0, 1)}, output, bottom),
    )


LEG_POSITIONS = {
    TWO_LEVEL: _two_level(),
    NEUTRAL_POINT_CLAMPED: _neutral_point_clamped(),
    T_TYPE: _t_type(),
}
