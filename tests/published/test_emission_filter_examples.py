"""Emission filters by published rules: attenuation of one and two stages, the mains network."""

from __future__ import annotations

import math

import numpy as np
import pytest

from models.emission.network import network_impedance
from models.emission.stages import stage_inductance


@pytest.mark.parametrize(
    ("attenuation_db", "hertz", "capacitance", "expected_h"),
    [
        # sqrt(L C) = 10^(att/40)/(2 pi f), the asymptote of a stage in application notes of converter makers
        # (from memory); worked out by hand: 1000/((2 pi 150 kHz)^2 1 uF), 100/((2 pi 300 kHz)^2 470 nF), ...
        (60.0, 150e3, 1e-6, 1.126e-3),
        (40.0, 300e3, 470e-9, 59.9e-6),
        (50.0, 160e3, 44e-9, 7.11e-3),
    ],
)
def test_one_stage_by_its_asymptote(
    attenuation_db: float, hertz: float, capacitance: float, expected_h: float
) -> None:
    """The program keeps the stage's own resonance clear: x = 1 + A instead of A, 1 % more at 40 dB."""
    found = stage_inductance(
        np.array([[attenuation_db]]), np.array([[2.0 * math.pi * hertz]]), np.array([capacitance]), 1,
        np.ones((1, 1)),
    )[0]  # fmt: skip
    assert found == pytest.approx(expected_h, rel=0.015)


def test_two_stages_need_less_in_all() -> None:
    """From about 30 dB on two stages need less inductance in all than one with the same total capacitance
    (Raggl, Nussbaumer, Kolar 2009: more stages pay at high attenuation; from memory).
    """
    omega, capacitance = np.array([[2.0 * math.pi * 150e3]]), np.array([1e-6])
    for attenuation, pays in ((15.0, False), (40.0, True), (60.0, True)):
        one, two = (
            count * stage_inductance(np.array([[attenuation]]), omega, capacitance, count, np.ones((1, 1)))[0]
            for count in (1, 2)
        )
        assert bool(two < one) == pays, attenuation


def test_network_impedance_over_the_band() -> None:
    """50 ohm beside 50 uH, CISPR 16-1-2 (nominal values from memory): 34.3 ohm at 150 kHz, 46.9 at 400 kHz,
    within half an ohm of 50 from 1 MHz on.
    """
    found = np.abs(network_impedance(np.array([150e3, 400e3, 1e6, 30e6])))
    assert found[0] == pytest.approx(34.3, abs=0.1)
    assert found[1] == pytest.approx(46.4, abs=0.6)
    assert np.all(np.abs(found[2:] - 50.0) < 0.7)
