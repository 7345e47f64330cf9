"""The models' waveform quantities against the edge-by-edge oracle, at random indexes and power factors.

The models take the line quantities as standing still within a switching period; the oracle does not. Its
pulse ratio is kept high enough that this difference lies well below the tolerances, except where a test
says otherwise.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
import pytest
from closed_loops import split_loss
from numpy.typing import NDArray
from oracle import FOLLOWING, SCHEMES, LinePeriod, scheme_at
from probe_device import At

from models.waveforms.bridges import BRIDGES
from models.waveforms.dc_link_current import rail_rms
from models.waveforms.operating_waveforms import operating_waveforms
from models.waveforms.tables import waveform_tables

Array = NDArray[np.float64]
BRIDGE_OF = {scheme.name: bridge.name for bridge in BRIDGES.values() for scheme in bridge.modulations}
CONTINUOUS = ["sine-triangle", "third harmonic one sixth", "centred space vector"]
JUMPING = ["one leg at line frequency", "discontinuous clamped at voltage peak", FOLLOWING]
CASES = 10
DEVICE_QUANTITIES = ("switch_average", "switch_mean_square", "diode_average", "diode_mean_square")


def odd_ratio(name: str, least: int) -> int:
    """An odd pulse ratio, for three phases a multiple of three; a multiple of six where a clamp 30 degrees
    off the voltage's peak shall begin at a peak of the carrier.
    """
    if name == FOLLOWING:
        return least + (6 - least) % 6
    step = 6 if len(SCHEMES[name].weights) == 3 else 2
    return least + (3 - least) % step if step == 6 else least | 1


def clamp_at_corner(lag: float, ratio: int) -> float:
    """The nearest lag whose clamped sectors begin right after a peak of the carrier, where controls change
    over; in the middle of a slope the change shifts a pulse, which the tables do not know of.
    """
    step = math.pi / ratio
    return round(lag / step) * step + 1e-6


@dataclass(frozen=True)
class Case:
    """One random state in both worlds."""

    at: At
    exact: LinePeriod

    @property
    def place(self) -> tuple[Array, Array, Array]:
        scheme = np.array([BRIDGES[self.at.bridge].modulation_index(self.at.scheme)])
        row, weight = self.at.tables.position(np.array([self.at.index]))
        return scheme, row, weight

    def table(self, name: str) -> float | Array:
        tables = self.at.tables
        found = tables.read(getattr(tables, name), *self.place)[0]
        return float(found) if np.ndim(found) == 0 else found

    def exact_devices(self) -> dict[str, float]:
        """Mean over the legs whose currents differ."""
        legs = BRIDGES[self.at.bridge].modelled_legs
        found = [self.exact.device_currents(leg) for leg in legs]
        return {name: float(np.mean([one[name] for one in found])) for name in DEVICE_QUANTITIES}

    def exact_commutations(self) -> dict[str, float]:
        legs = [leg for leg in BRIDGES[self.at.bridge].modelled_legs if self.exact.scheme.carriers[leg]]
        found = [self.exact.commutations(leg) for leg in legs]
        return {name: float(np.mean([one[name] for one in found])) for name in found[0]}


@lru_cache
def cases(
    name: str, least_ratio: int, ripple_unit: float = 0.0, count: int = CASES, low: float = 0.1
) -> list[Case]:
    """Random indexes up to 99.5 % of the linear limit, lags and leads of any power factor."""
    rng = np.random.default_rng(sum(map(ord, name)) + least_ratio)
    limit = SCHEMES[name].limit
    found = []
    for _ in range(count):
        index = rng.uniform(low, 0.995 * limit)
        lag = float(rng.choice([-1.0, 1.0]) * math.acos(rng.uniform(0.0, 1.0)))
        ratio = odd_ratio(name, least_ratio)
        if name == FOLLOWING:
            lag = clamp_at_corner(lag, ratio)
        at = At(BRIDGE_OF[name], name, index, lag, ripple_unit=ripple_unit)
        found.append(Case(at, LinePeriod(scheme_at(name, lag), index, ratio, lag, ripple_unit or 1e-9)))
    return found


def close(found: float, expected: float, tolerance: float, case: Case, what: str) -> None:
    assert found == pytest.approx(expected, rel=tolerance), (
        f"{what} at M = {case.at.index:.3f}, phi = {case.at.lag:.3f}"
    )


@pytest.mark.parametrize("name", SCHEMES)
def test_every_scheme_of_the_registry_has_an_oracle(name: str) -> None:
    two_level = {one.name for bridge in BRIDGES.values() if bridge.levels == 2 for one in bridge.modulations}
    assert two_level <= set(SCHEMES)
    scheme = BRIDGES[BRIDGE_OF[name]].modulations[BRIDGES[BRIDGE_OF[name]].modulation_index(name)]
    assert scheme.linear_limit == pytest.approx(SCHEMES[name].limit)


@pytest.mark.parametrize("name", SCHEMES)
def test_fundamental(name: str) -> None:
    for case in cases(name, 63):
        expected = abs(case.exact.harmonic(1))
        close(BRIDGES[case.at.bridge].index_base * case.at.index, expected, 1e-3, case, "fundamental")


@pytest.mark.parametrize("name", SCHEMES)
def test_listed_sidebands(name: str) -> None:
    """0.7 % of the fundamental or 1 % of the line.

    0.5 % is missed (0.6 %, always on the high side) where a line passes through zero between two indexes of
    the tables, which interpolate its magnitude. Where references jump, sidebands reach far and those of
    neighbouring groups fall on one another at low pulse ratios: 1.6 % of the fundamental at 63, 0.5 % at
    603.
    """
    for case in cases(name, 603 if name in JUMPING else 63):
        tables = case.at.tables
        scheme = case.place[0][0]
        amplitudes = np.asarray(case.table("sideband_amplitude"))
        fundamental = abs(case.exact.harmonic(1))
        for place in np.flatnonzero(tables.sideband_listed[scheme]):
            carrier, line = tables.sideband_carrier[scheme, place], tables.sideband_line[scheme, place]
            expected = abs(case.exact.harmonic(int(carrier * case.exact.ratio + line)))
            room = max(0.007 * fundamental, 0.01 * expected)
            assert abs(amplitudes[place] - expected) <= room, (carrier, line, case.at)


@pytest.mark.parametrize("name", SCHEMES)
def test_mean_square_of_the_switched_voltage(name: str) -> None:
    """All sidebands and rest lines together with the fundamental."""
    for case in cases(name, 123):
        base = case.at.entry.index_base * case.at.index
        found = 0.5 * (base**2 + float((case.table("sideband_amplitude") ** 2).sum()))
        close(found, case.exact.voltage_mean_square, 2e-3, case, "mean-square voltage")


@pytest.mark.parametrize("name", SCHEMES)
def test_ripple_rms(name: str) -> None:
    for case in cases(name, 63):
        found = math.sqrt(float(case.table("ripple_mean_square")))
        expected = math.sqrt(case.exact.ripple_mean_square) / case.exact.ripple_unit
        close(found, expected, 0.01, case, "ripple rms")


@pytest.mark.parametrize("name", SCHEMES)
def test_greatest_peak_to_peak_ripple(name: str) -> None:
    """2 %: up to 1.04 % is missed by the three-phase tables, whose angles stand half a step beside the
    peak.
    """
    for case in cases(name, 123):
        expected = case.exact.ripple_peak_to_peak / case.exact.ripple_unit
        close(float(case.table("peak_ripple")), expected, 0.02, case, "peak-to-peak ripple")


@pytest.mark.parametrize("name", SCHEMES)
def test_device_currents_without_ripple(name: str) -> None:
    for case in cases(name, 63):
        found, expected = case.at.read(), case.exact_devices()
        for quantity in DEVICE_QUANTITIES:
            tolerance = 0.01 if quantity.endswith("square") else 0.005  # twice 0.5 % of an rms current
            close(found[quantity], expected[quantity], tolerance, case, quantity)


RATED_RIPPLE = 0.4  # V_dc/(L f_s) over the peak current: 20 % peak to peak at most (bipolar), less elsewhere
COUNTING = 603


@pytest.mark.parametrize("name", SCHEMES)
def test_device_currents_with_ripple(name: str) -> None:
    for case in cases(name, COUNTING, RATED_RIPPLE):
        found, expected = case.at.read(), case.exact_devices()
        for quantity in DEVICE_QUANTITIES:
            close(found[quantity], expected[quantity], 0.01, case, quantity)


@pytest.mark.parametrize("name", SCHEMES)
def test_sums_of_commutated_currents(name: str) -> None:
    for case in cases(name, COUNTING, RATED_RIPPLE):
        found, expected = case.at.read(), case.exact_commutations()
        close(found["turn_on"], expected["turn_on"], 0.01, case, "turn-on currents")
        close(found["recovery"], expected["turn_on"], 0.01, case, "recovering currents")
        close(found["turn_off"], expected["turn_off"], 0.01, case, "turn-off currents")


@pytest.mark.parametrize("name", SCHEMES)
def test_number_of_hard_turn_ons(name: str) -> None:
    """Counted over 18 cells of the half wave: two of them may fall on the wrong side, one a side of the
    current's zero.
    """
    for case in cases(name, COUNTING, RATED_RIPPLE):
        found, expected = case.at.read()["hard_turn_ons"], case.exact_commutations()["hard_turn_ons"]
        assert abs(found - expected) < 2.0 / 18.0, case.at


@pytest.mark.parametrize("name", SCHEMES)
def test_dc_link_current(name: str) -> None:
    for case in cases(name, 63):
        lag = np.array([case.at.lag])
        slow, fast = (float(rail_rms(case.table(part), lag)[0]) for part in ("rail_slow", "rail_fast"))
        found = math.hypot(slow, fast)
        if not (name in CONTINUOUS or name.startswith("discontinuous")):
            close(slow, case.exact.dc_double_frequency_rms, 0.01, case, "double-frequency current")
        close(found, case.exact.dc_capacitor_rms, 0.01, case, "capacitor current")


@pytest.mark.parametrize("name", SCHEMES)
def test_dc_link_current_hardly_feels_the_ripple_of_rated_load(name: str) -> None:
    for case in cases(name, 123, RATED_RIPPLE):
        smooth = LinePeriod(case.exact.scheme, case.at.index, case.exact.ratio, case.at.lag)
        close(smooth.dc_capacitor_rms, case.exact.dc_capacitor_rms, 0.02, case, "capacitor current")


EXPONENTS = (1.5, 2.6)


def core_loss_shapes(name: str, index: float) -> tuple[float, float]:
    """Mean iGSE shape integral: of the tables, and of the oracle's loops."""
    tables = waveform_tables(BRIDGE_OF[name], (EXPONENTS,))
    scheme = np.array([BRIDGES[BRIDGE_OF[name]].modulation_index(name)])
    found = float(tables.read(tables.core_loss_shape, scheme, *tables.position(np.array([index])))[0, 0])
    loops = LinePeriod(SCHEMES[name], index, odd_ratio(name, 363)).period_loops()
    return found, float(np.mean([split_loss(*loop, *EXPONENTS) for loop in loops]))


