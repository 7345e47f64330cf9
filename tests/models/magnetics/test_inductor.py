"""One inductor evaluated: energy, flux, temperature balance, absent parts."""

from __future__ import annotations

from dataclasses import fields, replace

import numpy as np
import pytest

from models.catalog import Catalog
from models.magnetics.ac_resistance import resistance_ratio
from models.magnetics.build import Build, build
from models.magnetics.gap import gapped_inductance
from models.magnetics.inductor import (
    Inductor,
    InductorDuty,
    InductorMaking,
    dc_resistance,
    inductor,
    where_present,
)
from models.magnetics.sizing import core_ladder, fitting_families, size_inductor
from models.magnetics.two_nodes import Air
from models.magnetics.winding import copper_resistivity

COUNT = 200
POINTS = 3


@pytest.fixture(scope="module")
def built(catalog: Catalog) -> Build:
    """Random materials, conductors and sizes around one duty."""
    rng = np.random.default_rng(7)
    return build(
        catalog,
        size_inductor(
            catalog,
            core_ladder(catalog, fitting_families(catalog, 1)),
            rng.integers(0, len(catalog.core_materials), COUNT),
            rng.integers(0, len(catalog.conductors), COUNT),
            np.full(COUNT, 3e-4),
            np.full(COUNT, 32.0),
            np.full(COUNT, 21.0),
            rng.uniform(0.8, 6.0, COUNT),
            rng.uniform(0.3, 1.0, COUNT),
            rng.uniform(0.3, 1.0, COUNT),
            0.85,
            1.5e-3,
        ),
        1.5e-3,
    )


DUTY = InductorDuty(
    inductance=np.full(COUNT, 3e-4),
    peak_current=np.full(COUNT, 32.0),
    line_current=np.broadcast_to(np.array([5.0, 15.0, 21.0]), (COUNT, POINTS)),
    group_mean_square=np.full((COUNT, POINTS, 2), 1.5),
    group_frequency=np.broadcast_to(np.array([40e3, 80e3]), (COUNT, 2)),
    switched_loss_density=np.full((COUNT, POINTS), 3e4),
    line_frequency_hz=50.0,
    air=Air(50.0, 1.0, np.zeros(COUNT)),
)
MAKING = InductorMaking(labour=3.0, former_wall=1.5e-3, largest_gap_section=2e-3, gap_section_price=0.5)


@pytest.fixture(scope="module")
def found(catalog: Catalog, built: Build) -> Inductor:
    return inductor(catalog, built, DUTY, MAKING)


def test_everything_is_finite_and_positive(found: Inductor) -> None:
    for name, value in vars(found).items():
        assert np.isfinite(value).all(), name
        if name != "gap_share":  # negative where no gap is left to choose
            assert np.all(value >= 0.0), name


def test_flux_from_the_linkage(built: Build, found: Inductor) -> None:
    """N A B = L I: Faraday's law, however the core is made."""
    assert found.flux_density * built.turns * built.area == pytest.approx(DUTY.inductance * DUTY.peak_current)


def test_gap_gives_the_inductance(built: Build, found: Inductor) -> None:
    gapped = (built.material.kind == "gapped") & (found.gap > 0.0) & (found.gap_share < 0.3)
    assert gapped.sum() > 30
    back = gapped_inductance(
        built.turns, found.gap, built.area, built.path, built.material.initial_permeability,
        built.breadth * built.coils, np.maximum(found.gap_sections, 1.0),
    )  # fmt: skip
    assert back[gapped] == pytest.approx(DUTY.inductance[gapped], rel=5e-3)


def test_temperatures_are_in_balance_with_the_losses(
    catalog: Catalog, built: Build, monkeypatch: pytest.MonkeyPatch
) -> None:
    """Each node gives off its loss to the air and to the other node; winding loss at its own temperature.

    With the iteration carried to its end; how far its usual steps stay behind is the next test but one.
    """
    monkeypatch.setattr("models.magnetics.inductor.THERMAL_STEPS", 100)
    found = inductor(catalog, built, DUTY, MAKING)
    surface = 6.4 * built.box_volume[:, None] ** (2.0 / 3.0)
    share = built.winding_surface_share[:, None]
    way = built.clearance / 0.25 + 0.5e-3 / 0.029 + 0.5 * built.layers.height / 1.0
    between = (built.breadth * built.coils * built.inner_length / way)[:, None]

    def given_off(temperature: np.ndarray, area: np.ndarray) -> np.ndarray:
        rise, length = temperature - 50.0, np.cbrt(built.box_volume)[:, None]
        radiated = 0.85 * 5.670374e-8 * ((temperature + 273.15) ** 4 - 323.15**4)
        return area * (1.42 * (rise / length) ** 0.25 * rise + radiated)

    winding, core = found.winding_temperature, found.core_temperature
    across = between * (winding - core)
    below = (winding < 130.0) & (core < 130.0)
    assert below.sum() > 100
    own = given_off(winding, share * surface) + across
    assert own[below] == pytest.approx(found.winding_loss[below], rel=1e-3)
    own = given_off(core, (1.0 - share) * surface) - across
    assert own[below] == pytest.approx(found.core_loss[below], rel=1e-3)
    ratio = resistance_ratio(
        built, DUTY.group_frequency, copper_resistivity(np.array(100.0)), found.gap_sections
    )
    square = DUTY.line_current**2 + np.sum(DUTY.group_mean_square * ratio[:, None], axis=-1)
    cold, hot = (dc_resistance(built, at)[:, None] for at in (0.0, 100.0))
    expected = square * (cold + (hot - cold) * winding / 100.0)
    assert found.winding_loss[below] == pytest.approx(expected[below], rel=5e-3)


