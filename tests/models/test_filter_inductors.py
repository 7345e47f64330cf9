"""What the two filter inductors are told to carry, read off the duty that reaches the inductor model."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from model_fixtures import Draw, Spaces

import models.filter_inductors as filter_inductors
from models.designs import Designs
from models.evaluation import Evaluation
from models.magnetics.build import Build
from models.magnetics.core_loss import igse_factor, steinmetz_loss
from models.magnetics.inductor import InductorDuty, InductorMaking, inductor

sys.path.insert(0, str(Path(__file__).parent / "waveforms"))
from closed_loops import split_loss
from oracle import SCHEMES, LinePeriod

SPACE = ("rooftop_5kw", "SiC MOSFET")
Seen = tuple[Designs, Evaluation, list[tuple[Build, InductorDuty]]]


@pytest.fixture
def seen(spaces: Spaces, draw: Draw, monkeypatch: pytest.MonkeyPatch) -> Seen:
    """Random candidates, their evaluation, and build and duty of either inductor, bridge side first."""
    calls: list[tuple[Build, InductorDuty]] = []

    def recording(catalog: Any, built: Build, duty: InductorDuty, making: InductorMaking) -> Any:
        calls.append((built, duty))
        return inductor(catalog, built, duty, making)

    monkeypatch.setattr(filter_inductors, "inductor", recording)
    designs = draw(spaces[SPACE], 40, 12)
    return designs, spaces[SPACE].inverter.evaluate(designs), calls


def test_bridge_side_ripple_by_carrier_groups(seen: Seen, spaces: Spaces) -> None:
    """Groups stand at multiples of the switching frequency, those beyond the sixth together, and have the
    ripple's mean square.
    """
    designs, found, calls = seen
    _, duty = calls[0]
    multiples = duty.group_frequency / designs.switching_frequency_hz[:, None]
    assert multiples == pytest.approx(np.broadcast_to([*np.arange(1.0, 7.0), 11.0], multiples.shape))
    inverter = spaces[SPACE].inverter
    names = [scheme.name for scheme in inverter.bridge.modulations]
    spec = inverter.specification
    for row in range(8):
        name = names[designs.modulation[row]]
        unit = spec.dc_voltage_v / (designs.inverter_inductance_h[row] * designs.switching_frequency_hz[row])
        exact = LinePeriod(SCHEMES[name], found.details["modulation_index_rated"][row], 121, ripple_unit=unit)
        carried = duty.group_mean_square[row, found.rated].sum()
        assert carried == pytest.approx(exact.ripple_mean_square, rel=0.03)


def test_bridge_side_core_loss_of_the_ripple(seen: Seen, spaces: Spaces) -> None:
    """Improved Steinmetz over the oracle's loops, in teslas, with the constants of the ripple's own band."""
    designs, found, calls = seen
    built, duty = calls[0]
    inverter = spaces[SPACE].inverter
    names = [scheme.name for scheme in inverter.bridge.modulations]
    for row in range(8):
        material = inverter.catalog.core_materials[int(designs.inverter_inductor.material[row])]
        name = names[designs.modulation[row]]
        frequency = designs.switching_frequency_hz[row]
        ripple_hz = frequency * (2.0 if name == "unipolar" else 1.0)
        if any(0.8 * top < ripple_hz < 2.0 * top for top in material.band_max_hz[:-1]):
            continue  # between two bands the law is a mean of theirs
        band = min(sum(ripple_hz > top for top in material.band_max_hz[:-1]), len(material.band_max_hz) - 1)
        k, alpha, beta = (getattr(material, f"steinmetz_{part}")[band] for part in ("k", "alpha", "beta"))
        index = found.details["modulation_index_rated"][row]
        loops = LinePeriod(SCHEMES[name], min(index, 1.0), 121).period_loops()
        shape = np.mean([split_loss(*loop, alpha, beta) for loop in loops])
        slope = inverter.specification.dc_voltage_v / (built.turns[row] * built.area[row])
        expected = float(igse_factor(*map(np.array, (k, alpha, beta)))) * shape
        expected *= slope**beta * frequency ** (alpha - beta)
        assert duty.switched_loss_density[row, found.rated] == pytest.approx(expected, rel=0.03)


def test_bridge_side_currents(seen: Seen, spaces: Spaces) -> None:
    """Rated line current plus the capacitor's; greatest current with half the greatest ripple on top."""
    _, found, calls = seen
    _, duty = calls[0]
    spec = spaces[SPACE].inverter.specification
    assert duty.line_current[:, found.rated] == pytest.approx(spec.rated_current_a, rel=0.02)
    line = np.sqrt(2.0) * spec.apparent_power_va / spec.phase_voltage_min_v
    expected = line + 0.5 * found.details["ripple_peak_to_peak_a"]
    # leading power adds the filter capacitor's current, up to 8 % of the rated one, partly in phase
    assert np.all(duty.peak_current >= expected * 0.999)
    assert np.all(duty.peak_current <= expected * 1.05)


def test_grid_side_carries_what_the_distortion_says(seen: Seen, spaces: Spaces) -> None:
    designs, found, calls = seen
    built, duty = calls[1]
    inverter = spaces[SPACE].inverter
    ripple = (
        np.sqrt(found.distortion.total**2 - found.distortion.low**2) * inverter.specification.rated_current_a
    )
    assert duty.group_mean_square[:, 0, 0] == pytest.approx(ripple**2)
    assert duty.line_current[:, found.rated] == pytest.approx(inverter.specification.rated_current_a)
    flux = designs.grid_inductance_h * np.sqrt(2.0) * ripple / (built.turns * built.area)
    for row in range(8):
        material = inverter.catalog.core_materials[int(designs.grid_inductor.material[row])]
        frequency = np.array(duty.group_frequency[row, 0])
        laws = zip(material.steinmetz_k, material.steinmetz_alpha, material.steinmetz_beta, strict=True)
        losses = [float(steinmetz_loss(*map(np.array, law), frequency, flux[row])) for law in laws]
        # between two bands the loss lies between theirs
        assert min(losses) * (1.0 - 1e-6) <= duty.switched_loss_density[row, 0] <= max(losses) * (1.0 + 1e-6)


@pytest.mark.parametrize(("study", "phases"), [("rooftop_5kw", 1), ("depot_10kw_three_phase", 3)])
def test_one_inductor_per_phase_and_side(
    spaces: Spaces, draw: Draw, monkeypatch: pytest.MonkeyPatch, study: str, phases: int
) -> None:
    """Losses, volumes, masses and prices of a side are those of one inductor times the phases."""
    parts: list[Any] = []

    def recording(*arguments: Any) -> Any:
        parts.append(inductor(*arguments))
        return parts[-1]

    monkeypatch.setattr(filter_inductors, "inductor", recording)
    space = spaces[study, "SiC MOSFET"]
    found = space.inverter.evaluate(draw(space, 10, 13))
    loads = len(found.load_level)
    for side, part in zip(("inverter_inductor", "grid_inductor"), parts, strict=True):
        assert found.losses[f"{side}_winding"] == pytest.approx(phases * part.winding_loss[:, :loads])
        assert found.losses[f"{side}_core"] == pytest.approx(phases * part.core_loss[:, :loads])
        assert found.volumes[side] == pytest.approx(phases * part.volume)
        assert found.masses[side] == pytest.approx(phases * part.mass)
        assert found.prices[side] == pytest.approx(phases * part.price)
