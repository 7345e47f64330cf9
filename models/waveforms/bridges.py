"""Bridges and their modulation schemes: the registry every other waveform module works from.

A scheme is given by the reference of each leg over the line angle, u = 2 d - 1 with the on-state share d of
the upper switch, by the sign of each leg's triangular carrier, and by the weights that turn leg states into
the voltage across the filter. Ripple, spectrum and device currents follow from these alone, so that a new
scheme is one entry.

Modulation index M: peak of a leg's fundamental over V_dc/2 (three phases), peak fundamental of the bridge
voltage over V_dc (single phase). Carriers are symmetrical triangles (double-edge modulation), naturally
sampled. Sources: Holmes & Lipo, Pulse Width Modulation for Power Converters (2003), ch. 3-6; Hava, Kerkman,
Lipo (1999).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import partial

import numpy as np
from numpy.typing import NDArray

from models.waveforms.leg_positions import NEUTRAL_POINT_CLAMPED, T_TYPE, TWO_LEVEL

Array = NDArray[np.float64]
SINE_LIMIT = 1.0
INJECTION_LIMIT = 2.0 / np.sqrt(3.0)


@dataclass(frozen=True)
class Modulation:
    """One modulation scheme.

    Attributes:
        name: its name in the trade [-].
        linear_limit: greatest modulation index of the linear range [-].
        references: (angle [rad], modulation index) -> references of all legs, legs on the last axis [-]; a
            scheme that follows the current takes its displacement angle [rad] as a third argument.
        carrier_sign: +1 or -1 per leg; -1 for a leg that compares with the inverted carrier [-].
        switching_legs: 1 for a leg that switches at carrier frequency, 0 for one at line frequency [-].
        follows_current: whether the references depend on the displacement angle.
    """

    name: str
    linear_limit: float
    references: Callable[..., Array]
    carrier_sign: tuple[int, ...]
    switching_legs: tuple[int, ...]
    follows_current: bool = False

    def at(self, displacement: float) -> Modulation:
        """The scheme for a current that lags by a displacement angle [rad]."""
        if not self.follows_current:
            return self
        return replace(self, references=partial(self.references, displacement=displacement))


@dataclass(frozen=True)
class Bridge:
    """One bridge: how leg states make the filter voltage, and which schemes it can run.

    Attributes:
        name: its name in the trade [-].
        phases: 1 or 3 [-].
        voltage_weights: filter voltage of phase one over V_dc = sum(weight x leg state) [-].
        modelled_legs: indexes of legs whose currents differ; others repeat them [-].
        leg_copies: physical legs per modelled leg [-].
        current_sign: sign of the phase-one current in each modelled leg [-].
        index_base: V_dc times this is the peak fundamental at M = 1 [-].
        modulations: the schemes that a search chooses from.
        levels: levels of a leg; a three-level leg compares with two carriers in phase (phase disposition)
            [-].
        leg_type: a key of `leg_positions.LEG_POSITIONS`, or "" where the waveforms do not depend on it.
        slow_order: lowest multiple of the line frequency in the dc-link current, 0 where there is none [-].
        further: line-switched schemes, which only `line_period` evaluates.
    """

    name: str
    phases: int
    voltage_weights: tuple[float, ...]
    modelled_legs: tuple[int, ...]
    leg_copies: int
    current_sign: tuple[int, ...]
    index_base: float
    modulations: tuple[Modulation, ...]
    levels: int = 2
    leg_type: str = TWO_LEVEL
    slow_order: int = 0
    further: tuple[Modulation, ...] = ()

    def scheme(self, name: str) -> Modulation:
        """Return a scheme of this bridge, a further one included. Raises ValueError naming the known ones."""
        known = {one.name: one for one in (*self.modulations, *self.further)}
        if name not in known:
            raise ValueError(f"modulation {name!r} of {self.name}: expected one of {', '.join(known)}")
        return known[name]

    def modulation_index(self, name: str) -> int:
        """Return the position of a scheme. Raises ValueError naming the known ones."""
        names = [scheme.name for scheme in self.modulations]
        if name not in names:
            raise ValueError(f"modulation {name!r} of {self.name}: expected one of {', '.join(names)}")
        return names.index(name)


def _opposed_sines(angle: Array, index: Array) -> Array:
    wave = index * np.sin(angle)
    return np.stack([wave, -wave], axis=-1)


def _one_leg_at_line_frequency(angle: Array, index: Array) -> Array:
    sine = np.sin(angle)
    polarity = np.where(sine >= 0, 1.0, -1.0)
    fast, slow = np.broadcast_arrays(2.0 * index * sine - polarity, -polarity)
    return np.stack([fast, slow], axis=-1)


def _three_sines(angle: Array, index: Array) -> Array:
    shifts = np.array([0.0, -2.0, 2.0]) * np.pi / 3.0
    return index[..., None] * np.sin(angle[..., None] + shifts)


def _third_harmonic(angle: Array, index: Array) -> Array:
    angle, index = np.broadcast_arrays(angle, index)
    return _three_sines(angle, index) + (index * np.sin(3.0 * angle) / 6.0)[..., None]


def _centred_space_vector(angle: Array, index: Array) -> Array:
    sines = _three_sines(*np.broadcast_arrays(angle, index))
    return sines - 0.5 * (sines.max(-1) + sines.min(-1))[..., None]


def _clamped_at_voltage_peak(angle: Array, index: Array) -> Array:
    angle, index = np.broadcast_arrays(angle, index)
    sines = _three_sines(angle, index)
    order = _three_sines(angle, np.ones_like(index))
    top, bottom = order.max(-1), order.min(-1)
    zero = np.where(top >= -bottom, 1.0 - index * top, -1.0 - index * bottom)
    return sines + zero[..., None]


def _clamped_at_current_peak(angle: Array, index: Array, displacement: float = 0.0) -> Array:
    """The clamp follows the current's peak as far as 30 degrees from the voltage's, where its phase still
    leads; a current that brakes peaks against the voltage.
    """
    behind = displacement - np.pi * np.round(displacement / np.pi)
    angle, index = np.broadcast_arrays(angle, index)
    sines = _three_sines(angle, index)
    order = _three_sines(angle - np.clip(behind, -np.pi / 6.0, np.pi / 6.0), np.ones_like(index))
    chosen = np.abs(order).argmax(-1)[..., None]
    rail = np.sign(np.take_along_axis(order, chosen, -1))
    references = sines + (rail - np.take_along_axis(sines, chosen, -1))
    np.put_along_axis(references, chosen, rail, -1)  # free of rounding: a clamped leg does not switch
    return references


def _polarity_of_sine(angle: Array, index: Array) -> Array:
    sine = np.sin(np.broadcast_arrays(angle, index)[0])
    return np.stack([sine, -sine], axis=-1)


def _polarity_of_three_sines(angle: Array, index: Array) -> Array:
    return _three_sines(np.asarray(angle), np.ones_like(np.broadcast_arrays(angle, index)[1]))


def _one_sine(angle: Array, index: Array) -> Array:
    return (index * np.sin(angle))[..., None]


SQUARE_INDEX = 4.0 / np.pi
QUASI_SQUARE = "quasi-square wave"

FULL_BRIDGE = Bridge(
    name="single-phase full bridge",
    phases=1,
    voltage_weights=(1.0, -1.0),
    modelled_legs=(0, 1),
    leg_copies=1,
    current_sign=(1, -1),
    index_base=1.0,
    slow_order=2,
    modulations=(
        Modulation("bipolar", SINE_LIMIT, _opposed_sines, (1, -1), (1, 1)),
        Modulation("unipolar", SINE_LIMIT, _opposed_sines, (1, 1), (1, 1)),
        Modulation("one leg at line frequency", SINE_LIMIT, _one_leg_at_line_frequency, (1, 1), (1, 0)),
    ),
    further=(
        Modulation("square wave", SQUARE_INDEX, _polarity_of_sine, (1, 1), (0, 0)),
        Modulation(QUASI_SQUARE, SQUARE_INDEX, _polarity_of_sine, (1, 1), (0, 0)),
    ),
)
SIX_SWITCH_BRIDGE = Bridge(
    name="three-phase six-switch bridge",
    phases=3,
    voltage_weights=(2.0 / 3.0, -1.0 / 3.0, -1.0 / 3.0),
    modelled_legs=(0,),
    leg_copies=3,
    current_sign=(1,),
    index_base=0.5,
    modulations=(
        Modulation("sine-triangle", SINE_LIMIT, _three_sines, (1, 1, 1), (1, 1, 1)),
        Modulation("third harmonic one sixth", INJECTION_LIMIT, _third_harmonic, (1, 1, 1), (1, 1, 1)),
        Modulation("centred space vector", INJECTION_LIMIT, _centred_space_vector, (1, 1, 1), (1, 1, 1)),
        Modulation(
            "discontinuous clamped at voltage peak",
            INJECTION_LIMIT,
            _clamped_at_voltage_peak,
            (1, 1, 1),
            (1, 1, 1),
        ),
        Modulation(
            "discontinuous following the current",
            INJECTION_LIMIT,
            _clamped_at_current_peak,
            (1, 1, 1),
            (1, 1, 1),
            follows_current=True,
        ),
    ),
    further=(Modulation("six-step", SQUARE_INDEX, _polarity_of_three_sines, (1, 1, 1), (0, 0, 0)),),
)
THREE_LEVEL_HALF_BRIDGE = Bridge(
    name="single-phase three-level half bridge",
    phases=1,
    voltage_weights=(1.0,),
    modelled_legs=(0,),
    leg_copies=1,
    current_sign=(1,),
    index_base=0.5,
    modulations=(Modulation("phase disposition", SINE_LIMIT, _one_sine, (1,), (1,)),),
    levels=3,
    leg_type="",
    slow_order=1,
)
THREE_LEVEL_FULL_BRIDGE = Bridge(
    name="single-phase three-level full bridge",
    phases=1,
    voltage_weights=(1.0, -1.0),
    modelled_legs=(0,),
    leg_copies=2,
    current_sign=(1,),
    index_base=1.0,
    modulations=(Modulation("phase disposition", SINE_LIMIT, _opposed_sines, (1, 1), (1, 1)),),
    levels=3,
    leg_type="",
    slow_order=2,
)
THREE_LEVEL_BRIDGE = Bridge(
    name="three-phase three-level bridge",
    phases=3,
    voltage_weights=(2.0 / 3.0, -1.0 / 3.0, -1.0 / 3.0),
    modelled_legs=(0,),
    leg_copies=3,
    current_sign=(1,),
    index_base=0.5,
    modulations=(
        Modulation("phase disposition", SINE_LIMIT, _three_sines, (1, 1, 1), (1, 1, 1)),
        Modulation(
            "phase disposition with common-mode injection",
            INJECTION_LIMIT,
            _centred_space_vector,
            (1, 1, 1),
            (1, 1, 1),
        ),
    ),
    levels=3,
    leg_type="",
    slow_order=3,
)
_THREE_LEVEL = {
    THREE_LEVEL_HALF_BRIDGE: "single-phase half bridge",
    THREE_LEVEL_FULL_BRIDGE: "single-phase full bridge",
    THREE_LEVEL_BRIDGE: "three-phase bridge",
}
BRIDGES = {FULL_BRIDGE.name: FULL_BRIDGE, SIX_SWITCH_BRIDGE.name: SIX_SWITCH_BRIDGE} | {
    f"{name}, {leg_type}": replace(bridge, name=f"{name}, {leg_type}", leg_type=leg_type)
    for bridge, name in _THREE_LEVEL.items()
    for leg_type in (NEUTRAL_POINT_CLAMPED, T_TYPE)
}
"""Bridges that a study can name."""

ALL_BRIDGES = BRIDGES | {bridge.name: bridge for bridge in _THREE_LEVEL}
"""All bridges whose waveforms `line_period` evaluates; three-level ones also without a leg type."""
