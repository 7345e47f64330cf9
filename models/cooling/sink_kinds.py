"""The curves of all kinds of heatsinks at one place and air, kept for the last ones asked."""

from __future__ import annotations

from functools import lru_cache

from models.cooling.cold_plate import sink_curve_cold_plate
from models.cooling.fan import Fan
from models.cooling.forced_curve import sink_curve_forced
from models.cooling.natural_curve import sink_curve_natural
from models.cooling.several_sinks import shared_by_several
from models.cooling.sink_curve import SinkCurve


@lru_cache(maxsize=16)
def sink_kinds(
    ambient_c: float, altitude_m: float, fans: tuple[Fan, ...], price_per_kg: float
) -> tuple[SinkCurve, SinkCurve, SinkCurve]:
    """Least-volume heatsinks over thermal resistance, in the order of COOLING.

    Args:
        ambient_c: [degC]; altitude_m: [m].
        fans: to choose from.
        price_per_kg: of heatsinks [currency/kg].
    """
    natural = sink_curve_natural(ambient_c=ambient_c, altitude_m=altitude_m, price_per_kg=price_per_kg)
    forced = sink_curve_forced(
        fans=fans, ambient_c=ambient_c, altitude_m=altitude_m, price_per_kg=price_per_kg
    )
    return natural, shared_by_several(forced), sink_curve_cold_plate()
