"""Cooling: air, convection, radiation, fans, plate-fin heatsinks, cold plates, and least-volume curves of
them.
"""

from models.cooling.air import Air, air_at, pressure_at_altitude
from models.cooling.cold_plate import ColdPlate, auxiliary_power, cold_plate, sink_curve_cold_plate
from models.cooling.extrusion import Extrusion, FanMounting, HeatEntry
from models.cooling.fan import Fan
from models.cooling.forced_curve import sink_curve_forced
from models.cooling.natural_curve import sink_curve_natural
from models.cooling.plate_fin import PlateFin, forced_conductance, natural_conductance, pressure_drop
from models.cooling.several_sinks import shared_by_several
from models.cooling.sink_curve import SinkCurve, SinkPoint
from models.cooling.sink_kinds import sink_kinds

__all__ = [
    "Air",
    "ColdPlate",
    "Extrusion",
    "Fan",
    "FanMounting",
    "HeatEntry",
    "PlateFin",
    "SinkCurve",
    "SinkPoint",
    "air_at",
    "auxiliary_power",
    "cold_plate",
    "forced_conductance",
    "natural_conductance",
    "pressure_at_altitude",
    "pressure_drop",
    "shared_by_several",
    "sink_curve_cold_plate",
    "sink_curve_forced",
    "sink_curve_natural",
    "sink_kinds",
]
