"""The loader: what it accepts, what it refuses and in which words."""

from __future__ import annotations

import pickle
from pathlib import Path

import numpy as np
import pytest

from models.catalog import Catalog, load_catalog

DEVICE = """
[[devices]]
name = "measured switch"
based_on = "SiC 1200 V"
"""
CAPACITOR = """
[[ac_capacitors]]
name = "own film box"
voltage_rating_v_ac = { value = 275, origin = "data sheet" }
volume_cm3_per_uf = { value = 6.0, origin = "data sheet" }
current_a_per_uf = { value = 0.5, origin = "data sheet" }
loss_tangent = { value = 0.002, origin = "data sheet" }
price_per_uf = { value = 0.3, origin = "offer" }
price_fixed = { value = 0, origin = "offer" }
density_g_cm3 = { value = 1.4, origin = "weighed" }
temperature_limit_c = { value = 105, origin = "data sheet" }
"""


def loaded(folder: Path, text: str) -> Catalog:
    path = folder / "own.toml"
    path.write_text(text, encoding="utf-8")
    return load_catalog([path])


def refused(folder: Path, text: str) -> str:
    with pytest.raises(ValueError, match=r"^catalogue: ") as caught:
        loaded(folder, text)
    return str(caught.value)


def test_built_in_catalogue_is_complete_cached_and_can_be_sent_to_a_worker() -> None:
    catalog = load_catalog()
    assert catalog is load_catalog()
    classes = {part.device_class for part in catalog.devices}
    silicon = {"low-voltage MOSFET", "superjunction MOSFET", "silicon IGBT", "IGCT", "GTO"}
    assert classes == silicon | {"SiC MOSFET", "GaN HEMT"}
    families = {part.family for part in catalog.core_shapes}
    wound = {"cut C", "three-limb"}
    assert families == {"E", "ETD", "PQ", "RM", "U", "toroid powder", "toroid ferrite"} | wound
    for part in catalog.core_materials:
        assert set(part.families) <= families
    assert pickle.loads(pickle.dumps(catalog)) == catalog


def test_every_number_of_every_part_has_an_origin() -> None:
    catalog = load_catalog()
    tables = (
        catalog.devices,
        catalog.core_materials,
        catalog.core_shapes,
        catalog.conductors,
        catalog.ac_capacitors,
        catalog.dc_link_capacitors,
    )
    for table in tables:
        for part in table:
            numbers = {
                name
                for name, value in vars(part).items()
                if name != "origin"
                and (
                    isinstance(value, float)
                    or (isinstance(value, tuple) and value and isinstance(value[0], float))
                )
            }
            assert numbers == set(part.origin), part.name
            assert all(words.strip() for words in part.origin.values()), part.name


def test_no_number_is_nan_and_only_limits_that_do_not_exist_are_infinite() -> None:
    """Roll-off field of gapped cores, frequency limit of parts that have none."""
    catalog = load_catalog()
    endless = ("rolloff_field_a_per_m", "greatest_switching_frequency_hz")
    for table in (
        catalog.devices,
        catalog.core_materials,
        catalog.core_shapes,
        catalog.conductors,
        catalog.ac_capacitors,
        catalog.dc_link_capacitors,
        catalog.fans,
    ):
        for name in (n for n in vars(table[0]) if n != "origin"):
            column = table.column(name)
            if column.dtype.kind == "f":
                assert not np.isnan(column).any(), name
                assert np.isfinite(column).all() or name in endless, name
    materials = catalog.core_materials
    assert np.array_equal(
        np.isinf(materials.column("rolloff_field_a_per_m")), materials.column("kind") == "gapped"
    )


def test_own_part_is_added_in_si_with_its_origin(tmp_path: Path) -> None:
    catalog = loaded(tmp_path, CAPACITOR)
    assert len(catalog.ac_capacitors) == len(load_catalog().ac_capacitors) + 1
    part = catalog.ac_capacitors[catalog.ac_capacitors.index("own film box")]
    assert part.volume_m3_per_f == 6.0  # 6 cm3 for 1 uF is 6 m3 for 1 F
    assert part.current_a_per_f == 0.5e6
    assert part.price_per_f == pytest.approx(0.3e6)
    assert part.density_kg_m3 == 1400.0
    assert part.origin["density_kg_m3"] == "weighed"


