"""Concepts: what a study compares, a device class on a bridge each; every concept gets a population and a
front of its own.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass


@dataclass(frozen=True)
class Concept:
    """A bridge with a device class.

    Attributes:
        bridge, device_class: names.
        name: what the concept is called in tables and charts; the device class alone where the study has one
            bridge.
        initials: what its designs are called by.
    """

    bridge: str
    device_class: str
    name: str
    initials: str


SHORT_NAMES = {
    "silicon IGBT": "IGBT",
    "superjunction MOSFET": "SJ",
    "low-voltage MOSFET": "LV",
    "SiC MOSFET": "SIC",
    "GaN HEMT": "GAN",
}
"""What the designs of a class are called by; other classes by their own name."""


def concepts(bridges: Sequence[str], device_classes: Sequence[str]) -> tuple[Concept, ...]:
    """All pairs of bridges and device classes: bridge by bridge, in the order of the classes."""
    return tuple(
        Concept(
            bridge,
            device_class,
            device_class if len(bridges) == 1 else f"{device_class}, {_leg_words(bridge)}",
            SHORT_NAMES.get(device_class, device_class.replace(" ", "")) + (str(place) if place > 1 else ""),
        )
        for place, bridge in enumerate(bridges, start=1)
        for device_class in device_classes
    )


def _leg_words(bridge: str) -> str:
    """A bridge's name without what all bridges of a study share."""
    for phases in ("single-phase ", "three-phase "):
        bridge = bridge.removeprefix(phases)
    return bridge.removeprefix("bridge, ")
