"""What heats the dies of one position, each part apart, and the laws of their losses over temperature."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np
from numpy.typing import NDArray

from models.semiconductors.conduction import HeatLaw
from models.semiconductors.switching import Dies
from models.uncertainty import NOMINAL, ModelFactors

Array = NDArray[np.float64]
NO_HEAT = HeatLaw(*(np.zeros((1, 1)) for _ in range(4)))


@dataclass(frozen=True)
class PositionHeat:
    """Losses of one position, per modelled leg or role (l, n, p), each part apart.

    Attributes:
        forward, channel: conduction of switch current and, of a shared die, of reverse current, in the switch
            die.
        freewheel: conduction of a diode die of its own.
        switching, recovery: laws without resistive part.
        output_charge, dead_time: losses that do not depend on temperature, in the switch die [W].
        gate: power spent in the drivers [W].
        shared: true where one die carries both directions.
        resistances: switch junction to case, diode junction to case, case to heatsink [K/W].
        limit_c: greatest junction temperature [degC].
    """

    forward: HeatLaw
    channel: HeatLaw
    freewheel: HeatLaw
    switching: HeatLaw
    recovery: HeatLaw
    output_charge: Array
    dead_time: Array
    gate: Array
    shared: NDArray[np.bool_]
    resistances: tuple[Array, Array, Array]
    limit_c: Array

    def scaled(self, factors: ModelFactors) -> PositionHeat:
        """Every part times the factor on its phenomenon."""
        if factors is NOMINAL:  # of a search, which this would cost two per cent
            return self
        drop = factors.on_state[:, None]
        junction_case, diode_case, case_sink = self.resistances
        thermal = factors.junction_sink_resistance[:, None]
        return replace(
            self,
            forward=self.forward.scaled(drop),
            channel=self.channel.scaled(drop),
            freewheel=self.freewheel.scaled(drop),
            switching=self.switching.scaled(factors.switching_energy[:, None]),
            recovery=self.recovery.scaled(factors.recovery_energy[:, None]),
            output_charge=self.output_charge * factors.output_charge[:, None],
            dead_time=self.dead_time * drop,
            resistances=(junction_case * thermal, diode_case * thermal, case_sink * thermal),
        )

    def dies(self) -> tuple[HeatLaw, HeatLaw]:
        """All of it as one law for the switch die and one for the diode die."""
        together = self.shared.astype(float)
        apart = 1.0 - together
        fixed = self.output_charge + self.dead_time
        switch = HeatLaw(
            self.forward.constant + self.switching.constant + fixed + together * self.recovery.constant,
            self.forward.linear + self.switching.linear + together * self.recovery.linear,
            self.forward.resistive + together * self.channel.resistive,
            self.forward.growth,
        )
        diode = HeatLaw(
            apart * (self.freewheel.constant + self.recovery.constant),
            apart * (self.freewheel.linear + self.recovery.linear),
            apart * self.freewheel.resistive,
            self.freewheel.growth,
        )
        return switch, diode

    def conduction(self, switch_c: Array, diode_c: Array) -> Array:
        """Conduction loss of the position [W]."""
        reverse = np.where(self.shared, self.channel.at(switch_c), self.freewheel.at(diode_c))
        return self.forward.at(switch_c) + reverse


def stacked(positions: Sequence[PositionHeat]) -> PositionHeat:
    """Positions of (n, p) on a new first axis."""
    return PositionHeat(**{entry.name: _stacked([getattr(one, entry.name) for one in positions])
                           for entry in fields(PositionHeat)})  # fmt: skip


def _stacked(values: list[Any]) -> Any:
    first = values[0]
    if isinstance(first, HeatLaw):
        rows = [list(vars(one).values()) for one in values]
        return HeatLaw(*(_stacked(list(parts)) for parts in zip(*rows, strict=True)))
    if isinstance(first, tuple):
        return tuple(_stacked(list(parts)) for parts in zip(*values, strict=True))
    return np.stack(np.broadcast_arrays(*values))


def energy_law(device: Any, *parts: tuple[Array, Array]) -> HeatLaw:
    """Switching losses E_hot [1 - k (T_hot - T)] as one law of temperature.

    Args:
        device: catalogue fields.
        parts: hot loss [W] and temperature coefficient k [1/K] of each.
    """
    linear = np.sum([hot * coefficient for hot, coefficient in parts], axis=0)
    constant = np.sum([hot for hot, _ in parts], axis=0) - device.energy_hot_c * linear
    return HeatLaw(constant, linear, np.zeros((1, 1)), np.zeros((1, 1)))


def switching_law(dies: Dies, turn_on_hot: Array, turn_off_hot: Array) -> HeatLaw:
    """Loss of turning on and off over temperature, from the losses at the hot reference temperature [W]."""
    device = dies.device
    return energy_law(
        device,
        (turn_on_hot, device.turn_on_temperature_coefficient_per_k),
        (turn_off_hot, device.turn_off_temperature_coefficient_per_k),
    )


def recovery_law(dies: Dies, recovery_hot: Array) -> HeatLaw:
    """Recovery loss of a diode over temperature, from the loss at the hot reference temperature [W]."""
    return energy_law(dies.device, (recovery_hot, dies.device.recovery_temperature_coefficient_per_k))
