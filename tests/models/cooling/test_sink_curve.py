"""Curves: optimal against random sinks, monotone, exact at their points, honest outside; speed."""

from dataclasses import fields, replace
from time import perf_counter

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from models.cooling import (
    Fan,
    FanMounting,
    SinkCurve,
    sink_curve_cold_plate,
    sink_curve_forced,
    sink_curve_natural,
)
from models.cooling.air import ZERO_CELSIUS_K, air_at, pressure_at_altitude
from models.cooling.cold_plate import auxiliary_power, cold_plate
from models.cooling.extrusion import (
    ORDINARY_EXTRUSION,
    ORDINARY_FAN_MOUNTING,
    ORDINARY_HEAT_ENTRY,
    Extrusion,
    HeatEntry,
)
from models.cooling.fan import RATED_DENSITY, fan_pressure, working_flow
from models.cooling.plate_fin import (
    PlateFin,
    base_resistance,
    forced_conductance,
    natural_conductance,
    pressure_drop,
)
from models.cooling.sink_search import film_air, least_volume

# made-up fans of ordinary size and strength
SMALL = Fan("small", 0.04, 0.020, 0.0070, 150.0, 2.0, 40e3, 4.0)
MIDDLE = Fan("middle", 0.08, 0.025, 0.021, 50.0, 2.6, 50e3, 6.0)
LARGE = Fan("large", 0.12, 0.038, 0.054, 85.0, 6.0, 50e3, 12.0)
FANS = (SMALL, MIDDLE, LARGE)
SETTING = {"ambient_c": 40.0, "altitude_m": 500.0}
METAL, EMISSIVITY = np.array(205.0), np.array(0.88)
NATURAL = sink_curve_natural(**SETTING)
FORCED = sink_curve_forced(**SETTING, fans=FANS)
PLATE = sink_curve_cold_plate()
CURVES = [NATURAL, FORCED, PLATE]
NAMES = ["natural", "forced", "cold plate"]
COLUMNS = ("volume_m3", "mass_kg", "base_area_m2", "fan_power_w", "price")


def with_base(sink: PlateFin, film, rise: float):
    source = ORDINARY_HEAT_ENTRY.source_area(rise / film, sink.base_area)
    return film + base_resistance(sink, film, METAL, source, np.array(ORDINARY_HEAT_ENTRY.source_count))


def natural_resistance(sink: PlateFin, rise: float = 40.0):
    air = film_air(SETTING["ambient_c"], SETTING["altitude_m"], np.array(rise))
    ambient = np.array(SETTING["ambient_c"] + ZERO_CELSIUS_K)
    return with_base(
        sink, 1.0 / natural_conductance(sink, np.array(rise), ambient, air, METAL, EMISSIVITY), rise
    )


def forced_air():
    pressure = pressure_at_altitude(np.array(SETTING["altitude_m"]))
    return air_at(np.array(SETTING["ambient_c"] + ZERO_CELSIUS_K + 15.0), pressure)


@pytest.mark.parametrize("curve", CURVES, ids=NAMES)
def test_curve_is_monotone_and_clean(curve: SinkCurve):
    assert np.all(np.diff(curve.thermal_resistance_k_per_w) < 0.0)
    assert np.all(np.diff(curve.volume_m3) >= 0.0)
    for name in COLUMNS:
        column = getattr(curve, name)
        assert column.shape == curve.volume_m3.shape
        assert np.all(np.isfinite(column))
        assert np.all(column >= 0.0)
    steps = np.diff(np.log(curve.thermal_resistance_k_per_w))
    np.testing.assert_allclose(steps, steps[0], rtol=1e-9)


@pytest.mark.parametrize("curve", CURVES, ids=NAMES)
def test_exact_at_its_points(curve: SinkCurve):
    point = curve.at(curve.thermal_resistance_k_per_w)
    assert point.available.all()
    for name in COLUMNS:
        np.testing.assert_allclose(getattr(point, name), getattr(curve, name), rtol=1e-7, atol=1e-9)
    np.testing.assert_array_equal(
        curve.index(curve.thermal_resistance_k_per_w), np.arange(len(curve.volume_m3))
    )


