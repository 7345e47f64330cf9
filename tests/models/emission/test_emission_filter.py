"""Emission of whole designs: levels by hand, steps at fractions of 150 kHz, filters that do their work."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from model_fixtures import DEPOT, ROOFTOP, Draw, Spaces

from models.catalog import Catalog
from models.designs import Designs
from models.emission.emission_filter import Emission
from models.inverter import Inverter
from models.output_filter import Filter, line_phasors
from models.specification import Specification
from models.waveforms.state import waveform_state
from optimizer.space import SearchSpace
from optimizer.study.study import Study

CLASS_A, CLASS_B = "CISPR 11 class A up to 20 kVA", "CISPR 11 class B"


def judged(inverter: Inverter, designs: Designs, multiples: np.ndarray | None = None) -> Emission:
    """Emission of designs, at the judged carrier groups or at those given."""
    points, model = inverter.points, inverter.emission
    circuit = Filter(
        designs.inverter_inductance_h,
        designs.grid_inductance_h,
        designs.filter_capacitance_f,
        designs.damping_resistance_ohm,
    ).columns()
    spec = inverter.specification
    phasors = line_phasors(circuit, spec.line_frequency_hz, points.output_voltage, points.output_current)
    per_volt = 1.0 / (designs.inverter_inductance_h * designs.switching_frequency_hz)
    state = waveform_state(
        inverter.bridge, inverter.tables, designs.modulation, phasors, points.dc_voltage, per_volt
    )
    packages = inverter.packages.of(designs)
    if multiples is None:
        return model.evaluate(designs, circuit, state, points.distortion, packages)
    return model.at_multiples(multiples, designs, circuit, state, points.distortion, packages)


def space_of(study: Study, specification: Specification, catalog: Catalog) -> SearchSpace:
    return SearchSpace(
        replace(study, specification=specification), Inverter(specification, catalog), "SiC MOSFET"
    )


def swept(space: SearchSpace, frequencies: list[float], scheme: str) -> Designs:
    """One design at several switching frequencies, everything else the same."""
    point = space.repaired(np.full((1, len(space.variables)), 0.5))
    one = space.designs(point).take(np.zeros(len(frequencies), dtype=np.int64))
    place = np.full(len(frequencies), space.inverter.bridge.modulation_index(scheme))
    return replace(one, switching_frequency_hz=np.array(frequencies), modulation=place)


@pytest.fixture(scope="module")
def rooftop_space(studies: dict[str, Study], catalog: Catalog) -> SearchSpace:
    return space_of(studies["rooftop_5kw"], replace(ROOFTOP, emission_limit=CLASS_A), catalog)


def test_common_mode_level_by_hand(rooftop_space: SearchSpace) -> None:
    """One leg switching at 30 kHz, fifth group at 150 kHz: amplitude (2/(5 pi)) V_dc of that leg, half of it
    common; the node capacitance passes a current into two lines of the network side by side.
    """
    spec, inverter = rooftop_space.study.specification, rooftop_space.inverter
    designs = swept(rooftop_space, [30e3], "one leg at line frequency")
    found = judged(inverter, designs)
    device = inverter.catalog.devices[int(designs.device[0])]
    nodes = 2.0 * designs.parallel[0] * device.switch_node_capacitance_f + 2.0 * spec.rules.switch_node_stray
    volts = 0.5 * 2.0 / (5.0 * math.pi) * spec.dc_voltage_max_v / math.sqrt(2.0)
    reactance = 2.0 * math.pi * 150e3 * 50e-6
    network = 50.0 * reactance / math.hypot(50.0, reactance)
    current = volts * 2.0 * math.pi * 150e3 * nodes
    level = 20.0 * math.log10(current * network / 2.0 / 1e-6)
    assert found.frequency[0, 0] == pytest.approx(150e3)
    assert found.common[0, 0] == pytest.approx(level, abs=0.2)


def test_differential_level_by_hand(rooftop_space: SearchSpace) -> None:
    """Bipolar at 150 kHz: first group, up to (4/pi) V_dc, through L1, C and L2 (circuit laws, written out),
    half of the loop's voltage at one of two networks.
    """
    spec, inverter = rooftop_space.study.specification, rooftop_space.inverter
    designs = swept(rooftop_space, [150e3], "bipolar")
    found = judged(inverter, designs)
    omega = 2.0 * math.pi * 150e3
    network = 50.0 * (1j * omega * 50e-6) / (50.0 + 1j * omega * 50e-6)

    def choke(inductance: float) -> complex:
        bare = (1j + 0.02) * omega * inductance
        return bare / (1.0 + 1j * omega * spec.rules.choke_capacitance * bare)

    z1, z2 = (choke(float(value[0])) for value in (designs.inverter_inductance_h, designs.grid_inductance_h))
    branch = designs.damping_resistance_ohm[0] + 1.0 / (1j * omega * designs.filter_capacitance_f[0])
    onward = z2 + 2.0 * network
    beside = branch * onward / (branch + onward)
    volts = 4.0 / math.pi * spec.dc_voltage_max_v / math.sqrt(2.0)
    level = abs(volts * beside / (beside + z1) * network / onward)
    assert found.differential[0, 0] == pytest.approx(20.0 * math.log10(level / 1e-6), abs=0.3)


@pytest.mark.parametrize("n", [1, 2, 3, 4])
def test_steps_at_fractions_of_150_khz(rooftop_space: SearchSpace, n: int) -> None:
    """From just below 150 kHz/n to just above, the first group in the band falls from (n + 1)/n of 150 kHz to
    150 kHz. The common-mode current of group m goes as (1/m) f = f_s: only the network's impedance changes
    the level; the limit of class A is flat, so a one-stage filter's L C must grow by about ((n + 1)/n)^2.
    """
    below, above = 0.999 * 150e3 / n, 1.001 * 150e3 / n
    designs = swept(rooftop_space, [below, above], "one leg at line frequency")
    found = judged(rooftop_space.inverter, designs)
    assert found.frequency[0, 0] == pytest.approx((n + 1) * below)
    assert found.frequency[1, 0] == pytest.approx(n * above)
    before, after = (50.0 * x / math.hypot(50.0, x) for x in 2.0 * math.pi * 50e-6 * found.frequency[:, 0])
    step = found.common[1, 0] - found.common[0, 0]
    assert step == pytest.approx(20.0 * math.log10(after / before), abs=0.2)
    first, second = found.common_inductance
    if found.common_stages[0] == found.common_stages[1]:
        assert second / first == pytest.approx(((n + 1.0) / n) ** 2, rel=0.45)
    assert second > 1.15 * first or found.common_stages[1] > found.common_stages[0]
    assert found.volume[1] >= found.volume[0]


def test_volume_over_frequency_steps_up_at_every_fraction(rooftop_space: SearchSpace) -> None:
    """Total size of the filter, averaged over a few percent of frequency on either side of each step."""
    for n in (1, 2, 3, 4):
        edge = 150e3 / n
        sides = [np.linspace(0.95, 0.999, 12) * edge, np.linspace(1.001, 1.05, 12) * edge]
        below, above = (
            judged(
                rooftop_space.inverter, swept(rooftop_space, side.tolist(), "one leg at line frequency")
            ).volume.mean()
            for side in sides
        )
        assert above > 1.03 * below, n


@pytest.mark.parametrize("name", ["rooftop_5kw", "depot_10kw_three_phase"])
def test_most_filters_do_what_they_are_sized_for(
    name: str, studies: dict[str, Study], catalog: Catalog, draw: Draw
) -> None:
    """Random designs: the sized filter keeps nearly all of them at the limit less margin; the others are told
    by their distance.
    """
    base = ROOFTOP if name == "rooftop_5kw" else DEPOT
    space = space_of(studies[name], replace(base, emission_limit=CLASS_B), catalog)
    found = judged(space.inverter, draw(space, 400, 3))
    assert np.isfinite(found.margin).all()
    assert np.mean(found.margin > -0.1) > 0.7
    unfiltered = np.maximum(found.differential, found.common) - found.limit
    assert np.median(unfiltered.max(-1)) > 10.0


def test_wide_spectrum_of_a_design_has_the_same_filter(rooftop_space: SearchSpace) -> None:
    designs = swept(rooftop_space, [40e3], "unipolar")
    one = judged(rooftop_space.inverter, designs)
    wide = judged(rooftop_space.inverter, designs, np.arange(4, 750)[None])
    assert wide.common_inductance == pytest.approx(one.common_inductance)
    assert wide.volume == pytest.approx(one.volume)
    assert wide.frequency[0, -1] == pytest.approx(749 * 40e3)


def test_leakage_current_sets_the_y_capacitance(rooftop_space: SearchSpace) -> None:
    """3.5 mA at 253 V, 50 Hz: 44 nF (shared row, derived there)."""
    assert rooftop_space.inverter.emission.y_capacitance == pytest.approx(44e-9, rel=0.01)


def test_emission_left_out_costs_nothing(spaces: Spaces, draw: Draw) -> None:
    space = spaces["backup_3kva", "SiC MOSFET"]
    assert space.inverter.specification.emission_limit == ""
    result = space.inverter.evaluate(draw(space, 5, 1))
    assert "emission_filter" not in result.volumes


def test_emission_filter_counts_in_the_totals(
    studies: dict[str, Study], catalog: Catalog, draw: Draw
) -> None:
    study = studies["rooftop_5kw"]
    without, with_limit = (
        space_of(study, replace(ROOFTOP, emission_limit=limit), catalog) for limit in ("", CLASS_B)
    )
    designs = draw(without, 50, 2)
    bare, filtered = (space.inverter.evaluate(designs) for space in (without, with_limit))
    packing = ROOFTOP.rules.packing_factor
    assert filtered.volume - bare.volume == pytest.approx(filtered.volumes["emission_filter"] / packing)
    assert filtered.price - bare.price == pytest.approx(filtered.prices["emission_filter"])
    assert np.all(filtered.efficiency <= bare.efficiency)
    assert np.all(filtered.prices["emission_filter"] > 0.0)
