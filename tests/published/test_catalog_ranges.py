"""Catalogue values against published and recalled ranges of real components.

Every value that names a row (`range`) lies within that row's low..high; a failure's message carries the row's
source and status ("from memory" and "estimate" rows are plausibility, not proof). Rows that no value names,
but that a combination of values must satisfy, follow below.
"""

from __future__ import annotations

import math
import tomllib
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from catalog_rows import assert_in, limits_si, row_of, said

from models.catalog import load_catalog
from models.catalog.key_units import accepted_keys
from models.catalog.schemas import COST_SCHEMA, SCHEMAS, Schema

CATALOG = Path(__file__).parents[2] / "models" / "catalog"


def _parts() -> Iterator[tuple[Schema, dict[str, Any]]]:
    for path in sorted(CATALOG.glob("*.toml")):
        document = tomllib.loads(path.read_text(encoding="utf-8"))
        for schema in SCHEMAS:
            for part in document.get(schema.section, []):
                yield schema, part
        if "cost" in document:
            yield COST_SCHEMA, document["cost"]


def _ranged() -> Iterator[Any]:
    for schema, part in _parts():
        keys = accepted_keys(schema.quantities)
        for key, entry in part.items():
            if isinstance(entry, dict) and "range" in entry:
                names = entry["range"] if isinstance(entry["range"], list) else [entry["range"]]
                values = entry["value"] if isinstance(entry["value"], list) else [entry["value"]]
                assert len(names) == len(values), f"{part.get('name')}: {key} needs one row for each value"
                for place, (name, value) in enumerate(zip(names, values, strict=True)):
                    if name:
                        group, _, short = name.rpartition(" :: ")
                        unit = "W/m3 with Hz and T" if key == "steinmetz_k" else None
                        label = f"{part.get('name', schema.section)}-{key}-{place}"
                        row = (group or part["range_class"], short, unit)
                        yield pytest.param(value * keys[key][1], row, entry["origin"], id=label)


RANGED = list(_ranged())


@pytest.mark.parametrize(("value", "row_name", "origin"), RANGED)
def test_value_lies_in_its_published_range(value: float, row_name: tuple[str, ...], origin: str) -> None:
    row = row_of(*row_name)
    low, high = limits_si(row)
    slack = 1e-9 * abs(high)
    assert low - slack <= value <= high + slack, f"{value:g} outside {low:g}..{high:g}: {said(row)}"
    if row["status"] in ("from memory", "estimate"):
        assert row["status"] in origin, f"the origin must repeat the row's status: {said(row)}"


def test_most_values_are_tied_to_a_row() -> None:
    assert len(RANGED) > 500


def test_every_value_states_an_origin_that_says_how_it_is_known() -> None:
    starts = ("page", "from memory", "estimate", "derived", "definition", "convention", "limit read")
    for schema, part in _parts():
        for key, entry in part.items():
            if isinstance(entry, dict):
                assert entry["origin"].startswith(starts), f"{schema.section} {part.get('name')} {key}"
                if "range" not in entry:
                    assert not entry["origin"].startswith("page;"), (
                        f"a value read on a page names its row: {key}"
                    )


# --- rows that several values must satisfy together ---------------------------------------------------------

CAT = load_catalog()
SUPERJUNCTION = "Si superjunction MOSFET, 600/650 V"
IGBT_1700, IGBT_3300, IGBT_4500, IGBT_6500 = (f"Si IGBT + diode, {v} V" for v in (1700, 3300, 4500, 6500))
IGCT = "IGCT 4500 V (asymmetric)"


def device(name: str) -> Any:
    return CAT.devices[CAT.devices.index(name)]


@pytest.mark.parametrize(
    ("name", "group", "hot", "row"),
    [
        ("IGBT 650 V fast", "Si IGBT + diode, 600/650 V", False, "V_CE(sat) | fast, rated current, 25 C"),
        (
            "IGBT 650 V fast",
            "Si IGBT + diode, 600/650 V",
            True,
            "V_CE(sat) | fast, rated current, 150..175 C",
        ),
        (
            "IGBT 650 V low-loss",
            "Si IGBT + diode, 600/650 V",
            True,
            "V_CE(sat) | low-loss, rated current, 150 C",
        ),
        ("IGBT 1200 V fast", "Si IGBT + diode, 1200 V", False, "V_CE(sat) | fast, rated current, 25 C"),
        (
            "IGBT 1200 V low-loss",
            "Si IGBT + diode, 1200 V",
            False,
            "V_CE(sat) | low-loss, rated current, 25 C",
        ),
    ],
)
def test_saturation_voltage_of_threshold_and_slope(name: str, group: str, hot: bool, row: str) -> None:
    part = device(name)
    slope = part.slope_area_hot_ohm_m2 if hot else part.slope_area_25_ohm_m2
    threshold = part.threshold_hot_v if hot else part.threshold_25_v
    assert_in(threshold + slope * part.reference_current_density_a_per_m2, group, row)