@pytest.mark.parametrize("name", SCHEMES)
@pytest.mark.parametrize("index", [0.3, 0.6, 0.9])
def test_core_loss_of_the_ripple(name: str, index: float) -> None:
    """Minor loops split from the major one, within 1 %."""
    found, expected = core_loss_shapes(name, index)
    assert found == pytest.approx(expected, rel=0.01)


LIGHT_LOAD = (
    8.0  # V_dc/(L f_s) over the peak current: a rated ripple of 40 % (bipolar) at a tenth of the load
)


@pytest.mark.parametrize("name", SCHEMES)
def test_turn_off_currents_at_light_load(name: str) -> None:
    for case in cases(name, COUNTING, LIGHT_LOAD, 4):
        close(
            case.at.read()["turn_off"], case.exact_commutations()["turn_off"], 0.01, case, "turn-off currents"
        )


@pytest.mark.xfail(
    strict=True, reason="defect: average device currents take no ripple, low where the current reverses"
)
@pytest.mark.parametrize("name", ["bipolar", "unipolar", "one leg at line frequency"])
def test_average_device_currents_at_light_load(name: str) -> None:
    for case in cases(name, COUNTING, LIGHT_LOAD, 4):
        found, expected = case.at.read(), case.exact_devices()
        close(found["switch_average"], expected["switch_average"], 0.01, case, "switch average")
        close(found["diode_average"], expected["diode_average"], 0.01, case, "diode average")