@pytest.mark.parametrize("curve", CURVES, ids=NAMES)
@given(share=st.floats(0.0, 1.0))
def test_between_its_points(curve: SinkCurve, share):
    resistance = curve.thermal_resistance_k_per_w
    asked = np.exp(np.log(resistance[0]) + share * np.log(resistance[-1] / resistance[0]))
    point, row = curve.at(asked), int(curve.index(asked))
    for name in COLUMNS:
        ends = np.sort(getattr(curve, name)[max(row - 1, 0) : row + 1])
        assert ends[0] * (1 - 1e-6) - 1e-9 <= getattr(point, name) <= ends[-1] * (1 + 1e-6) + 1e-9
    assert resistance[row] <= asked * (1.0 + 1e-6)
    assert point.available


@pytest.mark.parametrize("curve", CURVES, ids=NAMES)
def test_outside_is_flagged_and_clipped(curve: SinkCurve):
    low, high = curve.thermal_resistance_k_per_w[[-1, 0]]
    point = curve.at(np.array([0.5 * low, low, high, 2.0 * high, np.nan, np.inf, 0.0, -1.0]))
    np.testing.assert_array_equal(point.available, [False, True, True, False, False, False, False, False])
    for name in COLUMNS:
        column, values = getattr(curve, name), getattr(point, name)
        np.testing.assert_allclose(values[[0, 3]], column[[-1, 0]], rtol=1e-7, atol=1e-9)
        assert np.all(np.isfinite(values))


@pytest.mark.parametrize("curve", CURVES, ids=NAMES)
def test_any_shape(curve: SinkCurve):
    asked = np.geomspace(0.1, 2.0, 6)
    flat, square = curve.at(asked), curve.at(asked.reshape(2, 3))
    for name in COLUMNS:
        np.testing.assert_array_equal(getattr(square, name), getattr(flat, name).reshape(2, 3))
        assert getattr(curve.at(asked[2]), name) == getattr(flat, name)[2]


@pytest.mark.parametrize("curve", CURVES, ids=NAMES)
@given(power=st.just(0.0) | st.floats(1e-3, 2e3), resistance=st.floats(0.02, 4.0))
def test_rise_solves_its_law(curve: SinkCurve, power, resistance):
    rise = curve.rise(np.array(power), np.array(resistance))
    if power == 0.0:
        assert rise == 0.0
        return
    hot = resistance * (rise / curve.reference_rise_k) ** -curve.rise_exponent
    assert rise == pytest.approx(power * hot, rel=1e-9)


def test_natural_rise_law_follows_the_model():
    assert 0.2 < NATURAL.rise_exponent < 0.45
    assert NATURAL.geometry is not None
    reference = natural_resistance(NATURAL.geometry)
    for rise, allowed in ((10.0, NATURAL.rise_deviation), (25.0, 0.08), (60.0, 0.08)):
        power = rise / natural_resistance(NATURAL.geometry, rise)
        np.testing.assert_allclose(NATURAL.rise(power, reference), rise, rtol=allowed + 1e-9)
    assert NATURAL.rise_deviation < 0.2
    assert FORCED.rise_exponent == 0.0


def test_natural_sinks_hold_what_the_curve_promises():
    best, extrusion = NATURAL.geometry, ORDINARY_EXTRUSION
    assert best is not None
    resistance = natural_resistance(best)
    assert np.all(resistance <= NATURAL.thermal_resistance_k_per_w * (1 + 1e-9))
    np.testing.assert_allclose(best.boxed_volume, NATURAL.volume_m3)
    np.testing.assert_allclose(NATURAL.mass_kg, 2700.0 * best.metal_volume)
    np.testing.assert_allclose(NATURAL.price, 7.0 * NATURAL.mass_kg)
    assert np.all(best.fin_height / best.gap <= 16.0 * (1 + 1e-9))
    assert np.all(best.fin_thickness >= extrusion.least_fin_thickness(best.fin_height) - 1e-12)
    assert np.all(np.maximum(best.width / best.length, best.length / best.width) <= 2.0 * (1 + 1e-9))