@pytest.mark.parametrize(
    ("name", "group", "row"),
    [
        (
            "IGBT 1200 V low-loss",
            "Si IGBT + diode, 1200 V",
            "slope resistance x total die area | low-loss, 25 C",
        ),
        (
            "IGBT 1200 V low-loss",
            "Si IGBT + diode, 1200 V",
            "slope resistance x total die area | low-loss, 125..150 C",
        ),
        (
            "IGBT 1200 V fast",
            "Si IGBT + diode, 1200 V",
            "slope resistance x total die area | fast, 150..175 C",
        ),
        ("IGBT 1700 V module", IGBT_1700, "slope resistance x total die area | 125..150 C"),
        ("IGBT 3300 V module", IGBT_3300, "slope resistance x total die area | 125 C"),
        ("IGBT 4500 V module", IGBT_4500, "slope resistance x total die area | 125 C"),
        ("IGBT 6500 V module", IGBT_6500, "slope resistance x total die area | 125 C"),
        ("IGCT 4500 V", IGCT, "slope resistance x pole-piece area | 85 mm pole piece, 5674 mm2"),
    ],
)
def test_slope_derived_from_saturation_voltage(name: str, group: str, row: str) -> None:
    part = device(name)
    slope = part.slope_area_25_ohm_m2 if row.endswith(" 25 C") else part.slope_area_hot_ohm_m2
    assert_in(slope, group, row)


@pytest.mark.parametrize(
    ("name", "group", "row"),
    [
        ("IGBT 1700 V module", IGBT_1700, "V_CE(sat) hot/cold ratio | 125 C over 25 C (150 C: 1.25)"),
        ("IGBT 3300 V module", IGBT_3300, "V_CE(sat) hot/cold ratio | 125 C (150 C 1.29)"),
        ("IGBT 4500 V module", IGBT_4500, "V_CE(sat) hot/cold ratio | 125 C"),
        ("IGBT 6500 V module", IGBT_6500, "V_CE(sat) hot/cold ratio | 125 C"),
    ],
)
def test_saturation_voltage_grows_with_temperature(name: str, group: str, row: str) -> None:
    part = device(name)
    density = part.reference_current_density_a_per_m2
    hot, cool = (
        getattr(part, f"threshold_{t}_v") + getattr(part, f"slope_area_{t}_ohm_m2") * density
        for t in ("hot", "25")
    )
    assert_in(hot / cool, group, row)


def cold(part: Any, which: str) -> float:
    """Energy per ampere and volt at 25 C by E_hot [1 - k (T_hot - 25 C)]."""
    coefficient = getattr(part, f"{which}_temperature_coefficient_per_k")
    return float(getattr(part, f"{which}_energy_j_per_av") * (1 - coefficient * (part.energy_hot_c - 25.0)))