@pytest.mark.parametrize("name", SCHEMES)
def test_mean_square_of_both_devices_at_light_load(name: str) -> None:
    """Switch and diode together carry all of the leg's mean square, the ripple's included."""
    for case in cases(name, COUNTING, LIGHT_LOAD, 4):
        found, expected = (
            values["switch_mean_square"] + values["diode_mean_square"]
            for values in (case.at.read(), case.exact_devices())
        )
        assert expected > 0.25 * 1.001  # the ripple is felt
        close(found, expected, 0.01, case, "mean square of both devices")


@pytest.mark.parametrize("name", SCHEMES)
def test_turn_on_currents_at_light_load(name: str) -> None:
    """Where turn-on is soft it must vanish: 2 % of the peak current, most of it the 18 cells'."""
    for case in cases(name, COUNTING, LIGHT_LOAD, 4):
        assert abs(case.at.read()["turn_on"] - case.exact_commutations()["turn_on"]) < 0.02, case.at


@pytest.mark.parametrize("ripple_unit", [RATED_RIPPLE, LIGHT_LOAD])
@pytest.mark.parametrize("name", SCHEMES)
def test_exact_line_period(name: str, ripple_unit: float) -> None:
    """Two exact roads, the models' own and the oracle's, at the same pulse ratio: 0.2 %.

    Commutation sums within two edges: whether a jump of a reference is a commutation depends on the last
    digit.
    """
    for case in cases(name, 123, ripple_unit, 4):
        exact = case.exact
        found = operating_waveforms(
            bridge=case.at.bridge,
            modulation=name,
            modulation_index=case.at.index,
            displacement=case.at.lag,
            dc_voltage=1.0,
            inductance=1.0 / (ripple_unit * exact.ratio),
            switching_frequency=exact.ratio,
            line_frequency=1.0,
            current=math.sqrt(0.5),
        )
        close(float(found.fundamental_peak), abs(exact.harmonic(1)), 1e-3, case, "fundamental")
        close(float(found.ripple_rms), math.sqrt(exact.ripple_mean_square), 2e-3, case, "ripple rms")
        close(float(found.ripple_peak_to_peak), exact.ripple_peak_to_peak, 5e-3, case, "ripple")
        close(float(found.dc_capacitor_rms), exact.dc_capacitor_rms, 2e-3, case, "capacitor current")
        devices, edge = exact.device_currents(0), 2.0 * (1.0 + ripple_unit) / exact.ratio
        for part, word in (("T1", "switch"), ("D1", "diode")):
            close(float(found.positions[part].average), devices[f"{word}_average"], 2e-3, case, word)
            rms = math.sqrt(devices[f"{word}_mean_square"])
            close(float(found.positions[part].rms), rms, 2e-3, case, word)
        for kind in ("turn_on", "turn_off"):
            total = float(getattr(found, f"{kind}_sum")) / exact.ratio
            assert abs(total - exact.commutations(0)[kind]) < edge, (kind, case.at)