@settings(max_examples=200)
@given(
    length=st.floats(0.04, 0.5),
    ratio=st.floats(0.5, 2.0),
    height=st.floats(0.01, 0.1),
    gap=st.floats(3e-3, 15e-3),
    extra=st.floats(1.0, 2.0),
    base=st.sampled_from(ORDINARY_EXTRUSION.base_thicknesses),
)
def test_no_practicable_natural_sink_beats_the_curve(length, ratio, height, gap, extra, base):
    # the grid of the search is finite: a million random sinks gained 6 % at most
    thickness = float(extra * ORDINARY_EXTRUSION.least_fin_thickness(np.array(height)))
    count = np.floor((ratio * length + gap) / (gap + thickness))
    values = (length, height, thickness, gap, count, base)
    names = [f.name for f in fields(PlateFin)][:6]
    free = PlateFin(**{name: np.array(value) for name, value in zip(names, values, strict=True)})
    practicable = height / gap <= 16.0 and count >= 2.0 and 0.5 <= free.width / length <= 2.0
    if not practicable or not 0.04 <= free.width <= 0.6:
        return
    point = NATURAL.at(natural_resistance(free))
    if point.available:
        assert point.volume_m3 <= 1.10 * free.boxed_volume


def block_resistance(sink: PlateFin, fan: Fan, count):
    """Resistance of fans before a sink, with the working point from scratch."""
    air = forced_air()
    grille = 0.5 * air.density * ORDINARY_FAN_MOUNTING.installation_loss / fan.face_width_m**4
    flow = working_flow(
        np.array(fan.free_flow_m3_per_s),
        np.array(fan.greatest_pressure_pa),
        air.density / RATED_DENSITY,
        lambda q: pressure_drop(sink, count * q, air) + grille * q**2,
    )
    return with_base(sink, 1.0 / forced_conductance(sink, count * flow, air, METAL), 30.0), flow


@pytest.mark.parametrize("index", range(3))
def test_forced_sinks_hold_what_the_curve_promises(index):
    curve = sink_curve_forced(**SETTING, fans=[FANS[index]])
    best, fan = curve.geometry, FANS[index]
    assert best is not None
    resistance, flow = block_resistance(best, fan, curve.fan_count)
    assert np.all(resistance <= curve.thermal_resistance_k_per_w * (1 + 1e-6))
    np.testing.assert_allclose(curve.air_flow_m3_per_s, curve.fan_count * flow, rtol=1e-5)
    np.testing.assert_allclose(best.width, curve.fan_count * fan.face_width_m + best.fin_thickness, rtol=1e-9)
    np.testing.assert_allclose(best.duct_height, fan.face_width_m, rtol=1e-9)
    assert np.all(best.fin_height / best.gap <= 16.0 * (1 + 1e-9))
    assert np.all(best.gap >= 2e-3 * (1 - 1e-9))
    box = (best.width + 2e-3) * (
        fan.face_width_m + best.halves * best.base_thickness + (2 - best.halves) * 1e-3
    )
    depth = best.length + fan.depth_m + 0.15 * fan.face_width_m
    np.testing.assert_allclose(curve.volume_m3, box * depth, rtol=1e-9)
    metal = 2700.0 * best.metal_volume
    np.testing.assert_allclose(curve.price, 7.0 * metal + curve.fan_count * fan.price, rtol=1e-9)
    density = float(forced_air().density) / RATED_DENSITY
    np.testing.assert_allclose(curve.fan_power_w, curve.fan_count * fan.input_power_w * density, rtol=1e-9)


def test_forced_working_point_lies_on_the_fan_curve():
    air, best = forced_air(), FORCED.geometry
    assert best is not None
    ends = [
        [getattr(FANS[i], name) for i in FORCED.fan_index]
        for name in ("free_flow_m3_per_s", "greatest_pressure_pa")
    ]
    face = np.array([FANS[i].face_width_m for i in FORCED.fan_index])
    flow = FORCED.air_flow_m3_per_s / FORCED.fan_count
    given_pressure = fan_pressure(flow, np.array(ends[0]), np.array(ends[1]), air.density / RATED_DENSITY)
    grille = 3.0 * 0.5 * air.density * (flow / face**2) ** 2
    np.testing.assert_allclose(
        pressure_drop(best, FORCED.air_flow_m3_per_s, air) + grille, given_pressure, rtol=1e-4
    )