@pytest.mark.parametrize(
    ("line", "field", "si"),
    [
        ("slope_area_25_mohm_cm2 = { value = 3.0, origin = 'x' }", "slope_area_25_ohm_m2", 3.0e-7),
        ("slope_area_25_ohm_mm2 = { value = 0.3, origin = 'x' }", "slope_area_25_ohm_m2", 3.0e-7),
        ("turn_on_energy_nj_per_av = { value = 20, origin = 'x' }", "turn_on_energy_j_per_av", 20e-9),
        (
            "reference_current_density_a_per_mm2 = { value = 3, origin = 'x' }",
            "reference_current_density_a_per_m2",
            3e6,
        ),
        ("dead_time_ns = { value = 150, origin = 'x' }", "dead_time_s", 150e-9),
        ("junction_case_k_mm2_per_w = { value = 6, origin = 'x' }", "junction_case_k_m2_per_w", 6e-6),
        ("price_per_area_per_mm2 = { value = 0.4, origin = 'x' }", "price_per_area_per_m2", 0.4e6),
        ("switch_node_capacitance_pf = { value = 20, origin = 'x' }", "switch_node_capacitance_f", 20e-12),
        (
            "output_charge_nc_per_cm2 = { value = 1800, origin = 'x' }",
            "output_charge_c_per_m2",
            1800e-9 * 1e4,
        ),
    ],
)
def test_units_at_the_end_of_a_key(tmp_path: Path, line: str, field: str, si: float) -> None:
    catalog = loaded(tmp_path, DEVICE + line)
    part = catalog.devices[catalog.devices.index("measured switch")]
    assert getattr(part, field) == pytest.approx(si, rel=1e-12)
    assert part.origin[field] == "x"


def test_data_sheet_of_one_switch_on_top_of_its_class(tmp_path: Path) -> None:
    """40 mOhm at 3.8 mOhm cm2 is a die of 9.5 mm2; area-specific values follow from it by hand."""
    catalog = loaded(
        tmp_path,
        DEVICE
        + """
sheet_on_resistance_25_mohm = { value = 40, origin = "data sheet" }
sheet_rated_current_a = { value = 38, origin = "data sheet" }
sheet_turn_off_energy_uj = { value = 250, origin = "data sheet, hot" }
sheet_output_charge_nc = { value = 150, origin = "data sheet" }
sheet_junction_case_k_per_w = { value = 0.7, origin = "data sheet" }
sheet_price = { value = 7.3, origin = "offer" }
""",
    )
    base = catalog.devices[catalog.devices.index("SiC 1200 V")]
    part = catalog.devices[catalog.devices.index("measured switch")]
    assert part.slope_area_25_ohm_m2 == base.slope_area_25_ohm_m2
    assert part.reference_current_density_a_per_m2 == pytest.approx(38 / 9.5e-6)
    assert part.turn_off_energy_j_per_av == pytest.approx(250e-6 / (38 * 800))
    assert part.turn_on_energy_j_per_av == base.turn_on_energy_j_per_av
    assert part.output_charge_c_per_m2 == pytest.approx(150e-9 / 9.5e-6)
    assert part.junction_case_k_m2_per_w / part.junction_case_reference_area_m2 == pytest.approx(0.7)
    assert part.price_per_area_per_m2 * 9.5e-6 + part.package_price == pytest.approx(7.3)
    assert part.origin["dead_time_s"].startswith("as SiC 1200 V: ")
    assert "data sheet, hot" in part.origin["turn_off_energy_j_per_av"]


def test_measured_die_area_of_a_sheet_sets_the_area_specific_resistance(tmp_path: Path) -> None:
    catalog = loaded(
        tmp_path,
        DEVICE
        + """
sheet_on_resistance_25_mohm = { value = 40, origin = "data sheet" }
sheet_die_area_mm2 = { value = 10, origin = "opened part" }
""",
    )
    base = catalog.devices[catalog.devices.index("SiC 1200 V")]
    part = catalog.devices[catalog.devices.index("measured switch")]
    assert part.slope_area_25_ohm_m2 == pytest.approx(40e-3 * 10e-6)
    ratio = base.slope_area_hot_ohm_m2 / base.slope_area_25_ohm_m2
    assert part.slope_area_hot_ohm_m2 / part.slope_area_25_ohm_m2 == pytest.approx(ratio)


def test_energy_of_turn_on_and_off_together_is_split_by_a_share(tmp_path: Path) -> None:
    catalog = loaded(
        tmp_path,
        DEVICE
        + "switching_energy_nj_per_av = { value = 40, origin = 'x' }\n"
        + "turn_on_share = { value = 0.7, origin = 'y' }",
    )
    part = catalog.devices[catalog.devices.index("measured switch")]
    assert part.turn_on_energy_j_per_av == pytest.approx(28e-9)
    assert part.turn_off_energy_j_per_av == pytest.approx(12e-9)
    assert part.origin["turn_off_energy_j_per_av"] == (
        "derived: rest of the energy of turn-on and turn-off together (x; y)"
    )