@pytest.mark.parametrize(
    ("name", "group", "which", "row"),
    [
        (
            "IGBT 650 V fast",
            "Si IGBT + diode, 600/650 V",
            "turn_on",
            "E_on per A and V | fast, 400 V, rated I, 25 C, co-pack diode",
        ),
        (
            "IGBT 650 V fast",
            "Si IGBT + diode, 600/650 V",
            "turn_off",
            "E_off per A and V | fast, 400 V, rated I, 25 C",
        ),
        (
            "IGBT 1200 V fast",
            "Si IGBT + diode, 1200 V",
            "turn_on",
            "E_on per A and V | fast, 600 V, rated I, 25 C, R_g about 10 Ohm",
        ),
        (
            "IGBT 1200 V fast",
            "Si IGBT + diode, 1200 V",
            "turn_off",
            "E_off per A and V | fast, 600 V, rated I, 25 C",
        ),
        (
            "SiC 1200 V",
            "SiC MOSFET, 1200 V",
            "turn_on",
            "E_on per A and V | 800 V, rated I, 25 C, R_g 2..5 Ohm",
        ),
        ("SiC 1200 V", "SiC MOSFET, 1200 V", "turn_off", "E_off per A and V | 800 V, rated I, 25 C"),
        ("GaN 650 V", "GaN HEMT, 650 V", "turn_on", "E_on per A and V | 400 V, 25 C"),
        ("SiC 650 V", "SiC MOSFET, 650/750 V", "turn_off", "E_off per A and V | 400 V, rated I, 25 C"),
        ("superjunction 650 V", SUPERJUNCTION, "recovery", "body-diode Q_rr per A | fast-diode series, 25 C"),
        ("IGBT 1700 V module", IGBT_1700, "turn_on", "E_on per A and V | 900 V, rated I, 25 C"),
        ("IGBT 1700 V module", IGBT_1700, "turn_off", "E_off per A and V | 900 V, rated I, 25 C"),
        ("IGBT 3300 V module", IGBT_3300, "turn_off", "E_off per A and V | 1800 V, 25 C"),
        (
            "low-voltage MOSFET 150 V",
            "Si low-voltage MOSFET, 150 V",
            "recovery",
            "body-diode Q_rr per A | 25 C",
        ),
    ],
)
def test_energy_at_25_c_follows_from_the_hot_one(name: str, group: str, which: str, row: str) -> None:
    assert_in(cold(device(name), which), group, row)


@pytest.mark.parametrize(
    ("name", "sum_nj_per_av"),
    [
        ("IGBT 650 V fast", 120),
        ("IGBT 1200 V fast", 205),
        ("IGBT 1200 V low-loss", 320),
        ("IGBT 1700 V module", 735),
        ("IGBT 3300 V module", 1780),
        ("IGBT 4500 V module", 3100),
        ("IGBT 6500 V module", 4330),
        ("SiC 1200 V", 33),
        ("SiC 1700 V", 70),
    ],
)
def test_orders_of_switching_energy(name: str, sum_nj_per_av: float) -> None:
    """Hot E_on + E_off of the classes, component facts note 3 (from memory for SiC)."""
    part = device(name)
    total = part.turn_on_energy_j_per_av + part.turn_off_energy_j_per_av
    assert total == pytest.approx(sum_nj_per_av * 1e-9, rel=0.05)


@pytest.mark.parametrize(
    ("name", "group", "row", "voltage"),
    [
        (
            "superjunction 650 V",
            SUPERJUNCTION,
            "E_oss/(Q_oss V) | 400 V; shows the extreme capacitance nonlinearity",
            400,
        ),
        ("SiC 1200 V", "SiC MOSFET, 1200 V", "E_oss/(Q_oss V) | SiC, C proportional V^-0.5 gives 1/3", 800),
        ("GaN 650 V", "GaN HEMT, 650 V", "E_oss/(Q_oss V) | 400 V", 400),
        ("GaN 200 V", "GaN HEMT, 650 V", "E_oss/(Q_oss V) | 400 V", 100),
        ("GaN 100 V", "GaN HEMT, 650 V", "E_oss/(Q_oss V) | 400 V", 50),
        ("SiC 1700 V", "SiC MOSFET, 1200 V", "E_oss/(Q_oss V) | SiC, C proportional V^-0.5 gives 1/3", 1200),
        (
            "SiC 3300 V module",
            "SiC MOSFET, 1200 V",
            "E_oss/(Q_oss V) | SiC, C proportional V^-0.5 gives 1/3",
            1800,
        ),
    ],
)
def test_output_energy_over_charge(name: str, group: str, row: str, voltage: float) -> None:
    part = device(name)
    assert part.energy_reference_voltage_v == voltage
    assert_in(part.output_energy_j_per_m2 / (part.output_charge_c_per_m2 * voltage), group, row)


def test_superjunction_price_times_on_resistance() -> None:
    part = device("superjunction 650 V")
    packaged = part.price_per_area_per_m2 + part.package_price / part.junction_case_reference_area_m2
    row = row_of(SUPERJUNCTION, "price x on-resistance | volume list 2025, 25 C typ. R_on")
    assert row["low"] <= packaged * part.slope_area_25_ohm_m2 * 1e3 <= row["high"], said(row)