@settings(max_examples=100)
@given(
    fan=st.sampled_from(FANS),
    count=st.integers(1, 6),
    halves=st.sampled_from([1.0, 2.0]),
    length=st.floats(0.02, 0.5),
    gap=st.floats(2e-3, 12e-3),
    extra=st.floats(1.0, 2.0),
    base=st.sampled_from(ORDINARY_EXTRUSION.base_thicknesses),
)
def test_no_practicable_forced_sink_beats_the_curve(fan, count, halves, length, gap, extra, base):
    face = fan.face_width_m
    height = face / halves
    thickness = float(extra * ORDINARY_EXTRUSION.least_fin_thickness(np.array(height)))
    gaps = np.floor(face / (gap + thickness))
    if gaps < 1.0 or height > 0.1 or count * face > 0.6 or height / (face / gaps - thickness) > 16.0:
        return
    values = (length, height, thickness, face / gaps - thickness, count * gaps + 1.0, base, halves)
    names = [f.name for f in fields(PlateFin)]
    free = PlateFin(**{name: np.array(value) for name, value in zip(names, values, strict=True)})
    resistance, _ = block_resistance(free, fan, count)
    point = FORCED.at(resistance)
    box = (free.width + 2e-3) * (free.height + (2.0 - halves) * 1e-3) * (length + fan.depth_m + 0.15 * face)
    if point.available:
        assert point.volume_m3 <= 1.12 * box


@settings(max_examples=10, deadline=None)
@given(st.floats(1.1, 2.5))
def test_stronger_fan_needs_no_larger_sink(factor):
    strong = replace(
        MIDDLE,
        free_flow_m3_per_s=factor * MIDDLE.free_flow_m3_per_s,
        greatest_pressure_pa=factor * MIDDLE.greatest_pressure_pa,
    )
    weak_curve, strong_curve = (sink_curve_forced(**SETTING, fans=[fan]) for fan in (MIDDLE, strong))
    size = len(weak_curve.volume_m3)
    assert len(strong_curve.volume_m3) >= size
    # both curves may give away 3 % of volume for a lower price
    assert np.all(strong_curve.volume_m3[:size] <= 1.03 * weak_curve.volume_m3 * (1 + 1e-9))


def test_wider_choice_of_fans_needs_no_larger_sink():
    alone = sink_curve_forced(**SETTING, fans=[MIDDLE])
    assert np.all(FORCED.volume_m3[: len(alone.volume_m3)] <= 1.03 * alone.volume_m3 * (1 + 1e-9))


def test_thin_air_and_bare_metal_need_larger_sinks():
    asked = np.array([0.2, 0.5, 1.0])
    high = {"ambient_c": 40.0, "altitude_m": 4000.0}
    assert np.all(sink_curve_natural(**high).at(asked).volume_m3 > 1.1 * NATURAL.at(asked).volume_m3)
    assert np.all(sink_curve_forced(**high, fans=[LARGE]).volume_m3[-20:].min() > 0.0)
    low_large, high_large = (sink_curve_forced(**s, fans=[LARGE]).at(asked / 10) for s in (SETTING, high))
    assert np.all(high_large.volume_m3 > low_large.volume_m3)
    bare = sink_curve_natural(**SETTING, emissivity=0.1)
    assert np.all(bare.at(asked).volume_m3 > 1.05 * NATURAL.at(asked).volume_m3)


def test_tighter_making_needs_larger_sinks():
    coarse = sink_curve_forced(
        **SETTING, fans=FANS, extrusion=Extrusion(greatest_fin_ratio=8.0, least_gap=3e-3)
    )
    one_sided = sink_curve_forced(**SETTING, fans=FANS, mounting=FanMounting(bases=(1,)))
    asked = np.array([0.1, 0.2, 0.4])
    assert np.all(coarse.at(asked).volume_m3 > FORCED.at(asked).volume_m3)
    assert np.all(one_sided.at(asked).volume_m3 > FORCED.at(asked).volume_m3)
    hot_spots = sink_curve_forced(**SETTING, fans=FANS, heat_entry=HeatEntry(flux=4e5))
    assert np.all(hot_spots.at(asked).volume_m3 > FORCED.at(asked).volume_m3)


