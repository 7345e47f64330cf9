"""Which switch commutates with which diode in a leg, over what voltage, and who swings along.

Everything follows from the potentials and conduction of `leg_positions`: of the positions that carry the
current at one level only, the switch that blocks at the other level is the active one, and the diode that
blocks where the switch conducts is the one that recovers.
"""

from __future__ import annotations

from dataclasses import dataclass

from models.waveforms.leg_positions import LEG_POSITIONS, NEUTRAL_POINT_CLAMPED, T_TYPE, TWO_LEVEL, Position

OUTER, INNER, CLAMP = "outer", "inner", "clamp"
ROLES = {
    TWO_LEVEL: {"1": OUTER, "2": OUTER},
    NEUTRAL_POINT_CLAMPED: {"1": OUTER, "2": INNER, "3": INNER, "4": OUTER, "5": CLAMP, "6": CLAMP},
    T_TYPE: {"1": OUTER, "2": INNER, "3": INNER, "4": OUTER},
}
"""Role of each package, named by the number of its switch and diode; packages of one role are equal by
half-wave symmetry."""


@dataclass(frozen=True)
class Commutation:
    """A change of a leg's level by half or all of V_dc, with one sign of the outward current.

    Attributes:
        low, high: levels over V_dc [-].
        sign: of the outward current, +1 or -1 [-].
        switch: role of the package whose switch turns on and off.
        diode: role of the package whose diode takes the current over.
        swings: (role, blocked voltage at one level, at the other) of every package whose blocked voltage
            changes, over V_dc [-].
    """

    low: float
    high: float
    sign: int
    switch: str
    diode: str
    swings: tuple[tuple[str, float, float], ...]

    @property
    def voltage_share(self) -> float:
        """Commutated voltage over V_dc [-]."""
        return self.high - self.low


def leg_commutations(leg_type: str) -> tuple[Commutation, ...]:
    """All commutations of a leg between neighbouring levels.

    Args:
        leg_type: a key of LEG_POSITIONS.
    """
    positions = LEG_POSITIONS[leg_type]
    levels = sorted(positions[0].ends)
    return tuple(
        _commutation(leg_type, low, high, sign)
        for low, high in zip(levels[:-1], levels[1:], strict=True)
        for sign in (1, -1)
    )


def blocking_shares(leg_type: str) -> dict[str, float]:
    """Greatest voltage that the packages of each role must block, over V_dc [-]."""
    shares: dict[str, float] = {}
    for position in LEG_POSITIONS[leg_type]:
        role = ROLES[leg_type][position.name[1:]]
        shares[role] = max(shares.get(role, 0.0), position.blocking_share)
    return shares


def _commutation(leg_type: str, low: float, high: float, sign: int) -> Commutation:
    positions, roles = LEG_POSITIONS[leg_type], ROLES[leg_type]
    driven, freewheeling = (
        (high, low) if sign > 0 else (low, high)
    )  # the level the switch connects, the other

    def alone(level: float, other: float, kind: str) -> list[Position]:
        return [
            one
            for one in positions
            if one.name.startswith(kind)
            and (level, sign) in one.conducts
            and (other, sign) not in one.conducts
            and _blocked(one, other) > 0.0
        ]

    (switch,) = alone(driven, freewheeling, "T")
    (diode,) = alone(freewheeling, driven, "D")
    packages = {position.name[1:]: position for position in positions}
    swings = tuple(
        (roles[number], _blocked(one, low), _blocked(one, high))
        for number, one in packages.items()
        if _blocked(one, low) != _blocked(one, high)
    )
    return Commutation(low, high, sign, roles[switch.name[1:]], roles[diode.name[1:]], swings)


def _blocked(position: Position, level: float) -> float:
    upper, lower = position.ends[level]
    return abs(upper - lower)