def test_sic_output_charge_is_contained_in_its_turn_on_energy() -> None:
    """Component facts note 4: a data sheet's E_on mostly contains the output charge."""
    for part in CAT.devices:
        if part.turn_on_includes_output_charge:
            charge = part.output_charge_c_per_m2 / part.reference_current_density_a_per_m2
            assert charge < part.turn_on_energy_j_per_av, part.name
        if part.turn_off_energy_j_per_av and part.device_class not in ("silicon IGBT", "IGCT", "GTO"):
            assert part.output_charge_c_per_m2 > 0.0, part.name


ELECTROLYTIC = "4 electrolytic: aluminium, 16..600 V"
FILM = "4 film: dc link 450..1500 V"


SNAP_IN = "energy density at 450 V, snap-in | 470 uF in 35 x 50 mm: 47.6 J in 48.1 cm3"
ESR_PRODUCT = "ESR from tan delta | 100 Hz, 20 C: ESR C = tan d/(2 pi 100); 450 V 0.17 gives"
ELECTROLYTICS = [p for p in CAT.dc_link_capacitors if p.technology == "electrolytic"]
FILM_BOXES = [p for p in CAT.dc_link_capacitors if p.name.startswith("film ") and "can" not in p.name]
FILM_CANS = [p for p in CAT.dc_link_capacitors if p.name.startswith("film can")]


@pytest.mark.parametrize("part", ELECTROLYTICS, ids=lambda p: p.name)
def test_electrolytic_can(part: Any) -> None:
    """Energy and ripple current per volume of the can (box: 4/pi of it), ESR C at 20 C (from memory)."""
    can = part.unit_volume_m3 * math.pi / 4.0
    energy = 0.5 * part.unit_capacitance_f * part.voltage_rating_v**2
    scale = (part.voltage_rating_v / 450.0) ** 0.6
    assert_in(energy / can / scale, ELECTROLYTIC, SNAP_IN)
    density = part.unit_ripple_a / (can * 1e6)
    row = row_of(ELECTROLYTIC, "rms ripple current density | 450 V snap-in, 100 Hz, 105 C rated")
    assert row["low"] <= density <= row["high"], said(row)
    row = row_of(ELECTROLYTIC, ESR_PRODUCT)
    cold_product = part.unit_esr_low_ohm / 0.5 * part.unit_capacitance_f * 1e6
    assert row["low"] <= cold_product <= row["high"], said(row)


def test_electrolytic_price_check() -> None:
    part = CAT.dc_link_capacitors[CAT.dc_link_capacitors.index("electrolytic 450 V 470 uF")]
    assert_in(part.unit_price, ELECTROLYTIC, "price, check | 470 uF 450 V 105 C snap-in, 1k, 2023")


@pytest.mark.parametrize("part", FILM_CANS, ids=lambda p: p.name)
def test_film_can_takes_less_current_by_volume_than_a_box(part: Any) -> None:
    """Its core lies deeper below the surface: half of the large box's least and up (common practice)."""
    density = part.unit_ripple_a / (part.unit_volume_m3 * 1e6)
    row = row_of(FILM, "rms ripple current density | large box, 70 C")
    assert 0.5 * row["low"] <= density < row["typical"], said(row)


@pytest.mark.parametrize("part", FILM_BOXES, ids=lambda p: p.name)
def test_film_box_ripple_density(part: Any) -> None:
    density = part.unit_ripple_a / (part.unit_volume_m3 * 1e6)
    row = row_of(FILM, "rms ripple current density | large box, 70 C")
    assert row["low"] <= density <= row["high"], said(row)


def test_x2_price_of_one_microfarad() -> None:
    part = CAT.ac_capacitors[CAT.ac_capacitors.index("X2 film box 310 V ac")]
    price = part.price_fixed + 1e-6 * part.price_per_f
    group = "4 film: X2 275/310/330 V ac box"
    assert_in(price, group, "price | 1 uF, 1k pieces; 0.1 uF 0.08, 4.7 uF 1.2")


def test_finer_strands_have_thicker_enamel_and_cost_more() -> None:
    litz = sorted((p for p in CAT.conductors if p.kind == "litz"), key=lambda p: p.strand_diameter_m)
    assert len(litz) >= 4
    assert np.all(np.diff([p.strand_outer_factor for p in litz]) < 0.0)
    assert np.all(np.diff([p.copper_share_bobbin for p in litz]) > 0.0)
    assert np.all(np.diff([p.price_per_kg for p in litz]) < 0.0)
