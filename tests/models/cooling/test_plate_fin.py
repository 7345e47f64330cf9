"""One heatsink: energy balance, similarity, limits, a second published model, hand checks."""

from dataclasses import fields, replace

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from models.cooling import forced_convection as forced
from models.cooling.air import air_at
from models.cooling.plate_fin import (
    PlateFin,
    base_resistance,
    duct_nusselt,
    duct_velocity,
    forced_conductance,
    natural_conductance,
    plain_coefficient,
    pressure_drop,
)

AIR = air_at(np.array(323.0), np.array(101_325.0))
METAL, PERFECT = np.array(205.0), np.array(1e12)
AMBIENT_K = np.array(303.0)


def sink(length=0.1, height=0.03, thickness=1.2e-3, gap=3e-3, count=20.0, base=6e-3, halves=1.0):
    values = (length, height, thickness, gap, count, base, halves)
    names = [f.name for f in fields(PlateFin)]
    return PlateFin(**{name: np.array(value) for name, value in zip(names, values, strict=True)})


SINKS = st.builds(
    sink,
    length=st.floats(0.02, 0.4),
    height=st.floats(0.01, 0.1),
    thickness=st.floats(0.5e-3, 3e-3),
    gap=st.floats(1.5e-3, 12e-3),
    count=st.integers(2, 60).map(float),
    base=st.floats(3e-3, 20e-3),
    halves=st.sampled_from([1.0, 2.0]),
)
FLOWS = st.floats(0.5, 15.0)


def flow_at(plates, velocity):
    return velocity * plates.channels * plates.gap * plates.duct_height


@given(SINKS, FLOWS)
def test_duct_energy_balance(plates, velocity):
    # heat = m cp (outlet - inlet) = U A times the logarithmic mean temperature difference
    flow, rise = flow_at(plates, velocity), 30.0
    heat = forced_conductance(plates, flow, AIR, METAL) * rise
    outlet_rise = heat / (AIR.density * flow * AIR.heat_capacity)
    assert 0.0 < outlet_rise <= rise * (1.0 + 1e-12)
    if outlet_rise > rise * (1.0 - 1e-9):
        return
    mean_difference = outlet_rise / -np.log1p(-outlet_rise / rise)
    diameter = forced.hydraulic_diameter(plates.gap, plates.duct_height)
    reynolds = duct_velocity(plates, flow) * diameter / AIR.kinematic_viscosity
    coefficient = duct_nusselt(plates, reynolds, AIR.prandtl) * AIR.conductivity / diameter
    m_height = plates.fin_height * np.sqrt(2.0 * coefficient / (METAL * plates.fin_thickness))
    bare = plates.halves * plates.channels * plates.gap * plates.length
    fins = 2.0 * plates.halves * plates.channels * plates.fin_height * plates.length
    area = bare + fins * np.tanh(m_height) / m_height
    assert heat == pytest.approx(coefficient * area * mean_difference, rel=1e-6)


@given(SINKS, FLOWS, st.floats(1.02, 3.0))
def test_more_flow_cools_more_and_costs_pressure(plates, velocity, factor):
    flow = flow_at(plates, velocity)
    assert forced_conductance(plates, factor * flow, AIR, METAL) > forced_conductance(
        plates, flow, AIR, METAL
    )
    assert pressure_drop(plates, factor * flow, AIR) > pressure_drop(plates, flow, AIR)


@given(SINKS, FLOWS, st.integers(2, 6))
def test_ducts_side_by_side_add_up(plates, velocity, times):
    wide = replace(plates, fin_count=times * plates.channels + 1.0)
    flow = flow_at(plates, velocity)
    alone = forced_conductance(plates, flow, AIR, METAL)
    assert forced_conductance(wide, times * flow, AIR, METAL) == pytest.approx(times * alone, rel=1e-9)
    assert pressure_drop(wide, times * flow, AIR) == pytest.approx(pressure_drop(plates, flow, AIR), rel=1e-9)


@given(SINKS, FLOWS, st.floats(0.3, 3.0))
def test_similar_ducts(plates, velocity, scale):
    # all lengths times s, velocity over s: Re and Nu alike, so conductance goes with s, pressure with 1/s^2
    lengths = ("length", "fin_height", "fin_thickness", "gap", "base_thickness")
    scaled = replace(plates, **{name: getattr(plates, name) * scale for name in lengths})
    flow = flow_at(plates, velocity)
    here, there = (
        forced_conductance(p, q, AIR, PERFECT) for p, q in ((plates, flow), (scaled, flow * scale))
    )
    assert there == pytest.approx(scale * here, rel=1e-6)
    drops = pressure_drop(plates, flow, AIR), pressure_drop(scaled, flow * scale, AIR)
    assert drops[1] == pytest.approx(drops[0] / scale**2, rel=1e-6)