@given(
    st.lists(
        st.tuples(st.floats(0.005, 8.0), st.floats(1.0, 9.0), st.floats(1.0, 9.0)), min_size=1, max_size=40
    )
)
def test_least_volume_against_a_plain_loop(rows):
    resistance, volume, price = (np.array(column) for column in zip(*rows, strict=True))
    grid = np.geomspace(5.0, 0.01, 12)
    if resistance.min() > grid[0]:
        with pytest.raises(ValueError, match="no sink reaches 5 K/W"):
            least_volume(resistance, volume, price, grid, 0.0)
        return
    chosen = least_volume(resistance, volume, price, grid, 0.0)
    expected = [volume[resistance <= value].min() for value in grid if (resistance <= value).any()]
    np.testing.assert_array_equal(volume[chosen], expected)
    assert np.all(resistance[chosen] <= grid[: len(chosen)])
    spared = least_volume(resistance, volume, price, grid, 0.3)
    assert np.all(volume[spared] <= 1.3 * np.array(expected))
    assert np.all(np.diff(volume[spared]) >= 0.0)


def test_refused_candidates_are_never_chosen():
    volume = np.array([np.inf, 2.0])
    chosen = least_volume(np.array([0.02, 0.5]), volume, np.ones(2), np.geomspace(5.0, 0.01, 12))
    assert set(chosen) == {1}


@given(st.floats(1e-5, 1e-3), st.floats(1e-3, 0.1), st.floats(0.0, 1e4))
def test_cold_plate_resistance_times_area(specific, area, heat):
    plate = cold_plate(np.array(specific), np.array(area))
    assert plate.thermal_resistance_k_per_w * area == pytest.approx(specific)
    assert plate.mass_kg < 2700.0 * plate.volume_m3
    assert auxiliary_power(np.array(heat)) == pytest.approx(0.03 * heat)


def test_errors_tell_what_came():
    with pytest.raises(ValueError, match="rise_k must be above 0 K, got -5"):
        sink_curve_natural(**SETTING, rise_k=-5.0)
    with pytest.raises(ValueError, match="emissivity must lie above 0 and up to 1, got 1.2"):
        sink_curve_natural(**SETTING, emissivity=1.2)
    with pytest.raises(ValueError, match="needs at least one fan, got none"):
        sink_curve_forced(**SETTING, fans=[])
    with pytest.raises(ValueError, match=r"no practicable fin block for fans \['large'\]"):
        sink_curve_forced(**SETTING, fans=[LARGE], mounting=FanMounting(bases=(1,)))
    with pytest.raises(ValueError, match="altitude must lie within"):
        sink_curve_natural(ambient_c=40.0, altitude_m=2e4)
    with pytest.raises(ValueError, match="must be above 0, got 0.0 and"):
        cold_plate(np.array(0.0), np.array(0.01))
    with pytest.raises(ValueError, match="flux must be above 0"):
        HeatEntry(flux=0.0)
    with pytest.raises(ValueError, match="greatest_share must lie above 0 and up to 1, got 1.5"):
        HeatEntry(greatest_share=1.5)
    with pytest.raises(ValueError, match="source_count must be at least 1, got 0"):
        HeatEntry(source_count=0)


def least_time(call, repeats):
    times = []
    for _ in range(repeats):
        start = perf_counter()
        call()
        times.append(perf_counter() - start)
    return min(times)


def test_speed():
    # goals: a curve within 0.25 s, a hundred look-ups within 60 us
    asked = np.geomspace(0.03, 4.0, 100)
    assert least_time(lambda: sink_curve_natural(**SETTING), 4) < 0.25
    assert least_time(lambda: sink_curve_forced(**SETTING, fans=FANS * 3), 4) < 0.25
    assert least_time(lambda: FORCED.at(asked), 300) < 60e-6