def test_snubber_and_clamp_are_counted_with_the_switch(tmp_path: Path) -> None:
    """By hand: 2 J of snubber at 500 A and 1600 V are 2500 nJ/(A V); half as much again at turn-off."""
    catalog = loaded(
        tmp_path,
        """
[[devices]]
name = "own puck"
based_on = "GTO 4500 V"
sheet_rated_current_a = { value = 500, origin = "data sheet" }
energy_reference_voltage_v = { value = 1600, origin = "data sheet" }
bare_turn_on_energy_nj_per_av = { value = 700, origin = "data sheet" }
snubber_energy_j = { value = 2, origin = "0.5 C V^2" }
bare_turn_off_energy_nj_per_av = { value = 1000, origin = "data sheet" }
clamp_loss_ratio = { value = 0.5, origin = "bench" }
""",
    )
    part = catalog.devices[catalog.devices.index("own puck")]
    assert part.turn_on_energy_j_per_av == pytest.approx(3200e-9)
    assert part.turn_off_energy_j_per_av == pytest.approx(1500e-9)
    assert part.gate_unit_power_w == 40.0
    assert part.greatest_switching_frequency_hz == 500.0
    assert part.origin["greatest_switching_frequency_hz"].startswith("as GTO 4500 V: ")


def test_price_times_on_resistance(tmp_path: Path) -> None:
    """By hand: a price of 38 for 1 mohm at 3.8 mohm cm2 is 10 for 1 cm2, package and all."""
    catalog = loaded(tmp_path, DEVICE + "price_on_resistance_mohm = { value = 38, origin = 'x' }")
    part = catalog.devices[catalog.devices.index("measured switch")]
    share = part.package_price / part.junction_case_reference_area_m2
    assert part.price_per_area_per_m2 + share == pytest.approx(10.0 / 1e-4)


def test_gate_unit_and_frequency_limit_are_stated_where_a_part_has_them(tmp_path: Path) -> None:
    catalog = loaded(
        tmp_path,
        DEVICE
        + "gate_unit_power_w = { value = 3, origin = 'data sheet' }\n"
        + "greatest_switching_frequency_khz = { value = 60, origin = 'data sheet' }",
    )
    base = catalog.devices[catalog.devices.index("SiC 1200 V")]
    part = catalog.devices[catalog.devices.index("measured switch")]
    assert (base.gate_unit_power_w, base.greatest_switching_frequency_hz) == (0.0, np.inf)
    assert base.origin["gate_unit_power_w"] == "convention: gate drive takes charge per cycle only"
    assert (part.gate_unit_power_w, part.greatest_switching_frequency_hz) == (3.0, 60e3)


def test_a_material_based_on_another_keeps_its_measured_line_loss(tmp_path: Path) -> None:
    catalog = loaded(
        tmp_path,
        '[[core_materials]]\nname = "own strip"\nbased_on = "grain-oriented silicon steel 0.23 mm"\n'
        'price_per_kg = { value = 20, origin = "offer" }\n',
    )
    materials = catalog.core_materials
    own = materials[materials.index("own strip")]
    base = materials[materials.index("grain-oriented silicon steel 0.23 mm")]
    assert own.price_per_kg == 20.0
    assert own.line_loss_w_per_m3 == base.line_loss_w_per_m3 == pytest.approx(0.3 * 7650)


def test_cost_entries_of_an_own_file_replace_the_built_in_ones(tmp_path: Path) -> None:
    catalog = loaded(tmp_path, '[cost]\nboard_price_per_m2 = { value = 90, origin = "own purchase" }\n')
    assert catalog.cost.board_price_per_m2 == 90.0
    assert catalog.cost.origin["board_price_per_m2"] == "own purchase"
    assert catalog.cost.control_price == load_catalog().cost.control_price


