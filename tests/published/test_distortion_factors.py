"""Harmonic distortion factors of three-phase modulation over the modulation index.

Source: Holmes & Lipo, Pulse Width Modulation for Power Converters (2003), ch. 5, and Hava, Kerkman, Lipo
(1999): closed forms of the mean square harmonic flux (from memory; the four polynomials agree with the
quadrature of the switching periods to 1e-4, which four wrong memories would not). Mean square of the ripple
current over (V_dc/(L f_s))^2 is the factor over 576.
"""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
import pytest

from models.waveforms.bridges import SIX_SWITCH_BRIDGE
from models.waveforms.operating_waveforms import operating_waveforms
from models.waveforms.tables import waveform_tables

PI, ROOT3 = np.pi, np.sqrt(3.0)
FACTORS: dict[str, Callable[[float], float]] = {
    "sine-triangle": lambda m: 1.5 * m**2 - 4 * ROOT3 / PI * m**3 + 9 / 8 * m**4,
    "third harmonic one sixth": lambda m: 1.5 * m**2 - 4 * ROOT3 / PI * m**3 + m**4,
    "centred space vector": lambda m: (
        1.5 * m**2 - 4 * ROOT3 / PI * m**3 + (27 / 16 - 81 * ROOT3 / (64 * PI)) * m**4
    ),
    "discontinuous clamped at voltage peak": lambda m: (
        6 * m**2 - (45 / (2 * PI) + 4 * ROOT3 / PI) * m**3 + (27 / 8 + 27 * ROOT3 / (32 * PI)) * m**4
    ),
}


@pytest.mark.parametrize("scheme", FACTORS)
def test_ripple_of_the_tables(scheme: str) -> None:
    tables = waveform_tables(SIX_SWITCH_BRIDGE.name)
    place = SIX_SWITCH_BRIDGE.modulation_index(scheme)
    for index in np.linspace(0.1, SIX_SWITCH_BRIDGE.modulations[place].linear_limit, 12):
        row, weight = tables.position(np.array([index]))
        found = tables.read(tables.ripple_mean_square, np.array([place]), row, weight)[0]
        assert found == pytest.approx(FACTORS[scheme](index) / 576.0, rel=3e-3), index


@pytest.mark.parametrize("scheme", FACTORS)
@pytest.mark.parametrize("index", [0.3, 0.6, 0.9])
def test_ripple_of_the_exact_line_period(scheme: str, index: float) -> None:
    """At 501 pulses, a multiple of three."""
    found = operating_waveforms(
        bridge=SIX_SWITCH_BRIDGE.name, modulation=scheme, modulation_index=index, displacement=0.2,
        dc_voltage=700.0, inductance=1e-3, switching_frequency=501 * 50.0, line_frequency=50.0, current=10.0,
    )  # fmt: skip
    unit = 700.0 / (1e-3 * 501 * 50.0)
    assert float(found.ripple_rms) == pytest.approx(unit * np.sqrt(FACTORS[scheme](index) / 576.0), rel=5e-3)


def test_which_scheme_has_least_ripple() -> None:
    """At equal carrier frequency space vector lies below sine-triangle everywhere, clamping above; with a
    carrier half as fast again clamping wins at high indexes (published comparison).
    """
    tables = waveform_tables(SIX_SWITCH_BRIDGE.name)

    def ripple(scheme: str, index: float) -> float:
        place = np.array([SIX_SWITCH_BRIDGE.modulation_index(scheme)])
        return float(tables.read(tables.ripple_mean_square, place, *tables.position(np.array([index])))[0])

    clamped = "discontinuous clamped at voltage peak"
    for index in (0.2, 0.5, 0.8, 1.0):
        assert ripple("centred space vector", index) < ripple("sine-triangle", index)
        assert ripple(clamped, index) > ripple("sine-triangle", index)
    assert ripple(clamped, 0.6) / 1.5**2 > ripple("centred space vector", 0.6)
    assert ripple(clamped, 1.1) / 1.5**2 < ripple("centred space vector", 1.1)
