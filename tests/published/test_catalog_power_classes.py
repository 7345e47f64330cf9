"""What several values of a device class must satisfy together: rows at other voltages, pairs in one module,
sums over a part, and what holds along the voltage ratings.

Rows marked "from memory" are plausibility, not proof; bands typed here say where they come from.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
import pytest
from catalog_rows import assert_in, limits_si, row_of, said

from models.catalog import load_catalog
from models.semiconductors.junction import junction_to_case

DEVICES = load_catalog().devices
FAMILIES = {
    "low-voltage MOSFET": [f"low-voltage MOSFET {v} V" for v in (100, 150, 200)],
    "silicon IGBT": ["IGBT 1200 V low-loss", *(f"IGBT {v} V module" for v in (1700, 3300, 4500, 6500))],
    "SiC MOSFET": ["SiC 650 V", "SiC 1200 V", "SiC 1700 V", "SiC 3300 V module"],
    "GaN HEMT": ["GaN 100 V", "GaN 200 V", "GaN 650 V"],
}
MODULES = [f"IGBT {volt} V module" for volt in (1700, 3300, 4500, 6500)]
IGBT_1700, SIC_3300 = "Si IGBT + diode, 1700 V", "SiC MOSFET, 3300 V"
IGCT, GTO = "IGCT 4500 V (asymmetric)", "GTO 4500 V"


def device(name: str) -> Any:
    return DEVICES[DEVICES.index(name)]


def rated_current(part: Any) -> float:
    """Of the die at the reference area [A]."""
    return float(part.reference_current_density_a_per_m2 * part.junction_case_reference_area_m2)


@pytest.mark.parametrize(
    ("name", "group", "charge_row", "energy_row"),
    [
        (
            "SiC 1700 V",
            "SiC MOSFET, 1700 V",
            "R_on x Q_oss | 1000 V, Q = 3 E/V",
            "R_on x E_oss | 1000 V",
        ),
        (
            "SiC 3300 V module",
            SIC_3300,
            "R_on x Q_oss | 1000 V only",
            "R_on x E_oss | 1000 V only (1800 V: x 2.4)",
        ),
    ],
)
def test_output_charge_at_the_voltage_of_its_row(
    name: str, group: str, charge_row: str, energy_row: str
) -> None:
    """Capacitance proportional to V^-0.5: charge grows with V^0.5, energy with V^1.5."""
    part = device(name)
    down = 1000.0 / part.energy_reference_voltage_v
    assert part.output_charge_voltage_exponent == 0.5
    assert_in(part.slope_area_25_ohm_m2 * part.output_charge_c_per_m2 * down**0.5, group, charge_row)
    assert_in(part.slope_area_25_ohm_m2 * part.output_energy_j_per_m2 * down**1.5, group, energy_row)


@pytest.mark.parametrize(
    ("name", "group", "row"),
    [
        ("IGBT 1700 V module", IGBT_1700, "package volume | two-switch modules"),
        ("SiC 3300 V module", SIC_3300, "package volume | 100 x 140 x 40 mm two-switch module"),
    ],
)
def test_two_switches_fill_one_module(name: str, group: str, row: str) -> None:
    assert_in(2.0 * device(name).package_volume_m3, group, row)


def test_two_switches_share_the_base_plate_of_a_62_mm_module() -> None:
    half = device("IGBT 1700 V module").case_sink_k_per_w / 2.0
    assert_in(half, "all", "R_th case-sink, 62 mm module, per module | grease")


@pytest.mark.parametrize("name", MODULES)
def test_diode_against_switch_in_one_module(name: str) -> None:
    """The row is of 1700 V modules; the same build, hence the same ratio, is taken for the higher ratings."""
    part = device(name)
    area = part.junction_case_reference_area_m2
    diode = junction_to_case(part, area * part.diode_area_share) * part.diode_junction_case_factor
    ratio = float(diode / junction_to_case(part, np.array(area)))
    assert_in(ratio, IGBT_1700, "diode R_th,jc relative to IGBT | same module")


def test_module_of_silicon_carbide_conducts_heat_as_the_row_of_discrete_parts_says_of_modules() -> None:
    row = row_of(SIC_3300, "R_th,jc x die area | discrete; module 15..20")
    assert 15e-6 <= device("SiC 3300 V module").junction_case_k_m2_per_w <= 20e-6, said(row)


def test_thermal_resistance_of_a_small_gan_die() -> None:
    part = device("GaN 100 V")
    resistance = part.junction_case_k_m2_per_w / part.junction_case_reference_area_m2
    assert_in(resistance, "GaN HEMT, 100 V", "R_th,jc | 5.6 mOhm die / embedded 7 mOhm part")


@pytest.mark.parametrize("frequency", [300.0, 400.0, 500.0])
def test_gate_unit_of_the_igct(frequency: float) -> None:
    """Constant part and charge per cycle together, at the full turn-off current."""
    part = device("IGCT 4500 V")
    charge = part.gate_charge_c_per_m2 * part.junction_case_reference_area_m2
    row = row_of(IGCT, "gate-unit power | per device at 300..500 Hz")
    power = part.gate_unit_power_w + charge * part.gate_swing_v * frequency
    assert row["low"] <= power <= row["high"], said(row)


def test_energies_of_igct_and_gto_hold_those_of_their_circuit() -> None:
    """Typical rows by hand; the share of clamp and choke lies in its row."""
    igct, gto = device("IGCT 4500 V"), device("GTO 4500 V")
    for part, bare in ((igct, 1960e-9), (gto, 916e-9)):
        assert_in(part.turn_off_energy_j_per_av / bare - 1.0, IGCT, "clamp + choke loss | ")
    snubber = (gto.turn_on_energy_j_per_av - 767e-9) * 1000.0 * 3000.0
    assert_in(snubber, GTO, "snubber energy | 0.5 C V^2 at 3000 V, 1 uF, lost unless recovered")


def test_slope_of_the_gto_leads_to_its_on_state_voltage_at_1000_a() -> None:
    part = device("GTO 4500 V")
    area = part.junction_case_reference_area_m2
    assert_in(
        part.threshold_hot_v + part.slope_area_hot_ohm_m2 / area * 1000.0,
        GTO,
        "V_TM | 1000 A, 125 C, maximum",
    )


@pytest.mark.parametrize("volt", [100, 150, 200])
def test_price_of_low_voltage_parts_times_on_resistance(volt: int) -> None:
    part = device(f"low-voltage MOSFET {volt} V")
    area = part.junction_case_reference_area_m2
    price = part.price_per_area_per_m2 * area + part.package_price
    condition = "volume" if volt == 150 else "volume list 2025"
    group = f"Si low-voltage MOSFET, {volt} V"
    assert_in(price * part.slope_area_25_ohm_m2 / area, group, f"price x on-resistance | {condition}")


@pytest.mark.parametrize("name", [*MODULES, "IGCT 4500 V"])
def test_price_of_a_full_package_per_ampere(name: str) -> None:
    part = device(name)
    rows = {
        "IGBT 1700 V module": "price per rated ampere | module, per switch, volume",
        "IGBT 3300 V module": "price per rated ampere | single-switch module",
        "IGBT 4500 V module": "price per rated ampere | single-switch module or press-pack",
        "IGBT 6500 V module": "price per rated ampere | single-switch module",
        "IGCT 4500 V": "price per I_TGQM ampere | with gate unit",
    }
    group = IGCT if name == "IGCT 4500 V" else f"Si IGBT + diode, {part.voltage_rating_v:.0f} V"
    area = part.die_area_max_m2
    current = part.reference_current_density_a_per_m2 * area
    assert_in((part.price_per_area_per_m2 * area + part.package_price) / current, group, rows[name])


@pytest.mark.parametrize("names", FAMILIES.values(), ids=FAMILIES)
def test_a_higher_rating_costs_resistance_and_current_density(names: list[str]) -> None:
    """Thicker drift regions: common practice, no source. Ratings rise from name to name."""
    parts = [device(name) for name in names]
    assert len({part.device_class for part in parts}) == 1
    assert np.all(np.diff([part.voltage_rating_v for part in parts]) > 0.0)
    assert np.all(np.diff([part.slope_area_hot_ohm_m2 for part in parts]) > 0.0)
    assert np.all(np.diff([part.reference_current_density_a_per_m2 for part in parts]) < 0.0)
    assert np.all(np.diff([part.dead_time_s for part in parts]) > 0.0)


@pytest.mark.parametrize("family", ["silicon IGBT", "SiC MOSFET"])
def test_a_higher_rating_costs_energy_per_ampere_and_volt(family: str) -> None:
    parts = [device(name) for name in FAMILIES[family]]
    energies = [part.turn_on_energy_j_per_av + part.turn_off_energy_j_per_av for part in parts]
    assert np.all(np.diff(energies) > 0.0)


def test_unipolar_resistance_grows_faster_than_voltage() -> None:
    """Exponent of R_on x A over rating: up to 2.5 by the drift region alone (unipolar limit of silicon), less
    where channel and substrate count; common practice, no source.
    """
    for low, high in (
        ("low-voltage MOSFET 100 V", "low-voltage MOSFET 200 V"),
        ("SiC 1700 V", "SiC 3300 V module"),
        ("GaN 100 V", "GaN 650 V"),
    ):
        first, last = device(low), device(high)
        rise = math.log(last.slope_area_25_ohm_m2 / first.slope_area_25_ohm_m2)
        assert 1.0 <= rise / math.log(last.voltage_rating_v / first.voltage_rating_v) <= 2.6, (low, high)


@pytest.mark.parametrize("part", list(DEVICES), ids=lambda part: part.name)
def test_rated_current_is_a_current_the_die_can_bear(part: Any) -> None:
    """Conduction of the hot die at rated current warms it over its case by 5 to 110 K: estimate; a rated
    current that melts the die, or that leaves it cold, is a slip of units.
    """
    current, area = rated_current(part), part.junction_case_reference_area_m2
    drop = part.threshold_hot_v + part.slope_area_hot_ohm_m2 / area * current
    rise = current * drop * part.junction_case_k_m2_per_w / area
    assert 5.0 <= rise <= 110.0


def test_only_parts_with_a_gate_unit_take_a_constant_power_and_few_have_a_frequency_limit() -> None:
    """Frequency limits: common practice, no source."""
    for part in DEVICES:
        assert (part.gate_unit_power_w > 0.0) == (part.device_class in ("IGCT", "GTO")), part.name
    limited = {part.name: part.greatest_switching_frequency_hz for part in DEVICES}
    limited = {name: limit for name, limit in limited.items() if math.isfinite(limit)}
    assert limited == {"IGBT 6500 V module": 2000.0, "IGCT 4500 V": 1000.0, "GTO 4500 V": 500.0}


def test_frequency_limits_leave_room_for_dead_time_and_least_on_time() -> None:
    """On and off once a period, each at least as long as the dead time, and two dead times."""
    for part in DEVICES:
        assert 4.0 * part.dead_time_s * min(part.greatest_switching_frequency_hz, 2000.0) < 0.5, part.name


def test_every_self_commutated_class_of_the_rows_is_in_the_catalogue() -> None:
    """The phase-control thyristor cannot turn off, the Schottky diodes are no switches."""
    ratings = {(part.device_class, part.voltage_rating_v) for part in DEVICES}
    assert ratings == {
        *(("low-voltage MOSFET", float(volt)) for volt in (100, 150, 200)),
        *(("silicon IGBT", float(volt)) for volt in (650, 1200, 1700, 3300, 4500, 6500)),
        ("superjunction MOSFET", 650.0),
        *(("SiC MOSFET", float(volt)) for volt in (650, 1200, 1700, 3300)),
        *(("GaN HEMT", float(volt)) for volt in (100, 200, 650)),
        ("IGCT", 4500.0),
        ("GTO", 4500.0),
    }


@pytest.mark.parametrize("part", list(DEVICES), ids=lambda part: part.name)
def test_packages_are_places_of_one_switch(part: Any) -> None:
    """The largest die covers at most 0.55 of the footprint (estimate: tab of a through-hole package)."""
    assert part.die_area_max_m2 <= 0.55 * part.mounting_area_m2
    assert part.die_area_min_m2 <= part.junction_case_reference_area_m2 <= part.die_area_max_m2


def test_limits_of_rows_used_here_are_in_si() -> None:
    assert limits_si(row_of(IGCT, "R_th,jc | double-sided")) == pytest.approx((8e-3, 13e-3))