def test_a_part_is_replaced_only_when_it_says_so(tmp_path: Path) -> None:
    own = CAPACITOR.replace("own film box", "X2 film box 310 V ac")
    assert "there is such a part already" in refused(tmp_path, own)
    said = own.replace("[[ac_capacitors]]", "[[ac_capacitors]]\nreplaces = true")
    catalog = loaded(tmp_path, said)
    assert catalog.ac_capacitors[0].voltage_rating_v_ac == 275.0
    assert catalog.ac_capacitors.names == load_catalog().ac_capacitors.names


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        (DEVICE + "dead_tim_ns = { value = 1, origin = 'x' }", ["'dead_tim_ns'", "'dead_time_ns'"]),
        (DEVICE + "dead_time_ns = { value = 1 }", ["dead_time_ns has no origin"]),
        (DEVICE + "dead_time_ns = { value = 1, origin = '  ' }", ["dead_time_ns has no origin"]),
        (
            DEVICE + "dead_time_ns = { value = -1, origin = 'x' }",
            ["dead_time_s must be greater than zero, got -1e-09"],
        ),
        (DEVICE + "dead_time_ns = { value = nan, origin = 'x' }", ["dead_time_s must not be NaN"]),
        (DEVICE + "dead_time_ns = { value = inf, origin = 'x' }", ["dead_time_s must be finite"]),
        (DEVICE + "dead_time_ns = 150", ["dead_time_ns must be written", "150"]),
        (DEVICE + "dead_time_ns = { value = 'long', origin = 'x' }", ["must be a number", "'long'"]),
        (DEVICE + "dead_time_ns = { value = [1, 2], origin = 'x' }", ["dead_time_s must be one number"]),
        (DEVICE + "dead_time_ns = { value = 1, orign = 'x', origin = 'x' }", ["'orign'", "'origin'"]),
        (
            DEVICE + "dead_time_ns = { value = 1, origin = 'x' }\ndead_time_us = { value = 1, origin = 'x' }",
            ["dead_time_s is given twice"],
        ),
        (DEVICE + "output_charge_nc_per_cm2 = { value = -1, origin = 'x' }", ["must not be negative"]),
        (
            DEVICE + "voltage_use_limit = { value = 1.2, origin = 'x' }",
            ["voltage_use_limit must not exceed 1, got 1.2"],
        ),
        (
            DEVICE + "die_area_max_mm2 = { value = 1, origin = 'x' }",
            ["die_area_min_m2 must not exceed die_area_max_m2"],
        ),
        (
            DEVICE + "turn_on_temperature_coefficient_per_k = { value = 0.02, origin = 'x' }",
            ["energy vanish"],
        ),
        (
            DEVICE + "sheet_gate_charge_nc = { value = 99, origin = 'x' }",
            ["nothing follows", "sheet_die_area_m2"],
        ),
        (
            DEVICE + "gate_unit_power_w = { value = -1, origin = 'x' }",
            ["gate_unit_power_w must not be negative"],
        ),
        (
            DEVICE + "greatest_switching_frequency_khz = { value = 0, origin = 'x' }",
            ["greatest_switching_frequency_hz must be greater than zero"],
        ),
        (
            DEVICE + "switching_energy_nj_per_av = { value = 9, origin = 'x' }\n"
            "turn_on_share = { value = 1.5, origin = 'x' }",
            ["turn_on_share must not exceed 1"],
        ),
        (DEVICE + "device_class = 'vacuum valve'", ["device_class must be one of", "'vacuum valve'"]),
        (DEVICE + "shared_die = 1", ["shared_die must be true or false, got 1"]),
        ('[[devices]]\nname = "x"\nbased_on = "SiC 1201 V"', ["no part called 'SiC 1201 V'", "'SiC 1200 V'"]),
        ("[[devices]]\nshared_die = true", ["needs a name"]),
        ("[[devicez]]\nname = 'x'", ["unknown section 'devicez'", "devices"]),
        ("[devices]\nname = 'x'", ["must be written [[devices]]"]),
        ("[[devices]\n", ["not readable as TOML"]),
        (CAPACITOR.replace("loss_tangent", "# loss"), ["loss_tangent is missing"]),
        ("[cost]\nrating_va = { value = [1, 2], origin = 'x' }", ["must have the same number of entries"]),
        ("[cost]\nchoke_current_a = { value = [50, 10, 200], origin = 'x' }", ["choke_current_a must rise"]),
        (
            '[[core_materials]]\nname = "x"\nbased_on = "amorphous tape 25 um"\n'
            "steinmetz_k = { value = [1, 2], origin = 'x' }",
            ["same number of entries"],
        ),
    ],
)
def test_a_fault_is_one_clear_error(tmp_path: Path, text: str, expected: list[str]) -> None:
    message = refused(tmp_path, text)
    assert message.count("\n") == 0, "one fault, one line"
    assert "own.toml" in message
    for words in expected:
        assert words in message


def test_all_faults_of_a_file_are_reported_at_once(tmp_path: Path) -> None:
    message = refused(
        tmp_path,
        DEVICE
        + "dead_tim_ns = { value = 1, origin = 'x' }\njunction_limit_c = { value = -5, origin = 'x' }\n"
        + CAPACITOR.replace("voltage_rating_v_ac = { value = 275", "voltage_rating_v_ac = { value = 0"),
    )
    assert "'dead_tim_ns'" in message
    assert "junction_limit_c must be greater than zero" in message
    assert "part 'own film box': voltage_rating_v_ac must be greater than zero, got 0" in message


def test_missing_file_is_named(tmp_path: Path) -> None:
    with pytest.raises(ValueError, match=r"nowhere\.toml: no such file"):
        load_catalog([tmp_path / "nowhere.toml"])