def test_core_loss_of_line_loop_and_ripple(built: Build, found: Inductor) -> None:
    """Major loop at the line current's peak flux, and the ripple's loss raised by that premagnetisation."""
    material = built.material
    flux = np.sqrt(2.0) * DUTY.line_current * DUTY.inductance[:, None] / (built.turns * built.area)[:, None]
    major = material.line_loss_w_per_m3[:, None] * flux ** material.line_loss_exponent[:, None]
    bias = np.minimum(flux / (0.5 * material.saturation_t[:, None]), 2.0)
    raised = 3e4 * (1.0 + (material.bias_loss_factor[:, None] - 1.0) * 2.0 / np.pi * bias)
    expected = (major + raised) * (material.loss_factor * built.core_volume)[:, None]
    solid = built.strip_width == 0.0
    assert found.core_loss[solid] == pytest.approx(expected[solid])
    ripple = 2.0 * 1.5 * (DUTY.inductance / (built.turns * built.area)) ** 2 * (40e3 + 80e3)
    across = 388.0 * (built.strip_width * found.gap)[:, None] * (50.0 * flux**2 + ripple[:, None])
    assert found.core_loss[~solid] == pytest.approx((expected + across)[~solid])


def test_temperatures_are_the_fixed_point(
    catalog: Catalog, built: Build, monkeypatch: pytest.MonkeyPatch
) -> None:
    three = inductor(catalog, built, DUTY, MAKING)
    monkeypatch.setattr("models.magnetics.inductor.THERMAL_STEPS", 100)
    many = inductor(catalog, built, DUTY, MAKING)
    below = (many.winding_temperature < 130.0) & (many.core_temperature < 130.0)
    for name in ("winding_temperature", "core_temperature"):
        assert np.abs(getattr(three, name) - getattr(many, name))[below].max() < 0.5, name
    assert three.winding_loss[below] == pytest.approx(many.winding_loss[below], rel=5e-3)


def test_losses_grow_with_current_and_temperature_with_ambient(
    catalog: Catalog, built: Build, found: Inductor
) -> None:
    assert np.all(np.diff(found.winding_loss, axis=-1) > 0.0)
    assert np.all(np.diff(found.core_loss, axis=-1) >= 0.0)
    hotter = inductor(catalog, built, replace(DUTY, air=Air(60.0, 1.0, np.zeros(COUNT))), MAKING)
    sane = (hotter.winding_temperature < 250.0) & (hotter.core_temperature < 250.0)
    assert sane.mean() > 0.5
    for name in ("winding_temperature", "core_temperature"):
        assert np.all((getattr(hotter, name) > getattr(found, name))[sane])
        assert np.all(getattr(found, name) > 50.0)


def test_ripple_only_adds_loss(catalog: Catalog, built: Build, found: Inductor) -> None:
    calm = inductor(catalog, built, replace(DUTY, group_mean_square=np.zeros((COUNT, POINTS, 2))), MAKING)
    assert np.all(calm.winding_loss < found.winding_loss)


def test_price_contains_labour(catalog: Catalog, built: Build, found: Inductor) -> None:
    dearer = inductor(catalog, built, DUTY, replace(MAKING, labour=4.0))
    assert dearer.price - found.price == pytest.approx(1.0 / (1.0 - catalog.cost.wound_part_margin))


def test_price_contains_the_sections_of_the_gap(catalog: Catalog, built: Build, found: Inductor) -> None:
    dearer = inductor(catalog, built, DUTY, replace(MAKING, gap_section_price=1.5))
    further = np.maximum(found.gap_sections - built.coils, 0.0)
    assert further.max() >= 2.0
    assert dearer.price - found.price == pytest.approx(further / (1.0 - catalog.cost.wound_part_margin))


def test_an_absent_inductor_is_harmless() -> None:
    shared = np.array([1.0, 2.0])
    part = Inductor(**{entry.name: shared for entry in fields(Inductor)} | {  # type: ignore[arg-type]
        name: np.stack([shared] * 3, axis=-1) for name in (
            "winding_loss", "core_loss", "winding_temperature", "core_temperature")
    })  # fmt: skip
    found = where_present(part, np.array([True, False]), 55.0)
    assert found.winding_loss[0] == pytest.approx(1.0)
    assert found.volume[0] == 1.0
    assert found.winding_loss[1] == pytest.approx(0.0)
    assert found.volume[1] + found.mass[1] + found.price[1] == 0.0
    assert found.winding_temperature[1] == pytest.approx(55.0)
    assert found.inductance_share[1] > 1.0
    assert where_present(part, np.array([True, True]), 55.0) is part
