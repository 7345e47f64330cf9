"""Conducted emission of designs over the whole band: levels without and with the emission filter."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields

import numpy as np
from numpy.typing import NDArray

from models.designs import Designs
from models.emission.emission_filter import BAND_START_HZ
from models.inverter import Inverter

Array = NDArray[np.float64]
BAND_END_HZ = 30e6
CONSECUTIVE = 8  # carrier groups from 150 kHz on that are all shown
SPREAD = 14  # groups shown from there to 30 MHz, evenly over the logarithm


@dataclass(frozen=True)
class EmissionLines:
    """Emission of designs (n, k), worst-case quasi-peak.

    Attributes:
        frequency: [Hz].
        bare, left: greater one of differential and common mode, without and with the emission filter [dB over
            1 uV].
        limit: quasi-peak limit [dB over 1 uV].
    """

    frequency: Array
    bare: Array
    left: Array
    limit: Array


def emission_lines(inverter: Inverter, designs: Designs) -> EmissionLines | None:
    """Levels of designs from 150 kHz to 30 MHz; None where the study leaves emission out."""
    spec = inverter.specification
    if not spec.emission_limit:
        return None
    found = inverter.emission_at(designs, shown_multiples(designs.switching_frequency_hz))
    return EmissionLines(
        frequency=found.frequency,
        bare=np.maximum(found.differential, found.common),
        left=np.maximum(found.differential_left, found.common_left),
        limit=found.limit + spec.rules.emission_margin_db,
    )


def shown_multiples(frequency: Array) -> NDArray[np.int64]:
    """Carrier multiples to show for switching frequencies (n,) [Hz]: (n, k) [-]."""
    first = np.ceil(BAND_START_HZ / frequency - 1e-9)
    last = np.maximum(np.floor(BAND_END_HZ / frequency), first + CONSECUTIVE)
    start = first + CONSECUTIVE - 1.0
    share = np.arange(1, SPREAD + 1) / SPREAD
    spread = np.floor(start[:, None] * (last / start)[:, None] ** share + 1e-9)
    near = first[:, None] + np.arange(CONSECUTIVE)
    return np.concatenate([near, spread], axis=-1).astype(np.int64)


def joined_lines(parts: Sequence[EmissionLines | None]) -> EmissionLines | None:
    """Lines of several groups of designs together; None where there are none."""
    there = [part for part in parts if part is not None]
    if not there:
        return None
    names = [entry.name for entry in fields(EmissionLines)]
    return EmissionLines(**{name: np.concatenate([getattr(part, name) for part in there]) for name in names})