def test_long_narrow_duct_heats_the_air_through():
    plates, flow = sink(length=0.4, gap=1.5e-3), np.array(1e-3)
    stream = AIR.density * AIR.heat_capacity * flow
    assert forced_conductance(plates, flow, AIR, PERFECT) == pytest.approx(stream, rel=1e-3)


@pytest.mark.parametrize("gap", [1.5e-3, 2e-3, 3e-3])
@pytest.mark.parametrize("length", [0.03, 0.06, 0.1, 0.2])
@pytest.mark.parametrize("velocity", [2.0, 4.0])
def test_second_published_model_of_plate_fins(gap, length, velocity):
    # Teertstra, Yovanovich & Culham 2000: Nu_b on the inlet difference, parallel plates, laminar. Ours
    # counts the ducts' corners
    # (height 16 gaps) and so lies up to a tenth lower.
    plates = sink(length=length, height=16.0 * gap, gap=gap, count=2.0)
    pr = AIR.prandtl
    channel = velocity * gap / AIR.kinematic_viscosity * gap / length
    developed = channel * pr / 2.0
    developing = 0.664 * np.sqrt(channel) * pr ** (1 / 3) * np.sqrt(1.0 + 3.65 / np.sqrt(channel))
    nusselt = (developed**-3 + developing**-3) ** (-1 / 3)
    expected = nusselt * AIR.conductivity / gap * length * (2.0 * plates.fin_height + gap)
    ours = forced_conductance(plates, flow_at(plates, velocity), AIR, PERFECT)
    assert 0.88 * expected < ours < 1.01 * expected


def test_forced_sink_by_hand():
    # 100 x 100 mm base, 25 fins 30 mm high and 1 mm thick, 24 gaps of 3.125 mm, 3 m/s between the fins, 323
    # K.
    # By hand: Dh = 2*3.125*30/33.125 = 5.66 mm; nu = 1.80e-5, Re = 943, x* = 0.1/(0.00566*943*0.70) = 0.0268.
    # Stephan for plates at 0.0268: 7.55 + 0.024*62.0/(1 + 0.0358*0.941*10.1) = 8.66; times
    # Nu_T(0.104)/7.541 = 0.778 for the
    # corners of the duct on the developed part: about 7.2. h = 7.2*0.0280/0.00566 = 35.6 W/(m2 K).
    # Fins: m = sqrt(2*35.6/(205*0.001)) = 18.6 1/m, mL = 0.559, efficiency 0.906.
    # Area 24*0.1*(2*0.030*0.906 + 0.003125) = 0.138 m2, h A = 4.91 W/K.
    # Stream: 24*3.125e-3*0.030*3 = 6.75e-3 m3/s times 1.09*1006 = 7.40 W/K; 7.40*(1 - exp(-0.664)) = 3.59
    # W/K.
    plates = sink(length=0.1, height=0.03, thickness=1e-3, gap=3.125e-3, count=25.0)
    assert plates.width == pytest.approx(0.1)
    flow = np.array(6.75e-3)
    assert forced_conductance(plates, flow, AIR, METAL) == pytest.approx(3.59, rel=0.04)
    # Pressure: developed f Re = 96*0.873 = 83.8; x+ = 0.01875: 13.76/sqrt(x+) = 100; together 131, f = 0.139;
    # head 0.5*1.09*9 = 4.9 Pa; 0.139*17.7 = 2.46; ends: sigma 0.758: 0.102 + 0.059; 4.9*2.62 = 12.8 Pa
    assert pressure_drop(plates, flow, AIR) == pytest.approx(12.8, rel=0.03)


def test_natural_sink_by_hand():
    # 150 mm high, 16 fins 40 mm deep and 1.5 mm thick, 15 gaps of 8 mm, base 6 mm; 40 K over 303 K, film
    # 323 K, sea level.
    # Channel: Ra_S = 9.81/323*40*0.008^3/(1.80e-5)^2*0.70 = 1344, El = 1344*8/150 = 71.7
    #   Nu = (576/5141 + 2.873/8.47)^-0.5 = (0.1120 + 0.3392)^-0.5 = 1.489, h = 1.489*0.0280/0.008 = 5.21
    #   W/(m2 K)
    # Radiation of one channel, emissivity 0.88: front 0.0012 and two ends 0.00064 m2, less 7 % that they
    # see of each other:
    #   0.00171 m2; grey 0.98; sigma (646)(343^2 + 303^2) = 7.67 W/(m2 K): 12.9 mW/K; over the wetted 0.0132
    #   m2 0.97.
    # Together 6.18. Fin: m = sqrt(2*6.18/(205*0.0015)) = 6.34, mL = 0.254, efficiency 0.979.
    # Channels: 15*0.15*6.18*(0.08*0.979 + 0.008) = 1.200 W/K.
    # Outer faces: Ra_L = 1344*(150/8)^3 = 8.86e6, Nu = 0.68 + 0.513*54.6 = 28.7, h = 5.36 + 0.88*7.67 = 12.1;
    #   2*0.15*(0.040*0.979 + 0.006)*12.1 = 0.164; tips 16*0.0015*0.15*12.1*0.98 = 0.043. All: 1.41 W/K.
    plates = sink(length=0.15, height=0.04, thickness=1.5e-3, gap=8e-3, count=16.0, base=6e-3)
    conductance = natural_conductance(plates, np.array(40.0), AMBIENT_K, AIR, METAL, np.array(0.88))
    assert conductance == pytest.approx(1.41, rel=0.01)


