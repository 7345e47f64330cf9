"""The artificial mains network and chains of filter elements before it."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Complex = NDArray[Any]
NETWORK_OHM, NETWORK_H = 50.0, 50e-6
SERIES, SHUNT = "series", "shunt"


def network_impedance(frequency_hz: Array) -> Complex:
    """Impedance of one line of the artificial mains network, 50 ohm beside 50 uH [ohm].

    Source: CISPR 16-1-2 (its 5 ohm in series with the inductance left out, as is common practice).
    """
    reactance = 2j * np.pi * frequency_hz * NETWORK_H
    return NETWORK_OHM * reactance / (NETWORK_OHM + reactance)


def choke_impedance(inductance: Array, capacitance: float, frequency_hz: Array) -> Complex:
    """Impedance of a choke with the capacitance of its winding beside it [ohm].

    A loss of LOSS_SHARE of the reactance in series keeps the self-resonance finite.

    Args:
        inductance: [H]; capacitance: of the winding [F]; frequency_hz: [Hz].
    """
    omega = 2.0 * np.pi * frequency_hz
    choke = (1j + LOSS_SHARE) * omega * inductance
    return choke / (1.0 + 1j * omega * capacitance * choke)


LOSS_SHARE = 0.02  # judgement: quality factor of 50 of chokes in the range of 150 kHz to some MHz


def load_share(chain: Sequence[tuple[str, Complex]], load: Complex) -> Array:
    """Voltage at the load over the voltage of the source, magnitude [-].

    Args:
        chain: (SERIES, impedance [ohm]) or (SHUNT, admittance [S]) from the source to the load.
        load: impedance of the load [ohm].
    """
    voltage, current = np.ones_like(load), 1.0 / load
    for kind, value in reversed(chain):
        if kind == SERIES:
            voltage = voltage + current * value
        else:
            current = current + voltage * value
    return np.asarray(1.0 / np.abs(voltage))
