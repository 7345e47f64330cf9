"""Forced parallel-plate channels over a grid, against the general heat-transfer library ht: its plate
boundary layer and its developed duct bound the channel's Nusselt number from below, and meet it at both
ends; its effectiveness turns that into the heat a whole sink gives off.
"""

from __future__ import annotations

import ht
import numpy as np
import pytest

from models.cooling import PlateFin, air_at, forced_conductance
from models.cooling.forced_convection import hydraulic_diameter
from models.cooling.plate_fin import duct_nusselt

AIR = air_at(np.array(330.0), np.array(101325.0))
PRANDTL = float(AIR.prandtl)
GAPS = (1.5e-3, 2.5e-3, 4e-3)
LENGTHS = (0.04, 0.1, 0.3)
SPEEDS = (1.0, 2.0, 4.0, 8.0)
LAMINAR = 2300.0
GRID = [
    (gap, length, speed)
    for gap in GAPS
    for length in LENGTHS
    for speed in SPEEDS
    if 2.0 * gap * speed / AIR.kinematic_viscosity < LAMINAR
]
DEVELOPED = 7.541  # parallel plates, uniform wall temperature (Shah & London 1978; any text)


def plates(gap: float, length: float) -> PlateFin:
    """Deep, thin fins: close to parallel plates."""
    values = {
        "length": length,
        "fin_height": 400.0 * gap,
        "fin_thickness": 1e-3,
        "gap": gap,
        "fin_count": 21.0,
    }
    return PlateFin(
        **{name: np.array(value) for name, value in values.items()}, base_thickness=np.array(8e-3)
    )


def numbers(gap: float, length: float, speed: float) -> tuple[float, float, float]:
    """Nusselt number of ours, of ht's plate, and of the developed channel, all on the hydraulic diameter."""
    sink = plates(gap, length)
    diameter = float(hydraulic_diameter(sink.gap, sink.fin_height))
    ours = float(duct_nusselt(sink, np.array(speed * diameter / AIR.kinematic_viscosity), AIR.prandtl))
    along = speed * length / float(AIR.kinematic_viscosity)
    plate = ht.Nu_horizontal_plate_laminar_Baehr(Re=along, Pr=PRANDTL) * diameter / length
    return ours, plate, DEVELOPED


@pytest.mark.parametrize(("gap", "length", "speed"), GRID)
def test_channel_between_plate_and_developed_flow(gap: float, length: float, speed: float) -> None:
    ours, plate, developed = numbers(gap, length, speed)
    least, both = max(plate, developed), np.hypot(plate, developed)
    assert 0.97 * least < ours < 1.3 * both


def test_short_channels_are_plates_and_long_ones_are_developed() -> None:
    ours, plate, _ = numbers(20e-3, 10e-3, 3.0)
    assert ours == pytest.approx(plate, rel=0.05)
    ours, _, developed = numbers(1.5e-3, 2.0, 1.0)
    assert ours == pytest.approx(developed, rel=0.05)


@pytest.mark.parametrize(("gap", "length", "speed"), GRID)
def test_whole_sink_by_the_effectiveness(gap: float, length: float, speed: float) -> None:
    """Fins of a perfect metal: heat over inlet difference = m cp effectiveness(NTU)."""
    sink = plates(gap, length)
    flow = speed * 20.0 * gap * float(sink.fin_height)
    found = float(forced_conductance(sink, np.array(flow), AIR, np.array(1e9)))
    ours, _, _ = numbers(gap, length, speed)
    coefficient = ours * float(AIR.conductivity) / float(hydraulic_diameter(sink.gap, sink.fin_height))
    walls = 20.0 * length * (2.0 * float(sink.fin_height) + gap)
    stream = flow * float(AIR.density) * float(AIR.heat_capacity)
    effectiveness = ht.effectiveness_from_NTU(NTU=coefficient * walls / stream, Cr=0.0, subtype="boiler")
    assert found == pytest.approx(stream * effectiveness, rel=1e-3)