@given(st.floats(0.05, 0.3), st.floats(0.01, 0.08), st.floats(4e-3, 15e-3), st.integers(2, 30))
def test_natural_heat_is_linear_in_the_number_of_fins(length, height, gap, count):
    args = (np.array(40.0), AMBIENT_K, AIR, METAL, np.array(0.8))
    counts = np.array([count, count + 1.0, count + 2.0])
    heat = natural_conductance(sink(length=length, height=height, gap=gap, count=counts), *args)
    assert heat[2] - heat[1] == pytest.approx(heat[1] - heat[0], rel=1e-6)
    assert heat[1] > heat[0]


@given(st.floats(0.05, 0.95), st.floats(0.01, 0.05))
def test_emissivity_helps(emissivity, more):
    args = (sink(gap=8e-3), np.array(40.0), AMBIENT_K, AIR, METAL)
    assert natural_conductance(*args, np.array(emissivity + more)) > natural_conductance(
        *args, np.array(emissivity)
    )


@given(st.floats(5.0, 40.0), st.floats(1.05, 2.0))
def test_hotter_sinks_have_less_resistance(rise, factor):
    args = (AMBIENT_K, AIR, METAL, np.array(0.88))
    plates = sink(gap=8e-3)
    hot, cool = (natural_conductance(plates, np.array(r), *args) for r in (factor * rise, rise))
    assert hot > cool
    assert hot < cool * factor


def test_far_apart_fins_are_plates():
    # two fins 1 m apart, black: each inner face like a plain plate, less what the two exchange and the base
    # adds
    plates = sink(length=0.1, height=0.03, gap=1.0, count=2.0, base=1e-9, thickness=1e-3)
    rise, black = np.array(40.0), np.array(1.0)
    plain = plain_coefficient(plates.length, rise, AMBIENT_K, AIR, black)
    ours = natural_conductance(plates, rise, AMBIENT_K, AIR, PERFECT, black)
    area = plates.length * (4.0 * plates.fin_height + plates.gap + 2.0 * plates.fin_thickness)
    assert ours == pytest.approx(plain * area, rel=0.08)


@settings(max_examples=30)
@given(SINKS, SINKS)
def test_arrays_equal_scalars(one, other):
    both = PlateFin(
        **{f.name: np.array([getattr(one, f.name), getattr(other, f.name)]) for f in fields(PlateFin)}
    )
    flow = np.array([0.01, 0.02])
    for i, alone in enumerate((one, other)):
        for name in ("width", "base_area", "boxed_volume", "metal_volume", "fin_area"):
            assert getattr(both, name)[i] == pytest.approx(float(getattr(alone, name)), rel=1e-12)
        assert forced_conductance(both, flow, AIR, METAL)[i] == pytest.approx(
            float(forced_conductance(alone, flow[i], AIR, METAL)), rel=1e-12
        )
        assert pressure_drop(both, flow, AIR)[i] == pytest.approx(
            float(pressure_drop(alone, flow[i], AIR)), rel=1e-12
        )


@given(SINKS)
def test_metal_fills_part_of_the_box(plates):
    assert 0.0 < plates.metal_volume < plates.boxed_volume
    air = plates.channels * plates.gap * plates.duct_height * plates.length
    assert plates.metal_volume + air == pytest.approx(plates.boxed_volume)


@given(st.floats(0.05, 5.0), st.integers(1, 12), st.floats(0.02, 0.9))
def test_sources_everywhere_leave_conduction_alone(film, count, share):
    plates = sink()
    some = base_resistance(plates, np.array(film), METAL, share * plates.base_area, np.array(count))
    all_over = base_resistance(plates, np.array(film), METAL, plates.base_area, np.array(count))
    assert all_over == pytest.approx(plates.base_thickness / (205.0 * plates.base_area), rel=1e-9)
    assert some > all_over
