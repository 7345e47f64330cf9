"""Worked inductor designs of textbooks, within their own rounding. All numbers from memory."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.constants import mu_0

from models.magnetics.gap import fringing_factor, gap_for_inductance, gapped_inductance, powder_inductance
from models.magnetics.winding import copper_resistivity

NO_IRON = np.array(1e9)  # permeability of a core whose reluctance the example leaves out
ONE = np.array(1.0)


def test_flyback_inductor_by_the_core_geometry() -> None:
    """Erickson and Maksimovic, Fundamentals of Power Electronics, ch. 14, flyback example: EE30, 1.07 mH,
    1.5 A, 0.25 T, area 1.09 cm2 give 58.7 turns and a gap of 0.44 mm (no fringing).
    """
    inductance, peak, flux, area = 1.07e-3, 1.5, 0.25, 1.09e-4
    turns = inductance * peak / (flux * area)
    assert turns == pytest.approx(58.7, abs=0.5)
    gap = 0.44e-3
    plain = mu_0 * area * turns**2 / gap
    assert plain == pytest.approx(inductance, rel=0.012)  # half of the gap's last digit
    # with fringing the same inductance takes a longer gap: ours, of a core leg 1 cm wide
    longer, _ = gap_for_inductance(
        *(np.array(value) for value in (turns, inductance, area, 58e-3)), NO_IRON, np.array(20e-3), ONE, 1.0
    )
    assert 1.1 < float(longer) / gap < 1.5


class McLyman:
    """Transformer and Inductor Design Handbook, ch. 8, gapped inductor by the core geometry: 2.5 mH, 1.5 A
    dc, 0.2 A ripple; ETD39: 1.252 cm2, path 9.22 cm, window 2.84 cm high, turn 8.3 cm; wire 0.00653 cm2.
    """

    inductance, direct, area, path, window = 2.5e-3, 1.5, 1.252e-4, 9.22e-2, 2.84e-2
    turn, copper, permeability = 8.3e-2, 0.653e-6, 1500.0
    first_turns, gap, fringing, turns, resistance, loss = 161.0, 1.57e-3, 1.50, 130.0, 0.285, 0.641


def test_gap_and_fringing_of_the_gapped_inductor() -> None:
    """Gap of 0.157 cm for the first 161 turns, fringing factor 1.50, and with it 130 turns."""
    one = McLyman
    ideal = mu_0 * one.first_turns**2 * one.area / one.inductance - one.path / one.permeability
    assert ideal == pytest.approx(one.gap, rel=0.01)
    found = fringing_factor(np.array(one.gap), np.array(one.area), np.array(one.window))
    assert float(found) == pytest.approx(one.fringing, abs=0.005)
    reached = gapped_inductance(
        *(np.array(value) for value in (one.turns, one.gap, one.area, one.path)),
        NO_IRON,
        np.array(one.window),
        ONE,
    )
    assert float(reached) == pytest.approx(one.inductance, rel=0.02)  # 129 turns rounded up to 130


def test_copper_loss_of_the_gapped_inductor() -> None:
    """130 turns of 264 microohm/cm: 0.285 ohm, 0.641 W at 1.5 A."""
    one = McLyman
    resistance = float(copper_resistivity(np.array(20.0))) * one.turns * one.turn / one.copper
    assert resistance == pytest.approx(one.resistance, rel=0.01)
    assert resistance * one.direct**2 == pytest.approx(one.loss, rel=0.01)


def test_turns_of_the_powder_ring() -> None:
    """McLyman, ch. 9: 2.5 mH on an Mo-Ni-Fe ring of permeability 60, 1.32 cm2, 11.63 cm (86 mH for 1000
    turns): 170 turns.
    """
    found = powder_inductance(
        *(np.array(value) for value in (170.0, 0.0, 1.32e-4, 0.1163, 60.0, 7958.0, 2.627))
    )
    assert float(found) == pytest.approx(2.5e-3, rel=0.02)
    thousand = powder_inductance(
        *(np.array(value) for value in (1000.0, 0.0, 1.32e-4, 0.1163, 60.0, 7958.0, 2.627))
    )
    assert float(thousand) == pytest.approx(86e-3, rel=0.01)


def test_high_frequency_inductor_by_stored_energy() -> None:
    """Mohan, Undeland, Robbins, Power Electronics, ch. 30: 300 uH, 4 A rms sine at 100 kHz on a double E of
    leg 1 cm (1.5 cm2, window 1.4 cm2): 66 turns, 0.17 T, 0.64 mm2, 6.25 A/mm2, copper fill 0.3.
    """
    turns, flux, area, peak = 66.0, 0.17, 1.5e-4, 4.0 * np.sqrt(2.0)
    assert turns * flux * area / peak == pytest.approx(300e-6, rel=0.02)
    gap, sections = gap_for_inductance(
        *(np.array(value) for value in (turns, 300e-6, area, 77e-3)),
        NO_IRON,
        np.array(20e-3),
        ONE,
        0.8e-3,
    )
    # the flux of the peak current crosses all gaps, fringing included: N I = H_gap g over the spread area
    spread = fringing_factor(gap / sections, np.array(area), np.array(20e-3) / sections)
    ampere_turns = flux / (mu_0 * spread) * gap
    assert float(ampere_turns) == pytest.approx(turns * peak, rel=0.02)
    density = 4.0 / 0.64
    assert density == pytest.approx(6.25)
    assert turns * 0.64e-6 / 1.4e-4 == pytest.approx(0.3, abs=0.005)
